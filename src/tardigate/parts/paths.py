"""Module paths of a specify block to rows of times (IEEE 1364-2005 clause 14.2).

Takes the paths of one module in order, gives rows as a parts file would. Tells of terminals that are no
ports, of widths that differ and of illegal forms. Whether the function has such a hop is for `match`.
"""

from __future__ import annotations

from collections.abc import Container, Iterable, Sequence
from typing import NamedTuple

from tardigate.parts.cell_desk import INNER, CellDesk
from tardigate.parts.kind import Edge, Way
from tardigate.parts.model import SYMBOLS, Row
from tardigate.parts.path_values import GROUPS, ORDERS, by_transition
from tardigate.parts.source_delay import Triple
from tardigate.syntax import tree

EDGES = {"posedge": Edge.RISE, "negedge": Edge.FALL}

MOST_PAIRS = 1 << 18
"""Pairs of bits of all paths of one module."""

ALWAYS = -1

Pair = tuple[int, int]


class _Spread(NamedTuple):
    """A path and what was found of it: its pairs of bits, times by transition, and the node of its `if`."""

    path: tree.Path
    pairs: tuple[Pair, ...]
    times: dict[str, Triple]
    when: int


def build_paths(
    paths: Sequence[tree.Path], desk: CellDesk, lets_go: Container[int], unknown: Container[int] = (),
    opaque: bool = False,
) -> list[Row]:  # fmt: skip
    """Return the rows of all paths.

    `lets_go` are the output bits that can be z, `unknown` those whose function is not known: where a path is
    all that speaks of one, constant data says to which level it leads, and in an `opaque` body three values
    or more that the output can be z.
    """
    spread: list[_Spread] = []
    room = MOST_PAIRS
    for path in paths:
        found = _spread(path, desk, room)
        if found is not None:
            spread.append(found)
            room -= len(found.pairs)
    _tell_ifnone(spread, desk)
    conditions = _conditions(spread)
    rows: list[Row] = []
    for each in spread:
        for when, pairs in _by_state(each, conditions, desk):
            for here in (True, False):
                some = tuple(pair for pair in pairs if (pair[1] in unknown) == here)
                floats = opaque and here and len(each.path.values) > 2
                rows += _rows(each, when, some, desk, [p for p in some if floats or p[1] in lets_go], here)
    return rows


def _spread(path: tree.Path, desk: CellDesk, room: int) -> _Spread | None:
    """Look up all that a path names; None after telling what is wrong."""
    pairs = _pairs(path, desk, room)
    if len(path.values) not in ORDERS:
        desk.tell("N174", path.at, count=len(path.values))
        return None
    triples = [desk.triple(value) for value in path.values]
    known = [triple for triple in triples if triple is not None]
    when = desk.node(path.condition) if path.condition is not None else ALWAYS
    if path.ifnone and path.edge:
        desk.tell("N175", path.at)
        return None
    if pairs is None or len(known) < len(triples):
        return None
    return _Spread(path, tuple(pairs), by_transition(known), when)


# Terminals (14.2.1, 14.2.5, 14.2.6)


def _pairs(path: tree.Path, desk: CellDesk, room: int) -> list[Pair] | None:
    tails = _terminals(path.inputs, desk, Way.OUTPUT, "begin", "input")
    heads = _terminals(path.outputs, desk, Way.INPUT, "end", "output")
    if tails is None or heads is None:
        return None
    if not path.full:
        return _parallel(path, tails, heads, desk)
    tail_bits, head_bits = ([bit for bits in some for bit in bits] for some in (tails, heads))
    if len(tail_bits) * len(head_bits) > room:
        desk.tell("N181", path.at, most=MOST_PAIRS)
        return None
    return [(tail, head) for tail in dict.fromkeys(tail_bits) for head in dict.fromkeys(head_bits)]


def _parallel(
    path: tree.Path, tails: Sequence[tuple[int, ...]], heads: Sequence[tuple[int, ...]], desk: CellDesk
) -> list[Pair] | None:
    """Pair bit i with bit i; one terminal stands on each side (A.7.2)."""
    for terminals in (path.inputs, path.outputs):
        if len(terminals) > 1:
            desk.tell("N173", terminals[1].at, _length(terminals[1]))
            return None
    if len(tails[0]) != len(heads[0]):
        desk.tell("N172", path.at, _length(path.inputs[0]), left=len(tails[0]), right=len(heads[0]))
        return None
    return list(zip(tails[0], heads[0], strict=True))


