"""Combinational loops: strongly connected components and a short ring of each.

Takes arcs between points, gives rings as numbers of arcs, in the order in which a change runs round.
Does not tell anybody.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from tardigate.graph.expand import Arcs

Out = dict[int, dict[int, int]]
"""Tail → head → number of the first arc between them."""

STARTS, STEPS = 48, 400_000
"""A ring is looked for from so many points of a component at most, and fewer the larger the component."""


def find_rings(arcs: Arcs, suspect: NDArray[np.bool_]) -> list[list[int]]:
    """Return one ring of arcs for each component, by its lowest point.

    A ring is the shortest through some of the component's points (breadth first, Moore 1959); parallel arcs
    are one here, the first of them stands for all. `suspect` bool[points] limits the search.
    """
    out = _first_arcs(arcs, suspect)
    return [_ring(out, component) for component in _components(out)]


def _first_arcs(arcs: Arcs, suspect: NDArray[np.bool_]) -> Out:
    """Return tail → head → number of the first arc, of arcs between suspect points."""
    out: Out = {}
    inside = np.flatnonzero(suspect[arcs.tail] & suspect[arcs.head])
    columns = inside, arcs.tail[inside], arcs.head[inside]
    for arc, tail, head in zip(*(column.tolist() for column in columns), strict=True):
        out.setdefault(tail, {}).setdefault(head, arc)
    return out


def _components(out: Out) -> list[list[int]]:
    """Return the points of each component that holds a loop, both in ascending order."""
    import networkx  # only when there is a loop

    graph = networkx.DiGraph(out)
    parts: Iterator[set[int]] = networkx.strongly_connected_components(graph)
    return sorted(sorted(part) for part in parts if len(part) > 1 or graph.has_edge(*(2 * tuple(part))))


def _ring(out: Out, component: list[int]) -> list[int]:
    """Return the shortest ring that the component's first points lie on."""
    inside = set(component)
    best: list[int] = []
    for start in component[: max(1, min(STARTS, STEPS // len(component)))]:
        found = _ring_through(out, start, inside, len(best))
        if found:
            best = found
        if len(best) == 1:
            break
    return best


def _ring_through(out: Out, start: int, inside: set[int], shorter_than: int) -> list[int]:
    """Return the shortest ring through a point as arcs; empty when none is shorter (0 asks for any)."""
    came: dict[int, int] = {}
    front, length = [start], 1
    while front and (not shorter_than or length < shorter_than):
        reached = []
        for point in front:
            for head in out.get(point, {}):
                if head in inside and head not in came:
                    came[head] = point
                    reached.append(head)
        if start in came:
            return _arcs_back(out, came, start)
        front, length = reached, length + 1
    return []


def _arcs_back(out: Out, came: dict[int, int], start: int) -> list[int]:
    ring: list[int] = []
    head = start
    while not ring or head != start:
        tail = came[head]
        ring.append(out[tail][head])
        head = tail
    return ring[::-1]
