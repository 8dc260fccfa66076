"""Where hierarchical names lead, from one module into its blocks and the modules below.

Takes a module's scopes and variables for one set of parameters, gives what an instance overrides (`#(...)`
and `defparam`) and the nets that names such as `g[2].u.n` mean (IEEE 1364-2005 clauses 12.2, 12.5 to 12.7).
Looks into modules below through `Outside`. Does not connect anything.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from functools import cached_property
from typing import NamedTuple, Protocol

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.constants import NotConstantError, Value, evaluate, evaluate_whole
from tardigate.netlist.declare import Declarer
from tardigate.netlist.implicit import plain_statements
from tardigate.netlist.interface import Interface
from tardigate.netlist.plain_tree import instance_tree
from tardigate.netlist.scopes import Scope, chain
from tardigate.netlist.variables import Variables
from tardigate.source.arrays import Places
from tardigate.source.diagnostic import did_you_mean
from tardigate.source.span import Span
from tardigate.syntax import tree


class Setting(NamedTuple):
    """A `defparam` for something below an instance: what is left of its path, parameter, value, place."""

    path: tuple[str, ...]
    parameter: str
    value: Value
    place: Span


class Overrides(NamedTuple):
    """What an instance sets: its own parameters, and those of instances below it."""

    own: dict[str, Value]
    below: tuple[Setting, ...] = ()


class Seat(NamedTuple):
    """An instance as written and the scope that it stands in."""

    item: tree.Instances
    instance: tree.Instance
    scope: int


class Landing(NamedTuple):
    """Where a path leads: a scope of the module, or (`seat`) an instance in it, with what is left of it."""

    scope: int
    seat: Seat | None = None
    element: str = ""
    left: tuple[str, ...] = ()


class Target(NamedTuple):
    """A variable in a module below: the instances on the way, that module's variables, its number there."""

    path: tuple[str, ...]
    inside: Hierarchy
    variable: int


class Outside(Protocol):
    """What is asked of other modules."""

    def parameter_names(self, module: str) -> list[str] | None:
        """Return the parameters that may be overridden, in order; None where nobody knows."""

    def interface(self, module: str, overrides: Overrides) -> tuple[Interface, int] | None:
        """Return a module's interface and template number, None for what is no module."""

    def hierarchy(self, template: int) -> Hierarchy:
        """Return the hierarchy of a template."""


