"""Parameters: declarations and overrides to values (IEEE 1364-2005 clauses 4.10, 12.2).

Takes the declarations of one scope in order of the text, gives values; each sees those before it only. Does
not check that an override names a parameter.
"""

from __future__ import annotations

from collections import ChainMap
from collections.abc import Iterable, Mapping
from fractions import Fraction
from types import MappingProxyType
from typing import Protocol

from tardigate.netlist.constant_value import Value, assigned, real, rounded
from tardigate.syntax import tree

NO_VALUES: Mapping[str, Value] = MappingProxyType({})

INTEGER, TIME = (32, True), (64, False)
"""Bits and sign of the types `integer` and `time` (clause 4.8)."""


class Desk(Protocol):
    """Evaluates for a scope and tells what is wrong."""

    def constant(
        self, expression: tree.Expression, values: Mapping[str, Value], width: int | None = 0
    ) -> Value:
        """Return a constant's value in a context of `width` bits; a stand-in after telling of a fault."""

    def range(self, bounds: tree.Range, values: Mapping[str, Value]) -> tuple[int, int] | None:
        """Return msb and lsb, None after telling what is wrong."""

    def twice(self, named: tree.Named) -> None:
        """Tell that a name is declared twice."""


def parameter_values(
    declarations: Iterable[tree.Parameter],
    overrides: Mapping[str, Value],
    desk: Desk,
    outer: Mapping[str, Value] = NO_VALUES,
) -> dict[str, Value]:
    """Return the values of a scope's parameters, in order of declaration.

    `outer` are values of the scopes around, which are seen as well. A `localparam` or `specparam` keeps its
    own value whatever is overridden (clause 4.10.2, 4.10.3).
    """
    found: dict[str, Value] = {}
    seen: Mapping[str, Value] = ChainMap(found, dict(outer)) if outer else found
    for declaration in declarations:
        may_change = declaration.word == "parameter" and not declaration.local
        for named in declaration.names:
            if named.name in found:
                desk.twice(named)
                continue
            bounds = desk.range(declaration.range, seen) if declaration.range is not None else None
            value = overrides.get(named.name) if may_change else None
            if value is None:
                width = _width(declaration, bounds)
                value = desk.constant(named.value, seen, width) if named.value is not None else Value(0)
            found[named.name] = converted(value, declaration, bounds)
    return found


def declarations_of(module: tree.Module) -> list[tree.Parameter]:
    """Return the declarations of a module's own constants, in order of the text."""
    return [*module.parameters, *(item for item in module.items if isinstance(item, tree.Parameter))]


def _width(declaration: tree.Parameter, bounds: tuple[int, int] | None) -> int | None:
    """Return the bits that a declaration asks of its value, 0 where it asks for none."""
    if bounds is not None:
        return abs(bounds[0] - bounds[1]) + 1
    return {"integer": None, "time": 64}.get(declaration.type, 0)


def converted(value: Value, declaration: tree.Parameter, bounds: tuple[int, int] | None) -> Value:
    """Return a value as the declaration makes it (clause 4.10.1).

    A type gives type, width and sign; a range its width, unsigned without `signed`; `signed` alone the
    width of the value; nothing all of the value's. `bounds` are those of the declaration's range.
    """
    if declaration.type in ("real", "realtime"):
        return real(value.value)
    if declaration.type:
        width, signed = TIME if declaration.type == "time" else INTEGER
        return assigned(value, width, signed)
    if bounds is not None:
        cut = assigned(value, abs(bounds[0] - bounds[1]) + 1, declaration.signed)
        same = cut.value == value.value
        return cut._replace(bounds=bounds, form=value.form if same and value.form == "text" else "")
    if declaration.signed:
        if isinstance(value.value, Fraction):
            return Value(rounded(value))
        return assigned(value, value.width, True)
    return value._replace(bounds=None)


def triple_trees(
    declarations: Iterable[tree.Parameter], overrides: Mapping[str, Value] = NO_VALUES
) -> dict[str, tree.Expression]:
    """Return the trees of values that depend on a `min:typ:max`, for `Delays`; those overridden do not."""
    found: dict[str, tree.Expression] = {}
    for declaration in declarations:
        may_change = declaration.word == "parameter" and not declaration.local
        for named in declaration.names:
            overridden = may_change and named.name in overrides
            if named.value is not None and not overridden and _has_triple(named.value, found):
                found[named.name] = named.value
    return found


def _has_triple(expression: tree.Expression, names: Mapping[str, tree.Expression]) -> bool:
    for node in tree.walk(expression):
        if isinstance(node, tree.Triplet):
            return True
        if isinstance(node, tree.Reference) and node.path[0] in names:
            return True
    return False
