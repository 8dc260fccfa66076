"""The directives besides macros' uses and conditions (IEEE 1364-2005, 19).

Takes a text at a directive, changes the run's macros and states or puts a file on its stack. Whether a
directive stands inside or outside a module is not checked.
"""

from __future__ import annotations

import re
from collections.abc import Callable
from typing import NamedTuple

from tardigate.syntax.expansion import Handler, Run
from tardigate.syntax.frames import Frame, as_text
from tardigate.syntax.inclusion import Inclusion
from tardigate.syntax.macros import read_definition
from tardigate.syntax.marks import NAME, late, line_end, plain_name
from tardigate.syntax.placing import States, Use

Timescale = tuple[float | None, float | None]
"""Unit and precision in fs; both None where no `timescale` is in force."""

NETTYPES = ("wire", "tri", "tri0", "tri1", "wand", "triand", "wor", "trior", "trireg", "uwire", "none")
"""What may stand behind `default_nettype` (19.2)."""

_UNIT_FS = {b"s": 1e15, b"ms": 1e12, b"us": 1e9, b"ns": 1e6, b"ps": 1e3, b"fs": 1.0}
_NUMBERS = (b"1", b"10", b"100")
_TIME = rb"([\d.]+)\s*([A-Za-z]+)"
_BEHIND = late(rb"[ \t]*(" + NAME.pattern + rb")")


_INCLUDE = late(rb'[ \t]*"([^"\n]+)"')
_TIMESCALE = late(rb"\s*" + _TIME + rb"\s*/\s*" + _TIME)
_NETTYPE = late(rb"\s*(\w+)")
_PULL = late(rb"\s*(pull[01])\b")
_LINE = late(rb'[ \t]*[1-9]\d*[ \t]+"[^"\n]*"[ \t]+[012]\b')
_STANDARD = late(rb'\s*"[^"\n]+"')


class _Argument(NamedTuple):
    """What must stand behind a directive, the code of its absence, and what takes it."""

    pattern: Callable[[], re.Pattern[bytes]]
    code: str
    take: Callable[[Frame, re.Match[bytes], Use], None]


class Settings:
    """The states along the text: time scale, default net type, cell or not, pull of unconnected inputs."""

    __slots__ = ("cells", "drives", "nettypes", "timescales")

    def __init__(self, timescale: Timescale, nettype: str, cell: bool, drive: str) -> None:
        self.timescales = States(timescale)
        self.nettypes = States(nettype)
        self.cells = States(cell)
        self.drives = States(drive)

    def reset(self, offset: int) -> None:
        """Go back to what holds before any directive (19.6)."""
        self.timescales.set(offset, (None, None))
        self.nettypes.set(offset, "wire")
        self.cells.set(offset, False)
        self.drives.set(offset, "none")


