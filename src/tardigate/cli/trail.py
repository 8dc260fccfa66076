"""The command `trail`."""

from __future__ import annotations

from typing import Any

from tardigate.cli.answer import Answer
from tardigate.cli.given import request_of, subject_of
from tardigate.cli.options import Options
from tardigate.pipeline import assumptions_of, graph_of, load, times_of, trails_of
from tardigate.report.looks import Look
from tardigate.report.model import TrailsRecord
from tardigate.report.pick import Picker
from tardigate.report.records import Records
from tardigate.report.trail_view import trail_view
from tardigate.report.waterfall import PLACE_FROM

MOST_HOPS = 200
"""Hops of a trail that are told one by one on a terminal; JSON tells all."""


def trail(options: Options, look: Look) -> Answer:
    """Tell the slowest or the fastest trails. Raises InputRefusedError."""
    loaded = load(request_of(options))
    graph = graph_of(loaded)
    picker = Picker(loaded.flat, loaded.names, graph)
    sources, sinks = picker.sources(options.from_names), picker.sinks(options.to_names)
    trails = trails_of(loaded, graph, options.grade, options.trails, not options.fastest, sources, sinks)
    records = Records(loaded.flat, loaded.names, graph)
    most = None if options.json else MOST_HOPS
    places = options.json or look.width >= PLACE_FROM
    assumptions = assumptions_of(loaded, graph, options.grade, times_of(graph, options.grade))
    record = TrailsRecord(
        subject_of(loaded),
        not options.fastest,
        options.from_names,
        options.to_names,
        tuple(records.trail(found, most, places) for found in trails),
        tuple((assumption.key, assumption.count) for assumption in assumptions),
        loaded.warnings,
    )
    return Answer(lambda: trail_view(record, look), lambda: _body(record), loaded.warnings)


def _body(record: TrailsRecord) -> dict[str, Any]:
    from tardigate.report.json_form import trail_json  # for those who ask for it

    return trail_json(record)
