"""What an analysis refuses: numbers that the grade needs and nobody gave.

Takes the graph and a grade, tells every pair of pins that lacks one. A missing min is no fault: it counts as
0 and is an assumption.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from tardigate.analysis.model import Grade
from tardigate.analysis.sweep import COLUMNS
from tardigate.graph.model import Graph
from tardigate.netlist.flat import Flat
from tardigate.netlist.names import Names
from tardigate.source.collector import Collector

COLUMN_NAMES = ("min", "typ", "max")


def missing_numbers(graph: Graph, grade: Grade) -> NDArray[np.int64]:
    """Return the rows of `Graph.delays` that hops use and that lack a typ or max which the grade needs."""
    column = COLUMNS[grade][0]
    if column == 0:
        return np.empty(0, np.int64)
    used = np.zeros(len(graph.delays), np.bool_)
    used[graph.delay_row] = True
    return np.flatnonzero(used & np.isnan(graph.delays[:, column]))


def refuse_missing(flat: Flat, graph: Graph, grade: Grade, collector: Collector) -> None:
    """Tell G102 for each kind and pair of pins that lacks a number, at the first instance of the kind.

    Raises InputRefusedError for any.
    """
    names = Names(flat)
    for row in missing_numbers(graph, grade).tolist():
        kind, hop = flat.kinds[graph.row_kind[row]], graph.row_hop[row]
        user = int(np.argmax(flat.inst_kind == graph.row_kind[row]))  # first of the instances
        collector.tell(
            "G102",
            names.place(user) if collector.room("G102") else None,
            kind=kind.name,
            column=COLUMN_NAMES[COLUMNS[grade][0]],
            pin_in=kind.pins[kind.hop_from[hop]],
            pin_out=kind.pins[kind.hop_to[hop]],
            grade=grade,
            words=kind.words or "no place known",
        )
    collector.refuse()
