"""The ports of a module: names in the header to local nets (IEEE 1364-2005 clause 12.3).

Takes a module's header and variables, gives its ports. Tells of a port without direction (N112) and of a
direction without port (N113), of two ports of one name (N114).
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.template import TemplatePort
from tardigate.netlist.variables import NO_DIRECTION, RANGED
from tardigate.parts.kind import Way
from tardigate.source.arrays import distinct
from tardigate.syntax import tree

if TYPE_CHECKING:
    from tardigate.netlist.wiring import Wiring


def template_ports(module: tree.Module, wiring: Wiring) -> tuple[TemplatePort, ...]:
    """Return the ports in order of the header."""
    header = _Header(wiring)
    if isinstance(module.ports, tree.PlainPorts):
        header.plain(module.ports)
    else:
        for port in module.ports:
            header.port(port)
    directed = np.flatnonzero(wiring.variables.way != NO_DIRECTION)
    for variable in directed.tolist() if len(directed) > len(header.listed) else ():
        if variable not in header.listed:
            name = wiring.variables.text_of(variable)
            span = wiring.span(int(wiring.variables.place[variable]), len(name))
            wiring.collector.tell("N113", span, name=name, module=module.name)
    return tuple(header.ports)


_WAYS = tuple(Way(way) for way in range(NO_DIRECTION))


class _Header:
    """The ports so far: `names` those outside, `listed` the variables behind them."""

    def __init__(self, wiring: Wiring) -> None:
        self.wiring, self.variables = wiring, wiring.variables
        self.ports: list[TemplatePort] = []
        self.names: set[str] = set()
        self.listed: set[int] = set()

    def plain(self, span: tree.PlainPorts) -> None:
        """Take a header that only lists names: all at once when all are scalars with directions."""
        scan, variables = self.wiring.unit.scan, self.variables
        numbers = scan.word[span.first : span.last]
        found = self.wiring.variables_of(numbers)
        if (
            (found >= 0).all()
            and len(found) == len(distinct(found))
            and not (variables.flags[found] & RANGED).any()
            and (variables.way[found] != NO_DIRECTION).all()
        ):
            self._scalars(numbers, found)
            return
        stops = scan.word_stop[span.first : span.last]
        if scan.escaped is not None:
            stops = stops - scan.escaped[span.first : span.last]  # a place is that of the backslash
        for number, stop in zip(numbers.tolist(), stops.tolist(), strict=True):
            name = scan.names.text(number)
            self._whole(name, name, stop - len(name))

    def _scalars(self, numbers: NDArray[np.int32], found: NDArray[np.int32]) -> None:
        scan, variables = self.wiring.unit.scan, self.variables
        starts, ends = scan.names.start[numbers].tolist(), scan.names.stop[numbers].tolist()
        names = [scan.data[start:end].decode("latin-1") for start, end in zip(starts, ends, strict=True)]
        ways = [_WAYS[way] for way in variables.way[found].tolist()]
        nets = variables.base[found].tolist()
        self.ports.extend(map(TemplatePort, names, ways, zip(nets), zip(names)))
        self.listed.update(found.tolist())

    def port(self, port: tree.HeaderPort) -> None:
        """Take one port."""
        inside = port.inside
        if inside is None:
            if self._named(port.name, port.at):
                self.ports.append(TemplatePort(port.name, Way.INPUT, (), ()))
        elif isinstance(inside, tree.Reference) and not inside.selections:
            self._whole(port.name, ".".join(inside.path), port.at)
        else:
            self._expression(port, inside)

    def _named(self, name: str, at: int) -> bool:
        """Take a port's name; tell of one that is there already."""
        if name in self.names:
            self.wiring.collector.tell("N114", self.wiring.span(at, len(name)), name=name)
            return False
        if name:
            self.names.add(name)
        return True

    def _expression(self, port: tree.HeaderPort, inside: tree.Expression) -> None:
        """Take a port that is a selection or a concatenation; all its nets have one direction."""
        wiring, references, nets, ways = self.wiring, [inside], list[int](), set[int]()
        while references:
            node = references.pop()
            if isinstance(node, tree.Concatenation):
                references.extend(reversed(node.parts))
            elif isinstance(node, tree.Reference):
                nets += wiring.bits(node)[::-1]
                variable = wiring.variable(node.path[0])
                if variable >= 0:
                    self.listed.add(variable)
                    ways.add(int(self.variables.way[variable]))
            else:
                wiring.collector.tell("N165", wiring.span(node.at), pin="port")
                return
        if len(ways) != 1 or NO_DIRECTION in ways:
            wiring.collector.tell("N112", wiring.span(port.at), name=port.name or "port expression")
            return
        if not self._named(port.name, port.at):
            return
        count = len(nets)
        name = port.name or f"port{len(self.ports)}"
        bits = [name] if count == 1 else [f"{name}[{count - 1 - i}]" for i in range(count)]
        self.ports.append(TemplatePort(port.name, Way(ways.pop()), nets, bits))

    def _whole(self, outside: str, inside: str, at: int) -> None:
        variables, variable = self.variables, self.wiring.variable(inside)
        if variable < 0 or variables.way[variable] == NO_DIRECTION:
            self.wiring.collector.tell("N112", self.wiring.span(at, len(inside)), name=inside)
        elif self._named(outside, at):
            self.listed.add(variable)
            bits = _bit_names(outside, self.wiring, variable)
            way = Way(int(variables.way[variable]))
            self.ports.append(TemplatePort(outside, way, variables.bits(variable), bits))


def _bit_names(name: str, wiring: Wiring, variable: int) -> list[str]:
    if not wiring.variables.flags[variable] & RANGED:
        return [name]
    msb, lsb = int(wiring.variables.msb[variable]), int(wiring.variables.lsb[variable])
    return [f"{name}[{i}]" for i in (range(msb, lsb - 1, -1) if msb >= lsb else range(msb, lsb + 1))]
