"""User-defined primitives as parts (IEEE 1364-2005 clause 8).

Takes a primitive's tree, gives its function over any nodes, or how it stores, or a whole part. Only 0 and 1
count as values; where a table gives x, either may come. Does not tell anything.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

from tardigate.parts.function import Network
from tardigate.parts.kind import Edge, Way
from tardigate.parts.model import Part, Pin, Place, Register
from tardigate.parts.udp_stored import Unclear, recognise
from tardigate.parts.udp_table import ONE, Values, combinational
from tardigate.syntax.tree import Primitive

UNKNOWN = -1_000_000
"""The bit that stands for x where the caller gives none: like that of a parameter that may be anything."""


class Stored(NamedTuple):
    """How a sequential primitive stores.

    `clock`: the number of the input that stores at `edge` or, of a `latch`, opens with it; -1 where levels
    alone set and clear the output (an SR latch), and `data` is then its function, x where it is held.
    `data`, `clear`, `set` are nodes; `clear` and `set` are -1 for none and never depend on the clock.
    """

    latch: bool
    edge: Edge
    clock: int
    data: int
    clear: int = -1
    set: int = -1


def function_node(
    network: Network, primitive: Primitive, inputs: Sequence[int], unknown: int = UNKNOWN
) -> int:
    """Return the node of a combinational primitive over the nodes of its inputs, in the order of its ports.

    `unknown` is the number, below 0, of the bit that stands for x; give each instance its own.
    """
    return _choice(network, combinational(primitive), inputs, unknown)


def stored(
    network: Network, primitive: Primitive, inputs: Sequence[int], state: int, unknown: int = UNKNOWN
) -> Stored | str:
    """Return how a sequential primitive stores, or in words why its table is no register and no latch.

    `inputs` are the nodes of its inputs in the order of its ports, `state` the node that reads the stored bit
    (`network.add("bit", number)`); `unknown` as for `function_node`. Input `clock` is not read by any node:
    what drives it, and whether inverted, is for the caller to see.
    """
    found = recognise(primitive)
    if isinstance(found, Unclear):
        return found.reason
    operands = [*inputs, state]
    if found.clock >= 0:
        del operands[found.clock]
    clear, set_ = (
        _choice(network, values, operands, unknown) if (values == ONE).any() else -1
        for values in (found.clear, found.set)
    )
    data = _choice(network, found.data, operands, unknown)
    return Stored(found.latch, found.edge, found.clock, data, clear, set_)


def udp_part(primitive: Primitive, place: Place) -> tuple[Part, str]:
    """Return a primitive as a part without rows, and in words why its table is not understood, or nothing.

    Output first, each port a scalar pin. Of a table that is not understood the part has neither function nor
    register, so that every input may move the output either way.
    """
    network = Network()
    inputs = [network.add("bit", i) for i in range(1, len(primitive.ports))]
    functions: dict[int, int] = {}
    registers: tuple[Register, ...] = ()
    reason = ""
    if not primitive.sequential:
        functions[0] = function_node(network, primitive, inputs)
    else:
        found = stored(network, primitive, inputs, network.add("bit", 0))
        if isinstance(found, str):
            reason = found
        elif found.clock < 0:
            functions[0] = found.data
        else:
            stores = {0: found.data}
            register = Register(
                found.latch, found.edge, found.clock + 1, stores, found.clear, found.set, place
            )
            registers = (register,)
    ways = [Way.OUTPUT, *[Way.INPUT] * len(inputs)]
    pins = tuple(Pin(name, way, place=place) for name, way in zip(primitive.ports, ways, strict=True))
    part = Part(
        primitive.name, "", "", 1, pins, (), (), network, functions, {}, registers, (), (), (), place,
        primitive.ports,
    )  # fmt: skip
    return part, reason


def _choice(network: Network, values: Values, operands: Sequence[int], unknown: int) -> int:
    """Return the node that chooses among values by its operands, the first choosing between neighbours.

    Shannon 1938; equal branches are one node, and a choice with a constant becomes the gate that it is.
    """
    leaves = (network.add("const", 0), network.add("const", 1), network.add("bit", unknown))
    level = [leaves[value] for value in values.tolist()]
    for operand in operands:
        pairs = zip(level[::2], level[1::2], strict=True)
        level = [low if low == high else _mux(network, operand, high, low) for low, high in pairs]
    return level[0]


def _mux(network: Network, operand: int, high: int, low: int) -> int:
    """Return `operand ? high : low`, as a gate where one branch is a constant: its polarity then shows."""
    zero, one = network.add("const", 0), network.add("const", 1)
    if (high, low) == (one, zero):
        return operand
    if high in (zero, one) and low in (zero, one):
        return network.add("not", operand)
    if low == zero:
        return network.add("and", *sorted((operand, high)))
    if high == one:
        return network.add("or", *sorted((operand, low)))
    if high == zero:
        return network.add("and", *sorted((network.add("not", operand), low)))
    if low == one:
        return network.add("or", *sorted((network.add("not", operand), high)))
    return network.add("mux", operand, high, low)
