"""All parts files of a run under one condition: what the netlist asks for kinds.

Takes files, gives kinds; equal questions get the same object. Does not know any design.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from copy import copy
from types import MappingProxyType

from tardigate.parts import gates
from tardigate.parts.build import build_family
from tardigate.parts.by_kind import ByKind, Choice
from tardigate.parts.check import check_families, choose_condition, resolve
from tardigate.parts.function import Values
from tardigate.parts.kind import Edge, Kind, Origin
from tardigate.parts.kind_maker import Delay
from tardigate.parts.model import Family, Part, Pin
from tardigate.parts.part_kind import parameter_values, part_kind
from tardigate.parts.register_kind import REGISTER, Control, register_kind
from tardigate.parts.source_delay import SourceDelay
from tardigate.source.collector import Collector
from tardigate.source.files import SourceFile
from tardigate.syntax.parts_reader import read_families

NO_PARAMETERS: Mapping[str, int] = MappingProxyType({})


class Library:
    """Parts, gates and operators with their delays under one condition.

    `conditions`: the names known, in order; `condition_assumed`: the first one's, when there are several and
    none was chosen.
    """

    def __init__(
        self, families: Sequence[Family], columns: Sequence[int], condition_assumed: str | None = None
    ) -> None:
        self.families = tuple(families)
        self.conditions = tuple(dict.fromkeys(c.name for family in families for c in family.conditions))
        self.condition_assumed = condition_assumed
        self._choice = _choice(families, columns)
        self._parts: dict[str, Part] = {}
        self._column: dict[str, int] = {}
        self._condition: dict[str, str] = {}
        for family, column in zip(families, columns, strict=True):
            for part in family.parts:
                self._parts.setdefault(part.name, part)
                self._column.setdefault(part.name, column)
                self._condition.setdefault(part.name, _named(family, column))
        aliases = [alias for family in families for alias in family.aliases]
        self._parts.update(resolve(aliases, families, self._parts))
        self._kinds: dict[tuple[object, ...], Kind] = {}
        self._is_timed = True

    def without_times(self) -> Library:
        """Return the same parts, with gates, operators and registers that take what the source says only."""
        other = copy(self)
        other._kinds, other._is_timed = {}, False
        return other

    @classmethod
    def read(cls, files: Sequence[SourceFile], condition: str | None, collector: Collector) -> Library:
        """Read parts files; no files make an empty library. Faults are told to the collector."""
        trees = [read_families(file, collector) for file in files]
        broken: set[str] = set()
        families = [build_family(family, collector, broken) for some in trees for family in some or ()]
        if None not in trees:  # or else names would be missed that stand in the faulty file
            check_families(families, frozenset(broken), collector)
        columns, assumed = choose_condition(families, condition, collector)
        return cls(families, columns, assumed)

    def rated(self) -> frozenset[str]:
        """Return the names of parts whose times hold at a rated load."""
        return frozenset(part.name for family in self.families for part in family.parts if part.loads)

    def wire_rows(self) -> int:
        """Return how many statements about wires the parts files make."""
        return sum(
            len(wires.fanout) + bool(wires.more) + len(wires.nets) + (wires.load is not None)
            for wires in (family.wires for family in self.families)
        )

    def describes(self, module: str) -> bool:
        """Say whether a module's name is that of a part or alias."""
        return module in self._parts

    def part_names(self) -> list[str]:
        """Return the names of parts and aliases, sorted."""
        return sorted(self._parts)

    def pins(self, module: str) -> tuple[Pin, ...]:
        """Return the pins of a part in declared order. Raises KeyError for an unknown part."""
        return self._parts[module].pins

    def parameters(self, module: str) -> Mapping[str, int | None]:
        """Return the names of a part's parameters with their defaults, None where there is none."""
        return {parameter.name: parameter.default for parameter in self._parts[module].parameters}

    def part_kind(self, module: str, parameters: Mapping[str, int] = NO_PARAMETERS) -> Kind:
        """Return the kind of a part: bits of its pins in the order of `pins`, most significant first.

        Parameters that the part does not have make no difference. Raises KeyError for an unknown part.
        """
        part = self._parts[module]
        chosen = _chosen(part, parameters)
        key = ("part", part.name, *chosen.items())
        if key not in self._kinds:
            column, condition = self._column[part.name], self._condition[part.name]
            made = part_kind(part, column, chosen, self._choice, condition)
            self._kinds[key] = made._replace(parameters=tuple(chosen.items()))
        return self._kinds[key]

    def gate_kind(self, gate: str, inputs: int, outputs: int = 1, delay: SourceDelay | None = None) -> Kind:
        """Return the kind of a gate primitive; `inputs` counts a three-state gate's control as well.

        A delay written in the source comes first, then a parts file's entry, then a default.
        Raises KeyError for an unknown gate.
        """
        key = ("gate", gate, inputs, outputs, _hashable(delay))
        if key not in self._kinds:
            delay_of = (
                gates.source_delays(delay) if delay else self._delay_of(self._choice.gates, gate, inputs)
            )
            self._kinds[key] = gates.gate(gate, inputs, outputs, delay_of)._replace(source=delay)
        return self._kinds[key]

    def operator_kind(self, operator: str, inputs: int, delay: SourceDelay | None = None) -> Kind:
        """Return the kind of an operator of an assignment, `copy` for an assignment without one.

        `inputs` counts bits of all operands. Raises KeyError for an unknown operator.
        """
        key = ("operator", operator, inputs, _hashable(delay))
        if key not in self._kinds:
            table = self._choice.operators
            delay_of = gates.source_delays(delay) if delay else self._delay_of(table, operator, inputs)
            turns_off = delay is not None and len(delay.values) > 2
            written = delay
            if delay is not None and operator == gates.THREE_STATE_NET:
                written = gates.with_turn_off(delay)
            self._kinds[key] = gates.operator(operator, inputs, delay_of, turns_off)._replace(source=written)
        return self._kinds[key]

    def part(self, module: str, parameters: Mapping[str, int] = NO_PARAMETERS) -> tuple[Part, Values]:
        """Return a part and the values of its parameters' bits that are known. Raises KeyError."""
        part = self._parts[module]
        return part, parameter_values(part, _chosen(part, parameters))

    def cell_kind(
        self, part: Part, delay: SourceDelay | None = None, written: tuple[tuple[str, str], ...] = ()
    ) -> Kind:
        """Return the kind of a part that stands in the source, a cell or a primitive with `delay` behind `#`.

        What its rows do not time takes the default of the parts files. `written` are the parameters that made
        the part, as constants of Verilog.
        """
        key = ("cell", part.name, id(part), _hashable(delay))
        if key not in self._kinds:
            made = part_kind(part, 0, {}, self._choice, delay=delay)
            self._kinds[key] = made._replace(source=delay, parameters=written)
        return self._kinds[key]

    def register_kind(
        self, edge: Edge, controls: Sequence[Control], data: int, delay: SourceDelay | None = None
    ) -> Kind:
        """Return the kind of a register that an `always` makes; see `register_kind` for its pins.

        Delays written in the source come first, then the operators' entry `"register"`, then a default.
        """
        of_controls = tuple((c.level, c.sets, _hashable(c.delay)) for c in controls)
        key = (REGISTER, edge, of_controls, data, _hashable(delay))
        if key not in self._kinds:
            delay_of = self._delay_of(self._choice.operators, REGISTER, 0)
            made = register_kind(edge, controls, data, delay, delay_of)
            self._kinds[key] = made._replace(
                source=delay, control_sources=tuple(control.delay for control in controls)
            )
        return self._kinds[key]

    def _delay_of(self, table: ByKind, name: str, inputs: int) -> gates.DelayOf:
        def delay_of(transition: str) -> Delay:
            if not self._is_timed:
                return gates.NO_DELAY
            if name == "copy":  # a wire unless a parts file says otherwise; no default is meant for it
                return table.find(name, inputs, transition) or gates.NO_DELAY
            return self._choice.delay(table, name, inputs, transition)

        return delay_of


def _chosen(part: Part, parameters: Mapping[str, int]) -> dict[str, int]:
    """Return the values of a part's parameters that are known, each cut to its width."""
    values = {p: parameters.get(p.name, p.default) for p in part.parameters}
    return {p.name: value & (1 << p.width) - 1 for p, value in values.items() if value is not None}


def _hashable(delay: SourceDelay | None) -> object:
    """Return what equal delays have in common; NaN is equal to itself here."""
    return None if delay is None else (repr(delay.values), delay.words)


def _named(family: Family, column: int) -> str:
    return family.conditions[column].name if family.conditions else ""


def _choice(families: Sequence[Family], columns: Sequence[int]) -> Choice:
    choice = Choice(ByKind(), ByKind(), ByKind())
    for family, column in zip(families, columns, strict=True):
        condition = _named(family, column)
        choice.gates.add(family.gates, column, Origin.PARTS, condition=condition)
        choice.operators.add(family.operators, column, Origin.PARTS, condition=condition)
        choice.default.add(family.default, column, Origin.DEFAULT, "default of ")
    return choice
