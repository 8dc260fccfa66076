"""The scopes of one module for one set of parameters: itself and its generate blocks. Data only."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field

from tardigate.netlist.constants import Value
from tardigate.syntax import tree

CHOICES = (tree.GenerateIf, tree.GenerateCase)
GENERATE = (tree.GenerateFor, *CHOICES)
"""The generate constructs."""


@dataclass(slots=True)
class Scope:
    """A scope: the module (number 0, no name) or one generate block (IEEE 1364-2005 clause 12.4).

    `name` has a loop's index (`g[2]`), `prefix` is what stands before the names of what is declared here
    (`g[2].h.`). `values`: the constants that can be seen from here. `items`: what stands here, generate
    constructs carried out. `blocks`: scopes right below by name. `genvars`: those declared here or around;
    `looping` those that a loop around counts with.
    """

    number: int
    parent: int
    name: str
    prefix: str
    values: Mapping[str, Value]
    place: int
    genvars: frozenset[str] = frozenset()
    looping: frozenset[str] = frozenset()
    items: list[tree.Item] = field(default_factory=list)
    blocks: dict[str, int] = field(default_factory=dict)


def has_generate(items: Sequence[tree.Item]) -> bool:
    """Tell whether there is a generate construct or a genvar among items."""
    return any(isinstance(item, (tree.Genvars, *GENERATE)) for item in items)


def chain(scopes: Sequence[Scope], number: int) -> list[Scope]:
    """Return a scope and those around it, the module last."""
    found = []
    while number >= 0:
        found.append(scopes[number])
        number = scopes[number].parent
    return found
