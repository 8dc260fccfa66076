"""Columns of text: cells to lines of one width, without wrapping.

Takes rows of cells and the room there is, shortens what may be shortened, gives lines. A plain layout of
our own, because tables of rich shorten at the end rather than in the middle and cost ten times the time.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Literal, NamedTuple

from rich.text import Text

from tardigate.report.looks import STYLES, Look
from tardigate.report.shorten import cells, shorten

Cell = str | tuple[str, str]
"""Text, or text and the name of its style."""

GAP = 2


class Column(NamedTuple):
    """A column: its head, where its text stands, its style, and how narrow it may become (0: never)."""

    head: str
    align: Literal["left", "right"] = "left"
    style: str = ""
    least: int = 0


def lay_out(columns: Sequence[Column], rows: Sequence[Sequence[Cell]], room: int, look: Look) -> list[Text]:
    """Return the head and one line a row, all of the same width, at most `room` where that can be."""
    texts = [[look.safe(cell if isinstance(cell, str) else cell[0]) for cell in row] for row in rows]
    widths = [
        max([cells(column.head), *(cells(row[i]) for row in texts)]) for i, column in enumerate(columns)
    ]
    _narrow(widths, columns, room - GAP * (len(columns) - 1))
    lines = [_line([column.head for column in columns], ["quiet"] * len(columns), columns, widths, look)]
    for row, row_texts in zip(rows, texts, strict=True):
        styles = [
            column.style if isinstance(cell, str) else cell[1]
            for cell, column in zip(row, columns, strict=True)
        ]
        lines.append(_line(row_texts, styles, columns, widths, look))
    return lines


def _narrow(widths: list[int], columns: Sequence[Column], room: int) -> None:
    """Lower the widest of the columns that may shrink to one level, as far as it takes."""
    natural = list(widths)
    level = max(widths, default=0)
    while sum(widths) > room and level > 0:
        level -= 1
        for i, column in enumerate(columns):
            if column.least:
                widths[i] = min(natural[i], max(level, column.least))


def _line(
    texts: Sequence[str], styles: Sequence[str], columns: Sequence[Column], widths: Sequence[int], look: Look
) -> Text:
    line = Text()
    for i, (text, style, column, width) in enumerate(zip(texts, styles, columns, widths, strict=True)):
        shown = shorten(text, width, look.glyph("cut"))
        pad = " " * (width - cells(shown))
        line.append((" " * GAP if i else "") + (pad if column.align == "right" else ""))
        line.append(shown, STYLES.get(style, ""))
        line.append(pad if column.align == "left" else "")
    return line