class Hierarchy:
    """One module for one set of parameters, as hierarchical names see it."""

    def __init__(
        self, module: tree.Module, declarer: Declarer, scopes: list[Scope], variables: Variables,
        settings: Sequence[Setting], outside: Outside,
    ) -> None:  # fmt: skip
        self.module, self.declarer, self.scopes, self.variables = module, declarer, scopes, variables
        self.outside, self.collector = outside, declarer.collector
        self._seats: dict[int, dict[str, Seat]] = {}
        self._children: dict[tuple[int, str], int | None] = {}
        self._given: dict[tuple[int, str], list[Setting]] = {}
        self._defparams(settings)

    def _span(self, at: int, length: int = 1) -> Span:
        return self.declarer.text.span(at, at + length)

    # Instances and blocks by name

    def seat(self, scope: int, name: str) -> Seat | None:
        """Return the instance statement of a name in a scope."""
        if scope not in self._seats:
            self._seats[scope] = {
                instance.name: Seat(item, instance, scope)
                for item in self.scopes[scope].items
                if isinstance(item, tree.Instances)
                for instance in item.instances
            }
        found = self._seats[scope].get(name)
        return found if found is not None or scope else self._plain_seat(name)

    def _plain_seat(self, name: str) -> Seat | None:
        """Return an instance among the plain statements."""
        unit, number = self.declarer.unit, self.declarer.lookup.find(name)
        statements, places = self._plain_names
        for place in places.of(number) if number >= 0 else ():
            found = instance_tree(unit, int(statements[place]))
            if isinstance(found, tree.Instances):
                seat = Seat(found, found.instances[0], 0)
                return self._seats[0].setdefault(name, seat)
        return None

    @cached_property
    def _plain_names(self) -> tuple[NDArray[np.int64], Places]:
        """The plain instance statements of the module, and the places of their names."""
        unit = self.declarer.unit
        statements = plain_statements(unit, self.scopes[0].items)
        return statements, Places(unit.plain.name[statements])

    @cached_property
    def _own_names(self) -> tuple[NDArray[np.int64], Places]:
        """The variables that the module itself declares, and the places of their names."""
        own = np.flatnonzero(self.variables.scope == 0)
        return own, Places(self.variables.name[own])

    def elements(self, reference: tree.Reference, scope: int) -> tuple[str, ...] | None:
        """Return the names on the way to what a reference means, with their indices; None after telling."""
        if not reference.indices:
            return reference.path[:-1]
        found = []
        for name, index in zip(reference.path, reference.indices, strict=False):
            try:
                number = "" if index is None else f"[{evaluate_whole(index, self.scopes[scope].values)}]"
            except NotConstantError as error:
                self.collector.tell("N120", self._span(error.at), reason=error.reason)
                return None
            found.append(name + number)
        return tuple(found)

    def walk(self, elements: Sequence[str], scope: int, upward: bool) -> Landing | None:
        """Follow a path through blocks, to a scope or an instance; the first name is sought `upward` too."""
        at = scope
        for place, element in enumerate(elements):
            found = self._enter(element, at)
            above = chain(self.scopes, at)[1:] if found is None and upward and not place else []
            for around in above:
                found = found or self._enter(element, around.number)
            if found is None and upward and not place and element == self.module.name:
                found = Landing(0)
            if found is None:
                return None
            if found.seat is not None:
                return found._replace(left=tuple(elements[place + 1 :]))
            at = found.scope
        return Landing(at)

    def _enter(self, element: str, scope: int) -> Landing | None:
        """Return the block or instance that a name and index mean in a scope."""
        block = self.scopes[scope].blocks.get(element)
        if block is not None:
            return Landing(block)
        seat = self.seat(scope, element.partition("[")[0])
        if seat is None or ("[" in element) != (seat.instance.range is not None):
            return None
        if seat.instance.range is not None:
            bounds = self.declarer.range(seat.instance.range, self.scopes[scope].values)
            index = int(element.partition("[")[2][:-1])
            if bounds is None or not min(bounds) <= index <= max(bounds):
                return None
        return Landing(scope, seat, element)

    # Parameters

    def _defparams(self, settings: Sequence[Setting]) -> None:
        """Take the module's defparams, then those from above, which win; tells of those that set nothing."""
        for scope in self.scopes:
            for item in scope.items:
                for assign in item.assigns if isinstance(item, tree.Defparam) else ():
                    self._defparam(assign, scope)
        for setting in settings:
            self._give(setting, 0)

    def _defparam(self, assign: tree.Assign, scope: Scope) -> None:
        reference = assign.target
        assert isinstance(reference, tree.Reference)
        elements = self.elements(reference, scope.number)
        if elements is None:
            return
        value = self.declarer.constant(assign.value, scope.values)
        place = self._span(reference.at, len(reference.path[0]))
        self._give(Setting(elements, reference.path[-1], value, place), scope.number)

    def _give(self, setting: Setting, scope: int) -> None:
        landing = self.walk(setting.path, scope, upward=True) if setting.path else None
        if landing is None or landing.seat is None:
            name = ".".join((*setting.path, setting.parameter))
            self.collector.tell("N127", setting.place, name=name)
        elif scope and landing.scope not in self._below(scope):
            self.collector.tell("N128", setting.place, name=".".join(setting.path))
        else:
            key = (landing.scope, landing.element)
            self._given.setdefault(key, []).append(setting._replace(path=landing.left))

    def _below(self, scope: int) -> list[int]:
        """Return a scope and those inside it."""
        found = [scope]
        for at in found:
            found += self.scopes[at].blocks.values()
        return found

    def sets_members(self, seat: Seat) -> bool:
        """Tell whether defparams set single members of an array of instances."""
        name = seat.instance.name
        return any(at == seat.scope and element.partition("[")[0] == name for at, element in self._given)

    def overrides(self, item: tree.Instances, scope: int) -> dict[str, Value] | None:
        """Return what an instance statement's `#(...)` overrides, None after telling (N168, N120)."""
        found: dict[str, Value] = {}
        names = self.outside.parameter_names(item.module) if item.overrides else None
        named = [override.pin for override in item.overrides if override.pin]
        if named and len(named) < len(item.overrides):
            span = self._span(item.at, len(item.module))
            self.collector.tell("N163", span, what="parameters")
            return None
        for at, override in enumerate(item.overrides):
            name = override.pin or (names[at] if names and at < len(names) else "")
            if names is not None and name not in names:
                self._tell_no_parameter(
                    self._span(override.at, max(1, len(override.pin))), item.module,
                    override.pin or f"number {at + 1}", override.pin, names,
                )  # fmt: skip
                return None
            if override.pin and named.count(override.pin) > 1:
                self.collector.tell("N159", self._span(override.at, len(override.pin)), name=override.pin)
                return None
            if override.net is not None:
                try:
                    found[name] = evaluate(override.net, self.scopes[scope].values)
                except NotConstantError as error:
                    self.collector.tell("N120", self._span(error.at), reason=error.reason)
                    return None
        return found

    def _tell_no_parameter(
        self, span: Span, module: str, shown: str, name: str, known: Sequence[str]
    ) -> None:
        hint = did_you_mean(name, list(known)) if name and self.collector.room("N168") else None
        self.collector.tell("N168", span, module=module, name=shown, hint=hint)

    def settled(self, seat: Seat, element: str, own: Mapping[str, Value]) -> Overrides:
        """Return what an instance sets when its defparams, which beat `#(...)`, are added (clause 12.2.1)."""
        given = self._given.get((seat.scope, element), ())
        if not given:
            return Overrides(dict(own))
        values, below = dict(own), []
        names = self.outside.parameter_names(seat.item.module)
        for setting in given:
            if setting.path:
                below.append(setting)
            elif names is not None and setting.parameter not in names:
                shown = setting.parameter
                self._tell_no_parameter(setting.place, seat.item.module, shown, shown, names)
            else:
                values[setting.parameter] = setting.value
        return Overrides(values, tuple(below))

    # Modules below

    def child(self, seat: Seat, element: str) -> int | None:
        """Return the template number of an instance, None when it is of no module that is read."""
        key = (seat.scope, element)
        if key not in self._children:
            own = self.overrides(seat.item, seat.scope)
            found = None
            if own is not None:
                found = self.outside.interface(seat.item.module, self.settled(seat, element, own))
            self._children[key] = None if found is None else found[1]
        return self._children[key]

    def target(self, landing: Landing, name: str) -> Target | None:
        """Return the variable that the rest of a path means, in modules below; None when there is none."""
        inside: Hierarchy = self
        path: list[str] = []
        while landing.seat is not None:
            path.append(inside.scopes[landing.scope].prefix + landing.element)
            number = inside.child(landing.seat, landing.element)
            if number is None:
                return None
            inside = self.outside.hierarchy(number)
            found = inside.walk(landing.left, 0, upward=False)
            if found is None:
                return None
            landing = found
        variable = inside.variable(landing.scope, name)
        return None if variable < 0 else Target(tuple(path), inside, variable)

    def is_delayed(self, variable: int) -> bool:
        """Tell whether a variable is a net with a delay of its own."""
        scope, name = int(self.variables.scope[variable]), int(self.variables.name[variable])
        text = self.variables.names.text(name)
        return any(
            named.name == text and named.value is None
            for item in self.scopes[scope].items
            if isinstance(item, tree.Declaration) and item.delay is not None
            for named in item.names
        )

    def variable(self, scope: int, name: str) -> int:
        """Return the variable that is declared in a scope under a name, -1 for none."""
        number = self.declarer.lookup.find(name)
        if number < 0:
            return -1
        if scope:
            return self.variables.scoped.get((scope, number), -1)
        own, places = self._own_names
        found = places.of(number)
        return int(own[found[0]]) if found else -1
