"""Ways through a part's body: which input edge reaches which output edge, and how long that takes inside.

Takes a body, gives for each pair of pins and edges the longest and the shortest way by the delays that are
written inside (IEEE 1364-2005 clause 14.4, distributed delays). Iterative; a way goes round no loop.
"""

from __future__ import annotations

from collections.abc import Iterable
from typing import NamedTuple

import numpy as np

from tardigate.netlist.body import Body
from tardigate.netlist.cell_function import Functions
from tardigate.netlist.flat import CONSTANTS
from tardigate.parts.function import NEGATIVE, POSITIVE
from tardigate.parts.kind import Edge, Kind, Origin, Way
from tardigate.parts.source_delay import Triple

ZERO: Triple = (0.0, 0.0, 0.0)

MOST_STEPS = 1 << 22
"""Hops times input edges that ways are sought through."""

Vertex = int
"""2 * net + edge."""


class _Hop(NamedTuple):
    head: Vertex
    delay: Triple
    written: bool
    launches: bool


class Inside(NamedTuple):
    """All ways from one pin and edge to another: `late` the longest, `early` the shortest, fs.

    `written`: a delay in the source lies on one of them; `through`: one of them passes no register's clock.
    """

    late: Triple
    early: Triple
    written: bool
    through: bool


End = tuple[int, Edge]
"""A bit of the part's pins, and an edge of it."""


class Ways:
    """The ways through one body."""

    def __init__(self, body: Body, functions: Functions) -> None:
        self.flat = body.flat
        self._hops: dict[Vertex, list[_Hop]] = {}
        self._found: dict[End, dict[End, Inside]] = {}
        self.has_delays = False
        for inst, number in enumerate(self.flat.inst_kind.tolist()):
            kind = self.flat.kinds[number]
            self._add(kind, number in body.cells and kind.group == "part", inst, functions)
        for net, follows in functions.follows.items():
            for edge in Edge:
                self._hops.setdefault(2 * follows + edge, []).append(_Hop(2 * net + edge, ZERO, False, False))
        self._heads: dict[Vertex, list[End]] = {}
        for bit, port in enumerate(self.flat.ports):
            for edge in Edge if port.way != Way.INPUT else ():
                self._heads.setdefault(2 * port.net + edge, []).append((bit, edge))

    def _add(self, kind: Kind, part: bool, inst: int, functions: Functions) -> None:
        """Add the hops of an instance; those of a gate without `#` take no time (7.14), of a part its own."""
        counts = np.full(kind.hops, part or kind.origin == Origin.SOURCE) & ~np.isnan(kind.delays).all(axis=1)
        self.has_delays |= bool(counts.any())
        columns = (kind.hop_from, kind.hop_to, kind.from_edge, kind.to_edge, kind.launches, counts)
        rows = zip(*(column.tolist() for column in columns), np.nan_to_num(kind.delays).tolist(), strict=True)
        for tail, head, from_edge, to_edge, launches, counted, delay in rows:
            nets = functions.net(inst, tail), functions.net(inst, head)
            if min(nets) >= CONSTANTS:
                hop = _Hop(2 * nets[1] + to_edge, tuple(delay) if counted else ZERO, counted, launches)
                self._hops.setdefault(2 * nets[0] + from_edge, []).append(hop)

    def too_many(self) -> bool:
        """Tell whether the ways are too many to be sought."""
        inputs = sum(port.way != Way.OUTPUT for port in self.flat.ports)
        return 2 * inputs * sum(map(len, self._hops.values())) > MOST_STEPS

    def of(self, bit: int, edge: Edge) -> dict[End, Inside]:
        """Return what an edge of an input reaches."""
        found = self._found.get((bit, edge))
        if found is None:
            found = self._found[bit, edge] = self._reached(2 * self.flat.ports[bit].net + edge)
        return found

    def written(self, tail: int, head: int) -> bool:
        """Tell whether a delay in the source lies on any way from a bit to another, whatever the edges."""
        found = (self.of(tail, one).get((head, other)) for one in Edge for other in Edge)
        return any(inside is not None and inside.written for inside in found)

    def senses(self) -> dict[int, dict[int, int]]:
        """Return for each output bit the inputs from which a written delay leads there, with polarities."""
        found: dict[int, dict[int, int]] = {}
        for (tail, one), (head, other), inside in self.all() if self.has_delays else ():
            if inside.written and inside.through:
                of_head = found.setdefault(head, {})
                of_head[tail] = of_head.get(tail, 0) | (POSITIVE if one == other else NEGATIVE)
        return found

    def all(self) -> Iterable[tuple[End, End, Inside]]:
        """Yield all ways from an input to an output."""
        for bit, port in enumerate(self.flat.ports):
            for edge in Edge if port.way != Way.OUTPUT else ():
                for head, inside in self.of(bit, edge).items():
                    yield (bit, edge), head, inside

    def _reached(self, start: Vertex) -> dict[End, Inside]:
        ways = {start: Inside(ZERO, ZERO, False, True)}
        order = self._order(start)
        place = {vertex: at for at, vertex in enumerate(order)}
        found: dict[End, Inside] = {}
        for at, vertex in enumerate(order):
            inside = ways.get(vertex)
            if inside is None:
                continue
            if vertex != start and vertex in self._heads:
                found.update((end, inside) for end in self._heads[vertex])
            for hop in self._hops.get(vertex, ()):
                if place[hop.head] > at:  # else it closes a loop
                    ways[hop.head] = _merged(ways.get(hop.head), inside, hop)
        return found

    def _order(self, start: Vertex) -> list[Vertex]:
        """Return what can be reached, a vertex before those that follow it, loops left open somewhere."""
        seen, done = {start}, list[Vertex]()
        work = [(start, iter(self._hops.get(start, ())))]
        while work:
            vertex, hops = work[-1]
            follower = next((hop.head for hop in hops if hop.head not in seen), None)
            if follower is None:
                done.append(vertex)
                work.pop()
            else:
                seen.add(follower)
                work.append((follower, iter(self._hops.get(follower, ()))))
        return done[::-1]


def _merged(before: Inside | None, inside: Inside, hop: _Hop) -> Inside:
    """Return the ways to a hop's end: those known before, and those that come by the hop."""
    late, early, written, through = inside
    if hop.delay is not ZERO:
        late, early = _sum(late, hop.delay), _sum(early, hop.delay)
    written, through = written or hop.written, through and not hop.launches
    if before is None:
        return Inside(late, early, written, through)
    if late != before.late:
        late = larger(late, before.late)
    if early != before.early:
        early = _smaller(early, before.early)
    return Inside(late, early, written or before.written, through or before.through)


def _sum(a: Triple, b: Triple) -> Triple:
    return a[0] + b[0], a[1] + b[1], a[2] + b[2]


def larger(a: Triple, b: Triple) -> Triple:
    """Return the larger number of two triples in each place."""
    return max(a[0], b[0]), max(a[1], b[1]), max(a[2], b[2])


def _smaller(a: Triple, b: Triple) -> Triple:
    return min(a[0], b[0]), min(a[1], b[1]), min(a[2], b[2])
