"""The view of `trail`: the slowest or the fastest trails, hop by hop.

Takes a record, gives lines. Does not know the terminal.
"""

from __future__ import annotations

from rich.text import Text

from tardigate.report.assumptions_view import assumption_lines
from tardigate.report.axis import with_unit
from tardigate.report.looks import STYLES, Look
from tardigate.report.model import TrailRecord, TrailsRecord
from tardigate.report.numbers import Scale, scale_of
from tardigate.report.prose import caution_lines, counted, listed, named, sentence, subject_lines
from tardigate.report.shorten import cells, shorten
from tardigate.report.waterfall import waterfalls


def trail_view(record: TrailsRecord, look: Look) -> list[Text]:
    """Return the lines of the view."""
    scale = trail_scale(record.trails)
    lines = _lead(record, scale, look) + subject_lines(record.subject, look)
    falls = waterfalls(record.trails, scale, look)
    for number, (trail, fall) in enumerate(zip(record.trails, falls, strict=True), 1):
        lines += [Text(), heading(trail, scale, look, number if len(record.trails) > 1 else None)]
        lines += fall if trail.length else [Text("no hop: the source is itself the sink", STYLES["quiet"])]
    return lines + assumption_lines(record.assumptions, look) + caution_lines(look)


def trail_scale(trails: tuple[TrailRecord, ...]) -> Scale:
    """Return the scale of all times of some trails."""
    return scale_of(time for trail in trails for row in trail.hops for time in (row.delay, row.over))


def heading(trail: TrailRecord, scale: Scale, look: Look, number: int | None = None) -> Text:
    """Return the line above a trail's waterfall: its ends, its time, its hops."""
    first = f"{number}  " if number else ""
    to = f" {look.glyph('to')} "
    last = f"  {with_unit(trail.total, scale, look)} in {counted(trail.length, 'hop')}"
    room = look.width - cells(first + to + last) - 4
    cut = look.glyph("cut")
    source, sink = look.safe(trail.source.name), look.safe(trail.sink.name)
    source = shorten(source, max(1, room - min(cells(sink), room // 2)), cut)
    sink = shorten(sink, max(1, room - cells(source)), cut)
    line = Text().append(first, STYLES["quiet"])
    line.append(source, STYLES["name"]).append(f" {look.edge(trail.source.edge)}{to}")
    line.append(sink, STYLES["name"]).append(f" {look.edge(trail.sink.edge)}{last}")
    return line


def _lead(record: TrailsRecord, scale: Scale, look: Look) -> list[Text]:
    asked = [
        *(Text(" from ").append_text(_any_of(record.from_names, look)) for _ in record.from_names[:1]),
        *(Text(" to ").append_text(_any_of(record.to_names, look)) for _ in record.to_names[:1]),
    ]
    if not record.trails:
        return sentence(look, "No trail leads", *asked, " in ", named(record.subject.top, look), ".")
    speed = "slowest" if record.slowest else "fastest"
    first = with_unit(record.trails[0].total, scale, look)
    if len(record.trails) == 1:
        return sentence(look, f"The {speed} trail", *asked, f" takes {first}.")
    last = with_unit(record.trails[-1].total, scale, look)
    take = f" take {first} to {last}." if first != last else f" take {first} each."
    return sentence(look, f"The {len(record.trails)} {speed} trails", *asked, take)


def _any_of(names: tuple[str, ...], look: Look) -> Text:
    return Text(listed([named(name, look).plain for name in names]).replace(" and ", " or "))
