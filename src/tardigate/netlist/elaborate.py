"""Elaborates one module for one set of parameters: its tree to a template.

Takes a module's name and parameters, gives its template; asks a `Workshop` for what lies outside the module:
kinds, interfaces and templates of others.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from operator import attrgetter
from typing import NamedTuple, Protocol

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.bulk import Bulk, gate_terminals
from tardigate.netlist.columns import Block, Instances
from tardigate.netlist.connect import Connector, is_target
from tardigate.netlist.constants import NotConstantError, Value, evaluate
from tardigate.netlist.declare import Declarer
from tardigate.netlist.delays import NO_DELAY, Delays
from tardigate.netlist.expression import Expressions
from tardigate.netlist.flat import CONSTANTS, OPEN
from tardigate.netlist.implicit import connection_names
from tardigate.netlist.interface import Interface, InterfacePin
from tardigate.netlist.name_columns import InstanceNames, NetNames
from tardigate.netlist.ports import template_ports
from tardigate.netlist.template import Child, Template, TemplatePort
from tardigate.netlist.variables import DRIVEN, WIRED, Variables
from tardigate.netlist.wiring import Wiring
from tardigate.parts.kind import Way
from tardigate.parts.source_delay import SourceDelay
from tardigate.source.diagnostic import Related
from tardigate.syntax import tree

_DELAYS = {"bufif0": 3, "bufif1": 3, "notif0": 3, "notif1": 3}
"""Most delays of a gate (clause 7.14); the others take two."""


class Workshop(Protocol):
    """What elaboration needs from outside a module."""

    def gate(self, gate: str, inputs: int, outputs: int, delay: SourceDelay | None) -> int:
        """Return the number of a gate's kind."""

    def operator(self, operator: str, inputs: int, delay: SourceDelay | None) -> int:
        """Return the number of an operator's kind."""

    def part(self, module: str, parameters: Mapping[str, int]) -> tuple[Interface, int] | None:
        """Return a described part's interface and kind, None when no parts file describes it."""

    def interface(self, module: str, parameters: Mapping[str, Value]) -> tuple[Interface, int] | None:
        """Return a module's interface and template number, None when there is no such module."""

    def undescribed(self, strange: Sequence[Strange], driven: NDArray[np.bool_]) -> None:
        """Take note of instances of what nobody describes; `driven` bool[nets]: something known drives it."""

    def outputs(self, instances: Block, children: Sequence[Child]) -> Iterable[NDArray[np.int32]]:
        """Yield the local nets at outputs of part instances and of modules below."""

    def parameter_names(self, module: str) -> list[str] | None:
        """Return a module's or part's parameters, in the order in which they may be overridden; None: any."""


class Strange(NamedTuple):
    """An instance, or array of `copies`, of a module that nobody describes: its pins and their local nets."""

    module: str
    place: int
    copies: int
    pins: tuple[tuple[str, tuple[int, ...]], ...]


