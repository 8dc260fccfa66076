"""Where something stands in a file, complete enough to be shown without the file.

Takes offsets and bytes, gives spans. Does not read files and does not check that the file still says so.
"""

from __future__ import annotations

from typing import NamedTuple

SNIPPET = 320
"""Longest piece of a source line that a span keeps, in characters."""


class Span(NamedTuple):
    """A piece of a file; what is shown of it is its first line.

    `line` and `column` count from 1, `column` in characters of the text (Unicode scalar values; a tab, a wide
    character and a combining mark are one each; bytes that are no UTF-8 are one for each run that a decoder
    replaces). `length` is the number of characters on that line, at least 1, so that `end_column` is the
    column past the last of them on the same line (a region in the sense of SARIF 2.1.0, 3.30, with columns
    of kind `unicodeCodePoints`). `start` and `stop` are byte offsets into the file from 0, `stop` past the
    end, and may reach beyond the first line. `snippet` is the line, or the part of a long one that begins at
    column `snippet_column`. `via` are the places that led there, with what they are: a macro's definition
    behind its use, an `include` of the file.
    """

    path: str
    line: int
    column: int
    length: int
    snippet: str
    snippet_column: int
    start: int
    stop: int
    via: tuple[tuple[Span, str], ...] = ()

    @property
    def end_column(self) -> int:
        """The column past the last character, on the same line."""
        return self.column + self.length

    def __str__(self) -> str:
        return f"{self.path}:{self.line}:{self.column}"


_LAST: list[tuple[bytes, int, int]] = [(b"", 0, 1)]
"""The text, offset and line that were asked for last: the next place is seldom far, and files are long."""


def _line(data: bytes, start: int) -> int:
    last, at, line = _LAST[0]
    if last is not data:
        at, line = 0, 1
    line += data.count(b"\n", at, start) if at <= start else -data.count(b"\n", start, at)
    _LAST[0] = (data, start, line)
    return line


def span_in(path: str, data: bytes, start: int, stop: int) -> Span:
    """Make the span of `data[start:stop]`, cut at the end of its first line."""
    start = max(0, min(start, len(data)))
    stop = max(start, min(stop, len(data)))
    line_start = data.rfind(b"\n", 0, start) + 1
    line_stop = data.find(b"\n", start)
    if line_stop < 0:
        line_stop = len(data)
    line = _line(data, start)
    before = data[line_start:start].decode("utf-8", "replace")
    inside = data[start : min(stop, line_stop)].decode("utf-8", "replace")
    column = len(before) + 1
    text = data[line_start : min(line_stop, start + 4 * SNIPPET)].decode("utf-8", "replace").rstrip("\r")
    first = 0 if column <= SNIPPET - 40 else column - SNIPPET // 2
    snippet = text[first : first + SNIPPET]
    return Span(path, line, column, max(1, len(inside)), snippet, first + 1, start, stop)
