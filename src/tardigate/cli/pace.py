"""The command `pace`."""

from __future__ import annotations

from typing import Any

import numpy as np

from tardigate.cli.answer import Answer
from tardigate.cli.given import request_of, subject_of
from tardigate.cli.options import Options
from tardigate.graph.model import Graph
from tardigate.pipeline import Loaded, assumptions_of, graph_of, load, times_of, trails_of
from tardigate.report.looks import Look
from tardigate.report.model import PaceRecord, TrailRecord
from tardigate.report.pace_view import pace_view
from tardigate.report.records import Records
from tardigate.report.waterfall import PLACE_FROM

MOST_HOPS = 12
"""Hops of the limiting trail that are told one by one; `trail` tells more."""


def pace(options: Options, look: Look) -> Answer:
    """Tell when a design settles. Raises InputRefusedError."""
    loaded = load(request_of(options))
    graph = graph_of(loaded)
    times = times_of(graph, options.grade)
    records = Records(loaded.flat, loaded.names, graph)
    most = None if options.json else options.outputs
    hops = None if options.json else MOST_HOPS
    places = options.json or look.width >= PLACE_FROM
    limiting = trails_of(loaded, graph, options.grade, 1, times=times)
    record = PaceRecord(
        subject_of(loaded),
        records.outputs(times, most),
        records.register_pins(times, most),
        records.trail(limiting[0], hops, places) if limiting else None,
        _between_registers(loaded, graph, options, records, hops),
        tuple((found.key, found.count) for found in assumptions_of(loaded, graph, options.grade, times)),
        loaded.warnings,
    )
    return Answer(lambda: pace_view(record, look), lambda: _body(record), loaded.warnings)


def _between_registers(
    loaded: Loaded, graph: Graph, options: Options, records: Records, hops: int | None
) -> TrailRecord | None:
    sources = graph.sources[graph.sources >= 2 * graph.nets]
    nets = records.register_nets()
    if not len(sources) or not len(nets):
        return None
    sinks = np.concatenate([2 * nets, 2 * nets + 1])
    trails = trails_of(loaded, graph, options.grade, 1, sources=sources, sinks=sinks)
    return records.trail(trails[0], hops, options.json) if trails else None


def _body(record: PaceRecord) -> dict[str, Any]:
    from tardigate.report.json_form import pace_json  # for those who ask for it

    return pace_json(record)
