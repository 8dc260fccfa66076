"""Elaborates one module for one set of parameters: its scopes to a template.

Takes a module's hierarchy (scopes, variables), gives its template; asks a `Workshop` for what lies outside
the module: kinds, interfaces and templates of others.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from operator import attrgetter
from types import MappingProxyType

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.bulk import Bulk
from tardigate.netlist.columns import Block
from tardigate.netlist.delays import Delays
from tardigate.netlist.flat import CONSTANTS, OPEN
from tardigate.netlist.hierarchy import Hierarchy
from tardigate.netlist.implicit import plain_statements
from tardigate.netlist.items import Items, Workshop
from tardigate.netlist.name_columns import InstanceNames, NetNames
from tardigate.netlist.plain_tree import instance_tree
from tardigate.netlist.ports import template_ports
from tardigate.netlist.template import Template, TemplatePort
from tardigate.netlist.variables import TYPE, TYPES
from tardigate.netlist.wiring import Wiring
from tardigate.parts.kind import Way
from tardigate.source.arrays import distinct
from tardigate.source.diagnostic import Related
from tardigate.syntax import tree

_NOTHING: Mapping[int, int] = MappingProxyType({})


class Elaborator:
    """Elaborates one module."""

    def __init__(
        self, hierarchy: Hierarchy, workshop: Workshop, delays: Delays, of_name: NDArray[np.int32]
    ) -> None:
        self.hierarchy, self.workshop, self.of_name = hierarchy, workshop, of_name
        self.module, self.variables = hierarchy.module, hierarchy.variables
        self.declarer, self.collector = hierarchy.declarer, hierarchy.collector
        self.unit = self.declarer.unit
        self.wiring = Wiring(self.declarer, self.variables, hierarchy.scopes, of_name, hierarchy)
        self.items = Items(self.wiring, hierarchy, workshop, delays)

    def template(self, parameters: str) -> Template:
        """Elaborate; `parameters` is how the template is called apart from others of its module."""
        ports = template_ports(self.module, self.wiring)
        module, *blocks = self.hierarchy.scopes
        plain = plain_statements(self.unit, module.items)
        left = self._bulk(plain) if len(plain) else plain
        items = [*module.items, *(instance_tree(self.unit, statement) for statement in left.tolist())]
        self.items.enter(module)
        for item in sorted(items, key=attrgetter("at")) if len(left) else items:  # in order of the text
            self.items.item(item)
        for block in blocks:
            self.items.enter(block)
            for item in block.items:
                self.items.item(item)
        return self._made(parameters, ports)

    def _bulk(self, plain: NDArray[np.int64]) -> NDArray[np.int64]:
        """Read plain statements all at once; return the numbers of those that want a closer look."""
        bulk = Bulk(
            self.unit, self.declarer.lookup, self.variables, self.of_name, self.items.gate_kind,
            lambda module: self.workshop.part(module, {}),
        )  # fmt: skip
        blocks, left = bulk.read(plain)
        for block in blocks:
            self.items.instances.add_block(block)
        return left

    def _made(self, parameters: str, ports: tuple[TemplatePort, ...]) -> Template:
        columns, children, before = self.items.instances.columns(), self.items.children, _NOTHING
        if self.items.net_delays:
            from tardigate.netlist.net_delay import delay_nets  # few designs have any

            columns, ports, children, before = delay_nets(
                self.items.net_delays, columns, ports, children, self.wiring, self.workshop
            )
        start = np.concatenate(([0], np.cumsum(columns.counts)))
        names = InstanceNames(self.unit.scan.names, columns.name, self.items.instances.others)
        children = sorted(children, key=lambda child: child.place)
        self._tell_same_names(columns)
        if self.items.strangers:
            self.workshop.undescribed(self.items.strangers, self._driven(ports, columns))
        return Template(
            self.module.name, parameters, self.unit.text, self.module.at, ports,
            NetNames(self.variables), self.variables.net_places(), columns.kind, start, columns.pins, names,
            columns.place, tuple(children), self._typed(before), tuple(self.wiring.links),
        )  # fmt: skip

    def _tell_constants(self, numbers: NDArray[np.int32], places: NDArray[np.int64]) -> None:
        """Tell of instances that have the name of a parameter (N110)."""
        values = self.hierarchy.scopes[0].values
        taken = self.declarer.lookup.find_all(values) if values else []
        for at in np.flatnonzero(np.isin(numbers, taken)).tolist() if taken else ():
            name = self.unit.scan.names.text(int(numbers[at]))
            declared = [*self.module.parameters, *self.hierarchy.scopes[0].items]
            first = [
                named.at
                for item in declared
                if isinstance(item, tree.Parameter)
                for named in item.names
                if named.name == name
            ]
            one, other = sorted((int(places[at]), *first[:1]))
            self.declarer.twice_at(name, other, one)

    def _typed(self, before: Mapping[int, int]) -> dict[str, NDArray[np.int32]]:
        """Return the local nets by type and pull; a net's type counts before its delay as well."""
        types = self.variables.flags >> TYPE
        found = {word: np.array(nets, np.int32) for word, nets in self.items.pulled.items()}
        if types.any():
            of_net = np.repeat(types, self.variables.width)
            for number in distinct(types[types > 0]).tolist():
                nets = (np.flatnonzero(of_net == number) + CONSTANTS).astype(np.int32)
                more = [before[net] for net in nets.tolist() if net in before] if before else []
                found[TYPES[number]] = np.concatenate((nets, np.array(more, np.int32)))
        return found

    def _tell_same_names(self, columns: Block) -> None:
        """Tell of two instances with one name, or a net that has one's (clause 4.11; N115, N110).

        Those in blocks were told of before.
        """
        children = [(child.name, child.place) for child in self.items.children if child.name[-1] != "]"]
        others = [*(one for one in children if "." not in one[0]), *self.items.arrays]
        below = self.declarer.lookup.find_all([name for name, _ in others])
        named = np.flatnonzero(columns.name >= 0)
        numbers = np.concatenate((columns.name[named], np.array(below, np.int32)))
        places = np.concatenate((columns.place[named], np.array([at for _, at in others], np.int64)))
        self._tell_constants(numbers, places)
        net = self.of_name[numbers]
        for at in np.flatnonzero((net >= 0) & (numbers >= 0)).tolist():
            name, other = self.unit.scan.names.text(int(numbers[at])), int(self.variables.place[net[at]])
            first, second = sorted((int(places[at]), other))
            self.declarer.twice_at(name, second, first)
        ordered = np.sort(numbers)
        if not ((ordered[1:] == ordered[:-1]) & (ordered[1:] >= 0)).any():
            return
        order = np.argsort(numbers, kind="stable")
        same = np.flatnonzero((numbers[order[1:]] == numbers[order[:-1]]) & (numbers[order[1:]] >= 0))
        for at in same.tolist():
            first, second = sorted(int(place) for place in places[order[at : at + 2]])
            name = self.unit.scan.names.text(int(numbers[order[at]]))
            related = (Related(self.wiring.span(first, len(name)), "first one here"),)
            self.collector.tell("N115", self.wiring.span(second, len(name)), name=name, related=related)

    def _driven(self, ports: Sequence[TemplatePort], columns: Block) -> NDArray[np.bool_]:
        """Tell of each local net whether something that is known drives it."""
        driven = np.zeros(self.variables.nets, np.bool_)
        driven[:CONSTANTS] = True
        driven[[net for port in ports if port.way == Way.INPUT for net in port.nets]] = True
        for nets in self.workshop.outputs(columns, self.items.children):
            driven[nets[nets != OPEN]] = True
        return driven
