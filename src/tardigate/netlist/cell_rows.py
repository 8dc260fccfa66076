"""Rows of a part against the delays inside its body (IEEE 1364-2005 clause 14.4: the larger of the two).

Takes a part with the rows of its module paths, gives rows in which the delays written inside the body count,
and rows for what no path times. A change that neither times is left without a number: `part_kind` then takes
a default or says what is missing.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from functools import reduce
from operator import or_

from tardigate.netlist.cell_ways import Inside, Ways, larger
from tardigate.parts.function import Network
from tardigate.parts.kind import Edge
from tardigate.parts.kind_maker import UNKNOWN
from tardigate.parts.match import Matched, match
from tardigate.parts.model import SYMBOLS, Part, Place, Row
from tardigate.parts.needs import NOBODY, Need, function_of, output_bits
from tardigate.parts.source_delay import Triple

TRANSITION = {Edge.RISE: "LH", Edge.FALL: "HL"}


def timed_rows(part: Part, ways: Ways) -> tuple[Row, ...]:
    """Return the rows of a part with what its body adds.

    Where time passes inside, the body may still be in another state than the pins: a row then holds for every
    change of its pins that the function allows, whatever its condition, and where no condition holds in some
    state the delays inside count alone.
    """
    unknown = {head for head in output_bits(part) if function_of(part, head) == NOBODY}
    if not (ways.has_delays or unknown):
        return part.rows
    rows = list(part.rows)
    matched = match(part, {})
    if ways.has_delays:
        loose = [row._replace(when=-1) for row in rows]
        whens = {id(new): row.when for new, row in zip(loose, rows, strict=True)}
        matched = match(part._replace(rows=tuple(loose)), {})
        rows = list(_delayed(matched, ways))
        for need in (*matched.missing, *_lapsing(part.network, matched, whens)):
            rows += _inner(need, ways, part.place)
    rows += _structural(unknown, part.place, matched, ways)
    return tuple({row[:-1]: row for row in rows}.values())  # all but the place


def _lapsing(network: Network, matched: Matched, whens: Mapping[int, int]) -> Iterator[Need]:
    """Yield the changes that have rows, but in some state of the pins none whose condition holds."""
    nodes: dict[Need, set[int]] = {}
    for need, row in matched.timed:
        nodes.setdefault(need, set()).add(whens[id(row)])
    for need, some in nodes.items():
        if min(some) < 0:
            continue
        tables = network.tables(sorted(some), {})
        if tables is None or reduce(or_, [tables.of[node] for node in some]) != tables.all:
            yield need


def _delayed(matched: Matched, ways: Ways) -> Iterator[Row]:
    """Yield a row for each change that a path times, with the larger of its time and that inside."""
    for need, row in matched.timed:
        inside = _inside(ways, need)
        (outer,) = row.columns
        late, early = (outer, outer) if inside is None else (larger(outer, each) for each in inside[:2])
        for triple in dict.fromkeys((late, early)):
            yield _row(need, triple, row.place, row.polarity)


def _inside(ways: Ways, need: Need) -> Inside | None:
    return ways.of(need.tail, need.tail_edge).get((need.head, need.head_edge))


def _inner(need: Need, ways: Ways, place: Place) -> Iterator[Row]:
    """Yield rows of what is written inside, for a change that no path times."""
    inside = _inside(ways, need)
    if inside is not None and ways.written(need.tail, need.head):
        for triple in dict.fromkeys((inside.late, inside.early)):
            yield _row(need, triple, place)


def _row(need: Need, triple: Triple, place: Place, polarity: str = "") -> Row:
    symbol, pairs = SYMBOLS[need.transition], ((need.tail, need.head),)
    return Row(symbol, (need.transition,), need.tail_edge, polarity, pairs, -1, (triple,), place)


def _structural(heads: set[int], place: Place, matched: Matched, ways: Ways) -> Iterator[Row]:
    """Yield rows for ways through the body to `heads`, whose function is unknown, where no path leads.

    What is written inside counts; where nothing is, the row has no number.
    """
    given = {(need.tail, need.head) for need, _ in matched.timed}
    for tail, head, inside in ways.all() if heads else ():
        if head[0] in heads and (tail[0], head[0]) not in given and inside.through:
            need = Need(tail[0], head[0], tail[1], head[1], TRANSITION[head[1]])
            triples = (inside.late, inside.early) if ways.written(tail[0], head[0]) else (UNKNOWN,)
            for triple in dict.fromkeys(triples):
                yield _row(need, triple, place, "+" if tail[1] == head[1] else "-")
