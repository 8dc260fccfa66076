"""A part under one condition and with its parameters' values as a kind.

Takes a part, gives its `Kind`: hops from its rows, where there is no row from the default, else of unknown
numbers. Does not tell anything.
"""

from __future__ import annotations

from collections.abc import Mapping

from tardigate.parts.by_kind import Choice
from tardigate.parts.function import Values
from tardigate.parts.kind import Kind, Origin
from tardigate.parts.kind_maker import MISSING, Delay, KindHop, given, make_kind
from tardigate.parts.match import match
from tardigate.parts.model import Part
from tardigate.parts.needs import sink_bits


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


def part_kind(part: Part, column: int, parameters: Mapping[str, int], choice: Choice) -> Kind:
    """Make the kind of a part under the condition of `column`."""
    values = parameter_values(part, parameters)
    matched = match(part, values)
    hops: list[KindHop] = []
    for need, row in matched.timed:
        triple = row.columns[column]
        delay = Delay(triple, Origin.PARTS, str(part.place)) if given(triple) else None
        hops.append(
            KindHop(
                need.tail, need.head, need.tail_edge, need.head_edge,
                delay or _default(choice, need.transition), need.launches,
            )
        )  # fmt: skip
    for need in matched.missing:
        delay = _default(choice, need.transition)
        hops.append(KindHop(need.tail, need.head, need.tail_edge, need.head_edge, delay, need.launches))
    pins = [bit for pin in part.pins for bit in pin.bits]
    ways = [pin.way for pin in part.pins for _ in range(pin.width)]
    lets_go = bool(part.enables) or any("Z" in row.transitions[0] for row in part.rows)
    return make_kind(
        part.name, "part", pins, ways, hops, sinks=sink_bits(part, values), register=bool(part.registers),
        three_state=lets_go, words=str(part.place),
    )  # fmt: skip


def _default(choice: Choice, transition: str) -> Delay:
    return choice.default.find("", 0, transition) or MISSING


def has_default(choice: Choice) -> bool:
    """Say whether there is a default for every plain transition."""
    return all(choice.default.find("", 0, transition) for transition in ("LH", "HL"))
