"""Whether a part's tables and functions agree: all that may refuse a part whose words are known.

Takes a part, tells rows that stand twice, contradict the function or time nothing, and changes without a time.
"""

from __future__ import annotations

from tardigate.parts.function import NEGATIVE, POSITIVE
from tardigate.parts.kind import Edge
from tardigate.parts.match import Matched, match
from tardigate.parts.model import Part, Place, Register, Row
from tardigate.parts.needs import NOBODY, Need, function_of
from tardigate.source.collector import Collector
from tardigate.source.diagnostic import Related

SYMBOLS = {"LH": "tPLH", "HL": "tPHL", "ZH": "tPZH", "ZL": "tPZL", "HZ": "tPHZ", "LZ": "tPLZ"}
WORDS = {POSITIVE: "follows it", NEGATIVE: "inverts it", POSITIVE | NEGATIVE: "goes both ways with it"}
MOVES = {Edge.RISE: "rise", Edge.FALL: "fall"}


def check_part(part: Part, has_default: bool, collector: Collector) -> None:
    """Tell what is wrong with a part; with a family default, a change without a time is none of it."""
    before = len(collector.all())
    _twice(part, collector)
    _checks_twice(part, collector)
    _polarity(part, collector)
    for register in part.registers:
        _complement(part, register, collector)
    _never_stored(part, collector)
    matched = match(part, {})
    _idle(part, matched, collector)
    if not has_default and len(collector.all()) == before:
        _missing(part, matched, collector)
        _uncovered(part, matched, collector)


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


def _polarity(part: Part, collector: Collector) -> None:
    """Tell explicit polarities that the function does not have (under the row's `when`)."""
    for row in part.rows:
        for tail, head in row.pairs if row.polarity else ():
            root = function_of(part, head)
            if root == NOBODY:
                continue
            polarity = part.network.polarities(root, {}, row.when).get(tail, 0)
            if polarity and polarity != (POSITIVE if row.polarity == "+" else NEGATIVE):
                words = {"polarity": row.polarity, "tail": part.bit_names[tail], "head": part.bit_names[head]}
                collector.tell("P012", row.place.span(), function=WORDS[polarity], **words)
                break


def _complement(part: Part, register: Register, collector: Collector) -> None:
    """Tell two stored bits of which one stores the inverse of the other, where clear or set would make both alike."""
    if register.clear < 0 and register.set < 0:
        return
    roots = {bit: part.network.add("not", node) for bit, node in register.stores.items()}
    for bit, node in register.stores.items():
        for other, inverse in roots.items():
            if other > bit and node == inverse or part.network.nodes[register.stores[other]] == ("not", node, -1, -1):
                names = {"first": part.bit_names[bit], "second": part.bit_names[other]}
                collector.tell("P026", register.place.span(), **names)
                return


def _never_stored(part: Part, collector: Collector) -> None:
    stored = {bit for register in part.registers for bit in register.stores}
    first = part.pin_bits
    for state in part.states:
        bits = range(first, first + state.width)
        if not stored.issuperset(bits) and state.place is not None:
            collector.tell("P032", state.place.span(), name=state.name)
        first += state.width


def _idle(part: Part, matched: Matched, collector: Collector) -> None:
    """Tell rows that time nothing for one of their pairs, once a row."""
    told: set[int] = set()
    for row, (tail, head) in matched.idle:
        if id(row) not in told:
            told.add(id(row))
            names = {"tail": part.bit_names[tail], "head": part.bit_names[head]}
            collector.tell("P013", row.place.span(), symbol=row.symbol, **names)


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
        if head not in rowless:
            symbols = " and ".join(sorted({SYMBOLS[need.transition] for need in needs}))
            names = {"tail": part.bit_names[tail], "head": part.bit_names[head]}
            collector.tell("P014", part.place.span(), part=part.name, symbols=symbols, **names)


def _uncovered(part: Part, matched: Matched, collector: Collector) -> None:
    """Tell changes that can happen in a state for which no row is, though there are rows with `when`."""
    whens: dict[Need, list[Row]] = {}
    for need, row in matched.timed:
        whens.setdefault(need, []).append(row)
    for need, rows in whens.items():
        if need.root == NOBODY or any(row.when < 0 for row in rows):
            continue
        tables = part.network.tables([need.root, *(row.when for row in rows)], {})
        if tables is None:
            continue
        follow, against = tables.changes(need.root, need.tail)
        enabling = need.transition in ("ZH", "ZL")
        rises = need.tail_edge == Edge.RISE
        follows = need.tail_edge == need.head_edge if "Z" not in need.transition else rises == enabling
        open_states = follow if follows else against
        for row in rows:
            states = tables.of[row.when]
            open_states &= ~(states | states >> tables.step(need.tail))
        if open_states:
            names = {"tail": part.bit_names[need.tail], "head": part.bit_names[need.head]}
            symbol = SYMBOLS[need.transition]
            collector.tell("P033", rows[0].place.span(), symbol=symbol, **names)
            return
