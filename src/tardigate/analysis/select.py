"""Where trails may begin and end, from points to vertices.

Takes nets and register pins, gives vertices for `sweep` and `trails`. Does not know names.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from tardigate.graph.model import Graph
from tardigate.netlist.flat import CONSTANTS, Flat
from tardigate.source.arrays import distinct

Ints = NDArray[np.int64]


def both_edges(points: Sequence[int] | NDArray[np.integer]) -> Ints:
    """Return the vertices of points, int64[2 * distinct points], ascending."""
    once = distinct(np.asarray(points, np.int64))
    return np.stack([2 * once, 2 * once + 1], axis=1).reshape(-1)


def clock_vertices(graph: Graph, instances: Sequence[int]) -> Ints:
    """Return the vertices of the graph's sources at the clock pins of registers, ascending."""
    of_instance = np.flatnonzero(np.isin(graph.clock_pin_instance, np.asarray(instances, np.int64)))
    return np.intersect1d(both_edges(of_instance + graph.nets), graph.sources)


def clock_vertices_on(flat: Flat, graph: Graph, nets: Sequence[int]) -> Ints:
    """Return the vertices of the graph's sources at register clock pins on some nets, ascending."""
    pins = flat.pin_start[graph.clock_pin_instance] + graph.clock_pin_pin
    on_net = np.flatnonzero(np.isin(flat.pin_net[pins], np.asarray(nets, np.int64)))
    return np.intersect1d(both_edges(on_net + graph.nets), graph.sources)


def sink_nets(flat: Flat, instances: Sequence[int]) -> Ints:
    """Return the nets at the data and control pins of registers, ascending, each once."""
    found = [np.empty(0, np.int64)]
    for instance in instances:
        pins = flat.kinds[flat.inst_kind[instance]].sinks
        found.append(flat.pin_net[flat.pin_start[instance] + pins].astype(np.int64))
    nets = distinct(np.concatenate(found))
    return nets[nets >= CONSTANTS]
