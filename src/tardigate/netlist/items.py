"""Turns the items of a module's scopes into part instances, modules below and what nobody describes.

Takes items one by one, gives columns and children; asks a `Workshop` for what lies outside the module. Plain
statements that `bulk` has read do not come here.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from typing import TYPE_CHECKING, NamedTuple, Protocol

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.bulk import gate_terminals
from tardigate.netlist.columns import Block, Instances
from tardigate.netlist.connect import Connector, is_target
from tardigate.netlist.constants import Value
from tardigate.netlist.delays import NO_DELAY, Delays
from tardigate.netlist.expression import Expressions
from tardigate.netlist.hierarchy import Hierarchy, Outside, Overrides, Seat
from tardigate.netlist.interface import Interface, InterfacePin
from tardigate.netlist.name_columns import NetNames
from tardigate.netlist.scopes import Scope
from tardigate.netlist.template import Child
from tardigate.netlist.variables import VARIABLES
from tardigate.netlist.wiring import Wiring
from tardigate.parts.gates import THREE_STATE
from tardigate.parts.kind import Kind, Way
from tardigate.parts.source_delay import SourceDelay
from tardigate.source.diagnostic import Diagnostic, Related
from tardigate.syntax import tree

if TYPE_CHECKING:
    from tardigate.netlist.net_delay import NetDelay
    from tardigate.netlist.registers import RegisterBit


class Workshop(Outside, Protocol):
    """What elaboration needs from outside a module."""

    def gate(self, gate: str, inputs: int, outputs: int, delay: SourceDelay | None) -> int:
        """Return the number of a gate's kind."""

    def operator(self, operator: str, inputs: int, delay: SourceDelay | None) -> int:
        """Return the number of an operator's kind."""

    def kind(self, number: int) -> Kind:
        """Return a kind by number."""

    def interface_of(self, template: int) -> Interface:
        """Return the interface of a module below that has been asked for."""

    def part(self, module: str, parameters: Mapping[str, Value]) -> tuple[Interface, int] | None:
        """Return the interface and kind of a described part or a cell, None for anything else."""

    def primitive(self, name: str, delay: SourceDelay | None) -> tuple[Interface, int] | None:
        """Return the interface and kind of a user-defined primitive, None when there is none of that name."""

    def is_primitive(self, name: str) -> bool:
        """Tell whether a name is that of a user-defined primitive and no parts file describes it."""

    def no_register(self, told: Diagnostic) -> None:
        """Take note of an `always` that is no register."""

    def register(self, bit: RegisterBit) -> int:
        """Return the number of a register's kind."""

    def undescribed(self, strange: Sequence[Strange], driven: NDArray[np.bool_]) -> None:
        """Take note of instances of what nobody describes; `driven` bool[nets]: something known drives it."""

    def outputs(self, instances: Block, children: Sequence[Child]) -> Iterable[NDArray[np.int32]]:
        """Yield the local nets at outputs of part instances and of modules below."""


class Strange(NamedTuple):
    """An instance, or array of `copies`, of a module that nobody describes: its pins and their local nets."""

    module: str
    place: int
    copies: int
    pins: tuple[tuple[str, tuple[int, ...]], ...]


