"""When each vertex settles and stirs: one pass over the levels for each.

Takes the graph and a grade, gives times. A missing number counts as 0: `check.py` refuses first where that
would not be safe. Wide levels run as arrays, runs of narrow ones hop by hop.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from tardigate.analysis.model import Grade, Times
from tardigate.graph.model import Graph

Floats = NDArray[np.float64]

WIDE = 32
"""Hops of a level from which on an array step is quicker than steps hop by hop."""

COLUMNS: dict[Grade, tuple[int, int]] = {"span": (2, 0), "min": (0, 0), "typ": (1, 1), "max": (2, 2)}
"""Column of `Graph.delays` for settles and for stirs."""


def late_delays(graph: Graph, grade: Grade) -> Floats:
    """Return the delays that settles adds, float64[rows], fs; a missing one is 0."""
    return _known(graph.delays[:, COLUMNS[grade][0]])


def early_delays(graph: Graph, grade: Grade) -> Floats:
    """Return the delays that stirs adds, float64[rows], fs; a missing one is 0."""
    return _known(graph.delays[:, COLUMNS[grade][1]])


def _known(delays: Floats) -> Floats:
    return np.where(np.isnan(delays), 0.0, delays)


def sweep(graph: Graph, grade: Grade = "span", sources: NDArray[np.integer] | None = None) -> Times:
    """Return when each vertex settles and stirs after all sources change at 0.

    `sources` are the vertices that change (default: the graph's). Longest and shortest paths of an acyclic
    graph in topological order (Kirkpatrick and Clark 1966, "PERT as an analytical aid", IBM J. 10(2)).
    """
    late = settle(graph, late_delays(graph, grade), sources)
    early = settle(graph, -early_delays(graph, grade), sources)
    return Times(late, 0.0 - early)


def settle(graph: Graph, delays: Floats, sources: NDArray[np.integer] | None = None) -> Floats:
    """Return the length of the longest trail to each vertex, float64[vertices], -inf where there is none.

    `delays` float64[rows]. With all delays negated the result is the shortest, negated.
    """
    start = graph.sources if sources is None else np.asarray(sources)
    time = np.full(graph.vertices, -np.inf)
    time[start] = 0.0
    is_source = np.zeros(graph.vertices, np.bool_)
    is_source[start] = True
    kept = graph.heads[is_source[graph.heads]]  # sources that hops lead into: an inout port
    for first, last, wide in _runs(graph):
        if not wide:
            _narrow(graph, delays, time, first, last)
            continue
        _wide(graph, delays, time, first, last)
        if len(kept):
            time[kept] = np.maximum(time[kept], 0.0)
    return time


def _runs(graph: Graph) -> Iterator[tuple[int, int, bool]]:
    """Yield stretches of heads: one wide level each, or all narrow levels in a row."""
    begin = graph.level_start
    wide = np.diff(graph.head_start[begin]) >= WIDE
    cuts = np.flatnonzero(wide[1:] | wide[:-1]) + 1 if len(wide) else np.empty(0, np.int64)
    for first, last in zip([0, *cuts.tolist()], [*cuts.tolist(), len(wide)], strict=True):
        if first < last:
            yield int(begin[first]), int(begin[last]), bool(wide[first])


def _wide(graph: Graph, delays: Floats, time: Floats, first: int, last: int) -> None:
    start = graph.head_start[first : last + 1]
    hops = slice(start[0], start[-1])
    through = time.take(graph.tail[hops], mode="clip")
    through += delays.take(graph.delay_row[hops], mode="clip")
    time[graph.heads[first:last]] = np.maximum.reduceat(through, start[:-1] - start[0])


def _narrow(graph: Graph, delays: Floats, time: Floats, first: int, last: int) -> None:
    hops = slice(graph.head_start[first], graph.head_start[last])
    steps = graph.tail[hops], graph.head[hops], delays[graph.delay_row[hops]]
    at = time.data
    for tail, head, delay in zip(*(column.tolist() for column in steps), strict=True):
        through = at[tail] + delay
        if through > at[head]:
            at[head] = through
