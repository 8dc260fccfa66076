"""Every reported trail added up again by other means.

Takes the flat design and what the search found, and goes over each trail hop by hop from the parts' own
figures: instance to kind, kind to pins, edges and delay, pins to nets. It reads neither the graph's vertices
nor its delays. A difference is a fault of this program.
"""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise
from math import fsum
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from tardigate.analysis.model import Grade, Times, Trail
from tardigate.graph.model import Graph
from tardigate.netlist.flat import Flat
from tardigate.parts.kind import Way
from tardigate.source.arrays import distinct
from tardigate.source.faults import InternalFaultError

TOLERANCE = 1e-12
"""Of a total: sums of whole femtoseconds agree exactly, others up to the last bits of float64."""


class _Steps(NamedTuple):
    """The hops that the trails use, from the parts; `row` int32[graph's hops] is where each stands here.

    `begin`, `end` int64 are net and edge as `2 * net + edge`, where a register's clock pin counts as net
    `-1 - number of the pin`; `delays` float64, fs.
    """

    row: NDArray[np.int32]
    begin: NDArray[np.int64]
    end: NDArray[np.int64]
    delays: NDArray[np.float64]


def audit(
    flat: Flat,
    graph: Graph,
    trails: Sequence[Trail],
    grade: Grade,
    late: bool = True,
    times: Times | None = None,
    whole: bool = False,
) -> None:
    """Raise InternalFaultError when a trail is not what the parts say.

    `late`: they are the slowest trails (else the fastest). `times`: the sweep from the same sources; the
    first trail listed for a sink must take just as long as the sweep says. `whole`: neither sources nor
    sinks were chosen, so that each trail must begin and end where the design's trails do.
    """
    steps = _steps(flat, graph, trails, grade, late)
    for number, trail in enumerate(trails):
        _check_trail(flat, graph, trail, steps, number)
    _check_order(trails, late)
    if times is not None:
        _check_times(trails, times.settles if late else times.stirs)
    if whole:
        _check_ends(flat, trails)


def _steps(flat: Flat, graph: Graph, trails: Sequence[Trail], grade: Grade, late: bool) -> _Steps:
    used = np.zeros(len(graph.tail), np.bool_)
    for trail in trails:
        used[trail.hops] = True
    hops = np.flatnonzero(used)
    instance, delay_row = graph.instance[hops], graph.delay_row[hops]
    kind = flat.inst_kind[instance]
    if (graph.row_kind[delay_row] != kind).any():
        raise InternalFaultError("Audit: a hop uses the delay of another kind.")
    pin, edge = np.zeros((2, len(hops)), np.int64), np.zeros((2, len(hops)), np.int64)
    delays, launches = np.zeros(len(hops)), np.zeros(len(hops), np.bool_)
    for number in distinct(kind):
        part, here = flat.kinds[number], np.flatnonzero(kind == number)
        line = graph.row_hop[delay_row[here]]
        pin[:, here] = part.hop_from[line], part.hop_to[line]
        edge[:, here] = part.from_edge[line], part.to_edge[line]
        delays[here] = np.array([_figure(triple, grade, late) for triple in part.delays.tolist()])[line]
        launches[here] = part.launches[line]
    pin += flat.pin_start[instance]
    nets = flat.pin_net[pin].astype(np.int64)
    nets[0, launches] = -1 - pin[0, launches]
    begin, end = 2 * nets + edge
    return _Steps((np.cumsum(used) - 1).astype(np.int32), begin, end, delays)


def _figure(triple: list[float], grade: Grade, late: bool) -> float:
    """Return the number of a triple that the grade asks for; a missing one is 0."""
    by_name = dict(zip(("min", "typ", "max"), triple, strict=True))
    figure = by_name[("max" if late else "min") if grade == "span" else grade]
    return 0.0 if figure != figure else figure  # only NaN differs from itself


def _check_trail(flat: Flat, graph: Graph, trail: Trail, steps: _Steps, number: int) -> None:
    rows = steps.row[trail.hops]
    at = np.concatenate([[_place(flat, graph, trail.source)], steps.end[rows]])
    apart = at[:-1] ^ steps.begin[rows]
    if apart.any():
        what = "edges" if (apart <= 1).all() and (apart >= 0).all() else "nets"
        raise InternalFaultError(f"Audit: the hops of trail {number} do not join: other {what}.")
    if at[-1] != _place(flat, graph, trail.sink):
        raise InternalFaultError(f"Audit: trail {number} does not end at its sink.")
    delays = steps.delays[rows]
    total = fsum(delays.tolist())
    if (trail.delays != delays).any() or abs(total - trail.total) > TOLERANCE * abs(total):
        raise InternalFaultError(
            f"Audit: trail {number} takes {total:.0f} fs by the parts, {trail.total:.0f} fs by the search."
        )


def _place(flat: Flat, graph: Graph, vertex: int) -> int:
    """Return net and edge of a vertex as in `_Steps`."""
    point, edge = divmod(vertex, 2)
    if point < flat.nets:
        return vertex
    pin = point - flat.nets
    return 2 * (-1 - int(flat.pin_start[graph.clock_pin_instance[pin]] + graph.clock_pin_pin[pin])) + edge


def _check_order(trails: Sequence[Trail], late: bool) -> None:
    totals = [trail.total if late else -trail.total for trail in trails]
    if any(before < after for before, after in pairwise(totals)):
        raise InternalFaultError("Audit: the trails are out of order.")
    if len({(trail.source, trail.sink, trail.hops.tobytes()) for trail in trails}) < len(trails):
        raise InternalFaultError("Audit: a trail is listed twice.")


def _check_times(trails: Sequence[Trail], times: NDArray[np.float64]) -> None:
    seen: set[int] = set()
    for number, trail in enumerate(trails):
        swept = float(times[trail.sink])
        if trail.sink not in seen and abs(swept - trail.total) > TOLERANCE * abs(swept):
            raise InternalFaultError(
                f"Audit: trail {number} takes {trail.total:.0f} fs, its sink {swept:.0f} fs in the sweep."
            )
        seen.add(trail.sink)


def _check_ends(flat: Flat, trails: Sequence[Trail]) -> None:
    inputs = {port.net for port in flat.ports if port.way != Way.OUTPUT}
    outputs = {port.net for port in flat.ports if port.way != Way.INPUT}
    outputs |= _at_registers(flat, [trail.sink // 2 for trail in trails])
    for number, trail in enumerate(trails):
        source, sink = trail.source // 2, trail.sink // 2
        if source < flat.nets and source not in inputs:
            raise InternalFaultError(f"Audit: trail {number} begins at a net that no port drives.")
        if sink not in outputs:
            raise InternalFaultError(f"Audit: trail {number} ends neither at a port nor at a register.")


def _at_registers(flat: Flat, nets: list[int]) -> set[int]:
    """Return those of the nets that a register's data or control pin is on."""
    wanted = np.zeros(flat.nets + 1, np.bool_)  # the last is for open pins, -1
    wanted[nets] = True
    pins = np.flatnonzero(wanted[flat.pin_net])
    instance = np.searchsorted(flat.pin_start, pins, "right") - 1
    kind, pin = flat.inst_kind[instance], pins - flat.pin_start[instance]
    found: set[int] = set()
    for number in distinct(kind):
        at_sink = (kind == number) & np.isin(pin, flat.kinds[number].sinks)
        found.update(flat.pin_net[pins[at_sink]].tolist())
    return found