class Directives:
    """The handlers of one run; macros and settings are changed in place."""

    def __init__(self, run: Run, settings: Settings, inclusion: Inclusion) -> None:
        self._run = run
        self._settings = settings
        self._inclusion = inclusion
        self._arguments = {
            b"include": _Argument(_INCLUDE, "V124", self._include),
            b"timescale": _Argument(_TIMESCALE, "V141", self._timescale),
            b"default_nettype": _Argument(_NETTYPE, "V143", self._default_nettype),
            b"unconnected_drive": _Argument(_PULL, "V144", self._unconnected_drive),
            b"line": _Argument(_LINE, "V144", self._accept),
            b"begin_keywords": _Argument(_STANDARD, "V144", self._accept),
        }

    def handlers(self) -> dict[bytes, Handler]:
        """Return the handler of each directive."""
        plain: dict[bytes, Callable[[int], None]] = {
            b"celldefine": lambda at: self._settings.cells.set(at, True),
            b"endcelldefine": lambda at: self._settings.cells.set(at, False),
            b"nounconnected_drive": lambda at: self._settings.drives.set(at, "none"),
            b"resetall": self._settings.reset,
            b"end_keywords": lambda _: None,
        }
        found: dict[bytes, Handler] = {name: self._plain(do) for name, do in plain.items()}
        found |= {name: self._with_argument(argument) for name, argument in self._arguments.items()}
        return found | {b"define": self._define, b"undef": self._undef, b"pragma": self._pragma}

    def _plain(self, do: Callable[[int], None]) -> Handler:
        def handle(frame: Frame, mark: int, end: int) -> int:
            del frame, mark
            do(self._run.sink.length)
            return end

        return handle

    def _with_argument(self, argument: _Argument) -> Handler:
        """Return a handler that reads what stands behind; where macros give it, when they are expanded."""

        def handle(frame: Frame, mark: int, end: int) -> int:
            found = argument.pattern().match(frame.data, end)
            if found:
                argument.take(frame, found, frame.place(mark, found.end()))
                return found.end()
            stop = line_end(frame.data, end)
            rest = frame.data[end:stop]
            if b"`" not in rest:
                self._tell_missing(
                    argument, frame, frame.place(mark, stop), as_text(frame.data[mark + 1 : end])
                )
                return stop
            word, use = as_text(frame.data[mark + 1 : end]), frame.place(mark, stop)
            self._run.expand_then(
                frame, rest, use, lambda text: self._expanded(argument, frame, use, word, text)
            )
            return stop

        return handle

    def _expanded(self, argument: _Argument, frame: Frame, use: Use, word: str, text: bytes) -> None:
        found = argument.pattern().fullmatch(text.strip())
        if found:
            argument.take(frame, found, use)
        else:
            self._tell_missing(argument, frame, use, word)

    def _tell_missing(self, argument: _Argument, frame: Frame, use: Use, word: str) -> None:
        self._run.voice.tell(argument.code, frame, use, word=word)

    def _define(self, frame: Frame, mark: int, end: int) -> int:
        definition = read_definition(frame.data, end, frame.place(mark, end))
        macro = definition.macro
        if not macro:
            self._run.tell("V107", frame, mark, line_end(frame.data, mark), reason=definition.reason)
        elif macro.name in self._run.handlers:
            self._run.voice.tell("V108", frame, macro.defined, name=as_text(macro.name))
        else:
            self._run.macros[macro.name] = macro
            self._run.sink.traces.define(self._run.sink.length, macro.name, macro.defined)
        return definition.end

    def _undef(self, frame: Frame, mark: int, end: int) -> int:
        name = _BEHIND().match(frame.data, end)
        if not name:
            self._run.tell("V134", frame, mark, end, word="undef")
            return end
        self._run.macros.pop(plain_name(name[1]), None)
        return name.end()

    def _pragma(self, frame: Frame, mark: int, end: int) -> int:
        del mark
        return line_end(frame.data, end)

    def _accept(self, frame: Frame, found: re.Match[bytes], use: Use) -> None:
        """Take what changes nothing here: the true place of a text is kept, and all keywords are read."""

    def _include(self, frame: Frame, found: re.Match[bytes], use: Use) -> None:
        self._inclusion.include(frame, found[1].decode("utf-8", "surrogateescape"), use)

    def _timescale(self, frame: Frame, found: re.Match[bytes], use: Use) -> None:
        unit_number, unit, precision_number, precision = found.groups()
        fair = (
            unit_number in _NUMBERS
            and precision_number in _NUMBERS
            and unit in _UNIT_FS
            and precision in _UNIT_FS
        )
        if not fair:
            reason = "the numbers must be 1, 10 or 100, the units s, ms, us, ns, ps or fs"
            self._run.voice.tell("V142", frame, use, reason=reason)
            return
        unit_fs = int(unit_number) * _UNIT_FS[unit]
        precision_fs = int(precision_number) * _UNIT_FS[precision]
        if precision_fs > unit_fs:
            self._run.voice.tell("V142", frame, use, reason="the precision is coarser than the unit")
            return
        self._settings.timescales.set(self._run.sink.length, (unit_fs, precision_fs))

    def _default_nettype(self, frame: Frame, found: re.Match[bytes], use: Use) -> None:
        nettype = found[1].decode("ascii", "replace")
        if nettype in NETTYPES:
            self._settings.nettypes.set(self._run.sink.length, nettype)
        else:
            self._run.voice.tell("V143", frame, use, word="default_nettype")

    def _unconnected_drive(self, frame: Frame, found: re.Match[bytes], use: Use) -> None:
        del frame, use
        self._settings.drives.set(self._run.sink.length, found[1].decode("ascii"))
