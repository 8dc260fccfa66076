"""The flat design to its graph of (net, edge) vertices and hops.

Takes the flat columns, gives hops sorted by level and head, sources and sinks. A combinational loop is
refused (`check.py`); undriven and multiply driven nets are the netlist's to tell.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from tardigate.graph.check import refuse_loops
from tardigate.graph.expand import ClockPins, Hops, expand_arcs, expand_hops, find_clock_pins
from tardigate.graph.levels import IN_LOOP, find_levels
from tardigate.graph.model import Graph
from tardigate.netlist.batches import Batch, batches
from tardigate.netlist.flat import CONSTANTS, Flat
from tardigate.parts.kind import Way
from tardigate.source.arrays import distinct
from tardigate.source.collector import Collector


def build(flat: Flat, collector: Collector | None = None) -> Graph:
    """Return the graph of a flat design.

    Raises InputRefusedError (G101) when there are combinational loops; `collector` is told of each.
    """
    groups = batches(flat)
    clock_pins = find_clock_pins(groups)
    level = _levels(flat, groups, clock_pins, Collector() if collector is None else collector)
    hops = expand_hops(groups, flat.nets, clock_pins)
    order = _order(hops, level)
    head = hops.head[order]
    begin = np.flatnonzero(np.diff(head, prepend=-1))
    heads = head[begin]
    deepest = int(level.max(initial=0))
    row_kind, row_hop, delays = _rows(flat)
    return Graph(
        nets=flat.nets,
        tail=hops.tail[order],
        head=head,
        delay_row=hops.row[order],
        instance=hops.instance[order],
        delays=delays,
        row_kind=row_kind,
        row_hop=row_hop,
        heads=heads,
        head_start=np.append(begin, len(head)).astype(np.int64),
        level_start=np.searchsorted(level[heads >> 1], np.arange(1, deepest + 2)).astype(np.int64),
        sources=_sources(flat, clock_pins),
        sinks=_sinks(flat, groups),
        clock_pin_instance=clock_pins.instance,
        clock_pin_pin=clock_pins.pin,
    )


def _levels(
    flat: Flat, groups: list[Batch], clock_pins: ClockPins, collector: Collector
) -> NDArray[np.int32]:
    arcs = expand_arcs(groups, flat.nets, clock_pins)
    level = find_levels(flat.nets + len(clock_pins.instance), arcs.tail, arcs.head)
    if (level == IN_LOOP).any():
        refuse_loops(flat, arcs, level == IN_LOOP, collector)
    return level


def _order(hops: Hops, level: NDArray[np.int32]) -> NDArray[np.int64]:
    """Return the hops' order by level of head, head, and order of making.

    Keys and numbers are packed into one integer each, which sorts several times quicker than an argsort.
    """
    low = np.int64(0xFFFFFFFF)
    by_level = np.sort(level.astype(np.int64) << 32 | np.arange(len(level))) & low
    rank = np.empty(len(level), np.int64)
    rank[by_level] = np.arange(len(level)) << 33
    key = rank.take(hops.head >> 1, mode="clip")
    key |= (hops.head & 1).astype(np.int64) << 32
    key |= np.arange(len(key))
    key.sort()
    key &= low
    return key


def _rows(flat: Flat) -> tuple[NDArray[np.int32], NDArray[np.int32], NDArray[np.float64]]:
    """Return kind and hop of each row of delays, and the rows, float64[rows, 3]."""
    count = [kind.hops for kind in flat.kinds]
    row_kind = np.repeat(np.arange(len(count), dtype=np.int32), count)
    row_hop = np.concatenate([np.empty(0, np.int32), *(np.arange(n, dtype=np.int32) for n in count)])
    delays = np.concatenate([np.empty((0, 3)), *(kind.delays.reshape(-1, 3) for kind in flat.kinds)])
    return row_kind, row_hop, delays


def _sources(flat: Flat, clock_pins: ClockPins) -> NDArray[np.int32]:
    """Return both edges of each input port bit, then the launching edges of each clock pin, ascending."""
    ports = [port.net for port in flat.ports if port.way != Way.OUTPUT and port.net >= CONSTANTS]
    nets = distinct(np.array(ports, np.int64))
    kind_of = flat.inst_kind[clock_pins.instance]
    edges = np.zeros((len(kind_of), 2), np.bool_)
    for number in distinct(kind_of):
        kind = flat.kinds[number]
        launch = np.zeros((len(kind.pins), 2), np.bool_)
        launch[kind.hop_from[kind.launches], kind.from_edge[kind.launches]] = True
        of_kind = kind_of == number
        edges[of_kind] = launch[clock_pins.pin[of_kind]]
    launches = np.flatnonzero(edges.reshape(-1)) + 2 * flat.nets
    return np.concatenate([np.stack([2 * nets, 2 * nets + 1], axis=1).reshape(-1), launches]).astype(np.int32)


def _sinks(flat: Flat, groups: list[Batch]) -> NDArray[np.int32]:
    """Return the nets of output port bits and of the pins where trails end, ascending, each once."""
    ports = [port.net for port in flat.ports if port.way != Way.INPUT]
    found = [np.array(ports, np.int32)]
    found += [batch.nets[batch.kind.sinks].reshape(-1) for batch in groups if len(batch.kind.sinks)]
    nets = distinct(np.concatenate(found))
    return nets[nets >= CONSTANTS].astype(np.int32)
