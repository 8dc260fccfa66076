"""The flat design to its graph of (net, edge) vertices and hops.

Takes the flat columns, gives hops sorted by level and head, sources and sinks. A combinational loop is
refused (`check.py`); undriven and multiply driven nets are the netlist's to tell.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from tardigate.graph.check import refuse_loops
from tardigate.graph.expand import ClockPins, Hops, batches, expand_arcs, expand_hops, find_clock_pins
from tardigate.graph.levels import IN_LOOP, find_levels
from tardigate.graph.model import Graph
from tardigate.netlist.flat import CONSTANTS, Flat
from tardigate.parts.kind import Way
from tardigate.source.collector import Collector


def build(flat: Flat, collector: Collector | None = None) -> Graph:
    """Return the graph of a flat design.

    Raises InputRefusedError (G101) when there are combinational loops; `collector` is told of each.
    """
    clock_pins = find_clock_pins(flat)
    level = _levels(flat, clock_pins, Collector() if collector is None else collector)
    hops = expand_hops(flat, clock_pins)
    order, point_of = _order(hops, level)
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
        sinks=_sinks(flat),
        clock_pin_instance=clock_pins.instance,
        clock_pin_pin=clock_pins.pin,
    )


def _levels(flat: Flat, clock_pins: ClockPins, collector: Collector) -> NDArray[np.int32]:
    arcs = expand_arcs(flat, clock_pins)
    level = find_levels(flat.nets + len(clock_pins.instance), arcs.tail, arcs.head)
    if (level == IN_LOOP).any():
        refuse_loops(flat, arcs, level == IN_LOOP, collector)
    return level
