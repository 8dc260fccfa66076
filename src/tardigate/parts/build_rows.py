"""Rows of a part's tables to the model: pins resolved, arrows spread to pairs of bits, numbers converted.

Takes a row and the names of its part, gives it, or None when it is told to be faulty.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from tardigate.parts.columns import columns, quantity, unit_known
from tardigate.parts.expression import compile_expression
from tardigate.parts.function import Network
from tardigate.parts.kind import Edge
from tardigate.parts.model import Check, Columns, Load, Row
from tardigate.parts.scope import Scope, Signal
from tardigate.parts.units import FEMTOFARADS
from tardigate.syntax import parts_tree as tree

TRANSITIONS = {
    "tpd": ("LH", "HL"), "tPLH": ("LH",), "tPHL": ("HL",), "tPZH": ("ZH",), "tPZL": ("ZL",), "tPHZ": ("HZ",),
    "tPLZ": ("LZ",), "ten": ("ZH", "ZL"), "tdis": ("HZ", "LZ"),
}  # fmt: skip
"""What each letter symbol (JEDEC JESD99) gives: the output's transitions, Z for letting go."""

EDGES = {"posedge": Edge.RISE, "negedge": Edge.FALL}

MOST_PAIRS = 1 << 18
"""Pairs of bits of one row."""

ALWAYS = -1
FAULTY = -2

Picked = tuple[Signal, tuple[int, ...]]


def build_row(
    scope: Scope, network: Network, stored: frozenset[int], row: tree.Row, unit: tree.Word, count: int
) -> Row | None:
    """Return a row of times."""
    symbol = row.symbol.text
    made = columns(scope.desk, row.cells, unit, count, row.symbol)
    tails = _picked(scope, row.source.pins, ("input", "inout"), f"{symbol} leads from an input")
    heads = _picked(scope, row.to, ("output", "inout"), f"{symbol} leads to an output")
    when = _when(scope, network, stored, row.when)
    if made is None or tails is None or heads is None or when == FAULTY:
        return None
    pairs = _full(scope, row, tails, heads) if row.arrow.text == "*>" else _parallel(scope, row, tails, heads)
    if pairs is None:
        return None
    edge = EDGES[row.source.edge.text] if row.source.edge else None
    polarity = row.polarity.text if row.polarity else ""
    place = scope.desk.place(row.symbol)
    return Row(symbol, TRANSITIONS[symbol], edge, polarity, tuple(pairs), when, made, place)


def build_check(
    scope: Scope, network: Network, stored: frozenset[int], row: tree.Check, unit: tree.Word, count: int
) -> Check | None:
    """Return a row of checks; those between two pins may be negative."""
    symbol = row.symbol.text
    made = columns(scope.desk, row.cells, unit, count, row.symbol, negative=row.reference is not None)
    data = _picked(scope, row.data.pins, ("input", "inout"), f"{symbol} is about inputs")
    when = _when(scope, network, stored, row.when)
    reference: list[Picked] | None = []
    if row.reference is not None:
        reference = _picked(scope, row.reference.pins, ("input", "inout"), f"{symbol} refers to an input")
    if made is None or data is None or reference is None or when == FAULTY:
        return None
    if row.reference is not None and [len(bits) for _, bits in reference] != [1]:
        at = row.reference.pins[0]
        fact = f"{sum(len(bits) for _, bits in reference)} bits"
        scope.desk.tell("P006", at, name=at.name.text, fact=fact, wanted=f"{symbol} refers to one bit")
        return None
    bits = tuple(bit for _, picked in data for bit in picked)
    return Check(
        symbol, bits, _edge(row.data), reference[0][1][0] if reference else -1, _edge(row.reference),
        row.level.text if row.level else "", when, made, scope.desk.place(row.symbol),
    )  # fmt: skip


def build_load(scope: Scope, item: tree.Load, count: int) -> Load | None:
    """Return the rated load of outputs, of all where none is named."""
    desk = scope.desk
    rated = quantity(desk, item.rated, FEMTOFARADS, "a capacitance")
    more: Columns | None = ()
    if item.more and item.time_unit and item.load_unit:
        if not unit_known(desk, item.load_unit, FEMTOFARADS, "a capacitance"):
            return None
        per = FEMTOFARADS[item.load_unit.text]
        more = divided(columns(desk, item.more, item.time_unit, count, item.time_unit), float(per))
    if item.pins:
        picked = _picked(scope, item.pins, ("output", "inout"), "a rated load is an output's")
    else:
        picked = [(s, s.bits) for s in scope.signals.values() if s.way in ("output", "inout")]
    if rated is None or more is None or picked is None:
        return None
    bits = tuple(bit for _, each in picked for bit in each)
    return Load(bits, rated, more, desk.place(item.rated.number, item.rated.unit))


def divided(made: Columns | None, per: float) -> Columns | None:
    """Return triples divided by a number."""
    return None if made is None else tuple((a / per, b / per, c / per) for a, b, c in made)


def _edge(side: tree.Side | None) -> Edge | None:
    return EDGES[side.edge.text] if side is not None and side.edge is not None else None


def _when(scope: Scope, network: Network, stored: frozenset[int], expr: tree.Expr | None) -> int:
    if expr is None:
        return ALWAYS
    bits = compile_expression(expr, scope, network, stored)
    if bits is not None and len(bits) != 1:
        scope.desk.tell("P007", expr, left=1, right=len(bits), what="the condition after `when`")
        return FAULTY
    return FAULTY if bits is None else bits[0]


def _picked(
    scope: Scope, refs: Sequence[tree.PinRef], ways: tuple[str, ...], wanted: str
) -> list[Picked] | None:
    """Return the bits of each reference; None when one of them is told."""
    found: list[Picked] = []
    for ref in refs:
        picked = scope.pick(ref)
        if picked is None:
            continue
        if picked[0].way not in ways:
            article = "a" if picked[0].way in ("state", "parameter") else "an"
            scope.desk.tell("P006", ref, name=ref.name.text, fact=f"{article} {picked[0].way}", wanted=wanted)
            continue
        found.append(picked)
    return found if len(found) == len(refs) else None


def _parallel(
    scope: Scope, row: tree.Row, tails: Iterable[Picked], heads: list[Picked]
) -> list[tuple[int, int]] | None:
    """Spread `=>`: bit i to bit i (IEEE 1364-2005 clause 14.2.2); several scalars, each to each."""
    pairs: list[tuple[int, int]] = []
    for tail, tail_bits in tails:
        for head, head_bits in heads:
            if len(tail_bits) != len(head_bits):
                what = f"`{tail.name}` and `{head.name}` on the two sides of `=>`"
                scope.desk.tell("P007", row.arrow, what=what, left=len(tail_bits), right=len(head_bits))
                return None
            pairs += zip(tail_bits, head_bits, strict=True)
    return pairs


def _full(
    scope: Scope, row: tree.Row, tails: list[Picked], heads: list[Picked]
) -> list[tuple[int, int]] | None:
    """Spread `*>`: every bit to every bit."""
    tail_bits = [bit for _, bits in tails for bit in bits]
    head_bits = [bit for _, bits in heads for bit in bits]
    count = len(tail_bits) * len(head_bits)
    if count > MOST_PAIRS:
        scope.desk.tell("P027", row.arrow, name="*>", width=count, widest=MOST_PAIRS)
        return None
    return [(tail, head) for tail in tail_bits for head in head_bits]
