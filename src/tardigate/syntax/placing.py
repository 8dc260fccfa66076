"""The placed text while it grows, and the states that directives set along it.

Takes stretches of files and expansions of macros, gives one `PlacedText`. Does not know any directive.
"""

from __future__ import annotations

from bisect import bisect_right
from collections.abc import Sequence
from typing import Generic, NamedTuple, TypeVar

from tardigate.source.files import SourceFile
from tardigate.source.placed import Piece, PlacedText
from tardigate.source.span import Span
from tardigate.source.traces import Traces
from tardigate.syntax.marks import blank

T = TypeVar("T")


class Use(NamedTuple):
    """A stretch of a file that may have to be shown: bytes `start` to before `stop`."""

    file: SourceFile
    start: int
    stop: int

    def span(self) -> Span:
        """Return the place as a span; costs a count of the lines before it."""
        return self.file.span(self.start, self.stop)


class Sink:
    """Keeps the text of a macro's argument; knows no places."""

    __slots__ = ("_chunks",)

    def __init__(self) -> None:
        self._chunks: list[bytes] = []

    def copy(self, file: SourceFile, start: int, stop: int) -> None:
        """Take a stretch of a file as it is."""
        self._chunks.append(file.data[start:stop])

    def stand_in(self, file: SourceFile, start: int, text: bytes) -> None:
        """Take a text that is as long as what it stands for in the file."""
        del file, start
        self._chunks.append(text)

    def expand(self, text: bytes, use: Use) -> None:
        """Take a text that stands for a use of a macro."""
        del use
        self._chunks.append(text)

    def blank(self, file: SourceFile, start: int, stop: int) -> None:
        """Take spaces for a stretch of a file, line ends kept."""
        if stop > start:
            self.stand_in(file, start, blank(file.data[start:stop]))

    def text(self) -> bytes:
        """Return all that was taken."""
        return b"".join(self._chunks)


class PlacingSink(Sink):
    """Keeps the text of a whole run, with the pieces that tell where each byte was written."""

    __slots__ = ("_file", "_lead", "_pieces", "length", "traces")

    def __init__(self, traces: Traces) -> None:
        super().__init__()
        self.traces = traces
        self._pieces: list[Piece] = []
        self._file: SourceFile | None = None
        self._lead = 0
        self.length = 0

    def copy(self, file: SourceFile, start: int, stop: int) -> None:
        """Take a stretch of a file as it is."""
        if stop > start:
            self.stand_in(file, start, file.data[start:stop])

    def stand_in(self, file: SourceFile, start: int, text: bytes) -> None:
        """Take a text that is as long as what it stands for in the file."""
        if self._file is not file or self.length - start != self._lead:
            self._pieces.append(Piece(self.length, file, start))
            self._file, self._lead = file, self.length - start
        self._chunks.append(text)
        self.length += len(text)

    def expand(self, text: bytes, use: Use) -> None:
        """Take a text that stands for a use of a macro."""
        if not text:
            return
        last = self._pieces[-1] if self._pieces else None
        if not (last and last.file is use.file and (last.offset, last.stop) == (use.start, use.stop)):
            self._pieces.append(Piece(self.length, use.file, use.start, use.stop))
            self._file = None
        self._chunks.append(text)
        self.length += len(text)

    def placed(self, file: SourceFile) -> PlacedText:
        """Return the text, the very bytes of `file` when nothing was changed."""
        return PlacedText(self.text(), tuple(self._pieces) or (Piece(0, file, 0),), self.traces)


class States(Generic[T]):
    """The values of one setting along the placed text, each in force from its offset on."""

    __slots__ = ("_found",)

    def __init__(self, first: T) -> None:
        self._found: list[tuple[int, T]] = [(0, first)]

    def set(self, offset: int, value: T) -> None:
        """Let `value` be in force from `offset` on; offsets must not fall."""
        if self._found[-1][0] == offset:
            self._found.pop()
        self._found.append((offset, value))

    def all(self) -> tuple[tuple[int, T], ...]:
        """Return offsets and values, sorted by offset; the first offset is 0."""
        return tuple(self._found)


def in_force(states: Sequence[tuple[int, T]], offset: int) -> T:
    """Return the value in force at an offset of the placed text; `states` as `States.all` gives them."""
    return states[max(0, bisect_right(states, offset, key=lambda state: state[0]) - 1)][1]
