"""Declares a module's parameters, nets and ports.

Takes a module's tree and the parameters that its instance overrides, gives its parameters' values,
`Variables` and ports. Tells of doubles, ranges that differ, ports without direction.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from math import prod
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.constants import NotConstantError, Value, evaluate, whole
from tardigate.netlist.flat import CONSTANTS
from tardigate.netlist.lookup import Lookup
from tardigate.netlist.parameters import declarations_of, parameter_values
from tardigate.netlist.scopes import Scope
from tardigate.netlist.variables import (
    NO_DIRECTION,
    RANGED,
    REGISTER,
    SIGNED,
    TYPE,
    TYPES,
    VARIABLES,
    Declared,
    Shape,
    Variables,
)  # fmt: skip
from tardigate.parts.kind import Way
from tardigate.source.arrays import spread
from tardigate.source.collector import Collector
from tardigate.source.diagnostic import Related, did_you_mean
from tardigate.source.placed import PlacedText
from tardigate.source.span import Span
from tardigate.syntax import tree
from tardigate.syntax.verilog_reader import Unit

WIDEST = 1 << 20
"""Bits of the widest vector that is accepted."""

MOST_BITS = 1 << 25
"""Bits of all nets of one module."""

WAYS = {"input": Way.INPUT, "output": Way.OUTPUT, "inout": Way.INOUT}
_WORDS = {"integer": 32, "time": 64}
_TYPES = {word: number << TYPE for number, word in enumerate(TYPES)}


@dataclass(slots=True)
class _Columns:
    """Declarations in order, one entry a name: chunks of columns that are joined at the end."""

    name: list[NDArray[np.int32]] = field(default_factory=list)
    numbers: list[NDArray[np.int64]] = field(default_factory=list)
    place: list[NDArray[np.int64]] = field(default_factory=list)
    arrays: dict[int, Shape] = field(default_factory=dict)

    def add(
        self, names: NDArray[np.int32], places: NDArray[np.int64], msb: int, lsb: int, way: int, flags: int
    ) -> None:
        self.name.append(names)
        self.place.append(places)
        self.numbers.append(np.tile(np.array([msb, lsb, way, flags], np.int64), (len(names), 1)))


class _Declared(NamedTuple):
    """What a declaration makes of a name: range, bits, flags; the bounds of an array."""

    msb: int
    lsb: int
    width: int
    flags: int
    array: Shape | None = None


def _number(value: int) -> tree.Number:
    return tree.Number(value, None, 0, 0, True, -1)


class Declarer:
    """Declares the names of one module for one set of parameters."""

    def __init__(self, unit: Unit, lookup: Lookup, collector: Collector) -> None:
        self.unit, self.lookup, self.collector = unit, lookup, collector
        self.text: PlacedText = unit.text

    # Parameters (clause 4.10, 12.2)

    def parameters(self, module: tree.Module, overrides: Mapping[str, Value]) -> dict[str, Value]:
        """Return the values of all parameters; tells of one declared twice (N110) or not constant (N120)."""
        return parameter_values(declarations_of(module), overrides, self)

    def twice_at(self, name: str, at: int, first: int) -> None:
        """Tell of a name declared twice, at `first` and at `at` (N110)."""
        self._tell("N110", at, name, first)

    def twice(self, named: tree.Named) -> None:
        """Tell of a parameter that is declared twice (N110)."""
        self._tell("N110", named.at, named.name)

    def constant(
        self, expression: tree.Expression, values: Mapping[str, Value], width: int | None = 0
    ) -> Value:
        """Return a constant's value in a context of `width` bits, 0 after telling that it is none (N120)."""
        try:
            return evaluate(expression, values, width)
        except NotConstantError as error:
            self.collector.tell("N120", self.text.span(error.at), reason=error.reason)
            return Value(0)

    def range(self, bounds: tree.Range, values: Mapping[str, Value]) -> tuple[int, int] | None:
        """Return msb and lsb, or None after telling what is wrong with them (N120, N121)."""
        try:
            msb = whole(evaluate(bounds.msb, values), bounds.msb.at)
            lsb = whole(evaluate(bounds.lsb, values), bounds.lsb.at)
        except NotConstantError as error:
            self.collector.tell("N120", self.text.span(error.at), reason=error.reason)
            return None
        if abs(msb - lsb) >= WIDEST or max(abs(msb), abs(lsb)) > 1 << 30:
            self.collector.tell("N121", self.text.span(bounds.at), most=WIDEST)
            return None
        return msb, lsb

    # Nets (clause 4.2, 12.3)

    def variables(self, module: tree.Module, scopes: Sequence[Scope]) -> Variables:
        """Return the declared nets of a module and its generate blocks."""
        columns, values = _Columns(), scopes[0].values
        if not isinstance(module.ports, tree.PlainPorts):
            for port in module.ports:
                if port.declaration is not None:
                    self._declaration(port.declaration, values, columns)
        for item in scopes[0].items:
            if isinstance(item, tree.Run):
                self._run(item, columns)
            elif isinstance(item, tree.Declaration):
                self._declaration(item, values, columns)
        variables = self._joined(columns, values)
        if len(scopes) > 1:
            self._in_blocks(scopes[1:], variables)
        return variables

    def _in_blocks(self, scopes: Sequence[Scope], variables: Variables) -> None:
        """Declare the nets of generate blocks; tells of two of one name in a block (N110)."""
        declared: list[Declared] = []
        shapes: dict[int, Shape] = {}
        bits = 0
        for scope in scopes:
            variables.prefixes.append(scope.prefix)
            seen: dict[str, int] = {}
            for item in scope.items:
                if not isinstance(item, tree.Declaration):
                    continue
                for named in item.names:
                    if named.name in seen:
                        self._tell("N110", named.at, named.name, seen[named.name])
                        continue
                    seen[named.name] = named.at
                    shape = self._shape(item, named, scope.values)
                    if shape.array is not None:
                        shapes[len(variables) + len(declared)] = shape.array
                    declared.append(
                        Declared(
                            self.lookup.find(named.name), shape.msb, shape.lsb, shape.width, named.at,
                            shape.flags, scope.number,
                        )
                    )  # fmt: skip
                    bits += shape.width
                    self._check_bits(bits, named.at)
        variables.add(declared)
        variables.arrays.update(shapes)

    def _shape(self, item: tree.Declaration, named: tree.Named, values: Mapping[str, Value]) -> _Declared:
        """Return the range and flags of one declared name; of an array its bounds and all its bits."""
        ranges = (*named.dimensions, *((item.range,) if item.range is not None else ()))
        if item.net_type in _WORDS and not ranges:
            ranges = (tree.Range(_number(_WORDS[item.net_type] - 1), _number(0), named.at),)
        found = [self.range(bounds, values) for bounds in ranges]
        bounds = tuple(bound for bound in found if bound is not None)
        flags = SIGNED * item.signed | _TYPES.get(item.net_type, 0)
        flags |= REGISTER * (item.net_type in VARIABLES)
        width = prod(abs(left - right) + 1 for left, right in bounds)
        if width > WIDEST:
            self.collector.tell("N121", self.text.span(named.at, named.at + len(named.name)), most=WIDEST)
            bounds, width = (), 1
        if len(bounds) > 1:
            return _Declared(width - 1, 0, width, flags, Shape(bounds, len(named.dimensions)))
        msb, lsb = bounds[0] if bounds else (0, 0)
        return _Declared(msb, lsb, width, flags | RANGED * bool(bounds))

    def _check_bits(self, bits: int, at: int) -> None:
        if bits > MOST_BITS:
            self.collector.tell("N124", self.text.span(at))
            self.collector.refuse()

    def _declaration(
        self, declaration: tree.Declaration, values: Mapping[str, Value], columns: _Columns
    ) -> None:
        way = WAYS.get(declaration.direction, NO_DIRECTION)
        if way in (Way.INPUT, Way.INOUT) and declaration.net_type in VARIABLES:
            name = declaration.names[0].name
            self.collector.tell("N129", self._span(declaration.names[0].at, name), name=name)
        plain = [named for named in declaration.names if not named.dimensions]
        if plain:
            shape = self._shape(declaration, plain[0], values)
            names = np.array(self.lookup.find_all([n.name for n in plain]), np.int32)
            places = np.array([n.at for n in plain], np.int64)
            columns.add(names, places, shape.msb, shape.lsb, way, shape.flags)
        for named in declaration.names:
            if named.dimensions:
                shape = self._shape(declaration, named, values)
                number = self.lookup.find(named.name)
                if shape.array is not None:
                    columns.arrays[number] = shape.array
                one = np.array([number], np.int32), np.array([named.at], np.int64)
                columns.add(*one, shape.msb, shape.lsb, way, shape.flags)

    def _run(self, run: tree.Run, columns: _Columns) -> None:
        plain = self.unit.plain
        statements = np.flatnonzero(plain.is_declaration[run.first : run.last]) + run.first
        if not len(statements):
            return
        count = plain.start[statements + 1] - plain.start[statements]
        ways = {self.lookup.find(word): int(way) for word, way in WAYS.items()}
        heads = plain.head[statements]
        way = np.full(len(statements), NO_DIRECTION, np.int64)
        for name, value in ways.items():
            way[heads == name] = value
        rows = spread(plain.start[statements], count)
        numbers = np.zeros((len(rows), 4), np.int64)
        numbers[:, 2] = np.repeat(way, count)
        columns.name.append(plain.net[rows])
        columns.place.append(plain.at[rows].astype(np.int64))
        columns.numbers.append(numbers)

    def _joined(self, columns: _Columns, values: Mapping[str, Value]) -> Variables:
        """Join the declarations of each name, in order of the first."""
        names = np.concatenate([*columns.name, np.zeros(0, np.int32)]).astype(np.int32)
        places = np.concatenate([*columns.place, np.zeros(0, np.int64)])
        numbers = np.concatenate([*columns.numbers, np.zeros((0, 4), np.int64)])
        here = np.arange(len(names))
        first = np.empty(len(self.unit.scan.names), np.int64)
        first[names[::-1]] = here[::-1]  # the last that is written stays: the first declaration
        is_head = first[names] == here
        variable = (np.cumsum(is_head) - 1)[first[names]]
        head = np.flatnonzero(is_head)
        directed = numbers[:, 2] != NO_DIRECTION
        self._tell_doubles(names, places, numbers, variable, directed, len(head))
        way = np.full(len(head), NO_DIRECTION, np.uint8)
        way[variable[directed]] = numbers[directed, 2]
        flags = np.zeros(len(head), np.int64)
        flagged = np.flatnonzero(numbers[:, 3])
        np.bitwise_or.at(flags, variable[flagged], numbers[flagged, 3])
        for name in np.flatnonzero(np.isin(names[head], self.lookup.find_all(values))):
            self._tell("N110", int(places[head[name]]), self.unit.scan.names.text(int(names[head[name]])))
        msb, lsb = numbers[head, 0].astype(np.int32), numbers[head, 1].astype(np.int32)
        width = np.abs(msb - lsb) + 1
        ends = np.cumsum(width, dtype=np.int64)
        self._check_bits(int(ends[-1]) if len(ends) else 0, int(places[0]) if len(places) else 0)
        base = (CONSTANTS + ends - width).astype(np.int32)
        return Variables(
            self.unit.scan.names, self.text, names[head], base, msb, lsb, width, places[head], way,
            flags.astype(np.uint16), CONSTANTS + (int(ends[-1]) if len(ends) else 0),
            np.zeros(len(head), np.int32),
            arrays={int(variable[first[number]]): array for number, array in columns.arrays.items()},
        )  # fmt: skip

    def _tell_doubles(
        self,
        names: NDArray[np.int32],
        places: NDArray[np.int64],
        numbers: NDArray[np.int64],
        variable: NDArray[np.int64],
        directed: NDArray[np.bool_],
        count: int,
    ) -> None:
        """Tell of names declared twice in the same way (N110) and of ranges that differ (N111)."""
        seen = np.bincount(2 * variable + directed, minlength=2 * count)
        for double in np.flatnonzero(seen > 1):
            entries = np.flatnonzero((2 * variable + directed) == double)
            name = self.unit.scan.names.text(int(names[entries[0]]))
            self._tell("N110", int(places[entries[1]]), name, int(places[entries[0]]))
        both = np.flatnonzero((seen[::2] > 0) & (seen[1::2] > 0)) if count else np.zeros(0, np.int64)
        if not len(both) or not numbers[:, :2].any():
            return
        low, high = np.full((count, 2), np.iinfo(np.int64).max), np.full((count, 2), np.iinfo(np.int64).min)
        np.minimum.at(low, variable, numbers[:, :2])
        np.maximum.at(high, variable, numbers[:, :2])
        for odd in both[(low[both] != high[both]).any(axis=1)]:
            entries = np.flatnonzero(variable == odd)
            name = self.unit.scan.names.text(int(names[entries[0]]))
            first = Related(self._span(int(places[entries[0]]), name), "first declared here")
            self.collector.tell(
                "N111", self._span(int(places[entries[-1]]), name), name=name, related=(first,)
            )

    def _span(self, at: int, name: str) -> Span:
        return self.text.span(at, at + len(name))

    def _tell(self, code: str, at: int, name: str, first: int | None = None) -> None:
        related = () if first is None else (Related(self._span(first, name), "first declared here"),)
        self.collector.tell(code, self._span(at, name), name=name, related=related)

    def suggestion(self, name: str, variables: Variables) -> str | None:
        """Return a hint that names a declared net that is spelled nearly so."""
        return did_you_mean(name, [variables.text_of(i) for i in range(min(len(variables), 5000))])
