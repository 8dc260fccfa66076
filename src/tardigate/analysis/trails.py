"""The slowest and the fastest trails, in exact order of their total, without listing all.

Takes the graph and a grade, gives trails. Eppstein 1998, "Finding the k shortest paths", SIAM J. Comput.
28(2): the best way to each vertex forms a tree; every other trail is a row of sidetracks off it, and each
vertex has a heap of the sidetracks on its best way, made when first needed. Does not check its own sums:
`audit.py` does.
"""

from __future__ import annotations

from collections.abc import Iterator
from heapq import heappop, heappush
from itertools import islice
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from tardigate.analysis.heaps import Node, Sidetrack, insert
from tardigate.analysis.model import Grade, Times, Trail
from tardigate.analysis.sweep import early_delays, late_delays, settle
from tardigate.graph.model import Graph
from tardigate.source.arrays import distinct

Vertices = NDArray[np.integer]
Floats = NDArray[np.float64]


def slowest(
    graph: Graph,
    grade: Grade = "span",
    count: int = 1,
    sources: Vertices | None = None,
    sinks: Vertices | None = None,
    times: Times | None = None,
) -> list[Trail]:
    """Return the `count` slowest trails, slowest first.

    `sources` and `sinks` are any vertices (default: the graph's sources, both edges of its sinks); trails
    from a source begin at 0. Parallel hops make trails apart. Equal trails follow each other in a fixed
    order, so that a longer list begins with the shorter one. `times`: the sweep from the same sources in the
    same grade, where it is at hand. Totals are exact for delays of whole femtoseconds.
    """
    delays = late_delays(graph, grade)
    longest = settle(graph, delays, sources) if times is None else times.settles
    return list(islice(_Search(graph, delays, longest, sources, sinks, count).trails(), count))


def fastest(
    graph: Graph,
    grade: Grade = "span",
    count: int = 1,
    sources: Vertices | None = None,
    sinks: Vertices | None = None,
    times: Times | None = None,
) -> list[Trail]:
    """Return the `count` fastest trails, fastest first; see `slowest`."""
    delays = -early_delays(graph, grade)
    longest = settle(graph, delays, sources) if times is None else -times.stirs
    search = _Search(graph, delays, longest, sources, sinks, count)
    return [_mirrored(trail) for trail in islice(search.trails(), count)]


def _mirrored(trail: Trail) -> Trail:
    return Trail(trail.source, trail.sink, trail.hops, 0.0 - trail.delays, 0.0 - trail.total)


class _Found(NamedTuple):
    """A trail as its hops from the sink back, int32."""

    sink: int
    back: NDArray[np.int32]
    source: int


class _Piece(NamedTuple):
    """A stretch of the tree: hops from a vertex back, then the vertex where a known piece goes on.

    The last piece goes on at -1 and has the source; `depth` counts the hops from the vertex to there.
    """

    back: NDArray[np.int32]
    onward: int
    source: int
    depth: int


_Known = tuple[Node | None, _Piece, int]
"""What is known of a vertex: the heap of the sidetracks on its best way; the piece and place it begins at."""


