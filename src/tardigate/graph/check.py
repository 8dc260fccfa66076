"""What the graph refuses: combinational loops.

Takes arcs and the points that have no level, tells each loop as its ring of pins with their places.
"""

from __future__ import annotations

from typing import NoReturn

import numpy as np
from numpy.typing import NDArray

from tardigate.graph.expand import Arcs
from tardigate.graph.loops import find_rings
from tardigate.netlist.flat import Flat
from tardigate.netlist.names import Names
from tardigate.source.collector import Collector
from tardigate.source.diagnostic import Related
from tardigate.source.faults import InternalFaultError

LISTED = 24
"""Hops of a ring that are listed with their places; the rest are counted."""


def refuse_loops(flat: Flat, arcs: Arcs, suspect: NDArray[np.bool_], collector: Collector) -> NoReturn:
    """Tell G101 for each loop and refuse; `suspect` bool[points] are the points in loops or behind them."""
    names = Names(flat)
    rings = find_rings(arcs, suspect)
    for ring in rings:
        steps = _steps(flat, names, arcs, ring)
        related = tuple(
            Related(names.place(int(arcs.instance[arc])), step)
            for arc, step in zip(ring, steps, strict=False)
        )
        if len(ring) > LISTED:
            steps.append(f"({len(ring) - LISTED} more)")
        place = names.place(int(arcs.instance[ring[0]]))
        collector.tell("G101", place, related=related, hops=_count(len(ring)), ring=", ".join(steps))
    collector.refuse()
    raise InternalFaultError("Points without a level form no loop.")


def _steps(flat: Flat, names: Names, arcs: Arcs, ring: list[int]) -> list[str]:
    """Return the first hops of a ring as `instance.pin → pin`."""
    found = []
    for arc in ring[:LISTED]:
        instance = int(arcs.instance[arc])
        pins = flat.kinds[flat.inst_kind[instance]].pins
        found.append(f"{names.instance(instance)}.{pins[arcs.pin_in[arc]]} → {pins[arcs.pin_out[arc]]}")
    return found


def _count(hops: int) -> str:
    return f"{hops} hop{'' if hops == 1 else 's'}"
