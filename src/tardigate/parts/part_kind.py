"""A part under one condition and with its parameters' values as a kind.

Takes a part, gives its `Kind`: hops from its rows, or if it has none from a delay in the source, else from
the default, else of unknown numbers. Does not tell anything.
"""

from __future__ import annotations

from collections.abc import Mapping

from tardigate.parts.by_kind import Choice
from tardigate.parts.function import Values
from tardigate.parts.gates import NO_DELAY, DelayOf, source_delays
from tardigate.parts.kind import Kind, Origin
from tardigate.parts.kind_maker import MISSING, UNKNOWN, Delay, KindHop, given, make_kind
from tardigate.parts.match import Matched, match
from tardigate.parts.model import SYMBOLS, Part
from tardigate.parts.needs import NOBODY, Need, function_of, sink_bits
from tardigate.parts.source_delay import SourceDelay


def parameter_values(part: Part, chosen: Mapping[str, int]) -> Values:
    """Return the values of the bits of the parameters that are chosen; the others may be anything."""
    values: dict[int, int] = {}
    first = -1
    for parameter in part.parameters:
        value = chosen.get(parameter.name)
        for i in range(parameter.width):
            if value is not None:
                values[first - i] = value >> (parameter.width - 1 - i) & 1
        first -= parameter.width
    return values


def part_kind(
    part: Part,
    column: int,
    parameters: Mapping[str, int],
    choice: Choice,
    condition: str = "",
    *,
    delay: SourceDelay | None = None,
    wired: bool = False,
) -> Kind:
    """Make the kind of a part under the condition of `column`, whose name is `condition`.

    Only a part without rows takes a `delay` that stands in the source at its instance (IEEE 1364-2005, 7.14
    and 8.6: rise and fall of the output), or, `wired`, none at all as an assignment without operator.
    """
    values = parameter_values(part, parameters)
    matched = match(part, values)
    pins = [bit for pin in part.pins for bit in pin.bits]
    words = _missing_words(part, matched, column, condition)
    own = _delay_without_rows(part, delay, wired)
    hops = [
        _hop(need, Delay(row.columns[column], Origin.PARTS, str(part.place)), choice, words)
        for need, row in matched.timed
    ]
    hops += [_hop(need, own(need.transition), choice, words) for need in matched.missing]
    hops = list(dict.fromkeys(hops))  # two states may have one time
    ways = [pin.way for pin in part.pins for _ in range(pin.width)]
    lets_go = bool(part.enables) or any("Z" in row.transitions[0] for row in part.rows)
    kind = make_kind(
        part.name, "part", pins, ways, hops, sinks=sink_bits(part, values), register=bool(part.registers),
        three_state=lets_go, words=str(part.place), unknown_function=_unspoken(part, matched),
    )  # fmt: skip
    return kind._replace(source=None if part.rows else delay)


def _delay_without_rows(part: Part, delay: SourceDelay | None, wired: bool) -> DelayOf:
    """Return the delays that stand in for rows."""
    if delay is not None and not part.rows:
        return source_delays(delay)
    if wired and not part.rows:
        return lambda _transition: NO_DELAY
    return lambda _transition: MISSING


def _hop(need: Need, own: Delay, choice: Choice, words: str) -> KindHop:
    """Return the hop of a change: with its own delay, or else the default's, or else an unknown one."""
    delay = own if given(own.triple) else choice.default.find("", 0, need.transition)
    missing = Delay(UNKNOWN, Origin.MISSING, words)
    return KindHop(need.tail, need.head, need.tail_edge, need.head_edge, delay or missing, need.launches)


def _missing_words(part: Part, matched: Matched, column: int, condition: str) -> str:
    """Say which rows give no number under the condition: the first, its place, and how many there are."""
    empty = {id(row): (need, row) for need, row in reversed(matched.timed) if not given(row.columns[column])}
    if empty:
        need, row = min(empty.values(), key=lambda pair: pair[1].place.start)
        under = f" under condition {condition}" if condition else ""
        others = f", and {more} more row{'s' * (more > 1)}" if (more := len(empty) - 1) else ""
        return f"{_change(part, need, row.symbol)} has no number{under}, {row.place}{others}"
    if matched.missing:
        need = matched.missing[0]
        return f"no row gives {_change(part, need, SYMBOLS[need.transition])}, {part.place}"
    return ""


def _change(part: Part, need: Need, symbol: str) -> str:
    return f"{symbol} {part.bit_names[need.tail]} => {part.bit_names[need.head]}"


def _unspoken(part: Part, matched: Matched) -> bool:
    """Say whether a change passes that no function, no register and no polarity of a row tells of."""
    needs = [need for need, row in matched.timed if not row.polarity]
    polar = {pair for row in part.rows if row.polarity for pair in row.pairs}
    needs += [need for need in matched.missing if (need.tail, need.head) not in polar]
    return any(not need.launches and function_of(part, need.head) == NOBODY for need in needs)
