"""Rows of times against what a part's functions can do.

Takes a part, gives for each change that can pass the rows that time it, the changes that no row times or
that some time in certain states only, and the rows that time nothing. Tells nothing: `check_part` and
`part_kind` do with it what they must.
"""

from __future__ import annotations

from collections.abc import Iterator
from typing import NamedTuple

from tardigate.parts.function import NEGATIVE, POSITIVE, Network, Values
from tardigate.parts.kind import Edge, Way
from tardigate.parts.model import Part, Row
from tardigate.parts.needs import DISABLING, ENABLING, NOBODY, Need, function_of, needs_of, output_bits


class Matched(NamedTuple):
    """`timed`: changes, each with a row; `missing`: those without; `idle`: rows that time nothing.

    A row is idle when it times none of its pairs; beside it stands its first pair.
    """

    timed: list[tuple[Need, Row]]
    missing: list[Need]
    idle: list[tuple[Row, tuple[int, int]]]


def match(part: Part, values: Values) -> Matched:
    """Return what the rows of a part time; `values` of parameter bits that are known."""
    rows: dict[int, dict[int, list[Row]]] = {}
    for row in part.rows:
        for tail, head in row.pairs:
            rows.setdefault(head, {}).setdefault(tail, []).append(row)
    matched = Matched([], [], [])
    for head in output_bits(part):
        given = rows.get(head, {})
        if function_of(part, head) >= 0:
            needs = needs_of(part, head, values)
            _known(part, needs, given, values, matched)
        else:
            _unknown(part, head, given, matched)
    used = {id(row) for _, row in matched.timed}
    matched.idle.extend([(row, row.pairs[0]) for row in part.rows if row.pairs and id(row) not in used])
    return matched


def _known(
    part: Part, needs: dict[int, list[Need]], given: dict[int, list[Row]], values: Values,
    matched: Matched,
) -> None:  # fmt: skip
    for tail, some in needs.items():
        for need in some:
            fitting = [row for row in given.get(tail, ()) if _fits(part, need, row, values)]
            matched.timed.extend([(need, row) for row in fitting])
            if not fitting:
                matched.missing.append(need)


def _fits(part: Part, need: Need, row: Row, values: Values) -> bool:
    if need.transition not in row.transitions or row.edge not in (None, need.tail_edge):
        return False
    follows = need.tail_edge == need.head_edge
    if row.polarity and not need.launches and (row.polarity == "+") != follows:
        return False
    if row.when < 0 or need.root == NOBODY:
        return True
    polarity = part.network.polarities(need.root, values, row.when).get(need.tail, 0)
    if need.transition in ("LH", "HL"):
        return bool(polarity & (POSITIVE if follows else NEGATIVE))
    enabling = need.transition in ("ZH", "ZL")
    return bool(polarity & (POSITIVE if (need.tail_edge == Edge.RISE) == enabling else NEGATIVE))


def _unknown(part: Part, head: int, given: dict[int, list[Row]], matched: Matched) -> None:
    """Take rows at their word where no function speaks; an edge of the output that none gives is missing."""
    for tail, rows in given.items():
        clocks = [register for register in part.registers if register.clock == tail]
        wanted: dict[Need, None] = {}
        timed: dict[Need, None] = {}
        for row in rows:
            edges = {register.edge for register in clocks} or set(Edge)
            for tail_edge in sorted(edges if row.edge is None else edges & {row.edge}):
                for need in _moves(tail, head, tail_edge, row, bool(clocks)):
                    wanted[need] = None
                    if need.transition in row.transitions:
                        timed[need] = None
                        matched.timed.append((need, row))
        matched.missing.extend([need for need in wanted if need not in timed])
    if not given:
        matched.missing.extend(_everything(part, head))


def _moves(tail: int, head: int, tail_edge: Edge, row: Row, launches: bool) -> list[Need]:
    """Return the changes that a row may be about: the output's two edges, or its four with letting go."""
    if "Z" in row.transitions[0]:
        group = ENABLING if row.transitions[0][0] == "Z" else DISABLING
        return [Need(tail, head, tail_edge, edge, transition, launches) for transition, edge in group]
    found = []
    for edge, transition in ((Edge.RISE, "LH"), (Edge.FALL, "HL")):
        if launches or not row.polarity or (row.polarity == "+") == (tail_edge == edge):
            found.append(Need(tail, head, tail_edge, edge, transition, launches))
    return found


def _everything(part: Part, head: int) -> list[Need]:
    """Return what an output may do of which nothing at all is known: follow any clock, or else any input."""
    clocks = {(register.clock, register.edge) for register in part.registers}
    found = [
        Need(tail, head, tail_edge, edge, "LH" if edge == Edge.RISE else "HL", True)
        for tail, tail_edge in sorted(clocks)
        for edge in Edge
    ]
    tail = 0
    for pin in part.pins:
        for _ in range(pin.width):
            if pin.way == Way.INPUT and not clocks:
                found += [
                    Need(tail, head, tail_edge, edge, "LH" if edge == Edge.RISE else "HL")
                    for tail_edge in Edge
                    for edge in Edge
                ]
            tail += 1
    return found


# States of the other pins in which no row holds


def uncovered(part: Part, matched: Matched) -> Iterator[tuple[Need, list[Row]]]:
    """Yield the changes that can happen in states in which none of their rows holds, with those rows."""
    rows: dict[Need, list[Row]] = {}
    for need, row in matched.timed:
        rows.setdefault(need, []).append(row)
    for need, some in rows.items():
        whens = [row.when for row in some]
        if need.root != NOBODY and min(whens) >= 0 and _open_states(part.network, need, whens):
            yield need, some


def _open_states(network: Network, need: Need, whens: list[int]) -> int:
    """Return the states in which a change passes and no condition holds; none when they are too many."""
    tables = network.tables([need.root, *whens], {})
    if tables is None:
        return 0
    follow, against = tables.changes(need.root, need.tail)
    follows = need.tail_edge == need.head_edge
    if "Z" in need.transition:  # the root is what makes the output drive
        follows = (need.tail_edge == Edge.RISE) == need.transition.startswith("Z")
    states = follow if follows else against
    for when in whens:
        states &= ~(tables.of[when] | tables.of[when] >> tables.step(need.tail))
    return states
