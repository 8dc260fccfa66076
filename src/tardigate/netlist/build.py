"""Elaboration as a list of passes: units and a library to the flat design.

Takes scanned files, the parts library and the top's name, gives a `Built`. Delays may still be missing and
instances undescribed: `check` and the pipeline refuse what a figure would need.
"""

from __future__ import annotations

from bisect import bisect_right
from collections.abc import Iterable, Mapping, Sequence
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.columns import Block, Kinds
from tardigate.netlist.constants import Value
from tardigate.netlist.declare import Declarer
from tardigate.netlist.delays import Delays
from tardigate.netlist.elaborate import Elaborator, Strange
from tardigate.netlist.flat import Flat
from tardigate.netlist.interface import Interface, InterfacePin
from tardigate.netlist.lookup import Lookup
from tardigate.netlist.modules import Modules, collect, find_ring, find_top
from tardigate.netlist.ports import template_ports
from tardigate.netlist.stamp import TooLargeError, stamp
from tardigate.netlist.strangers import Strangers, Undescribed
from tardigate.netlist.template import Child, Template
from tardigate.netlist.variables import Variables
from tardigate.netlist.wiring import Wiring
from tardigate.parts.kind import Way
from tardigate.parts.library import Library
from tardigate.parts.source_delay import SourceDelay, Triple
from tardigate.source.arrays import distinct
from tardigate.source.collector import Collector
from tardigate.source.faults import InputRefusedError
from tardigate.syntax import tree
from tardigate.syntax.verilog_reader import Unit

MOST_TEMPLATES = 1 << 16
"""Modules times sets of parameters that one design may have."""


class Built(NamedTuple):
    """What elaboration gives: the flat design, the undescribed, and the delays whose unit was assumed."""

    top: str
    flat: Flat
    modules: int
    undescribed: tuple[Undescribed, ...]
    units_assumed: int


def build(
    units: Sequence[Unit], library: Library, top: str | None, collector: Collector, *, bulk: bool = True
) -> Built:
    """Elaborate a design. Raises InputRefusedError."""
    modules = collect(units, library.describes, collector, bulk)
    collector.refuse()
    found = find_top(modules, top, collector)
    if found is None:
        _tell_unreadable(modules, collector)
    collector.refuse()
    assert found is not None
    find_ring(modules, [found], collector)
    collector.refuse()
    shop = _Shop(modules, library, collector)
    first = shop.number(found, {})
    templates = shop.elaborate_all()
    collector.refuse()
    try:
        flat = stamp(templates, first, shop.kinds.kinds)
    except TooLargeError:
        collector.tell("N124", modules.span(found))
        collector.refuse()
        raise
    return Built(found, flat, len({t.module for t in templates}), shop.strangers.resolved(), shop.assumed)


def _tell_unreadable(modules: Modules, collector: Collector) -> None:
    """Tell what is wrong with modules that do not parse: that may be why there is not one top."""
    for name in modules.names():
        if not modules.described(name):
            try:
                modules.tree(name)
            except InputRefusedError as refused:
                for diagnostic in refused.diagnostics:
                    if diagnostic.code == "V001":
                        collector.add(diagnostic)