class _Search:
    """Longest trails first; `time` is the longest way to each vertex, -inf where there is none."""

    def __init__(
        self,
        graph: Graph,
        delays: Floats,
        time: Floats,
        sources: Vertices | None,
        sinks: Vertices | None,
        count: int,
    ) -> None:
        self.graph, self.delays = graph, delays
        self.ends = _ends(graph, time, sinks, count)
        is_source = np.zeros(graph.vertices, np.bool_)
        is_source[graph.sources if sources is None else sources] = True
        place = np.full(graph.vertices, -1, np.int32)
        place[graph.heads] = np.arange(len(graph.heads), dtype=np.int32)
        self.place, self.is_source, self.time = place.data, is_source.data, time.data
        self.tail, self.head = graph.tail.data, graph.head.data
        self.row, self.start = graph.delay_row.data, graph.head_start.data
        self.delay: list[float] = delays.tolist()
        self.known: dict[int, _Known] = {}
        self.queue: list[tuple[float, int, _Found | None, Node | None, int]] = []
        self.pushed = 0

    def trails(self) -> Iterator[Trail]:
        """Yield every trail, longest first."""
        self._push_end(0)
        while self.queue:
            minus, _, before, node, number = heappop(self.queue)
            if node is None or before is None:
                self._push_end(number + 1)
                vertex = self.ends[number]
                heap = self._heap(vertex)
                found = self._found(vertex, [], vertex)
            else:
                loss, hop = node.sidetracks[number]
                self._push_beside(minus - loss, before, node, number)
                vertex = self.tail[hop] if hop >= 0 else -1
                heap = self._heap(vertex) if vertex >= 0 else None
                found = self._turned(before, hop, vertex)
            if heap is not None:
                self._push(minus + heap.loss, found, heap, 0)
            yield self._trail(found)

    def _push(self, minus: float, before: _Found | None, node: Node | None, number: int) -> None:
        self.pushed += 1
        heappush(self.queue, (minus, self.pushed, before, node, number))

    def _push_end(self, number: int) -> None:
        if number < len(self.ends):
            self._push(-self.time[self.ends[number]], None, None, number)

    def _push_beside(self, minus: float, before: _Found, node: Node, number: int) -> None:
        """Push what takes another sidetrack instead of this one; `minus` is without it."""
        if number + 1 < len(node.sidetracks):
            self._push(minus + node.sidetracks[number + 1][0], before, node, number + 1)
        if number == 0:
            for below in (node.left, node.right):
                if below is not None:
                    self._push(minus + below.loss, before, below, 0)

    def _heap(self, vertex: int) -> Node | None:
        """Return the heap of all sidetracks on the best way to a vertex, which is known from then on."""
        chain: list[tuple[int, list[Sidetrack]]] = []
        back: list[int] = []
        while vertex not in self.known:
            ways = self._ways(vertex)
            chain.append((vertex, ways[1:]))
            if ways[0][1] < 0:
                piece, heap = _Piece(np.array(back, np.int32), -1, vertex, len(back)), None
                break
            back.append(ways[0][1])
            vertex = self.tail[back[-1]]
        else:
            heap, beyond, at = self.known[vertex]
            piece = _Piece(np.array(back, np.int32), vertex, -1, len(back) + beyond.depth - at)
        for at in range(len(chain) - 1, -1, -1):
            vertex, sidetracks = chain[at]
            if sidetracks:
                heap = insert(heap, sidetracks)
            self.known[vertex] = heap, piece, at
        return heap

    def _ways(self, vertex: int) -> list[Sidetrack]:
        """Return the hops into a vertex that a trail can come through, best first."""
        time, tail, row, delay = self.time, self.tail, self.row, self.delay
        here = time[vertex]
        ways: list[Sidetrack] = [(here, -1 - vertex)] if self.is_source[vertex] else []
        place = self.place[vertex]
        if place >= 0:
            for hop in range(self.start[place], self.start[place + 1]):
                through = time[tail[hop]] + delay[row[hop]]
                if through > -np.inf:
                    ways.append((here - through, hop))
        if len(ways) > 1:
            ways.sort()
        return ways

    def _found(self, sink: int, back: list[NDArray[np.int32]], vertex: int) -> _Found:
        """Return the trail that comes the best way to a vertex and on through the hops `back` to its sink."""
        while True:
            _, piece, at = self.known[vertex]
            back.append(piece.back[at:])
            if piece.onward < 0:
                return _Found(sink, np.concatenate(back), piece.source)
            vertex = piece.onward

    def _turned(self, before: _Found, hop: int, vertex: int) -> _Found:
        """Return a trail with its last stretch, on the tree, left for a sidetrack from `vertex`."""
        leaves = self.head[hop] if hop >= 0 else -1 - hop
        _, piece, at = self.known[leaves]
        kept = before.back[: len(before.back) - (piece.depth - at)]
        if hop < 0:
            return _Found(before.sink, kept, leaves)
        return self._found(before.sink, [kept, np.array([hop], np.int32)], vertex)

    def _trail(self, found: _Found) -> Trail:
        hops = found.back[::-1].astype(np.int64)
        delays = self.delays[self.graph.delay_row[hops]]
        return Trail(found.source, found.sink, hops, delays, float(delays.sum()))


def _ends(graph: Graph, time: Floats, sinks: Vertices | None, count: int) -> list[int]:
    """Return the vertices of the sinks that a trail reaches, longest first; at least the first `count`."""
    if sinks is None:
        sinks = np.concatenate([2 * graph.sinks, 2 * graph.sinks + 1])
    ends = distinct(sinks)
    ends = ends[time[ends] > -np.inf]
    if 0 < count < len(ends):
        least = np.partition(time[ends], len(ends) - count)[len(ends) - count]
        ends = ends[time[ends] >= least]
    order: list[int] = ends[np.argsort(-time[ends], kind="stable")].tolist()
    return order
