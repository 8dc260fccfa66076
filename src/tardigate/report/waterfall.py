"""The waterfall: a trail as one row a hop on a time axis, so that the eye finds the long hop.

Takes trail records, gives lines. Does not fold: the record says which hops are told.
"""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import PurePath

from rich.text import Text

from tardigate.report.axis import Axis
from tardigate.report.columns import GAP, Cell, Column, lay_out
from tardigate.report.looks import STYLES, Look
from tardigate.report.model import FoldRecord, HopRecord, TrailRecord
from tardigate.report.numbers import Scale
from tardigate.report.prose import counted
from tardigate.report.shorten import cells, shorten

NET_FROM, PLACE_FROM = 100, 116
"""Widths from which the driven net and the place in the source are shown."""

LEAST_BAR = 10
"""Cells that the bars keep before the names of pins are shortened to make room."""

PIN_ROOMS = (None, 8, 4)
"""Cells for the name of a pin, tried in this order until a row fits; None: all that it takes."""

PINS = 2
"""The column of the pins."""

Row = HopRecord | FoldRecord


def waterfalls(trails: Sequence[TrailRecord], scale: Scale, look: Look) -> list[list[Text]]:
    """Return the lines of each trail: axis, rule, rows; all with the same columns on the same axis."""
    rows = [row for trail in trails for row in trail.hops]
    head, *lines = _laid_out(rows, scale, look)
    used = cells(head.plain) + GAP
    axis = Axis(max((t.total for t in trails), default=0.0), max(1, look.width - used), scale.unit, look)
    top = [
        head.append(" " * GAP).append_text(axis.labels()),
        Text(look.glyph("rule") * used, STYLES["quiet"]).append_text(axis.rule()),
    ]
    falls, at = [], 0
    for trail in trails:
        mine = lines[at : at + len(trail.hops)]
        at += len(trail.hops)
        falls.append([*(line.copy() for line in top), *_barred(trail, mine, axis)])
    return falls


def _laid_out(rows: Sequence[Row], scale: Scale, look: Look) -> list[Text]:
    """Return head and rows without bars; where they are too wide the bars give way first, then the pins."""
    columns, pick = _columns(look)
    table = [[_cells(row, scale, look)[i] for i in pick] for row in rows]
    lines: list[Text] = []
    for room in PIN_ROOMS:
        for cells_of_row, text in zip(table, _pins_texts(rows, look, room), strict=True):
            cells_of_row[PINS] = text
        lines = lay_out(columns, table, look.width - max(16, look.width // 4) - GAP, look)
        if cells(lines[0].plain) <= look.width - LEAST_BAR - GAP:
            break
    return lines


def _barred(trail: TrailRecord, lines: list[Text], axis: Axis) -> list[Text]:
    long = longest(trail)
    for row, line in zip(trail.hops, lines, strict=True):
        kind = "fold" if isinstance(row, FoldRecord) else "longest" if row.delay == long else "bar"
        line.append(" " * GAP).append_text(axis.bar(row.begins, row.over, kind))
    return lines


def longest(trail: TrailRecord) -> float | None:
    """Return the delay of the longest hops; None when they are too many to stand out."""
    delays = [row.delay for row in trail.hops if isinstance(row, HopRecord)]
    top = max(delays, default=0.0)
    return top if 2 * delays.count(top) <= len(delays) else None


def _columns(look: Look) -> tuple[list[Column], list[int]]:
    columns = [
        Column("part", least=10),
        Column("kind", style="quiet", least=4),
        Column("pins"),
        Column("hop", "right"),
        Column("over", "right"),
        Column("drives", least=8),
        Column("at", style="quiet", least=8),
    ]
    pick = list(range(5)) + [5] * (look.width >= NET_FROM) + [6] * (look.width >= PLACE_FROM)
    return [columns[i] for i in pick], pick


def _cells(row: Row, scale: Scale, look: Look) -> list[Cell]:
    """Return the cells of a row, but for its pins."""
    delay, over = scale.text(row.delay), scale.text(row.over)
    if isinstance(row, FoldRecord):
        told = f"{look.glyph('dot')} {counted(row.hops, 'other hop')}"
        return [(told, "quiet"), "", "", (delay, "quiet"), (over, "quiet"), "", ""]
    # The file's own name is enough to tell it by here; JSON has the path.
    place = f"{PurePath(row.place.path).name}:{row.place.line}" if row.place else ""
    return [row.instance, row.kind, "", delay, over, row.net, place]


def _pins_texts(rows: Sequence[Row], look: Look, room: int | None) -> list[str]:
    """Return `A↑ → Y↓` for each hop, arrows below one another; `A↑→Y↓` where names have only `room` cells."""
    ends = [
        (_pin(row.from_pin, row.from_edge, look, room), _pin(row.to_pin, row.to_edge, look, room))
        if isinstance(row, HopRecord)
        else ("", "")
        for row in rows
    ]
    wide = min(12, max((cells(begin) for begin, _ in ends), default=0)) if room is None else 0
    to = f" {look.glyph('to')} " if room is None else look.glyph("to")
    return [f"{begin.ljust(wide)}{to}{end}" if end else "" for begin, end in ends]


def _pin(name: str, edge: int, look: Look, room: int | None) -> str:
    name = look.safe(name)
    return (shorten(name, room, look.glyph("cut")) if room else name) + look.edge(edge)
