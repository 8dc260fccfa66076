"""What a run of the preprocessor holds while it reads: texts, calls, its limits and its voice.

Data and small counters; the reading is in `expansion.py`.
"""

from __future__ import annotations

from collections.abc import Callable

from tardigate.source.collector import MOST, Collector
from tardigate.source.diagnostic import Diagnostic, Related
from tardigate.source.files import SourceFile
from tardigate.syntax.macros import Macro
from tardigate.syntax.marks import Marks
from tardigate.syntax.placing import Sink, Use

LARGEST_EXPANSION = 64 << 20
"""Bytes of text that macros may give, and that files may give that are included again; 16 more a byte of the
file, so that a large file may use a macro for each gate."""
MOST_FAULTS = 100_000
"""Faults of one code after which the rest is not read: the text is something else than Verilog."""
MOST_USES = 250_000
"""Uses inside macros, and brackets and commas read for them; one more for each 16 bytes of the file."""


class Condition:
    """An `ifdef` that waits for its `endif`; `done` when one of its branches was taken."""

    __slots__ = ("done", "past_else", "use")

    def __init__(self, use: Use, done: bool) -> None:
        self.use = use
        self.done = done
        self.past_else = False


class Frame:
    """A text that is being read up to `pos`. `file` is None in the text of a macro or of an argument.

    `use` is the place of all faults in such a text, and the `include` that asked for a file; `args` fill the
    markers of a macro's body; `ended` takes the text of an argument.
    """

    __slots__ = ("args", "conditions", "data", "ended", "file", "macro", "marks", "pos", "sink", "use")

    def __init__(
        self,
        data: bytes,
        sink: Sink,
        file: SourceFile | None,
        use: Use,
        macro: Macro | None = None,
        args: list[bytes] | None = None,
        ended: Callable[[bytes], None] | None = None,
    ) -> None:
        self.data, self.sink, self.file, self.use = data, sink, file, use
        self.macro, self.args, self.ended = macro, args or [], ended
        self.pos = 0
        self.conditions: list[Condition] = []
        self.marks = Marks(data)

    def place(self, start: int, stop: int) -> Use:
        """Return where bytes of this text stand in a file."""
        return self.use if self.file is None else Use(self.file, start, stop)


class Call:
    """A use of a macro whose arguments are expanded one after the other."""

    __slots__ = ("args", "caller", "macro", "raw", "use")

    def __init__(self, macro: Macro, raw: tuple[bytes, ...], caller: Frame, use: Use) -> None:
        self.macro, self.raw, self.caller, self.use = macro, raw, caller, use
        self.args: list[bytes] = []


class Voice:
    """Tells faults; beyond the number that is kept of a code it only counts, so that no file is slow.

    `tell` raises InputRefusedError at `MOST_FAULTS` of a code.
    """

    def __init__(self, collector: Collector) -> None:
        self.collector = collector
        self._told: dict[str, int] = {}
        self._last: dict[str, Diagnostic] = {}

    def tell(
        self,
        code: str,
        frame: Frame,
        use: Use,
        *,
        hint: str | None = None,
        macro: Macro | None = None,
        begun: Use | None = None,
        **words: object,
    ) -> None:
        """Tell a fault; `macro` is the one that is used wrongly there, `begun` where a condition begins."""
        told = self._told[code] = self._told.get(code, 0) + 1
        if told <= MOST + 1:
            owners = {owner.name: owner for owner in (macro, frame.macro) if owner}
            related = tuple(
                Related(owner.defined.span(), f"`{as_text(owner.name)}` is defined here")
                for owner in owners.values()
            )
            if frame.file is not None and frame.use.file is not frame.file:
                related = (*related, Related(frame.use.span(), "included from here"))
            if begun:
                related = (Related(begun.span(), "begins here"), *related)
            self._last[code] = Diagnostic.of(code, use.span(), hint=hint, related=related, **words)
        self.collector.add(self._last[code])
        if told >= MOST_FAULTS:
            self.collector.refuse()

    def tires_of(self, code: str) -> bool:
        """Return whether more of a code are only counted."""
        return self._told.get(code, 0) > MOST


class Budget:
    """The limits of one run over a file of `size` bytes; passing one of them ends it."""

    def __init__(self, voice: Voice, size: int) -> None:
        self._voice = voice
        self._bytes = self._most_bytes = LARGEST_EXPANSION + 16 * size
        self._uses = self._most_uses = MOST_USES + size // 16

    def spend_bytes(self, length: int, frame: Frame, use: Use) -> None:
        """Count text. Raises InputRefusedError (V105) beyond the limit."""
        self._bytes -= length
        if self._bytes < 0:
            self._refuse(frame, use)

    def spend_uses(self, uses: int, frame: Frame, use: Use) -> None:
        """Count uses. Raises InputRefusedError (V105) beyond the limit."""
        self._uses -= uses
        if self._uses < 0:
            self._refuse(frame, use)

    def _refuse(self, frame: Frame, use: Use) -> None:
        uses = f"{self._most_uses:,}"
        self._voice.tell("V105", frame, use, size=self._most_bytes >> 20, uses=uses)
        self._voice.collector.refuse()


def as_text(name: bytes) -> str:
    """Return bytes of the source as text for a message."""
    return name.decode("utf-8", "replace")
