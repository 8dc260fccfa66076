"""Nets that nobody declared but a connection names (IEEE 1364-2005 clause 4.5).

Takes a module's scopes and declared variables, adds the nets that connections, gate terminals and targets of
assignments use, each in the scope of its first use; or, where `default_nettype none` is in force, tells of
them. Iterative.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.declare import Declarer
from tardigate.netlist.scopes import Scope, chain
from tardigate.netlist.variables import TYPE, TYPES, Declared, Variables
from tardigate.source.arrays import spread
from tardigate.syntax import tree
from tardigate.syntax.verilog_reader import Unit


def declare_implicit(
    declarer: Declarer,
    scopes: Sequence[Scope],
    variables: Variables,
    of_name: NDArray[np.int32],
    net_type: str,
) -> None:
    """Add implicit nets of a type to `variables` and `of_name`, or tell of them where it is `none` (N138)."""
    flags = TYPES.index(net_type) << TYPE if net_type in TYPES else 0
    found = _of_module(declarer, scopes[0], of_name)
    declared = np.zeros((len(found), 7), np.int64)
    declared[:, 0], declared[:, 3] = np.array(list(found), np.int64), 1
    declared[:, 4] = np.array(list(found.values()), np.int64)
    for scope in scopes[1:]:
        more = _of_block(declarer, scope, scopes, variables, of_name, found)
        declared = np.concatenate((declared, np.array(more, np.int64).reshape(-1, 7)))
    declared[:, 5] = flags
    if net_type == "none":
        _tell_undeclared(declarer, variables, declared)
    if len(declared):
        own = np.flatnonzero(declared[:, 6] == 0)
        of_name[declared[own, 0]] = len(variables) + own
        variables.add(declared)


def _tell_undeclared(declarer: Declarer, variables: Variables, declared: NDArray[np.int64]) -> None:
    for number, _, _, _, at, _, _ in declared.tolist():
        name = variables.names.text(number)
        hint = declarer.suggestion(name, variables) if declarer.collector.room("N138") else None
        declarer.collector.tell("N138", declarer.text.span(at, at + len(name)), name=name, hint=hint)


def _of_module(declarer: Declarer, scope: Scope, of_name: NDArray[np.int32]) -> dict[int, int]:
    """Return the numbers of names that the module's own items declare by use, and where, in order."""
    plain = plain_statements(declarer.unit, scope.items)
    found: dict[int, int] = {}
    if len(plain):
        names, places = _plain_names(declarer.unit, plain, of_name)
        found = dict(zip(names.tolist(), places.tolist(), strict=True))
        for name in (*scope.values, *scope.genvars):
            found.pop(declarer.lookup.find(name), None)
    for name, at in connection_names(scope.items):
        if name not in scope.values and name not in scope.genvars:
            number = declarer.lookup.find(name)
            if of_name[number] < 0:
                found[number] = min(at, found.get(number, at))
    return {number: found[number] for number in sorted(found, key=found.__getitem__)}


def _of_block(
    declarer: Declarer, scope: Scope, scopes: Sequence[Scope], variables: Variables,
    of_name: NDArray[np.int32], found: dict[int, int],
) -> list[Declared]:  # fmt: skip
    """Return what a generate block declares by use: not what it sees declared, or used, before around it."""
    declared: dict[int, Declared] = {}
    around = chain(scopes, scope.number)[:-1]
    for name, at in connection_names(scope.items):
        number = declarer.lookup.find(name)
        known = of_name[number] >= 0 or found.get(number, at) < at or number in declared
        known = known or name in scope.values or name in scope.genvars
        if known or any((one.number, number) in variables.scoped for one in around):
            continue
        declared[number] = Declared(number, 0, 0, 1, at, 0, scope.number)
    for one in declared.values():  # seen by the blocks inside, which come later
        variables.scoped[one.scope, one.name] = -1
    return list(declared.values())


def plain_statements(unit: Unit, items: Sequence[tree.Item]) -> NDArray[np.int64]:
    """Return the numbers of the plain instance statements among items."""
    runs = [item for item in items if isinstance(item, tree.Run)]
    if not runs:
        return np.zeros(0, np.int64)
    every = np.concatenate([np.arange(run.first, run.last) for run in runs])
    found: NDArray[np.int64] = every[~unit.plain.is_declaration[every]]
    return found


def _plain_names(
    unit: Unit, statements: NDArray[np.int64], of_name: NDArray[np.int32]
) -> tuple[NDArray[np.int32], NDArray[np.int64]]:
    """Return the undeclared names of nets that statements use, each once, and where first."""
    plain = unit.plain
    row = spread(plain.start[statements], plain.start[statements + 1] - plain.start[statements])
    row = row[plain.net[row] >= 0]
    unknown = row[of_name[plain.net[row]] < 0]
    names, first = np.unique(plain.net[unknown], return_index=True)
    return names, plain.at[unknown[first]].astype(np.int64)


def connection_names(items: Iterable[tree.Item]) -> Iterator[tuple[str, int]]:
    """Yield names and offsets of all nets in statements that are not plain and may declare a net by use."""
    for item in items:
        roots: list[tree.Expression] = []
        if isinstance(item, tree.Gates | tree.Pulls):
            roots = [terminal for gate in item.gates for terminal in gate.terminals]
        elif isinstance(item, tree.Instances):
            roots = [c.net for instance in item.instances for c in instance.connections if c.net is not None]
        elif isinstance(item, tree.Continuous):
            roots = [assign.target for assign in item.assigns]
        for root in roots:
            work = [root]
            while work:
                node = work.pop()
                if isinstance(node, tree.Reference):
                    if len(node.path) == 1:
                        yield node.path[0], node.at
                else:
                    work.extend(reversed(tree.operands(node)))
