"""The stack of texts that are being read: files, macros in use and their arguments.

Takes text, gives expanded text to a sink (IEEE 1364-2005, 19.3). What a directive means is not known here:
`Run` is given one handler a directive. No walk is recursive, whatever the nesting.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any

from tardigate.source.collector import Collector
from tardigate.source.diagnostic import did_you_mean
from tardigate.source.traces import Traces
from tardigate.syntax.frames import Budget, Call, Frame, Voice, as_text
from tardigate.syntax.macros import ARGUMENT, Macro, arguments_begin, read_arguments, trim
from tardigate.syntax.marks import NAME, blank_line_comments, comment_end, late, line_end, plain_name
from tardigate.syntax.placing import PlacingSink, Sink, Use

_QUOTE, _SLASH = 0x22, 0x2F
_AFTER_PADDING = b" \t\r\n),;"
_SAME_USES = late(rb"""(`[A-Za-z_][\w$]*+)(?=[ \t\r\n),;])(?:[^"\\/`]{0,400}+\1(?=[ \t\r\n),;]))*+""")
"""A use of a macro, to the last use of the same one that only a little plain text parts from it."""

Handler = Callable[[Frame, int, int], int]
"""Does a directive: its text, offsets of the grave accent and past the name; gives where it ends."""


class Run:
    """Reads texts from the top of a stack until it is empty."""

    def __init__(self, macros: dict[bytes, Macro], collector: Collector, size: int) -> None:
        self.macros = macros
        self.handlers: Mapping[bytes, Handler] = {}
        self.sink = PlacingSink(Traces(dict(macros)))
        self.stack: list[Frame] = []
        self.voice = Voice(collector)
        self.budget = Budget(self.voice, size)
        self._active: dict[bytes, None] = {}

    def read(self, frame: Frame) -> None:
        """Read a text and all that it includes and uses.

        Raises InputRefusedError when the expansion grows past its limits.
        """
        self.stack.append(frame)
        while self.stack:
            top = self.stack[-1]
            mark = top.marks.next(top.pos)
            self._emit(top, top.pos, mark)
            top.pos = mark
            if mark == len(top.data):
                self._close(top)
            elif top.data[mark] == _SLASH:
                self._comment(top, mark)
            elif top.data[mark] == _QUOTE:
                self.tell("V112", top, mark, line_end(top.data, mark))
                self.blank_to(top, line_end(top.data, mark))
            else:
                self._grave(top, mark)

    def tell(self, code: str, frame: Frame, start: int, stop: int, **words: Any) -> None:
        """Tell a fault of bytes `start` to before `stop` of a text; `words` as for `Voice.tell`."""
        self.voice.tell(code, frame, frame.place(start, stop), **words)

    def blank_to(self, frame: Frame, stop: int) -> None:
        """Pass the bytes up to `stop`, leaving spaces."""
        if stop <= frame.pos:
            return
        if frame.file is not None:
            frame.sink.blank(frame.file, frame.pos, stop)
        else:
            frame.sink.expand(b" ", frame.use)
        frame.pos = stop

    def expand_then(self, frame: Frame, text: bytes, use: Use, then: Callable[[bytes], None]) -> None:
        """Expand a piece of a text by itself and hand the result to `then`."""
        self.budget.spend_bytes(len(text), frame, use)
        self.stack.append(Frame(text, Sink(), None, use, frame.macro, frame.args, then))

    def _emit(self, frame: Frame, start: int, stop: int) -> None:
        if frame.file is not None:
            frame.sink.copy(frame.file, start, stop)
        elif stop > start:
            frame.sink.expand(self._fill(frame, frame.data[start:stop], frame.args, frame.use), frame.use)

    def _fill(self, frame: Frame, text: bytes, args: list[bytes], use: Use) -> bytes:
        """Return a text with its markers replaced, its length counted before it is made."""
        self.budget.spend_bytes(len(text), frame, use)
        if not args or b"\x01" not in text:
            return text
        grown = sum(len(args[int(number)]) for number in ARGUMENT.findall(text))
        self.budget.spend_bytes(grown, frame, use)
        return ARGUMENT.sub(lambda marker: args[int(marker[1])], text)

    def _close(self, frame: Frame) -> None:
        for condition in frame.conditions:
            self.voice.tell("V132", frame, condition.use)
        self.stack.pop()
        if frame.ended:
            frame.ended(frame.sink.text())
        elif frame.macro:
            del self._active[frame.macro.name]

    def _comment(self, frame: Frame, mark: int) -> None:
        if frame.file is not None and frame.data[mark + 1] == _SLASH:
            blanked = blank_line_comments(frame.data, mark)
            frame.sink.stand_in(frame.file, mark, blanked)
            frame.pos += len(blanked)
            return
        stop = comment_end(frame.data, mark)
        if stop < 0:
            self.tell("V111", frame, mark, mark + 2)
            stop = len(frame.data)
        self.blank_to(frame, stop)

    def _grave(self, frame: Frame, mark: int) -> None:
        """Do what stands behind a grave accent: a directive, or the use of a macro."""
        name, end = self._name_at(frame, mark + 1)
        if not name:
            self.tell("V106", frame, mark, mark + 1)
            self.blank_to(frame, mark + 1)
        elif name in self.handlers:
            self.blank_to(frame, self.handlers[name](frame, mark, end))
        elif name in self.macros:
            self._use(frame, self.macros[name], mark, end)
        else:
            hint = None
            if not self.voice.tires_of("V101"):
                hint = did_you_mean(as_text(name), [as_text(word) for word in (*self.macros, *self.handlers)])
            self.tell("V101", frame, mark, end, name=as_text(name), hint=hint)
            self.blank_to(frame, end)

    def _name_at(self, frame: Frame, pos: int) -> tuple[bytes, int]:
        """Return the name behind a grave accent and its end; in a macro's body an argument may give it."""
        written = NAME.match(frame.data, pos)
        if written:
            return plain_name(written[0]), written.end()
        marker = ARGUMENT.match(frame.data, pos) if frame.args else None
        given = NAME.fullmatch(frame.args[int(marker[1])]) if marker else None
        return (plain_name(given[0]), marker.end()) if marker and given else (b"", pos)

    def _use(self, frame: Frame, macro: Macro, mark: int, end: int) -> None:
        if frame.file is None:
            self.budget.spend_uses(1, frame, frame.use)
        if macro.name in self._active:
            ring = list(self._active)
            ring = [*ring[ring.index(macro.name) :], macro.name]
            words = {"name": as_text(macro.name), "ring": " → ".join(map(as_text, ring))}
            self.tell("V104", frame, mark, end, macro=macro, **words)
            self.blank_to(frame, end)
        elif macro.formals is not None:
            self._call(frame, macro, mark, end)
        elif macro.calm:
            self._insert(frame, macro.body, mark, end)
        else:
            frame.pos = end
            self._enter(Call(macro, (), frame, frame.place(mark, end)))

    def _insert(self, frame: Frame, body: bytes, mark: int, end: int) -> None:
        """Insert a body with nothing to expand; in place when it fits there and cannot grow together."""
        frame.pos = end
        fits = len(body) <= end - mark and frame.data[end : end + 1] in _AFTER_PADDING and b"\n" not in body
        if frame.file is not None and fits:
            same = _SAME_USES().match(frame.data, mark)
            stretch = same[0] if same else frame.data[mark:end]
            padded = stretch.replace(frame.data[mark:end], body.ljust(end - mark))
            frame.sink.stand_in(frame.file, mark, padded)
            frame.pos = mark + len(stretch)
            return
        use = frame.place(mark, end)
        self.budget.spend_bytes(len(body), frame, use)
        frame.sink.expand(body, use)

    def _call(self, frame: Frame, macro: Macro, mark: int, end: int) -> None:
        begin = arguments_begin(frame.data, end)
        arguments = read_arguments(frame.data, begin) if begin else None
        if not arguments:
            self.tell("V103", frame, mark, end, macro=macro, name=as_text(macro.name))
            self.blank_to(frame, len(frame.data) if begin else end)
            return
        if frame.file is None:
            self.budget.spend_uses(arguments.steps, frame, frame.use)
        formals = macro.formals or ()
        raw = () if not formals and arguments.raw == (b"",) else arguments.raw
        if len(raw) != len(formals):
            words = {"name": as_text(macro.name), "takes": len(formals), "given": len(raw)}
            self.tell("V102", frame, mark, arguments.end, macro=macro, **words)
            self.blank_to(frame, arguments.end)
            return
        frame.pos = arguments.end
        self._advance(Call(macro, raw, frame, frame.place(mark, arguments.end)))

    def _advance(self, call: Call) -> None:
        """Expand the next argument that needs it, or begin with the body when all are done.

        An argument is expanded where it is written, and its text is never split or expanded again.
        """
        while len(call.args) < len(call.raw):
            raw = call.raw[len(call.args)]
            if b"`" in raw:
                self.expand_then(call.caller, raw, call.use, lambda text: self._argument(call, text))
                return
            given = call.caller.args
            call.args.append(self._fill(call.caller, raw, given, call.use) if given else raw)
        self._enter(call)

    def _argument(self, call: Call, text: bytes) -> None:
        call.args.append(trim(text))
        self._advance(call)

    def _enter(self, call: Call) -> None:
        macro, sink = call.macro, call.caller.sink
        if macro.calm:
            sink.expand(self._fill(call.caller, macro.body, call.args, call.use), call.use)
            return
        self.budget.spend_bytes(len(macro.body), call.caller, call.use)
        self._active[macro.name] = None
        self.stack.append(Frame(macro.body, sink, None, call.use, macro, call.args))
