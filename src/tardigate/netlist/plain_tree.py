"""Plain statements as trees, as the grammar would have read them.

Takes numbers of plain statements of a file, gives trees for those that are elaborated one by one.
"""

from __future__ import annotations

import numpy as np

from tardigate.syntax import tree
from tardigate.syntax.numbers import read_number
from tardigate.syntax.verilog_reader import Unit
from tardigate.syntax.words import GATES


def instance_tree(unit: Unit, statement: int) -> tree.Gates | tree.Instances:
    """Return the tree of a plain instance statement."""
    plain, names, scan = unit.plain, unit.scan.names, unit.scan
    first, stop = int(plain.start[statement]), int(plain.start[statement + 1])
    nets = [_net_tree(unit, row) for row in range(first, stop)]
    name_number = int(plain.name[statement])
    mark = int(plain.first[statement]) + (1 if name_number >= 0 else 2)
    at, name = int(scan.at[mark]), names.text(name_number) if name_number >= 0 else ""
    head, start = names.text(int(plain.head[statement])), int(scan.at[plain.first[statement]])
    if head in GATES and scan.data[start] != 0x5C:
        return tree.Gates(head, None, (tree.Gate(name, None, tuple(n for n in nets if n), at),), start)
    connections = []
    for row, net in zip(range(first, stop), nets, strict=True):
        pin = int(plain.pin[row])
        # A named connection stands at its pin, three marks before an identifier, as in the grammar.
        place = _pin_place(unit, int(plain.at[row])) if pin >= 0 else int(plain.at[row])
        connections.append(tree.Connection(names.text(pin) if pin >= 0 else "", net, place))
    return tree.Instances(head, (), (tree.Instance(name, None, tuple(connections), at),), start)


def declaration_tree(unit: Unit, statement: int) -> tree.Declaration:
    """Return the tree of a plain declaration."""
    plain, names = unit.plain, unit.scan.names
    rows = range(int(plain.start[statement]), int(plain.start[statement + 1]))
    named = [tree.Named(names.text(int(plain.net[row])), None, int(plain.at[row])) for row in rows]
    head, at = names.text(int(plain.head[statement])), int(unit.scan.at[plain.first[statement]])
    direction = "" if head == "wire" else head
    return tree.Declaration(direction, "wire", False, None, None, tuple(named), at)


def trees_of(unit: Unit, run: tree.Run) -> list[tree.Declaration | tree.Gates | tree.Instances]:
    """Return the trees of all statements of a run."""
    return [
        declaration_tree(unit, statement)
        if unit.plain.is_declaration[statement]
        else instance_tree(unit, statement)
        for statement in range(run.first, run.last)
    ]


def _pin_place(unit: Unit, net_at: int) -> int:
    mark = int(np.searchsorted(unit.scan.at, np.int32(net_at)))  # of one type: no copy
    return int(unit.scan.at[mark - 2])


def _net_tree(unit: Unit, row: int) -> tree.Expression | None:
    plain, scan = unit.plain, unit.scan
    name, bit, at = int(plain.net[row]), int(plain.bit[row]), int(plain.at[row])
    if name == -1:
        return None
    if name < -1:
        mark = int(np.searchsorted(scan.at, np.int32(at)))
        stop = int(scan.word_stop[scan.word_of[mark]])
        return read_number(scan.data[at:stop].decode("latin-1"), at)
    selections: tuple[tree.Selection, ...] = ()
    if bit >= 0:
        selections = (tree.Selection("bit", tree.Number(bit, None, 0, 0, True, at), None),)
    return tree.Reference((scan.names.text(name),), selections, at)
