"""The view of `pace`: when a design settles and what limits it.

Takes a record, gives lines. Does not know the terminal.
"""

from __future__ import annotations

from collections.abc import Iterator

from rich.text import Text

from tardigate.report.assumptions_view import assumption_lines
from tardigate.report.axis import Axis, with_unit
from tardigate.report.columns import GAP, Cell, Column, lay_out
from tardigate.report.looks import STYLES, Look
from tardigate.report.model import PaceRecord, SinkRecord, SinksRecord
from tardigate.report.numbers import Scale, scale_of
from tardigate.report.prose import (
    caution_lines,
    counted,
    end_text,
    named,
    sentence,
    subject_lines,
    title,
)
from tardigate.report.shorten import cells
from tardigate.report.trail_view import heading
from tardigate.report.waterfall import waterfalls


def pace_view(record: PaceRecord, look: Look) -> list[Text]:
    """Return the lines of the view."""
    scale = scale_of(_times(record))
    lines = _lead(record, scale, look) + _between(record, scale, look) + subject_lines(record.subject, look)
    lines += _sinks(record, scale, look)
    if record.limiting and record.limiting.length:
        lines += title("limiting trail")
        lines += [heading(record.limiting, scale, look), *waterfalls([record.limiting], scale, look)[0]]
    return lines + assumption_lines(record.assumptions, look) + caution_lines(look)


def _times(record: PaceRecord) -> Iterator[float]:
    for sink in record.outputs.shown + record.register_pins.shown:
        yield from (time for time in sink.settles + sink.stirs if time is not None)
    for trail in (record.limiting, record.between_registers):
        if trail:
            yield trail.total
            yield from (time for row in trail.hops for time in (row.delay, row.over))


def _lead(record: PaceRecord, scale: Scale, look: Look) -> list[Text]:
    top, trail = named(record.subject.top, look), record.limiting
    if trail is None:
        return sentence(look, "Nothing in ", top, " ever changes: no source reaches an output or a register.")
    return sentence(
        look,
        top,
        f" settles in {with_unit(trail.total, scale, look)}: the last to settle is ",
        end_text(trail.sink, look),
        f", through {counted(trail.length, 'hop')} from ",
        end_text(trail.source, look),
        ".",
    )


def _between(record: PaceRecord, scale: Scale, look: Look) -> list[Text]:
    trail = record.between_registers
    if trail is None or trail.total <= 0:
        return []
    return sentence(
        look,
        f"From register to register the slowest trail takes {with_unit(trail.total, scale, look)}, from ",
        named(trail.source.name, look),
        " to ",
        named(trail.sink.name, look),
        ".",
    )


def _sinks(record: PaceRecord, scale: Scale, look: Look) -> list[Text]:
    """Return the table of sinks, each with a bar from when it stirs to when it has settled."""
    groups = [("output ports", record.outputs), ("register pins", record.register_pins)]
    groups = [(name, sinks) for name, sinks in groups if sinks.total]
    if not groups:
        return []
    shown = [sink for _, sinks in groups for sink in sinks.shown]
    least = max(12, look.width // 4)
    head, *lines = lay_out(
        _columns(look), [_cells(sink, scale) for sink in shown], look.width - least - GAP, look
    )
    used = cells(head.plain) + GAP
    last = max((sink.window[1] for sink in shown if sink.window), default=0.0)
    axis = Axis(last, max(1, look.width - used), scale.unit, look)
    for line, sink in zip(lines, shown, strict=True):
        if sink.window:
            line.append(" " * GAP).append_text(axis.bar(*sink.window, "bar"))
    rule = Text(look.glyph("rule") * used, STYLES["quiet"]).append_text(axis.rule())
    table = [Text(), head.append(" " * GAP).append_text(axis.labels()), rule]
    for name, sinks in groups:
        table.append(Text(f"{name}, {sinks.total}", STYLES["quiet"]))
        table += lines[: len(sinks.shown)] + _more(sinks, scale, look)
        lines = lines[len(sinks.shown) :]
    return table


def _columns(look: Look) -> list[Column]:
    return [
        Column("slowest first", least=12),
        Column(f"settles {look.glyph('rise')}", "right"),
        Column(f"settles {look.glyph('fall')}", "right"),
        Column("stirs", "right"),
    ]


def _cells(sink: SinkRecord, scale: Scale) -> list[Cell]:
    settles = ["never" if time is None else scale.text(time, "up") for time in sink.settles]
    return [f"  {sink.name}", *settles, scale.text(sink.window[0], "down") if sink.window else "never"]


def _more(sinks: SinksRecord, scale: Scale, look: Look) -> list[Text]:
    more = sinks.total - len(sinks.shown)
    if not more:
        return []
    by = "that never change" if sinks.rest is None else f"settled by {with_unit(sinks.rest, scale, look)}"
    return [Text(f"  {look.glyph('dot')} {more} more, {by}", STYLES["quiet"])]
