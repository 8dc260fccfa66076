"""Where the next comment, grave accent or unfinished string stands.

Takes bytes, gives offsets of marks outside strings and escaped identifiers (IEEE 1364-2005, 3.3, 3.6, 3.7.1).
Everything else is left unread.
"""

from __future__ import annotations

import re
from collections.abc import Callable
from functools import cache

from tardigate.syntax.patterns import compiled


def late(pattern: bytes) -> Callable[[], re.Pattern[bytes]]:
    """Return a pattern that is compiled when it is first called for; most texts need few of them."""
    return cache(lambda: compiled(pattern))


NAME = re.compile(rb"[A-Za-z_][A-Za-z0-9_$]*|\\[^\s]+")
"""An identifier, plain or escaped (3.7)."""

STRING = rb'"(?:[^"\\\n]++|\\[^\n])*+"'
"""A string on one line (3.6), as a piece of a pattern."""

_BLANK = bytes(c if c in b"\r\n" else 0x20 for c in range(256))
_STRINGS = late(rb"(?:" + STRING + rb'(?:[^"\\/`]{1,255}+|\\[^\s]*+|/(?![/*])){0,64}+)++')
_BLACK = late(rb"[^\s]*")
_COMMENT = re.compile(rb"/[/*]")
_LINE_COMMENT = late(rb"//[^\n]*")
_LINE_COMMENTS = late(rb'(?:[^"\\/`]{0,400}+//[^\n]*+)++')


def blank(text: bytes) -> bytes:
    """Return as many spaces as the text has bytes, line ends kept."""
    return text.translate(_BLANK)


def line_end(data: bytes, start: int) -> int:
    """Return the offset of the line's end, of the text's end in the last line."""
    stop = data.find(b"\n", start)
    return len(data) if stop < 0 else stop


def comment_end(data: bytes, start: int) -> int:
    """Return the offset past the comment that begins at `start`; -1 when it is not finished."""
    if data[start + 1] == 0x2F:
        return line_end(data, start)
    stop = data.find(b"*/", start + 2)
    return -1 if stop < 0 else stop + 2


def blank_line_comments(data: bytes, start: int) -> bytes:
    """Return the text from a line comment to the last one that little plain text parts from it, blanked.

    Files with a comment at each gate are then no slower to pass than others.
    """
    stretch = _LINE_COMMENTS().match(data, start)
    assert stretch is not None
    return _LINE_COMMENT().sub(lambda comment: b" " * len(comment[0]), stretch[0])


def plain_name(name: bytes) -> bytes:
    r"""Return an identifier without the backslash of its escaped form: `\cpu3` is `cpu3` (3.7.1)."""
    return name[1:] if name[:1] == b"\\" else name


class Marks:
    """Finds marks from left to right; each kind's next place is kept until it is passed."""

    __slots__ = ("_comment", "_data", "_grave", "_length", "_quote")

    def __init__(self, data: bytes) -> None:
        self._data = data
        self._length = len(data)
        self._comment = self._grave = self._quote = -1

    def next(self, pos: int) -> int:
        """Return the first mark at or after `pos`, which must not lie inside a token; the length if none.

        The byte there tells its kind: a grave accent, a slash (a comment), a quote (an unfinished string).
        """
        data, length = self._data, self._length
        while True:
            mark = self._candidate(pos)
            backslash = -1 if mark == length else data.rfind(b"\\", pos, mark)
            escaped = _BLACK().match(data, backslash + 1) if backslash >= 0 else None
            if escaped and escaped.end() > mark:
                pos = escaped.end()
                continue
            strings = _STRINGS().match(data, mark) if mark == self._quote < length else None
            if not strings:
                return mark
            pos = strings.end()

    def _candidate(self, pos: int) -> int:
        """Bring the kept places up to `pos`; return the first of all kinds."""
        data, length = self._data, self._length
        if self._grave < pos:
            found = data.find(b"`", pos)
            self._grave = length if found < 0 else found
        if self._quote < pos:
            found = data.find(b'"', pos)
            self._quote = length if found < 0 else found
        if self._comment < pos:
            comment = _COMMENT.search(data, pos)
            self._comment = comment.start() if comment else length
        first = self._grave if self._grave < self._quote else self._quote
        return first if first < self._comment else self._comment