class Elaborator:
    """Elaborates one module."""

    def __init__(
        self, module: tree.Module, declarer: Declarer, values: Mapping[str, Value], workshop: Workshop,
        delays: Delays, implicit: bool,
    ) -> None:  # fmt: skip
        self.module, self.declarer, self.values, self.workshop = module, declarer, values, workshop
        self.unit, self.collector = declarer.unit, declarer.collector
        self.delays, self.implicit = delays, implicit
        self.instances = Instances()
        self.children: list[Child] = []
        self.strangers: list[Strange] = []
        self.delay: SourceDelay | None = None
        self._kinds: dict[tuple[str, int, int], int] = {}  # by operator, inputs and delay object

    def template(self, parameters: str, variables: Variables) -> Template:
        """Elaborate; `variables` are the declared nets."""
        self.variables = variables
        of_name = np.full(len(self.unit.scan.names) + 1, -1, np.int32)
        of_name[variables.name] = np.arange(len(variables))
        of_name[-1] = -1
        bulk = Bulk(
            self.unit,
            self.declarer.lookup,
            variables,
            of_name,
            self._gate_kind,
            lambda m: self.workshop.part(m, {}),
        )
        plain = bulk.statements(self.module)
        self._declare_implicit(bulk, plain, of_name)
        self.wiring = Wiring(self.declarer, variables, self.values, of_name)
        self.expressions = Expressions(self.wiring, self._emit)
        self.connector = Connector(self.wiring, self.expressions)
        ports = template_ports(self.module, self.wiring)
        blocks, left = bulk.read(plain) if len(plain) else ([], plain)
        for block in blocks:
            self.instances.add_block(block)
        items = [*self.module.items, *(bulk.as_tree(statement) for statement in left.tolist())]
        for item in sorted(items, key=attrgetter("at")) if len(left) else items:  # in order of the text
            self._item(item)
        return self._made(parameters, ports)

    def _made(self, parameters: str, ports: tuple[TemplatePort, ...]) -> Template:
        columns = self.instances.columns()
        start = np.concatenate(([0], np.cumsum(columns.counts)))
        names = InstanceNames(self.unit.scan.names, columns.name, self.instances.others)
        self.children.sort(key=lambda child: child.place)
        self._tell_same_names(columns)
        if self.strangers:
            self.workshop.undescribed(self.strangers, self._driven(ports, columns))
        return Template(
            self.module.name, parameters, self.unit.text, self.module.at, ports, NetNames(self.variables),
            self.variables.net_places(), columns.kind, start, columns.pins, names, columns.place,
            tuple(self.children), self._nets_with(WIRED), self._nets_with(DRIVEN),
        )  # fmt: skip

    def _tell_same_names(self, columns: Block) -> None:
        """Tell of two instances with one name (clause 4.11; N115)."""
        below = [(self.declarer.lookup.find(child.name), child.place) for child in self.children]
        named = np.flatnonzero(columns.name >= 0)
        numbers = np.concatenate((columns.name[named], np.array([n for n, _ in below], np.int32)))
        places = np.concatenate((columns.place[named], np.array([at for _, at in below], np.int64)))
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

    def _nets_with(self, flag: int) -> NDArray[np.int32]:
        """Return the local nets whose variables have a flag."""
        flags = np.repeat(self.variables.flags, self.variables.width)
        return (np.flatnonzero(flags & flag) + CONSTANTS).astype(np.int32)

    def _declare_implicit(self, bulk: Bulk, plain: NDArray[np.int64], of_name: NDArray[np.int32]) -> None:
        """Declare the nets that only connections name, in order of place; or tell of them (N138)."""
        names, places = bulk.names(plain) if len(plain) else (np.zeros(0, np.int32), np.zeros(0, np.int64))
        found = dict(zip(names.tolist(), places.tolist(), strict=True))
        for name, at in connection_names(self.module):
            if name not in self.values:
                number = self.declarer.lookup.find(name)
                if of_name[number] < 0:
                    found[number] = min(at, found.get(number, at))
        order = sorted(found, key=found.__getitem__)
        if not self.implicit:
            for number in order:
                name = self.unit.scan.names.text(number)
                hint = self.declarer.suggestion(name, self.variables) if self.collector.room("N138") else None
                span = self.unit.text.span(found[number], found[number] + len(name))
                self.collector.tell("N138", span, name=name, hint=hint)
        if order:
            before = len(self.variables)
            self.variables.add_scalars(
                np.array(order, np.int32), np.array([found[number] for number in order], np.int64)
            )
            of_name[order] = np.arange(before, len(self.variables))

    # Items

    def _item(self, item: tree.Item) -> None:
        if isinstance(item, tree.Gates):
            self._gates(item)
        elif isinstance(item, tree.Instances):
            self._instances(item)
        elif isinstance(item, tree.Continuous):
            delay = self.delays.read(item.delay, 3)
            for assign in item.assigns:
                self._assign(assign.target, assign.value, delay)
        elif isinstance(item, tree.Declaration):
            if item.delay is not None:
                self.collector.tell("V008", self.unit.text.span(item.delay.at))
            for named in item.names:
                if named.value is not None:
                    self._assign(tree.Reference((named.name,), (), named.at), named.value, None)

    def _gate_kind(self, gate: str, inputs: int, outputs: int, delay: SourceDelay | None = None) -> int:
        return self.workshop.gate(gate, inputs, outputs, delay)

    def _gates(self, item: tree.Gates) -> None:
        delay = self.delays.read(item.delay, _DELAYS.get(item.gate, 2))
        for gate in item.gates:
            count = len(gate.terminals)
            if count < 2 or (item.gate in _DELAYS and count != 3):
                span = self.wiring.span(gate.at, max(1, len(gate.name)))
                self.collector.tell("N167", span, gate=item.gate, count=count)
                continue
            inputs, outputs = gate_terminals(item.gate, count)
            kind = self._gate_kind(item.gate, inputs, outputs, delay)
            indices = self.connector.array(gate.range)
            if indices is None:
                continue
            ways = [Way.OUTPUT] * outputs + [Way.INPUT] * inputs
            pins = self._pins(
                [InterfacePin("", way, 1) for way in ways],
                [tree.Connection("", terminal, terminal.at) for terminal in gate.terminals],
                len(indices), scalar=True,
            )  # fmt: skip
            if pins is not None:
                self._add(kind, gate.name, gate.range is not None, indices, gate.at, pins)

    def _pins(
        self, interface: Sequence[InterfacePin], connections: Sequence[tree.Connection | None], copies: int,
        scalar: bool = False,
    ) -> list[list[int]] | None:  # fmt: skip
        """Return the nets of all pins' bits for each copy, None after telling of a fault."""
        nets: list[list[int]] = [[] for _ in range(copies)]
        for pin, connection in zip(interface, connections, strict=True):
            bits = self.connector.bits(connection, pin, copies, scalar)
            if bits is None:
                return None
            for copy, of_copy in zip(nets, bits, strict=True):
                copy.extend(of_copy)
        return nets

    def _add(
        self, kind: int, name: str, is_array: bool, indices: Sequence[int], at: int, pins: list[list[int]]
    ) -> None:
        for index, nets in zip(indices, pins, strict=True):
            number = -1
            if is_array:
                number = self.instances.other_name(f"{name}[{index}]")
            elif name:
                number = self.declarer.lookup.find(name)
            self.instances.add(kind, at, number, nets)

    def _instances(self, item: tree.Instances) -> None:
        overrides = self._overrides(item)
        if overrides is None:
            return
        part = self.workshop.part(item.module, {name: value.value for name, value in overrides.items()})
        child = None if part else self.workshop.interface(item.module, overrides)
        for instance in item.instances:
            if part is None and child is None:
                self._strange(item, instance)
                continue
            interface, number = part or child or (Interface("", ()), 0)
            connections = self.connector.by_pin(instance, interface)
            indices = self.connector.array(instance.range)
            if connections is None or indices is None:
                continue
            nets = self._pins(interface.pins, connections, len(indices))
            if nets is None:
                continue
            if part is not None:
                self._add(number, instance.name, instance.range is not None, indices, instance.at, nets)
                continue
            for index, of_copy in zip(indices, nets, strict=True):
                name = f"{instance.name}[{index}]" if instance.range is not None else instance.name
                self.children.append(Child(name, number, np.array(of_copy, np.int32), instance.at))

    def _strange(self, item: tree.Instances, instance: tree.Instance) -> None:
        indices = self.connector.array(instance.range)
        if indices is None:
            return
        nets = [self.expressions.nets(c.net) if c.net is not None else [] for c in instance.connections]
        names = [c.pin or f"P{at + 1}" for at, c in enumerate(instance.connections)]
        pins = tuple(zip(names, map(tuple, nets), strict=True))
        self.strangers.append(Strange(item.module, item.at, len(indices), pins))

    def _driven(self, ports: Sequence[TemplatePort], columns: Block) -> NDArray[np.bool_]:
        """Tell of each local net whether something that is known drives it."""
        driven = np.zeros(self.variables.nets, np.bool_)
        driven[:CONSTANTS] = True
        driven[[net for port in ports if port.way == Way.INPUT for net in port.nets]] = True
        for nets in self.workshop.outputs(columns, self.children):
            driven[nets[nets != OPEN]] = True
        return driven

    def _overrides(self, item: tree.Instances) -> dict[str, Value] | None:
        """Return the parameters that an instance statement overrides, None after telling (N168, N120)."""
        found: dict[str, Value] = {}
        if not item.overrides:
            return found
        names = self.workshop.parameter_names(item.module)
        for at, override in enumerate(item.overrides):
            name = override.pin or (names[at] if names and at < len(names) else "")
            if names is not None and name not in names:
                span = self.wiring.span(override.at, max(1, len(override.pin)))
                self.collector.tell("N168", span, module=item.module, name=override.pin or f"number {at + 1}")
                return None
            if override.net is not None:
                try:
                    found[name] = evaluate(override.net, self.values)
                except NotConstantError as error:
                    self.collector.tell("N120", self.wiring.span(error.at), reason=error.reason)
                    return None
        return found

    # Assignments (clause 6.1)

    def _assign(self, target: tree.Expression, value: tree.Expression, delay: SourceDelay | None) -> None:
        if not is_target(target):
            self.collector.tell("N165", self.wiring.span(target.at), pin="left side")
            return
        nets = self.expressions.nets(target)
        if nets:
            self.delay = delay
            self.expressions.nets(value, len(nets), nets)
            self.delay = None

    def _emit(self, operator: str, inputs: Sequence[int], place: int, target: int | None, last: bool) -> int:
        delay = None if self.delay is None else self.delay if last else NO_DELAY
        key = (operator, len(inputs), id(delay))
        kind = self._kinds.get(key)
        if kind is None:
            kind = self._kinds[key] = self.workshop.operator(operator, len(inputs), delay)
        out = self.variables.new_result(place) if target is None else target
        self.instances.add(kind, place, -1, [out, *inputs])
        return out
