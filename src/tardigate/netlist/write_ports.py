"""The ports of a flat file, and which nets they are (IEEE 1364-2005 clause 12.3).

Takes a flat design, gives what is declared as a vector and the direction of every other net at a port. A
port of several nets that is no plain vector is written as one port a bit, with the name of the bit.
"""

from __future__ import annotations

from collections.abc import Collection, Mapping, Sequence
from typing import NamedTuple

from tardigate.netlist.flat import CONSTANTS, Flat, Port
from tardigate.netlist.template import TemplatePort
from tardigate.parts.kind import Way

WAY_WORDS = {Way.INPUT: "input", Way.OUTPUT: "output", Way.INOUT: "inout"}


class Vector(NamedTuple):
    """A vector port: its lowest net is that of bit `lsb`; `bits` index each net, from the lowest."""

    name: str
    way: Way
    msb: str
    lsb: str
    first: int
    bits: tuple[str, ...]


class Header(NamedTuple):
    """The ports: an entry for each vector and each bit that stands alone; the ways of nets of the latter."""

    entries: tuple[Vector | Port, ...]
    ways: Mapping[int, Way]


def plan_header(flat: Flat, names: Sequence[str], types: Mapping[int, Sequence[str]]) -> Header:
    """Return the ports; `names` of the nets, `types` of those that are no mere wires."""
    claims = _claims(flat.ports, names)
    ways = {net: flat.ports[bit].way for net, bit in claims.items()}
    taken = frozenset(names)
    entries: list[Vector | Port] = []
    at = 0
    for port in flat.templates[int(flat.scope_template[0])].ports:
        bits = flat.ports[at : at + len(port.bits)]
        own = all(claims.get(bit.net) == number for number, bit in enumerate(bits, at))
        vector = _vector(port, bits, names, taken) if own else None
        if vector is not None and len({tuple(types.get(bit.net, ())) for bit in bits}) == 1:
            entries.append(vector)
            for bit in bits:
                del ways[bit.net]
        else:
            entries += bits
        at += len(port.bits)
    entries += flat.ports[at:]
    return Header(tuple(entries), ways)


def _claims(ports: Sequence[Port], names: Sequence[str]) -> dict[int, int]:
    """Return the port bit that each net at a port is declared for: one of its own name, else the first."""
    claims: dict[int, int] = {}
    for own in (True, False):
        for number, port in enumerate(ports):
            if port.net >= CONSTANTS and (not own or port.name == names[port.net]):
                claims.setdefault(port.net, number)
    return claims


def _vector(
    port: TemplatePort, bits: Sequence[Port], names: Sequence[str], taken: Collection[str]
) -> Vector | None:
    """Return a port as a vector, when its nets are the bits of one that is called like the port."""
    nets = [bit.net for bit in bits][::-1]
    stem = f"{port.name}["
    if not nets or not port.name or port.name in taken or nets != list(range(nets[0], nets[0] + len(nets))):
        return None
    if any(bit.name != names[bit.net] or not bit.name.startswith(stem) for bit in bits):
        return None
    indices = tuple(bit.name[len(stem) : -1] for bit in reversed(bits))
    return Vector(port.name, port.way, indices[-1], indices[0], nets[0], indices)