def _terminals(
    references: Iterable[tree.Reference], desk: CellDesk, wrong: Way, does: str, wanted: str
) -> list[tuple[int, ...]] | None:
    """Return the bits of each terminal, None after telling of one that cannot be such a terminal."""
    found = []
    good = True
    for reference in references:
        bits = desk.terminal(reference)
        name = ".".join(reference.path)
        if INNER in bits:
            desk.tell("N170", reference.at, _length(reference), name=name, does=does)
        elif wrong in (ways := {desk.way(bit) for bit in bits}):
            way = ways.pop().name.lower() if len(ways) == 1 else wrong.name.lower()
            desk.tell("N171", reference.at, _length(reference), name=name, way=way, does=does, wanted=wanted)
        elif bits:
            found.append(bits)
            continue
        good = False
    return found if good else None


def _length(reference: tree.Reference) -> int:
    return len(".".join(reference.path))


# States (14.2.4)


def _conditions(spread: Iterable[_Spread]) -> dict[Pair, frozenset[int]]:
    """Return the nodes of the conditions of each pair's state-dependent paths, simple or edge-sensitive."""
    found: dict[Pair, set[int]] = {}
    for each in spread:
        if each.when != ALWAYS:
            for pair in each.pairs:
                found.setdefault(pair, set()).add(each.when)
    return {pair: frozenset(nodes) for pair, nodes in found.items()}


def _tell_ifnone(spread: Sequence[_Spread], desk: CellDesk) -> None:
    """Tell of an `ifnone` beside an unconditional simple path of the same pair (14.2.4.4)."""
    plain: set[Pair] = set()
    for each in spread:
        if each.when == ALWAYS and not each.path.ifnone and not each.path.edge:
            plain.update(each.pairs)
    for each in spread:
        if each.path.ifnone and not plain.isdisjoint(each.pairs):
            desk.tell("N176", each.path.at, _length(each.path.inputs[0]))


def _by_state(
    each: _Spread, conditions: dict[Pair, frozenset[int]], desk: CellDesk
) -> list[tuple[int, tuple[Pair, ...]]]:
    """Return the states in which a path holds, each with its pairs; none where no state can be so.

    An `ifnone` holds where none of the conditions of the same pair does; without any, always.
    """
    if not each.path.ifnone:
        return [] if never(each.when, desk) else [(each.when, each.pairs)]
    groups: dict[frozenset[int], list[Pair]] = {}
    for pair in each.pairs:
        groups.setdefault(conditions.get(pair, frozenset()), []).append(pair)
    found = []
    for nodes, pairs in groups.items():
        when = none_of(nodes, desk)
        if not never(when, desk):
            found.append((when, tuple(pairs)))
    return found


def none_of(nodes: Iterable[int], desk: CellDesk) -> int:
    """Return the node that holds where none of some does; ALWAYS for none."""
    any_of = ALWAYS
    for node in sorted(nodes):
        any_of = node if any_of == ALWAYS else desk.network.add("or", *sorted((any_of, node)))
    return any_of if any_of == ALWAYS else desk.network.add("not", any_of)


def never(when: int, desk: CellDesk) -> bool:
    """Say whether a condition holds in no state at all, as far as that can be tabulated."""
    tables = desk.network.tables([when], {}) if when != ALWAYS else None
    return tables is not None and not tables.of[when]


# Rows


def _rows(
    each: _Spread, when: int, pairs: Sequence[Pair], desk: CellDesk, floating: Sequence[Pair], unknown: bool
) -> list[Row]:
    """Return the rows of a path in some states; `floating` are those of the pairs whose output can be z."""
    path, times = each.path, each.times
    edge = EDGES.get(path.edge)
    place = desk.place(path.at, _length(path.inputs[0]))
    polarity = _polarity(path, unknown)
    rows = []
    for one, other, both in GROUPS:
        of = tuple(pairs if both == "tpd" else floating)
        named: list[tuple[str, tuple[str, ...]]] = [(SYMBOLS[way], (way,)) for way in (one, other)]
        if times[one] == times[other]:
            named = [(both, (one, other))]
        for symbol, ways in named if of else ():
            rows.append(Row(symbol, ways, edge, polarity, of, when, (times[ways[0]],), place))
    return rows


def _polarity(path: tree.Path, unknown: bool) -> str:
    """Return the polarity from the input to the output.

    The sign of an edge-sensitive path, or of one with a data source, is that of the data (14.2.3). Constant
    data is what a set or clear leads to.
    """
    if not path.edge and path.data is None:
        return path.polarity
    data = path.data
    if not (unknown and path.edge and isinstance(data, tree.Number)) or data.unknown | data.floating:
        return ""
    ones = (1 << (data.width or 32)) - 1
    if data.value not in (0, ones if data.width else 1):
        return ""
    rises = (data.value != 0) != (path.polarity == "-")
    return "+" if rises == (path.edge == "posedge") else "-"
