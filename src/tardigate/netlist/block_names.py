"""Names for generate blocks that have none (IEEE 1364-2005 clause 12.4.3).

Takes the generate constructs of a scope in order, gives `genblk1`, `genblk2`, …: the number counts all
constructs of the scope, named or not; where such a name is taken, zeros are put before the number.
"""

from __future__ import annotations

from collections.abc import Collection, Iterator, Sequence

import numpy as np

from tardigate.netlist.declare import Declarer
from tardigate.netlist.scopes import CHOICES, GENERATE
from tardigate.syntax import tree
from tardigate.syntax.verilog_reader import Unit


def block_names(constructs: Sequence[tree.Item], taken: Collection[str]) -> dict[int, str]:
    """Return the name for unnamed blocks of each construct, by the identity of its tree."""
    names: dict[int, str] = {}
    for number, construct in enumerate(constructs, 1):
        name = f"genblk{number}"
        zeros = 0
        while name in taken:
            zeros += 1
            name = f"genblk{'0' * zeros}{number}"
        names[id(construct)] = name
    return names


def declared_names(unit: Unit, items: Sequence[tree.Item]) -> frozenset[str]:
    """Return the names declared by a scope's items that begin like those of unnamed blocks."""
    names: set[str] = set()
    for item in items:
        if isinstance(item, tree.Run):
            names |= _of_run(unit, item)
        elif isinstance(item, tree.Declaration | tree.Parameter | tree.Genvars):
            names |= {named.name for named in item.names}
        elif isinstance(item, tree.Instances):
            names |= {instance.name for instance in item.instances}
        elif isinstance(item, tree.Gates | tree.Pulls):
            names |= {gate.name for gate in item.gates}
        elif isinstance(item, GENERATE):
            names |= {block.name for block in blocks_of(item)}
    return frozenset(name for name in names if name.startswith("genblk"))


def _of_run(unit: Unit, run: tree.Run) -> set[str]:
    """Return names of a run; texts without any such name at all are not looked through."""
    if b"genblk" not in unit.scan.data:
        return set()
    plain, names = unit.plain, unit.scan.names
    found = {names.text(n) for n in plain.name[run.first : run.last].tolist() if n >= 0}
    for statement in range(run.first, run.last):
        if plain.is_declaration[statement]:
            rows = plain.net[int(plain.start[statement]) : int(plain.start[statement + 1])]
            found |= {names.text(n) for n in rows.tolist()}
    return found


def blocks_of(construct: tree.Item) -> list[tree.Block]:
    """Return all blocks of a construct, those of choices that belong to it among them."""
    found: list[tree.Block] = []
    work: list[tree.Item] = [construct]
    while work:
        item = work.pop()
        blocks: list[tree.Block | None] = []
        if isinstance(item, tree.GenerateFor):
            blocks = [item.block]
        elif isinstance(item, tree.GenerateIf):
            blocks = [item.yes, item.no]
        elif isinstance(item, tree.GenerateCase):
            blocks = [arm.block for arm in item.arms]
        for block in blocks:
            if block is None:
                continue
            inner = block.items[0] if not block.begun and block.items else None
            if isinstance(inner, CHOICES) and isinstance(item, CHOICES):
                work.append(inner)
            else:
                found.append(block)
    return found


def tell_same_names(declarer: Declarer, items: Sequence[tree.Item], constructs: Sequence[tree.Item]) -> None:
    """Tell of genvars and blocks that share a name with something else of the scope (clause 12.7; N110).

    The name of a block is taken whether it is made or not; the blocks of one construct may share one.
    """
    wanted: list[tuple[str, int]] = []
    for item in items:
        if isinstance(item, tree.Genvars):
            wanted += [(named.name, named.at) for named in item.names]
    for construct in constructs:
        own: dict[str, int] = {}
        for block in blocks_of(construct):
            if block.name:
                own.setdefault(block.name, block.at)
        wanted += own.items()
    if not wanted:
        return
    taken: dict[str, int] = {}
    for name, at in wanted:
        if name in taken:
            declarer.twice_at(name, at, taken[name])
        taken.setdefault(name, at)
    for name, at in _declarations(declarer.unit, items, taken):
        first, second = sorted((taken[name], at))
        declarer.twice_at(name, second, first)


def _declarations(
    unit: Unit, items: Sequence[tree.Item], wanted: Collection[str]
) -> Iterator[tuple[str, int]]:
    """Yield those of the wanted names that nets, constants, gates and instances have, and where."""
    for item in items:
        named: Sequence[tree.Named | tree.Instance | tree.Gate] = ()
        if isinstance(item, tree.Run):
            yield from _run_names(unit, item, wanted)
        elif isinstance(item, tree.Declaration | tree.Parameter):
            named = item.names
        elif isinstance(item, tree.Instances):
            named = item.instances
        elif isinstance(item, tree.Gates | tree.Pulls):
            named = item.gates
        for one in named:
            if one.name in wanted:
                yield one.name, one.at


def _run_names(unit: Unit, run: tree.Run, wanted: Collection[str]) -> Iterator[tuple[str, int]]:
    plain, numbers = unit.plain, unit.scan.names.find_all(list(wanted))
    numbers = numbers[numbers >= 0]
    statements = np.arange(run.first, run.last)
    for statement in statements[np.isin(plain.name[statements], numbers)].tolist():
        mark = int(plain.first[statement]) + 1
        yield unit.scan.names.text(int(plain.name[statement])), int(unit.scan.at[mark])
    for statement in statements[plain.is_declaration[statements]].tolist():
        rows = slice(int(plain.start[statement]), int(plain.start[statement + 1]))
        hits = np.flatnonzero(np.isin(plain.net[rows], numbers)) + rows.start
        yield from ((unit.scan.names.text(int(plain.net[hit])), int(plain.at[hit])) for hit in hits)
