"""What the figures rest on that nobody stated, counted.

Takes the flat design, the graph, a grade and the sweep, gives one record for each assumption that was made.
Does not word it.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from tardigate.analysis.model import Grade, Times
from tardigate.analysis.sweep import COLUMNS
from tardigate.graph.model import Graph
from tardigate.netlist.flat import CONSTANTS, Flat
from tardigate.parts.kind import Origin, Way
from tardigate.source.arrays import distinct

Key = Literal[
    "inputs_at_zero",  # input port bits taken as changing at 0
    "clock_pins_at_zero",  # register clock pins taken as clocked at 0
    "clocks_through_logic",  # register clock pins not straight on an input port; that delay is not counted
    "wires_at_zero",  # nets taken as wires of 0 ns
    "minima_at_zero",  # hops whose min is missing and taken as 0
    "parts_with_minima_at_zero",  # part instances that have such a hop
    "on_family_default",  # part instances on a family default
    "unknown_functions",  # part instances without function: both edges pass both ways
    "tied_inputs",  # inputs tied to a constant; their parts' other trails are kept all the same
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
        "clocks_through_logic": _clocks_through_logic(flat, graph, inputs),
        "wires_at_zero": flat.nets - CONSTANTS,
        "minima_at_zero": hops,
        "parts_with_minima_at_zero": instances,
        "on_family_default": int(origin[Origin.DEFAULT]),
        "unknown_functions": int(_of_kinds(flat, [kind.unknown_function for kind in flat.kinds]).sum()),
        "tied_inputs": _tied_inputs(flat),
        "assigned_wires": int(origin[Origin.WIRE]),
        "never_changing_nets": int(never[CONSTANTS : flat.nets].sum()),
    }
    return tuple(Assumption(key, count) for key, count in counts.items() if count)


def _of_kinds(flat: Flat, marks: Sequence[bool]) -> NDArray[np.bool_]:
    """Return what is said of each kind for each part instance."""
    of_instances: NDArray[np.bool_] = np.array(marks, np.bool_)[flat.inst_kind]
    return of_instances


def _clocks_through_logic(flat: Flat, graph: Graph, inputs: set[int]) -> int:
    pins = flat.pin_start[graph.clock_pin_instance] + graph.clock_pin_pin
    return sum(net >= CONSTANTS and net not in inputs for net in flat.pin_net[pins].tolist())


def _tied_inputs(flat: Flat) -> int:
    """Return how many pins of parts with several inputs are on a constant net."""
    tied = np.flatnonzero((flat.pin_net >= 0) & (flat.pin_net < CONSTANTS))
    instances = np.searchsorted(flat.pin_start, tied, "right") - 1
    return int(_of_kinds(flat, [kind.inputs > 1 for kind in flat.kinds])[instances].sum())


def _minima_at_zero(graph: Graph, grade: Grade) -> tuple[int, int]:
    """Return how many hops and how many part instances lack a min that the grade uses."""
    if COLUMNS[grade][1] != 0:
        return 0, 0
    row_lacks = np.isnan(graph.delays[:, 0])
    if not row_lacks.any():
        return 0, 0
    lacking = row_lacks[graph.delay_row]
    return int(lacking.sum()), len(distinct(graph.instance[lacking]))