class _Shop:
    """What elaboration needs from outside a module (see `Workshop`), and the list of work."""

    def __init__(self, modules: Modules, library: Library, collector: Collector) -> None:
        self.modules, self.library, self.collector = modules, library, collector
        self.kinds = Kinds()
        self.strangers = Strangers()
        self.assumed = 0
        self._numbers: dict[tuple[str, tuple[tuple[str, Value], ...]], int] = {}
        self._work: list[tuple[str, dict[str, Value]]] = []
        self._interfaces: dict[int, Interface] = {}
        self._declared: dict[int, Variables] = {}
        self._lookups: dict[int, Lookup] = {}
        self._parts: dict[tuple[str, tuple[tuple[str, int], ...]], tuple[Interface, int]] = {}
        self._delays: dict[tuple[Triple, ...], SourceDelay] = {}
        self._at: Unit | None = None

    def elaborate_all(self) -> list[Template]:
        """Elaborate the modules on the list; elaborating one may put others on it."""
        templates: list[Template] = []
        while len(templates) < len(self._work):
            templates.append(self._elaborate(len(templates)))
        return templates

    def _elaborate(self, number: int) -> Template:
        name, values = self._work[number]
        unit = self._at = self.modules.unit(name)
        start = self.modules.text(name).start
        state = _in_force([s[0] for s in unit.source.timescales], start)
        _, step, precision = unit.source.timescales[state] if state >= 0 else (0, None, None)
        delays = Delays(unit.text, step, precision, values, self.collector, self._delays)
        nets = _in_force([s[0] for s in unit.source.default_nettypes], start)
        implicit = nets < 0 or unit.source.default_nettypes[nets][1] != "none"
        module = self.modules.tree(name)
        elaborator = Elaborator(module, self._declarer(unit), values, self, delays, implicit)
        words = ", ".join(f"{key}={value.value}" for key, value in values.items())
        template = elaborator.template(words, self._variables(number))
        self.assumed += delays.assumed
        return template

    def _declarer(self, unit: Unit) -> Declarer:
        if id(unit) not in self._lookups:
            self._lookups[id(unit)] = Lookup(unit.scan.names)
        return Declarer(unit, self._lookups[id(unit)], self.collector)

    def number(self, name: str, overrides: Mapping[str, Value]) -> int:
        """Return the number of a module's template for a set of parameters; puts it on the list when new."""
        values = self._declarer(self.modules.unit(name)).parameters(self.modules.tree(name), overrides)
        key = (name, tuple(values.items()))
        if key not in self._numbers:
            if len(self._work) >= MOST_TEMPLATES:
                self.collector.tell("N125", self.modules.span(name), name=name, most=MOST_TEMPLATES)
                self.collector.refuse()
            self._numbers[key] = len(self._work)
            self._work.append((name, values))
        return self._numbers[key]

    def _variables(self, number: int) -> Variables:
        """Return the declared nets of a template, once for the template and its interface."""
        if number not in self._declared:
            name, values = self._work[number]
            declarer = self._declarer(self.modules.unit(name))
            self._declared[number] = declarer.variables(self.modules.tree(name), values)
        return self._declared[number]

    def _module_interface(self, number: int) -> Interface:
        """Return a module's ports; what is wrong with them the module's own elaboration tells again."""
        name, values = self._work[number]
        unit, module = self.modules.unit(name), self.modules.tree(name)
        declarer, variables = self._declarer(unit), self._variables(number)
        of_name = np.full(len(unit.scan.names) + 1, -1, np.int32)
        of_name[variables.name] = np.arange(len(variables))
        of_name[-1] = -1
        ports = template_ports(module, Wiring(declarer, variables, values, of_name))
        return Interface(name, [InterfacePin(port.name, port.way, len(port.nets)) for port in ports])

    # Workshop

    def gate(self, gate: str, inputs: int, outputs: int, delay: SourceDelay | None) -> int:
        """Return the number of a gate's kind."""
        return self.kinds.number(self.library.gate_kind(gate, inputs, outputs, delay))

    def operator(self, operator: str, inputs: int, delay: SourceDelay | None) -> int:
        """Return the number of an operator's kind."""
        return self.kinds.number(self.library.operator_kind(operator, inputs, delay))

    def part(self, module: str, parameters: Mapping[str, int]) -> tuple[Interface, int] | None:
        """Return a described part's interface and kind number."""
        if not self.library.describes(module):
            return None
        key = (module, tuple(sorted(parameters.items())))
        if key not in self._parts:
            pins = [InterfacePin(pin.name, pin.way, pin.width) for pin in self.library.pins(module)]
            kind = self.kinds.number(self.library.part_kind(module, parameters))
            self._parts[key] = (Interface(module, pins), kind)
        return self._parts[key]

    def interface(self, module: str, parameters: Mapping[str, Value]) -> tuple[Interface, int] | None:
        """Return a module's interface and template number."""
        if module not in self.modules:
            return None
        number = self.number(module, parameters)
        if number not in self._interfaces:
            self._interfaces[number] = self._module_interface(number)
        return self._interfaces[number], number

    def undescribed(self, strange: Sequence[Strange], driven: NDArray[np.bool_]) -> None:
        """Take note of instances of what nobody describes."""
        assert self._at is not None
        text = self._at.text
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

    def parameter_names(self, module: str) -> list[str] | None:
        """Return the parameters that an instance may override; None where nobody says which there are."""
        if self.library.describes(module):
            return list(self.library.parameters(module)) or None
        if module not in self.modules:
            return None
        tree_of = self.modules.tree(module)
        declared = [*tree_of.parameters, *(i for i in tree_of.items if isinstance(i, tree.Parameter))]
        return [
            named.name for declaration in declared if not declaration.local for named in declaration.names
        ]


def _in_force(offsets: Sequence[int], at: int) -> int:
    return bisect_right(offsets, at) - 1
