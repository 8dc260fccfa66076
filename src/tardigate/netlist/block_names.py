"""Names for generate blocks that have none (IEEE 1364-2005 clause 12.4.3).

Takes the generate constructs of a scope in order, gives `genblk1`, `genblk2`, …: the number counts all
constructs of the scope, named or not; where such a name is taken, zeros are put before the number.
"""

from __future__ import annotations

from collections.abc import Collection, Sequence

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
        elif isinstance(item, tree.GenerateFor):
            names.add(item.block.name)
        elif isinstance(item, tree.GenerateIf):
            names |= {block.name for block in (item.yes, item.no) if block is not None}
        elif isinstance(item, tree.GenerateCase):
            names |= {arm.block.name for arm in item.arms if arm.block is not None}
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
