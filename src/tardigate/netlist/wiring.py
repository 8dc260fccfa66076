"""References to nets: names, selections, constants.

Takes references of a module's trees, gives local nets, least significant bit first. Tells of names that are
not declared and of indices that are not there.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from math import prod
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.constant_operators import ends_of
from tardigate.netlist.constants import NotConstantError, Value, evaluate_whole
from tardigate.netlist.declare import WIDEST, Declarer
from tardigate.netlist.hierarchy import Hierarchy, Target
from tardigate.netlist.lookup import Lookup
from tardigate.netlist.name_columns import bit_name
from tardigate.netlist.scopes import Scope
from tardigate.netlist.template import Link
from tardigate.netlist.variables import RANGED, REGISTER, SIGNED, Shape, Variables
from tardigate.source.collector import Collector
from tardigate.source.span import Span
from tardigate.syntax import tree
from tardigate.syntax.verilog_reader import Unit


class _Element(NamedTuple):
    """An element of an array: its first bit, width, what is selected from it, whether it is a vector."""

    offset: int
    width: int
    selections: tuple[tree.Selection, ...]
    ranged: bool


class Wiring:
    """The nets of one module by name."""

    def __init__(
        self,
        declarer: Declarer,
        variables: Variables,
        scopes: Sequence[Scope],
        of_name: NDArray[np.int32],
        hierarchy: Hierarchy | None = None,
    ) -> None:
        self.declarer, self.variables, self.scopes = declarer, variables, scopes
        self.values: Mapping[str, Value] = scopes[0].values
        self.scope = 0
        self.driving = False
        self.links: list[Link] = []
        self._hierarchy = hierarchy
        self._linked: dict[tuple[tuple[str, ...], int, int], int] = {}
        self.unit: Unit = declarer.unit
        self.lookup: Lookup = declarer.lookup
        self.collector: Collector = declarer.collector
        self._of_name = of_name

    def enter(self, scope: Scope) -> None:
        """Look names up from a scope from now on."""
        self.scope, self.values = scope.number, scope.values

    def span(self, at: int, length: int = 1) -> Span:
        """Return a place in the module's text."""
        return self.unit.text.span(at, at + length)

    def may_drive(self, target: tree.Expression) -> bool:
        """Tell whether nets stand where something drives; tells of variables (N129; clause 12.3.9.2)."""
        for node in tree.walk(target):
            if isinstance(node, tree.Reference) and len(node.path) == 1:
                variable = self.variable(node.path[0])
                if variable >= 0 and self.variables.flags[variable] & REGISTER:
                    span = self.span(node.at, len(node.path[0]))
                    self.collector.tell("N129", span, name=node.path[0])
                    return False
        return True

    def variable(self, name: str) -> int:
        """Return the number of a variable, -1 when there is none."""
        number = self.lookup.find(name)
        if number < 0:
            return -1
        scope = self.scope
        while scope:
            found = self.variables.scoped.get((scope, number))
            if found is not None:
                return found
            scope = self.scopes[scope].parent
        return int(self._of_name[number])

    def variables_of(self, numbers: NDArray[np.int32]) -> NDArray[np.int32]:
        """Return the variables of names given by number in the file, -1 where there is none."""
        return self._of_name[numbers]

    def is_signed(self, reference: tree.Reference) -> bool:
        """Tell whether a reference is signed: a whole net that is declared so (clause 5.5.1)."""
        if len(reference.path) > 1 or reference.selections:
            return False
        if reference.path[0] in self.values:
            return self.values[reference.path[0]].signed
        variable = self.variable(reference.path[0])
        return variable >= 0 and bool(self.variables.flags[variable] & SIGNED)

    def bits(self, reference: tree.Reference) -> list[int]:
        """Return the nets of a reference, least significant bit first; empty after telling of a fault."""
        if len(reference.path) > 1:
            return self._hierarchical(reference)
        name = reference.path[0]
        variable = self.variable(name)
        if variable < 0:
            hint = self.declarer.suggestion(name, self.variables) if self.collector.room("N130") else None
            self.collector.tell("N130", self.span(reference.at, len(name)), name=name, hint=hint)
            return []
        if not reference.selections and variable not in self.variables.arrays:
            base, width = int(self.variables.base[variable]), int(self.variables.width[variable])
            return list(range(base, base + width))
        return self._selected(reference, self.variables, variable)

    # Hierarchical names (clause 12.5)

    def _hierarchical(self, reference: tree.Reference) -> list[int]:
        """Return the nets of a hierarchical name; those in modules below get nets here that are linked."""
        assert self._hierarchy is not None
        elements = self._hierarchy.elements(reference, self.scope)
        if elements is None:
            return []
        landing = self._hierarchy.walk(elements, self.scope, upward=True)
        name = reference.path[-1]
        dotted = ".".join((*elements, name))
        target = None if landing is None else self._hierarchy.target(landing, name)
        if target is None:
            from tardigate.netlist.lost_path import lost_at  # only on the way to a refusal

            room = self.collector.room("N137")
            hint = lost_at(self._hierarchy, elements, name, self.scope) if room else None
            span = self.span(reference.at, len(reference.path[0]))
            self.collector.tell("N137", span, name=dotted, hint=hint)
            return []
        inside = target.inside.variables
        outside = target.inside is not self._hierarchy
        if outside and self.driving and target.inside.is_delayed(target.variable):
            self.collector.tell("N169", self.span(reference.at, len(reference.path[0])), net=dotted)
            return []
        bits = self._selected(reference, inside, target.variable)
        if not outside:
            return bits
        return [self._link(target, bit, reference.at) for bit in bits]

    def _link(self, target: Target, bit: int, at: int) -> int:
        """Return a net of this module that is one with a net of a module below."""
        key = (target.path, id(target.inside), bit)
        net = self._linked.get(key)
        if net is None:
            variables = target.inside.variables
            name = bit_name(variables, target.variable, bit - int(variables.base[target.variable]))
            net = self.variables.new_result(at, ".".join((*target.path, name)))
            self._linked[key] = net
            self.links.append(Link(net, target.path, bit))
        return net

    # Selections (clause 5.2)

    def _selected(self, reference: tree.Reference, variables: Variables, variable: int) -> list[int]:
        """Return the bits of a variable that a reference selects, least significant first."""
        base, width = int(variables.base[variable]), int(variables.width[variable])
        msb, lsb = int(variables.msb[variable]), int(variables.lsb[variable])
        selections, ranged = reference.selections, bool(variables.flags[variable] & RANGED)
        name = reference.path[-1]
        shape = variables.arrays.get(variable)
        if shape is not None:
            element = self._element(reference, shape)
            if element is None:
                return []
            offset, width, selections, ranged = element
            base += offset
            msb, lsb = shape.bounds[-1]
        if not selections:
            return list(range(base, base + width))
        if len(selections) > 1 or not ranged:
            self.collector.tell("N131", self.span(reference.at, len(name)), name=name)
            return []
        return self._chosen(reference, selections[0], base, msb, lsb)

    def _element(self, reference: tree.Reference, shape: Shape) -> _Element | None:
        """Return the element of an array that is meant, and what is selected from it (clause 5.2.2)."""
        name, given, dimensions = reference.path[-1], reference.selections, shape.dimensions
        if len(given) < dimensions or any(chosen.mode != "bit" for chosen in given[:dimensions]):
            self.collector.tell("N139", self.span(reference.at, len(name)), name=name)
            return None
        offset, size = 0, prod(abs(left - right) + 1 for left, right in shape.bounds)
        for (left, right), chosen in zip(shape.bounds[:dimensions], given, strict=False):
            size //= abs(left - right) + 1
            place = self._chosen(reference, chosen, 0, left, right)
            if not place:
                return None
            offset += place[0] * size
        return _Element(offset, size, given[dimensions:], dimensions < len(shape.bounds))

    def _chosen(
        self, reference: tree.Reference, chosen: tree.Selection, base: int, msb: int, lsb: int
    ) -> list[int]:
        """Return the bits of a vector at `base` that a selection chooses, least significant first."""
        step, name = 1 if msb >= lsb else -1, reference.path[-1]
        try:
            high = evaluate_whole(chosen.high, self.values)
            low = high if chosen.low is None else evaluate_whole(chosen.low, self.values)
        except NotConstantError as error:
            self.collector.tell("N133", self.span(error.at), reason=error.reason)
            return []
        if chosen.mode in ("up", "down") and not 0 < low <= WIDEST:
            self.collector.tell("N121", self.span(reference.at), most=WIDEST)
            return []
        high, low = ends_of(chosen.mode, high, low, step)
        first, last = (low - lsb) * step, (high - lsb) * step
        if first < 0 or last < 0 or max(first, last) > abs(msb - lsb):
            self.collector.tell(
                "N132", self.span(reference.at, len(name)), name=name, range=f"[{msb}:{lsb}]",
                index=high if chosen.low is None else f"{high}:{low}",
            )  # fmt: skip
            return []
        if first > last:
            self.collector.tell("N134", self.span(reference.at), name=name)
            return []
        return list(range(base + first, base + last + 1))
