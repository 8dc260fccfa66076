"""Which changes a part's functions and registers can pass on: every hop that the part must have a time for.

Takes a part, gives the needs of each pair of bits. Knows nothing of times.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import NamedTuple

from tardigate.parts.function import NEGATIVE, POSITIVE, Network, Values
from tardigate.parts.gates import OPPOSITE
from tardigate.parts.kind import Edge, Way
from tardigate.parts.model import Part, Register

NOBODY = -1


class Need(NamedTuple):
    """A change that can pass from bit `tail` to output bit `head`.

    `transition` is the output's (`LH HL ZH ZL HZ LZ`); `launches`: begins at a clock edge; `root`: the node
    whose dependence on `tail` it is, for a closer look under a condition, or NOBODY.
    """

    tail: int
    head: int
    tail_edge: Edge
    head_edge: Edge
    transition: str
    launches: bool = False
    root: int = NOBODY


def output_bits(part: Part) -> list[int]:
    """Return the bits that the part can drive."""
    bits: list[int] = []
    first = 0
    for pin in part.pins:
        if pin.way != Way.INPUT:
            bits += range(first, first + pin.width)
        first += pin.width
    return bits


def function_of(part: Part, bit: int) -> int:
    """Return the node of an output's value, or NOBODY where nothing says what it is."""
    if bit in part.functions:
        return part.functions[bit]
    if any(bit in register.stores for register in part.registers):
        return part.network.add("bit", bit)
    return NOBODY


def needs_of(part: Part, head: int, values: Values) -> dict[int, list[Need]]:
    """Return the needs of an output bit whose function is known, by the bit that they come from."""
    found: dict[int, dict[Need, None]] = {}
    stored = {bit: register for register in part.registers for bit in register.stores}
    network = part.network
    root = function_of(part, head)
    for bit, polarity in network.polarities(root, values).items() if root >= 0 else ():
        if bit < 0 or (bit == head and bit not in stored):  # a parameter, or an inout that reads itself
            continue
        if bit in stored:
            some = _stored_needs(part, head, bit, polarity, stored[bit], values)
        else:
            some = _data_needs(bit, head, polarity, root)
        for need in some:
            found.setdefault(need.tail, {})[need] = None
    enable = part.enables.get(head, NOBODY)
    levels = _driven(network, root, enable, values)
    for bit, polarity in network.polarities(enable, values).items() if enable >= 0 else ():
        for need in _enable_needs(bit, head, polarity, enable, stored.get(bit)) if bit >= 0 else ():
            if levels.intersection(need.transition):
                found.setdefault(need.tail, {})[need] = None
    return {tail: list(needs) for tail, needs in found.items()}


def _data_needs(tail: int, head: int, polarity: int, root: int) -> Iterator[Need]:
    for edge, transition in ((Edge.RISE, "LH"), (Edge.FALL, "HL")):
        if polarity & POSITIVE:
            yield Need(tail, head, edge, edge, transition, False, root)
        if polarity & NEGATIVE:
            yield Need(tail, head, OPPOSITE[edge], edge, transition, False, root)


def _launches(register: Register, head: int) -> Iterator[Need]:
    for edge, transition in ((Edge.RISE, "LH"), (Edge.FALL, "HL")):
        yield Need(register.clock, head, register.edge, edge, transition, True)


def _stored_needs(
    part: Part, head: int, state: int, polarity: int, register: Register, values: Values
) -> Iterator[Need]:
    """Give what a stored bit passes on: the clock's edge, clear and set, a latch's data while it is open.

    What the clock lets in is seen with the clock at the level after its edge: a latch before the gate that
    its own clock closes passes nothing on while it is open.
    """
    network, level = part.network, 1 - register.edge
    seen = network.polarities(function_of(part, head), {**values, register.clock: level}).get(state, 0)
    if seen:
        yield from _launches(register, head)
    stored = {bit for each in part.registers for bit in each.stores}
    if register.latch and seen:
        for tail, through in network.polarities(register.stores[state], values).items():
            if tail >= 0 and tail not in stored:
                yield from _data_needs(tail, head, composed(through, seen), NOBODY)
    for node, level in ((register.clear, Edge.FALL), (register.set, Edge.RISE)):
        for tail, active in part.network.polarities(node, values).items() if node >= 0 else ():
            if tail >= 0 and tail not in stored:
                yield from _forced(tail, head, active, polarity, level, register.latch)


def composed(first: int, second: int) -> int:
    """Return the polarity of two in a row."""
    turned = (POSITIVE if first & NEGATIVE else 0) | (NEGATIVE if first & POSITIVE else 0)
    return (first if second & POSITIVE else 0) | (turned if second & NEGATIVE else 0)


def _forced(tail: int, head: int, active: int, polarity: int, level: Edge, latch: bool) -> Iterator[Need]:
    """Give what clear or set does: it forces the stored bit to `level`; at its end an open latch moves."""
    for tail_edge, flag in ((Edge.RISE, POSITIVE), (Edge.FALL, NEGATIVE)):
        moves = [(tail_edge, level)] if active & flag else []
        if latch and moves:
            moves.append((OPPOSITE[tail_edge], OPPOSITE[level]))
        for edge, state_edge in moves:
            if polarity & POSITIVE:
                yield Need(tail, head, edge, state_edge, _moving(state_edge))
            if polarity & NEGATIVE:
                yield Need(tail, head, edge, OPPOSITE[state_edge], _moving(OPPOSITE[state_edge]))


def _moving(edge: Edge) -> str:
    return "LH" if edge == Edge.RISE else "HL"


def _driven(network: Network, root: int, enable: int, values: Values) -> frozenset[str]:
    """Return the levels, of `HL`, that an output can have while it drives: an open collector has one."""
    tables = network.tables([root, enable], values) if root >= 0 and enable >= 0 else None
    if tables is None:
        return frozenset("HL")
    high, drives = tables.of[root], tables.of[enable]
    return frozenset(("H" if high & drives else "") + ("L" if ~high & drives else ""))


ENABLING = (("ZH", Edge.RISE), ("ZL", Edge.FALL))
DISABLING = (("HZ", Edge.FALL), ("LZ", Edge.RISE))


def _enable_needs(bit: int, head: int, polarity: int, root: int, register: Register | None) -> Iterator[Need]:
    for tail_edge, flag in ((Edge.RISE, POSITIVE), (Edge.FALL, NEGATIVE)):
        for edge, moves in ((tail_edge, ENABLING), (OPPOSITE[tail_edge], DISABLING)):
            for transition, head_edge in moves if polarity & flag else ():
                if register is None:
                    yield Need(bit, head, edge, head_edge, transition, False, root)
                else:
                    yield Need(register.clock, head, register.edge, head_edge, transition, True)


def sink_bits(part: Part, values: Mapping[int, int]) -> list[int]:
    """Return the pin bits where trails end: what registers store, clear and set them."""
    stored = {bit for register in part.registers for bit in register.stores}
    found: set[int] = set()
    for register in part.registers:
        nodes = [*register.stores.values(), register.clear, register.set]
        for node in nodes:
            found |= part.network.support(node) if node >= 0 else frozenset()
    return sorted(bit for bit in found if bit >= 0 and bit not in stored and bit not in values)
