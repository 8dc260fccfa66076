"""Whether a part's tables and functions agree: all that may refuse a part whose words are known.

Takes a part, tells rows that stand twice, contradict the function or time nothing, and changes that no row
times. Does not build anything.
"""

from __future__ import annotations

from tardigate.parts.function import NEGATIVE, POSITIVE
from tardigate.parts.kind import Edge, Way
from tardigate.parts.match import Matched, match, uncovered
from tardigate.parts.model import SYMBOLS, Part, Place, Register, Row
from tardigate.parts.needs import NOBODY, Need, function_of
from tardigate.source.collector import Collector
from tardigate.source.diagnostic import Related

WORDS = {POSITIVE: "follows it", NEGATIVE: "inverts it", POSITIVE | NEGATIVE: "goes both ways with it"}


def check_part(part: Part, has_default: bool, collector: Collector) -> None:
    """Tell what is wrong with a part; with a family default, a change without a time is none of it."""
    own = Collector()
    _twice(part, own)
    _checks_twice(part, own)
    for register in part.registers:
        _complement(part, register, own)
    _never_stored(part, own)
    told = _polarity(part, own)
    matched = match(part, {})
    _idle(part, matched, told, own)
    if not has_default and not own.all():
        _missing(part, matched, own)
        _uncovered(part, matched, own)
    if not own.all():
        _unused(part, matched, own)
    for diagnostic in own.all():
        collector.add(diagnostic)


def _beside(place: Place, label: str) -> tuple[Related, ...]:
    return (Related(place.span(), label),)


def _twice(part: Part, collector: Collector) -> None:
    seen: dict[tuple[object, ...], Row] = {}
    for row in part.rows:
        for pair in row.pairs:
            for transition in row.transitions:
                edges = (row.edge,) if row.edge is not None else tuple(Edge)
                keys = [(pair, transition, edge, row.polarity, row.when) for edge in edges]
                first = next((seen[key] for key in keys if key in seen), None)
                if first is not None:
                    tail, head = (part.bit_names[bit] for bit in pair)
                    name = f"{SYMBOLS[transition]} {tail} => {head}"
                    related = _beside(first.place, "the first one")
                    collector.tell("P008", row.place.span(), related=related, what="row", name=name)
                    return
                seen.update((key, row) for key in keys)


def _checks_twice(part: Part, collector: Collector) -> None:
    seen: dict[tuple[object, ...], Place] = {}
    for check in part.checks:
        for bit in check.bits:
            edges = (check.edge, check.reference_edge)
            key = (check.symbol, bit, edges, check.reference, check.level, check.when)
            if key in seen:
                name = f"{check.symbol} {part.bit_names[bit]}"
                related = _beside(seen[key], "the first one")
                collector.tell("P008", check.place.span(), related=related, what="row", name=name)
                return
            seen[key] = check.place


def _polarity(part: Part, collector: Collector) -> set[int]:
    """Tell polarities that the function does not have (under the row's `when`); return those rows."""
    told: set[int] = set()
    for row in part.rows:
        for tail, head in row.pairs if row.polarity else ():
            root = function_of(part, head)
            if root == NOBODY:
                continue
            polarity = part.network.polarities(root, {}, row.when).get(tail, 0)
            if polarity and polarity != (POSITIVE if row.polarity == "+" else NEGATIVE):
                collector.tell(
                    "P012", row.place.span(), function=WORDS[polarity], polarity=row.polarity,
                    tail=part.bit_names[tail], head=part.bit_names[head],
                )  # fmt: skip
                told.add(id(row))
                break
    return told


def _complement(part: Part, register: Register, collector: Collector) -> None:
    """Tell a stored bit that stores the inverse of another, where clear or set would make both alike."""
    if register.clear < 0 and register.set < 0:
        return
    first_of = {node: bit for bit, node in register.stores.items()}
    for bit, node in register.stores.items():
        form, inside, _, _ = part.network.nodes[node]
        if form == "not" and inside in first_of:
            names = part.bit_names[first_of[inside]], part.bit_names[bit]
            collector.tell("P026", register.place.span(), first=names[0], second=names[1])
            return


def _never_stored(part: Part, collector: Collector) -> None:
    stored = {bit for register in part.registers for bit in register.stores}
    first = part.pin_bits
    for state in part.states:
        bits = range(first, first + state.width)
        if not stored.issuperset(bits) and state.place is not None:
            collector.tell("P032", state.place.span(), name=state.name)
        first += state.width


def _idle(part: Part, matched: Matched, told: set[int], collector: Collector) -> None:
    """Tell rows that time nothing for one of their pairs, once a row and none of those in `told`."""
    for row, (tail, head) in matched.idle:
        if id(row) not in told:
            told.add(id(row))
            ends = part.bit_names[tail], part.bit_names[head]
            collector.tell("P013", row.place.span(), symbol=row.symbol, tail=ends[0], head=ends[1])


def _unused(part: Part, matched: Matched, collector: Collector) -> None:
    """Warn of input pins that nothing uses; a part without outputs only hangs on its nets."""
    network = part.network
    used = {need.tail for need, _ in matched.timed} | {need.tail for need in matched.missing}
    roots = [*part.functions.values(), *part.enables.values()]
    roots += [row.when for row in part.rows] + [check.when for check in part.checks]
    for register in part.registers:
        used.add(register.clock)
        roots += [*register.stores.values(), register.clear, register.set]
    for check in part.checks:
        used.update((*check.bits, check.reference))
    for root in roots:
        used |= network.support(root) if root >= 0 else frozenset()
    first = 0
    drives = any(pin.way != Way.INPUT for pin in part.pins)
    for pin in part.pins:
        idle = used.isdisjoint(range(first, first + pin.width))
        if idle and drives and pin.way == Way.INPUT and pin.place is not None:
            collector.tell("P034", pin.place.span(), part=part.name, name=pin.name)
        first += pin.width


def _missing(part: Part, matched: Matched, collector: Collector) -> None:
    """Tell changes without a time, all symbols of a pair together."""
    pairs: dict[tuple[int, int], list[Need]] = {}
    for need in matched.missing:
        pairs.setdefault((need.tail, need.head), []).append(need)
    unspoken = {head for _, head in pairs if function_of(part, head) == NOBODY}
    rowless = unspoken - {head for row in part.rows for _, head in row.pairs}
    for head in sorted(rowless):
        collector.tell("P015", part.place.span(), part=part.name, name=part.bit_names[head])
    for (tail, head), needs in pairs.items():
        if head in rowless:
            continue
        missing = {need.transition for need in needs}
        symbols = " and ".join(symbol for transition, symbol in SYMBOLS.items() if transition in missing)
        ends = part.bit_names[tail], part.bit_names[head]
        partly = [row for row in part.rows if row.when >= 0 and (tail, head) in row.pairs]
        if partly and missing.issubset(transition for row in partly for transition in row.transitions):
            collector.tell("P033", partly[0].place.span(), symbols=symbols, tail=ends[0], head=ends[1])
        else:
            place = part.place.span()
            collector.tell("P014", place, part=part.name, symbols=symbols, tail=ends[0], head=ends[1])


def _uncovered(part: Part, matched: Matched, collector: Collector) -> None:
    """Tell a change that can happen in a state for which no row is, though there are rows with `when`."""
    for need, rows in uncovered(part, matched):
        ends = part.bit_names[need.tail], part.bit_names[need.head]
        symbol = SYMBOLS[need.transition]
        collector.tell("P033", rows[0].place.span(), symbols=symbol, tail=ends[0], head=ends[1])
        return
