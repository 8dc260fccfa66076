"""What elaboration needs from outside a module, and the list of work.

Takes modules and a library, gives kinds, interfaces and templates, each made once for a set of parameters;
elaborating one may put others on the list.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable, Mapping, Sequence
from typing import TYPE_CHECKING, Protocol

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.columns import Block, Kinds
from tardigate.netlist.constant_value import literal
from tardigate.netlist.constants import Value, rounded, words_of
from tardigate.netlist.declare import Declarer
from tardigate.netlist.delays import Delays
from tardigate.netlist.elaborate import Elaborator
from tardigate.netlist.hierarchy import Hierarchy, Overrides, Setting
from tardigate.netlist.implicit import declare_implicit
from tardigate.netlist.interface import Interface, InterfacePin
from tardigate.netlist.items import Strange
from tardigate.netlist.lookup import Lookup
from tardigate.netlist.modules import Modules
from tardigate.netlist.name_table import NameTables
from tardigate.netlist.parameters import triple_trees
from tardigate.netlist.ports import template_ports
from tardigate.netlist.scopes import Scope, has_generate
from tardigate.netlist.strangers import Strangers
from tardigate.netlist.template import Child, Template
from tardigate.netlist.wiring import Wiring
from tardigate.parts.kind import Kind, Way
from tardigate.parts.library import Library
from tardigate.parts.model import Part, Pin
from tardigate.parts.source_delay import SourceDelay, Triple
from tardigate.source.arrays import distinct
from tardigate.source.collector import Collector
from tardigate.source.diagnostic import Diagnostic
from tardigate.syntax.placing import in_force
from tardigate.syntax.tree import Module
from tardigate.syntax.verilog_reader import Unit

if TYPE_CHECKING:
    from tardigate.netlist.primitives import Primitives
    from tardigate.netlist.registers import RegisterBit

MOST_TEMPLATES = 1 << 16
"""Modules times sets of parameters that one design may have."""

MOST_SETS = 1 << 13
"""Sets of parameters that one module may be wanted with."""

MOST_DEPTH = 1 << 12
"""Modules below one another."""

_PULLS = {"pull0": 0, "pull1": 1}


class PartsOfCells(Protocol):
    """What makes parts of modules with a specify block."""

    def part(self, module: str, parameters: Mapping[str, Value]) -> Part | None:
        """Return a cell as a part, None after telling what is wrong with it."""


Key = tuple[str, tuple[tuple[str, Value], ...], tuple[Setting, ...]]


class Shop:
    """Kinds, interfaces, hierarchies and templates of one design (see `items.Workshop`)."""

    def __init__(self, modules: Modules, library: Library, collector: Collector) -> None:
        self.modules, self.library, self.collector = modules, library, collector
        self.kinds = Kinds()
        self.strangers = Strangers()
        self.assumed = 0
        self._numbers: dict[Key, int] = {}
        self._work: list[Key] = []
        self._depths: list[int] = []
        self._sets: Counter[str] = Counter()
        self._interfaces: dict[int, Interface] = {}
        self._hierarchies: dict[int, Hierarchy] = {}
        self.lookups: dict[int, Lookup] = {}
        self._parts: dict[tuple[str, tuple[tuple[str, int], ...]], tuple[Interface, int]] = {}
        self._delays: dict[tuple[Triple, ...], SourceDelay] = {}
        self.tables = NameTables()
        self.cells: PartsOfCells | None = None
        self._primitives: Primitives | None = None
        self._now = -1

    def elaborate_all(self) -> list[Template]:
        """Elaborate the modules on the list; elaborating one may put others on it."""
        templates: list[Template] = []
        while len(templates) < len(self._work):
            self._now = len(templates)
            templates.append(self._elaborate(len(templates)))
        return templates

    def _elaborate(self, number: int) -> Template:
        name, values, _ = self._work[number]
        unit, hierarchy = self.modules.unit(name), self.hierarchy(number)
        delays = self.delays_of(name, dict(values))
        words = ", ".join(f"{key}={words_of(value)}" for key, value in values)
        with self.tables.of(unit, hierarchy.variables) as table:
            template = Elaborator(hierarchy, self, delays, table).template(words)
        self.assumed += delays.assumed
        return template

    def delays_of(self, name: str, values: Mapping[str, Value]) -> Delays:
        """Return the reader of a module's delays."""
        unit, start = self.modules.unit(name), self.modules.text(name).start
        step, precision = in_force(unit.source.timescales, start)
        trees = triple_trees(self.modules.declarations(name))
        return Delays(unit.text, step, precision, values, self.collector, self._delays, trees=trees)

    def values(self, template: int) -> dict[str, Value]:
        """Return the parameters of a template."""
        return dict(self._work[template][1])

    def _declarer(self, unit: Unit) -> Declarer:
        if id(unit) not in self.lookups:
            self.lookups[id(unit)] = Lookup(unit.scan.names)
        return Declarer(unit, self.lookups[id(unit)], self.collector)

    def number(self, name: str, overrides: Overrides) -> int:
        """Return the number of a module's template for a set of parameters; puts it on the list when new."""
        module = self.modules.tree(name)
        values = self._declarer(self.modules.unit(name)).parameters(module, overrides.own)
        key = (name, tuple(values.items()), overrides.below)
        if key not in self._numbers:
            self._check_room(name)
            self._numbers[key] = len(self._work)
            self._work.append(key)
            self._depths.append(self._depths[self._now] + 1 if self._now >= 0 else 0)
            self._sets[name] += 1
        return self._numbers[key]

    def _check_room(self, name: str) -> None:
        """Refuse a design that grows without end (N125, N126)."""
        if len(self._work) >= MOST_TEMPLATES or self._sets[name] >= MOST_SETS:
            self.collector.tell("N125", self.modules.span(name), name=name, most=MOST_SETS)
        elif self._now >= 0 and self._depths[self._now] >= MOST_DEPTH:
            self.collector.tell("N126", self.modules.span(name), name=name, most=MOST_DEPTH)
        else:
            return
        self.collector.refuse()

    # Workshop: other modules

    def hierarchy(self, template: int) -> Hierarchy:
        """Return scopes and declared nets of a template, made once for it and all that look into it."""
        if template not in self._hierarchies:
            name, values, settings = self._work[template]
            unit, module = self.modules.unit(name), self.modules.tree(name)
            declarer = self._declarer(unit)
            scopes = _scopes(module, dict(values), declarer)
            variables = declarer.variables(module, scopes)
            net_type = in_force(unit.source.default_nettypes, self.modules.text(name).start)
            with self.tables.of(unit, variables) as table:
                declare_implicit(declarer, scopes, variables, table, net_type)
            self._hierarchies[template] = Hierarchy(module, declarer, scopes, variables, settings, self)
        return self._hierarchies[template]

    def interface(self, module: str, overrides: Overrides) -> tuple[Interface, int] | None:
        """Return a module's interface and template number; None where there is none that can be read."""
        if module not in self.modules or not self.modules.readable(module, self.collector):
            return None
        number = self.number(module, overrides)
        if number not in self._interfaces:
            self._interfaces[number] = self._module_interface(number)
        return self._interfaces[number], number

    def _module_interface(self, number: int) -> Interface:
        """Return a module's ports; what is wrong with them the module's own elaboration tells again."""
        name = self._work[number][0]
        unit, hierarchy = self.modules.unit(name), self.hierarchy(number)
        with self.tables.of(unit, hierarchy.variables) as table:
            wiring = Wiring(hierarchy.declarer, hierarchy.variables, hierarchy.scopes, table, hierarchy)
            ports = template_ports(hierarchy.module, wiring)
        pins = [InterfacePin(port.name, port.way, len(port.nets)) for port in ports]
        drive = in_force(unit.source.drives, self.modules.text(name).start)
        return Interface(name, pins, _PULLS.get(drive))

    def parameter_names(self, module: str) -> list[str] | None:
        """Return the parameters that an instance may override; None where nobody says which there are."""
        if self.library.describes(module):
            return list(self.library.parameters(module)) or None
        if module not in self.modules or not self.modules.readable(module, self.collector):
            return None
        declared = [each for each in self.modules.declarations(module) if not each.local]
        return [named.name for declaration in declared for named in declaration.names]

    def undescribed(self, strange: Sequence[Strange], driven: NDArray[np.bool_]) -> None:
        """Take note of instances of what nobody describes."""
        text = self.modules.unit(self._work[self._now][0]).text
        self.strangers.add(strange, [text.span(s.place, s.place + len(s.module)) for s in strange], driven)

    def outputs(self, instances: Block, children: Sequence[Child]) -> Iterable[NDArray[np.int32]]:
        """Yield the local nets at outputs of part instances and of modules below."""
        start = np.cumsum(instances.counts) - instances.counts
        for number in distinct(instances.kind).tolist():
            rows = start[instances.kind == number]
            for pin in np.flatnonzero(self.kinds.kinds[number].ways != Way.INPUT).tolist():
                yield instances.pins[rows + pin]
        for child in children:
            interface = self._interfaces[child.template]
            for port, first in zip(interface.pins, interface.first_bit, strict=False):
                if port.way != Way.INPUT:
                    yield child.joins[first : first + port.width]

    def interface_of(self, template: int) -> Interface:
        """Return the interface of a module below that has been asked for."""
        return self._interfaces[template]

    # Workshop: kinds

    def kind(self, number: int) -> Kind:
        """Return a kind by number."""
        return self.kinds.kinds[number]

    def gate(self, gate: str, inputs: int, outputs: int, delay: SourceDelay | None) -> int:
        """Return the number of a gate's kind."""
        return self.kinds.number(self.library.gate_kind(gate, inputs, outputs, delay))

    def operator(self, operator: str, inputs: int, delay: SourceDelay | None) -> int:
        """Return the number of an operator's kind."""
        return self.kinds.number(self.library.operator_kind(operator, inputs, delay))

    def no_register(self, told: Diagnostic) -> None:
        """Tell of an `always` that is no register."""
        self.collector.add(told)

    def register(self, bit: RegisterBit) -> int:
        """Return the number of a register's kind."""
        kind = self.library.register_kind(bit.edge, bit.controls, len(bit.data), bit.delay)
        return self.kinds.number(kind)

    def part(self, module: str, parameters: Mapping[str, Value]) -> tuple[Interface, int] | None:
        """Return a described part's interface and kind number."""
        if not self.library.describes(module):
            return self.cell(module, parameters) if self.is_cell(module) else None
        values = {name: rounded(value) for name, value in parameters.items()}
        key = (module, tuple(sorted(values.items())))
        if key not in self._parts:
            kind = self.kinds.number(self.library.part_kind(module, values))
            self._parts[key] = (_interface(module, self.library.pins(module)), kind)
        return self._parts[key]

    def is_cell(self, module: str) -> bool:
        """Tell whether a module is a part because a specify block gives it times or checks."""
        if self.cells is None or not self.modules.has_specify(module) or self.library.describes(module):
            return False
        return self.modules.readable(module, self.collector) and self.modules.says_times(module)

    def cell(self, module: str, parameters: Mapping[str, Value]) -> tuple[Interface, int] | None:
        """Return the interface and kind of a module with a specify block, None if it cannot be read."""
        assert self.cells is not None
        part = self.cells.part(module, parameters)
        if part is None:
            return None
        written = tuple((name, literal(value)) for name, value in sorted(parameters.items()))
        kind = self.library.cell_kind(part, written=written)
        return _interface(module, part.pins), self.kinds.number(kind)

    def is_primitive(self, name: str) -> bool:
        """Tell whether a name is that of a user-defined primitive and no parts file describes it."""
        return name in self.modules.primitives and not self.library.describes(name)

    @property
    def primitives(self) -> Primitives:
        """The user-defined primitives as parts."""
        if self._primitives is None:
            from tardigate.netlist.primitives import Primitives  # few designs have any

            self._primitives = Primitives(self.modules, self.collector)
        return self._primitives

    def primitive(self, name: str, delay: SourceDelay | None) -> tuple[Interface, int] | None:
        """Return the interface and kind of a user-defined primitive, None after telling what is wrong."""
        part = self.primitives.part(name)
        if part is None:
            return None
        return _interface(name, part.pins), self.kinds.number(self.library.cell_kind(part, delay))


def _interface(name: str, pins: Iterable[Pin]) -> Interface:
    return Interface(name, [InterfacePin(pin.name, pin.way, pin.width) for pin in pins])


def _scopes(module: Module, values: Mapping[str, Value], declarer: Declarer) -> list[Scope]:
    """Return the scopes of a module; of one without generate that is the module itself."""
    if not has_generate(module.items):
        return [Scope(0, -1, "", "", values, module.at, items=list(module.items))]
    from tardigate.netlist.generate import expand  # few modules need it

    return expand(module, values, declarer)
