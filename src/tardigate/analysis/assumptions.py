"""What the figures rest on that nobody stated, counted.

Takes the flat design, the graph, a grade and the sweep, gives one record for each assumption that was made.
Does not word it.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np

from tardigate.analysis.model import Grade, Times
from tardigate.analysis.sweep import COLUMNS
from tardigate.graph.model import Graph
from tardigate.netlist.flat import CONSTANTS, Flat
from tardigate.parts.kind import Origin, Way
from tardigate.source.arrays import distinct

Key = Literal[
    "inputs_at_zero",  # input port bits taken as changing at 0
    "clock_pins_at_zero",  # register clock pins taken as clocked at 0
    "wires_at_zero",  # nets taken as wires of 0 ns
    "minima_at_zero",  # hops whose min is missing and taken as 0
    "parts_with_minima_at_zero",  # part instances that have such a hop
    "on_family_default",  # part instances on a family default
    "assigned_wires",  # assignments without operator, taken as wires of 0 ns
    "units_assumed",  # delays in the source without a `timescale`, taken as ns
    "at_rated_load",  # part instances whose times are taken as at the rated load
    "wire_rows_left_out",  # statements of parts files about wires that no figure counts
    "never_changing_nets",  # nets that no source reaches; they are left out of every figure
]


@dataclass(frozen=True, slots=True)
class Assumption:
    """One assumption and how often it was made."""

    key: Key
    count: int


def find_assumptions(flat: Flat, graph: Graph, grade: Grade, times: Times) -> tuple[Assumption, ...]:
    """Return the assumptions that were made at least once, in the order of `Key`."""
    origin = np.bincount(
        np.array([kind.origin for kind in flat.kinds], np.int64)[flat.inst_kind], minlength=len(Origin)
    )
    inputs = {port.net for port in flat.ports if port.way != Way.OUTPUT and port.net >= CONSTANTS}
    hops, instances = _minima_at_zero(graph, grade)
    never = (times.settles == -np.inf).reshape(-1, 2).all(axis=1)
    counts: dict[Key, int] = {
        "inputs_at_zero": len(inputs),
        "clock_pins_at_zero": len(graph.clock_pin_instance),
        "wires_at_zero": flat.nets - CONSTANTS,
        "minima_at_zero": hops,
        "parts_with_minima_at_zero": instances,
        "on_family_default": int(origin[Origin.DEFAULT]),
        "assigned_wires": int(origin[Origin.WIRE]),
        "never_changing_nets": int(never[CONSTANTS : flat.nets].sum()),
    }
    return tuple(Assumption(key, count) for key, count in counts.items() if count)


def _minima_at_zero(graph: Graph, grade: Grade) -> tuple[int, int]:
    """Return how many hops and how many part instances lack a min that the grade uses."""
    if COLUMNS[grade][1] != 0:
        return 0, 0
    row_lacks = np.isnan(graph.delays[:, 0])
    if not row_lacks.any():
        return 0, 0
    lacking = row_lacks[graph.delay_row]
    return int(lacking.sum()), len(distinct(graph.instance[lacking]))
