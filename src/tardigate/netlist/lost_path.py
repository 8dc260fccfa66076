"""Says where a hierarchical name loses its way, for the hint of what is refused.

Takes a hierarchy and the names of a path, gives one sentence: the step that leads nowhere and what is there.
"""

from __future__ import annotations

from collections.abc import Sequence

from tardigate.netlist.hierarchy import Hierarchy
from tardigate.netlist.scopes import chain
from tardigate.source.diagnostic import did_you_mean
from tardigate.syntax import tree

_SHOWN = 6


def lost_at(hierarchy: Hierarchy, elements: Sequence[str], last: str, scope: int) -> str | None:
    """Return a hint for a path of which some step is not there, None when nothing can be said."""
    inside, at, upward = hierarchy, scope, True
    where = f"module `{hierarchy.module.name}`"
    left = list(elements)
    while left:
        element = left.pop(0)
        landing = inside.walk([element], at, upward)
        if landing is None:
            return _missing(inside, element, at, upward, where)
        where, upward, at = f"`{element}`", False, landing.scope
        if landing.seat is not None:
            number = inside.child(landing.seat, landing.element)
            if number is None:
                return f"{where} is an instance of `{landing.seat.item.module}`, which shows no nets inside."
            inside, at = inside.outside.hierarchy(number), 0
    nets = [
        inside.variables.names.text(int(inside.variables.name[variable]))
        for variable in range(len(inside.variables))
        if inside.variables.scope[variable] == at
    ]
    near = did_you_mean(last, nets)
    return f"There is no net `{last}` in {where}. {near or ''}".rstrip()


def _missing(hierarchy: Hierarchy, element: str, scope: int, upward: bool, where: str) -> str:
    """Say that a block or instance is not there, and what is."""
    stem = element.partition("[")[0]
    known: list[str] = []
    for each in chain(hierarchy.scopes, scope) if upward else [hierarchy.scopes[scope]]:
        known += each.blocks
        known += [
            instance.name
            for item in each.items
            if isinstance(item, tree.Instances)
            for instance in item.instances
        ]
    alike = [name for name in known if name.partition("[")[0] == stem]
    if alike:
        if "[" in alike[0]:
            return f"`{stem}` is there from `{alike[0]}` to `{alike[-1]}`."
        return f"`{alike[0]}` is there, with another index or none."
    near = did_you_mean(stem, sorted({name.partition("[")[0] for name in known}))
    some = ", ".join(f"`{name}`" for name in known[:_SHOWN])
    return f"No block or instance `{element}` in {where}. {near or (some and f'There are {some}.')}".rstrip()