class Items:
    """The items of one module."""

    def __init__(self, wiring: Wiring, hierarchy: Hierarchy, workshop: Workshop, delays: Delays) -> None:
        self.wiring, self.hierarchy, self.workshop, self.delays = wiring, hierarchy, workshop, delays
        self.collector, self.lookup = wiring.collector, wiring.lookup
        self.instances = Instances()
        self.children: list[Child] = []
        self.strangers: list[Strange] = []
        self.pulled: dict[str, list[int]] = {}
        self.net_delays: dict[int, NetDelay] = {}
        self.arrays: list[tuple[str, int]] = []
        self.expressions = Expressions(wiring, self._emit)
        self.connector = Connector(wiring, self.expressions)
        self._delay: SourceDelay | None = None
        self._prefix = ""
        self._named: dict[str, int] = {}
        self._kinds: dict[tuple[str, int, int], int] = {}  # by operator, inputs and delay object

    def enter(self, scope: Scope) -> None:
        """Read the items of a scope from now on."""
        self.wiring.enter(scope)
        self.delays.values = scope.values
        self._prefix, self._named = scope.prefix, {}

    def item(self, item: tree.Item) -> None:
        """Read one item."""
        if isinstance(item, tree.Gates):
            self._gates(item)
        elif isinstance(item, tree.Instances):
            self._instances(item)
        elif isinstance(item, tree.Continuous):
            delay = self.delays.read(item.delay, 3)
            for assign in item.assigns:
                self._assign(assign.target, assign.value, delay)
        elif isinstance(item, tree.Declaration):
            self._declaration(item)
        elif isinstance(item, tree.Pulls):
            self._pulls(item)
        elif isinstance(item, tree.Always):
            self._registers(item)

    # Gates (clause 7)

    def gate_kind(self, gate: str, inputs: int, outputs: int, delay: SourceDelay | None = None) -> int:
        """Return the number of a gate's kind."""
        return self.workshop.gate(gate, inputs, outputs, delay)

    def _gates(self, item: tree.Gates) -> None:
        delay = self.delays.read(item.delay, 3 if item.gate in THREE_STATE else 2)  # clause 7.14
        for gate in item.gates:
            count = len(gate.terminals)
            if count < 2 or (item.gate in THREE_STATE and count != 3):
                span = self.wiring.span(gate.at, max(1, len(gate.name)))
                self.collector.tell("N167", span, gate=item.gate, count=count)
                continue
            inputs, outputs = gate_terminals(item.gate, count)
            kind = self.gate_kind(item.gate, inputs, outputs, delay)
            pins = [InterfacePin("", Way.OUTPUT, 1)] * outputs + [InterfacePin("", Way.INPUT, 1)] * inputs
            self._terminals(kind, pins, gate)

    def _terminals(self, kind: int, pins: Sequence[InterfacePin], gate: tree.Gate) -> None:
        """Add what has scalar terminals by order: a gate or a primitive, or an array of them."""
        indices = self.connector.array(gate.range)
        if indices is None:
            return
        connections = [tree.Connection("", terminal, terminal.at) for terminal in gate.terminals]
        nets = self._pins(pins, connections, len(indices), scalar=True)
        if nets is not None:
            if gate.name:
                self._note_name(gate.name, gate.at, gate.range is not None)
            self._add(kind, gate.name, gate.range is not None, indices, gate.at, nets)

    def _pulls(self, item: tree.Pulls) -> None:
        """Take note of nets that are pulled, and so need no driver (clause 7.8)."""
        for gate in item.gates:
            if len(gate.terminals) != 1:
                span = self.wiring.span(gate.at, max(1, len(gate.name)))
                self.collector.tell("N167", span, gate=item.word, count=len(gate.terminals))
                continue
            indices = self.connector.array(gate.range)
            pin = InterfacePin(item.word, Way.OUTPUT, 1)
            connection = tree.Connection("", gate.terminals[0], gate.terminals[0].at)
            nets = None if indices is None else self._pins([pin], [connection], len(indices), scalar=True)
            for of_copy in nets or ():
                self.pulled.setdefault(item.word, []).extend(of_copy)

    def _pins(
        self, interface: Sequence[InterfacePin], connections: Sequence[tree.Connection | None], copies: int,
        scalar: bool = False, pulled: int | None = None,
    ) -> list[list[int]] | None:  # fmt: skip
        """Return the nets of all pins' bits for each copy, None after telling of a fault."""
        nets: list[list[int]] = [[] for _ in range(copies)]
        for pin, connection in zip(interface, connections, strict=True):
            bits = self.connector.bits(connection, pin, copies, scalar, pulled)
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
            if is_array and name:
                number = self.instances.other_name(f"{self._prefix}{name}[{index}]")
            elif name:
                number = self.lookup.find(name) if not self._prefix else -1
                number = number if number >= 0 else self.instances.other_name(self._prefix + name)
            self.instances.add(kind, at, number, nets)

    def _note_name(self, name: str, at: int, is_array: bool) -> None:
        """Tell of two things with one name in a generate block (clause 4.11; N115, N110)."""
        if is_array and not self._prefix:
            self.arrays.append((name, at))
        first = self._named.setdefault(name, at) if self._prefix else at
        net = self.wiring.variables.scoped.get((self.wiring.scope, self.lookup.find(name)), -1)
        if net >= 0:
            self.wiring.declarer.twice_at(name, at, int(self.wiring.variables.place[net]))
        if first != at:
            related = (Related(self.wiring.span(first, len(name)), "first one here"),)
            self.collector.tell("N115", self.wiring.span(at, len(name)), name=name, related=related)

    # Instances (clause 12.1)

    def _instances(self, item: tree.Instances) -> None:
        if self.workshop.is_primitive(item.module):
            self._primitives(item)
            return
        own = self.hierarchy.overrides(item, self.wiring.scope)
        for instance in item.instances if own is not None else ():
            if not instance.name:
                span = self.wiring.span(item.at, len(item.module))
                self.collector.tell("N108", span, module=item.module)
                return
            seat = Seat(item, instance, self.wiring.scope)
            self._note_name(instance.name, instance.at, instance.range is not None)
            if instance.range is not None and self.hierarchy.sets_members(seat):
                self._array_with_settings(seat, own or {})
            else:
                values = self.hierarchy.settled(seat, instance.name, own or {})
                self._instance(seat, values, None)

    def _array_with_settings(self, seat: Seat, own: Mapping[str, Value]) -> None:
        """Elaborate an array whose members may differ by defparams, each of them with its share."""
        indices = self.connector.array(seat.instance.range)
        for place, index in enumerate(indices or ()):
            values = self.hierarchy.settled(seat, f"{seat.instance.name}[{index}]", own)
            self._instance(seat, values, place)

    def _instance(self, seat: Seat, overrides: Overrides, only: int | None) -> None:
        """Add an instance, or all members of an array, or the one that is `only`."""
        item, instance = seat.item, seat.instance
        part = self.workshop.part(item.module, overrides.own)
        child = None if part else self.workshop.interface(item.module, overrides)
        if part is None and child is None:
            self._strange(item, instance)
            return
        for setting in overrides.below if part is not None else ():  # a part has no instances inside
            name = ".".join((*setting.path, setting.parameter))
            self.collector.tell("N127", setting.place, name=name)
        interface, number = part or child or (Interface("", ()), 0)
        connections = self.connector.by_pin(instance, interface)
        indices = self.connector.array(instance.range)
        if connections is None or indices is None:
            return
        nets = self._pins(interface.pins, connections, len(indices), pulled=interface.pulled)
        if nets is None:
            return
        if only is not None:
            indices, nets = indices[only : only + 1], nets[only : only + 1]
        is_array = instance.range is not None
        if part is not None:
            self._add(number, instance.name, is_array, indices, instance.at, nets)
            return
        for index, of_copy in zip(indices, nets, strict=True):
            name = f"{self._prefix}{instance.name}" + (f"[{index}]" if is_array else "")
            self.children.append(Child(name, number, np.array(of_copy, np.int32), instance.at))

    def _primitives(self, item: tree.Instances) -> None:
        """Add instances of a user-defined primitive (clause 8.6); what stands behind `#` are delays."""
        values = [override.net for override in item.overrides if not override.pin]
        delay = None
        if item.overrides and None not in values and len(values) == len(item.overrides):
            written = tuple(value for value in values if value is not None)
            delay = self.delays.read(tree.Delay(written, item.overrides[0].at), 2)
        elif item.overrides:
            self.collector.tell("N168", self.wiring.span(item.at), module=item.module, name="by name")
            return
        found = self.workshop.primitive(item.module, delay)
        for instance in item.instances if found is not None else ():
            assert found is not None
            interface, kind = found
            terminals = tuple(c.net for c in instance.connections if c.net is not None and not c.pin)
            if len(terminals) != len(interface.pins) or len(terminals) != len(instance.connections):
                at = instance.at if instance.name else item.at
                span = self.wiring.span(at, len(instance.name or item.module))
                self.collector.tell("N167", span, gate=item.module, count=len(terminals))
                continue
            at = instance.at if instance.name else terminals[0].at
            self._terminals(kind, interface.pins, tree.Gate(instance.name, instance.range, terminals, at))

    def _strange(self, item: tree.Instances, instance: tree.Instance) -> None:
        indices = self.connector.array(instance.range)
        if indices is None:
            return
        nets = [self.expressions.nets(c.net) if c.net is not None else [] for c in instance.connections]
        names = [c.pin or f"P{at + 1}" for at, c in enumerate(instance.connections)]
        pins = tuple(zip(names, map(tuple, nets), strict=True))
        self.strangers.append(Strange(item.module, item.at, len(indices), pins))

    def _registers(self, item: tree.Always) -> None:
        from tardigate.netlist.registers import registers_of  # few designs have any

        name, names = self.hierarchy.module.name, NetNames(self.wiring.variables)
        for bit in registers_of(item, name, self.wiring, self.expressions, self.delays, self.workshop):
            kind = self.workshop.register(bit)
            called = self.instances.other_name(names.one(bit.q))  # as what it stores
            self.instances.add(kind, bit.place, called, bit.pins)

    # Assignments (clause 6.1)

    def _declaration(self, item: tree.Declaration) -> None:
        if item.delay is not None:
            from tardigate.netlist.net_delay import declared_delays  # few designs have any

            self.net_delays |= declared_delays(item, self.wiring, self.delays)
        assigned = [named for named in item.names if named.value is not None]
        if not assigned or item.net_type in VARIABLES:
            return  # the first value of a variable is none that it drives (clause 6.2.1)
        delay = self.delays.read(item.delay, 3)
        for named in assigned:
            assert named.value is not None
            self._assign(tree.Reference((named.name,), (), named.at), named.value, delay)

    def _assign(self, target: tree.Expression, value: tree.Expression, delay: SourceDelay | None) -> None:
        if not is_target(target):
            self.collector.tell("N165", self.wiring.span(target.at), pin="left side")
            return
        if not self.wiring.may_drive(target):
            return
        self.wiring.driving = True
        nets = self.expressions.nets(target)
        self.wiring.driving = False
        if nets:
            self._delay = delay
            self.expressions.nets(value, len(nets), nets)
            self._delay = None

    def _emit(self, operator: str, inputs: Sequence[int], place: int, target: int | None, last: bool) -> int:
        delay = None if self._delay is None else self._delay if last else NO_DELAY
        key = (operator, len(inputs), id(delay))
        kind = self._kinds.get(key)
        if kind is None:
            kind = self._kinds[key] = self.workshop.operator(operator, len(inputs), delay)
        out = self.wiring.variables.new_result(place) if target is None else target
        self.instances.add(kind, place, -1, [out, *inputs])
        return out
