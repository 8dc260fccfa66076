"""The ports of a module: names in the header to local nets (IEEE 1364-2005 clause 12.3).

Takes a module's header and variables, gives its ports. Tells of a port without direction (N112) and of a
direction without port (N113).
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from tardigate.netlist.template import TemplatePort
from tardigate.netlist.variables import NO_DIRECTION, RANGED
from tardigate.parts.kind import Way
from tardigate.syntax import tree

if TYPE_CHECKING:
    from tardigate.netlist.wiring import Wiring


def template_ports(module: tree.Module, wiring: Wiring) -> tuple[TemplatePort, ...]:
    """Return the ports in order of the header."""
    ports: list[TemplatePort] = []
    listed: set[int] = set()
    if isinstance(module.ports, tree.PlainPorts):
        _plain(module.ports, wiring, ports, listed)
    else:
        for port in module.ports:
            _header_port(port, wiring, ports, listed)
    directed = np.flatnonzero(wiring.variables.way != NO_DIRECTION)
    for variable in directed.tolist() if len(directed) > len(listed) else ():
        if variable not in listed:
            name = wiring.variables.text_of(variable)
            span = wiring.span(int(wiring.variables.place[variable]), len(name))
            wiring.collector.tell("N113", span, name=name, module=module.name)
    return tuple(ports)


def _plain(
    span: tree.PlainPorts, wiring: Wiring, ports: list[TemplatePort], listed: set[int]
) -> None:
    """Take a header that only lists names: all at once where each is a scalar with a direction, named once."""
    scan, variables = wiring.unit.scan, wiring.variables
    numbers = scan.word[span.first : span.last]
    found = wiring.variables_of(numbers)
    data, stops = scan.data, scan.word_stop[span.first : span.last].tolist()
    known = found[found >= 0]
    if (
        len(known) == len(found) == len(np.unique(found))
        and not (variables.flags[found] & RANGED).any()
        and (variables.way[found] != NO_DIRECTION).all()
    ):
        starts = scan.names.start[numbers].tolist()
        ends = scan.names.stop[numbers].tolist()
        ways = [Way(way) for way in range(NO_DIRECTION)]
        rows = zip(starts, ends, variables.way[found].tolist(), variables.base[found].tolist(), strict=True)
        for start, end, way, base in rows:
            name = data[start:end].decode("latin-1")
            ports.append(TemplatePort(name, ways[way], (base,), (name,)))
        listed.update(found.tolist())
        return
    for number, stop in zip(numbers.tolist(), stops, strict=True):
        name = scan.names.text(number)
        _whole(name, name, stop - len(name), wiring, ports, listed)


def _header_port(port: tree.HeaderPort, wiring: Wiring, ports: list[TemplatePort], listed: set[int]) -> None:
    inside = port.inside
    if inside is None:
        ports.append(TemplatePort(port.name, Way.INPUT, (), ()))
    elif isinstance(inside, tree.Reference) and not inside.selections:
        _whole(port.name, ".".join(inside.path), port.at, wiring, ports, listed)
    else:
        _expression(port, inside, wiring, ports, listed)


def _expression(
    port: tree.HeaderPort, inside: tree.Expression, wiring: Wiring, ports: list[TemplatePort], listed: set[int]
) -> None:
    """Take a port that is a selection or a concatenation; all its nets have one direction."""
    references = [inside]
    nets: list[int] = []
    ways: set[int] = set()
    while references:
        node = references.pop(0)
        if isinstance(node, tree.Concatenation):
            references = [*node.parts, *references]
        elif isinstance(node, tree.Reference):
            nets += wiring.bits(node)[::-1]
            variable = wiring.variable(node.path[0])
            if variable >= 0:
                listed.add(variable)
                ways.add(int(wiring.variables.way[variable]))
        else:
            wiring.collector.tell("N165", wiring.span(node.at), pin="port")
            return
    if len(ways) != 1 or NO_DIRECTION in ways:
        wiring.collector.tell("N112", wiring.span(port.at), name=port.name or "port expression")
        return
    count = len(nets)
    name = port.name or f"port{len(ports)}"
    bits = [name] if count == 1 else [f"{name}[{count - 1 - i}]" for i in range(count)]
    ports.append(TemplatePort(port.name, Way(ways.pop()), nets, bits))


def _whole(
    outside: str, inside: str, at: int, wiring: Wiring, ports: list[TemplatePort], listed: set[int]
) -> None:
    variable = wiring.variable(inside)
    if variable < 0 or wiring.variables.way[variable] == NO_DIRECTION:
        wiring.collector.tell("N112", wiring.span(at, len(inside)), name=inside)
        return
    if variable in listed:
        if any(port.name == outside for port in ports):
            wiring.collector.tell("N114", wiring.span(at, len(inside)), name=outside)
            return
    listed.add(variable)
    way = Way(int(wiring.variables.way[variable]))
    ports.append(TemplatePort(outside, way, wiring.variables.bits(variable), _bit_names(outside, wiring, variable)))


def _bit_names(name: str, wiring: Wiring, variable: int) -> list[str]:
    if not wiring.variables.flags[variable] & RANGED:
        return [name]
    msb, lsb = int(wiring.variables.msb[variable]), int(wiring.variables.lsb[variable])
    return [f"{name}[{i}]" for i in (range(msb, lsb - 1, -1) if msb >= lsb else range(msb, lsb + 1))]
