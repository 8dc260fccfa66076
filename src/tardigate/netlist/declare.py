"""Declares a module's parameters, nets and ports.

Takes a module's tree and the parameters that its instance overrides, gives its parameters' values,
`Variables` and ports. Tells of doubles, ranges that differ, ports without direction.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.constants import NotConstantError, Value, evaluate, wrapped
from tardigate.netlist.flat import CONSTANTS
from tardigate.netlist.lookup import Lookup
from tardigate.netlist.variables import DRIVEN, NO_DIRECTION, RANGED, SIGNED, WIRED, Variables
from tardigate.parts.kind import Way
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
_WIRED = ("wand", "wor", "triand", "trior")
_DRIVEN = ("supply0", "supply1", "tri0", "tri1")


@dataclass(slots=True)
class _Columns:
    """Declarations in order, one entry a name: chunks of columns that are joined at the end."""

    name: list[NDArray[np.int32]] = field(default_factory=list)
    numbers: list[NDArray[np.int64]] = field(default_factory=list)
    place: list[NDArray[np.int64]] = field(default_factory=list)

    def add(
        self, names: NDArray[np.int32], places: NDArray[np.int64], msb: int, lsb: int, way: int, flags: int
    ) -> None:
        self.name.append(names)
        self.place.append(places)
        self.numbers.append(np.tile(np.array([msb, lsb, way, flags], np.int64), (len(names), 1)))


class Declarer:
    """Declares the names of one module for one set of parameters."""

    def __init__(self, unit: Unit, lookup: Lookup, collector: Collector) -> None:
        self.unit, self.lookup, self.collector = unit, lookup, collector
        self.text: PlacedText = unit.text

    # Parameters (clause 4.10, 12.2)

    def parameters(self, module: tree.Module, overrides: Mapping[str, Value]) -> dict[str, Value]:
        """Return the values of all parameters; tells of one declared twice (N110) or not constant (N120)."""
        values: dict[str, Value] = {}
        declared = [*module.parameters, *(item for item in module.items if isinstance(item, tree.Parameter))]
        for declaration in declared:
            for named in declaration.names:
                if named.name in values:
                    self._tell("N110", named.at, named.name)
                    continue
                value = self.constant(named.value, values) if named.value is not None else Value(0)
                if not declaration.local and named.name in overrides:
                    value = overrides[named.name]
                if declaration.range is not None:
                    bounds = self.range(declaration.range, values)
                    if bounds is not None:
                        value = wrapped(value.value, abs(bounds[0] - bounds[1]) + 1, False)
                values[named.name] = value
        return values

    def constant(self, expression: tree.Expression, values: Mapping[str, Value]) -> Value:
        """Return a constant's value, 0 after telling that it is none (N120)."""
        try:
            return evaluate(expression, values)
        except NotConstantError as error:
            self.collector.tell("N120", self.text.span(error.at), reason=error.reason)
            return Value(0)

    def range(self, bounds: tree.Range, values: Mapping[str, Value]) -> tuple[int, int] | None:
        """Return msb and lsb, or None after telling what is wrong with them (N120, N121)."""
        try:
            msb, lsb = evaluate(bounds.msb, values).value, evaluate(bounds.lsb, values).value
        except NotConstantError as error:
            self.collector.tell("N120", self.text.span(error.at), reason=error.reason)
            return None
        if abs(msb - lsb) >= WIDEST or max(abs(msb), abs(lsb)) > 1 << 30:
            self.collector.tell("N121", self.text.span(bounds.at), most=WIDEST)
            return None
        return msb, lsb

    # Nets (clause 4.2, 12.3)

    def variables(self, module: tree.Module, values: Mapping[str, Value]) -> Variables:
        """Return the declared nets of a module."""
        columns = _Columns()
        if not isinstance(module.ports, tree.PlainPorts):
            for port in module.ports:
                if port.declaration is not None:
                    self._declaration(port.declaration, values, columns)
        for item in module.items:
            if isinstance(item, tree.Run):
                self._run(item, columns)
            elif isinstance(item, tree.Declaration):
                self._declaration(item, values, columns)
        return self._joined(columns, values)

    def _declaration(
        self, declaration: tree.Declaration, values: Mapping[str, Value], columns: _Columns
    ) -> None:
        bounds = self.range(declaration.range, values) if declaration.range is not None else None
        flags = SIGNED * declaration.signed | WIRED * (declaration.net_type in _WIRED)
        flags |= DRIVEN * (declaration.net_type in _DRIVEN) | RANGED * (bounds is not None)
        names = np.array(self.lookup.find_all([n.name for n in declaration.names]), np.int32)
        places = np.array([n.at for n in declaration.names], np.int64)
        way = WAYS.get(declaration.direction, NO_DIRECTION)
        columns.add(names, places, *(bounds or (0, 0)), way, flags)

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
        first = plain.start[statements]
        rows = np.arange(count.sum()) + np.repeat(first - (np.cumsum(count) - count), count)
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
        if len(ends) and ends[-1] > MOST_BITS:
            self.collector.tell("N124", self.text.span(int(places[0])))
            self.collector.refuse()
        base = (CONSTANTS + ends - width).astype(np.int32)
        return Variables(
            self.unit.scan.names, self.text, names[head], base, msb, lsb, width, places[head], way,
            flags.astype(np.uint8), CONSTANTS + (int(ends[-1]) if len(ends) else 0),
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
