"""Conditional compilation (IEEE 1364-2005, 19.4): `ifdef`, `ifndef`, `elsif`, `else`, `endif`.

Takes a text at one of these directives, gives where reading goes on; text that is left out is passed by
its comments and strings and not otherwise read. A condition ends in the text in which it begins.
"""

from __future__ import annotations

from tardigate.syntax.expansion import Handler, Run
from tardigate.syntax.frames import Condition, Frame
from tardigate.syntax.marks import NAME, comment_end, late, line_end, plain_name

_BEHIND = late(rb"[ \t]*(" + NAME.pattern + rb")")
_WORD = late(rb"`(ifdef|ifndef|elsif|else|endif)(?![\w$])")


def condition_handlers(run: Run) -> dict[bytes, Handler]:
    """Return the handlers of the five directives."""
    conditions = _Conditions(run)
    return {
        b"ifdef": conditions.ifdef,
        b"ifndef": conditions.ifndef,
        b"elsif": conditions.elsif,
        b"else": conditions.otherwise,
        b"endif": conditions.endif,
    }


class _Conditions:
    def __init__(self, run: Run) -> None:
        self._run = run

    def ifdef(self, frame: Frame, mark: int, end: int) -> int:
        return self._begin(frame, mark, end, wanted=True)

    def ifndef(self, frame: Frame, mark: int, end: int) -> int:
        return self._begin(frame, mark, end, wanted=False)

    def _begin(self, frame: Frame, mark: int, end: int, *, wanted: bool) -> int:
        name, behind = self._name(frame, mark, end)
        holds = name is not None and (name in self._run.macros) == wanted
        frame.conditions.append(Condition(frame.place(mark, behind), holds))
        return behind if holds else self._skip(frame, behind)

    def elsif(self, frame: Frame, mark: int, end: int) -> int:
        name, behind = self._name(frame, mark, end)
        condition = self._branch(frame, mark, end)
        if not condition:
            return behind
        if condition.done or name not in self._run.macros:
            return self._skip(frame, behind)
        condition.done = True
        return behind

    def otherwise(self, frame: Frame, mark: int, end: int) -> int:
        condition = self._branch(frame, mark, end)
        if not condition:
            return end
        condition.past_else = True
        if condition.done:
            return self._skip(frame, end)
        condition.done = True
        return end

    def endif(self, frame: Frame, mark: int, end: int) -> int:
        if frame.conditions:
            frame.conditions.pop()
        else:
            self._run.tell("V131", frame, mark, end, word="endif")
        return end

    def _branch(self, frame: Frame, mark: int, end: int) -> Condition | None:
        """Return the condition that a branch belongs to; tell when there is none or it is past `else`."""
        word = frame.data[mark + 1 : end].decode("ascii", "replace")
        if not frame.conditions:
            self._run.tell("V131", frame, mark, end, word=word)
            return None
        condition = frame.conditions[-1]
        if condition.past_else:
            self._run.tell("V133", frame, mark, end, word=word, begun=condition.use)
        return condition

    def _name(self, frame: Frame, mark: int, end: int) -> tuple[bytes | None, int]:
        """Return the macro name behind a directive and where it ends."""
        found = _BEHIND().match(frame.data, end)
        if found:
            return plain_name(found[1]), found.end()
        self._run.tell("V134", frame, mark, end, word=frame.data[mark + 1 : end].decode("ascii", "replace"))
        return None, end

    def _skip(self, frame: Frame, start: int) -> int:
        """Return the place of the next branch or end of the innermost condition, the text's end if none."""
        data, marks, depth = frame.data, frame.marks, 0
        pos = start
        while (mark := marks.next(pos)) < len(data):
            word = _WORD().match(data, mark)
            if word and word[1] in (b"ifdef", b"ifndef"):
                depth += 1
            elif word and not depth:
                return mark
            elif word and word[1] == b"endif":
                depth -= 1
            pos = word.end() if word else self._past(frame, mark)
        return len(data)

    def _past(self, frame: Frame, mark: int) -> int:
        """Return the end of a comment, an unfinished string or a grave accent in text that is left out."""
        if frame.data[mark] == 0x22:
            return line_end(frame.data, mark)
        if frame.data[mark] == 0x60:
            return mark + 1
        stop = comment_end(frame.data, mark)
        if stop < 0:
            self._run.tell("V111", frame, mark, mark + 2)
        return len(frame.data) if stop < 0 else stop
