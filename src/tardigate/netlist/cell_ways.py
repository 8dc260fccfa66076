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
        written = kind.origin == Origin.SOURCE
        counts = written or (part and kind.origin != Origin.MISSING)
        self.has_delays |= counts and kind.hops > 0
        columns = (kind.hop_from, kind.hop_to, kind.from_edge, kind.to_edge, kind.launches)
        rows = zip(*(column.tolist() for column in columns), np.nan_to_num(kind.delays).tolist(), strict=True)
        for tail, head, from_edge, to_edge, launches, delay in rows:
            nets = functions.net(inst, tail), functions.net(inst, head)
            if min(nets) >= CONSTANTS:
                hop = _Hop(2 * nets[1] + to_edge, tuple(delay) if counts else ZERO, counts, launches)
                self._hops.setdefault(2 * nets[0] + from_edge, []).append(hop)

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

    def senses(self, head: int) -> dict[int, int]:
        """Return the polarity of each input bit from which a written delay leads to an output bit."""
        found: dict[int, int] = {}
        for (tail, one), (bit, other), inside in self.all():
            if bit == head and inside.written and inside.through:
                found[tail] = found.get(tail, 0) | (POSITIVE if one == other else NEGATIVE)
        return found

    def all(self) -> Iterable[tuple[End, End, Inside]]:
        """Yield all ways from an input to an output."""
        for bit, port in enumerate(self.flat.ports):
            for edge in Edge if port.way != Way.OUTPUT else ():
                for head, inside in self.of(bit, edge).items():
                    yield (bit, edge), head, inside

    def _reached(self, start: Vertex) -> dict[End, Inside]:
        ways: dict[Vertex, Inside] = {start: Inside(ZERO, ZERO, False, True)}
        order = self._order(start)
        place = {vertex: at for at, vertex in enumerate(order)}
        found: dict[End, Inside] = {}
        for vertex in order:
            inside = ways.get(vertex)
            if inside is None:
                continue
            if vertex != start:
                found.update((end, inside) for end in self._heads.get(vertex, ()))
            for hop in self._hops.get(vertex, ()):
                if place[hop.head] > place[vertex]:  # else it closes a loop
                    ways[hop.head] = _merged(ways.get(hop.head), _after(inside, hop))
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


def _after(inside: Inside, hop: _Hop) -> Inside:
    late, early = (_sum(delay, hop.delay) for delay in inside[:2])
    return Inside(late, early, inside.written or hop.written, inside.through and not hop.launches)


def _merged(one: Inside | None, other: Inside) -> Inside:
    if one is None:
        return other
    late, early = larger(one.late, other.late), _smaller(one.early, other.early)
    return Inside(late, early, one.written or other.written, one.through or other.through)


def _sum(a: Triple, b: Triple) -> Triple:
    return a[0] + b[0], a[1] + b[1], a[2] + b[2]


def larger(a: Triple, b: Triple) -> Triple:
    """Return the larger number of two triples in each place."""
    return max(a[0], b[0]), max(a[1], b[1]), max(a[2], b[2])


def _smaller(a: Triple, b: Triple) -> Triple:
    return min(a[0], b[0]), min(a[1], b[1]), min(a[2], b[2])
