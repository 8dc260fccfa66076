"""The flat design as flat Verilog (IEEE 1364-2005) that, read again with the same parts files, is the same.

Takes the flat design, gives a text: one module with the top's ports, a declaration for every net in order of
its number, a statement for every part instance in order of its number, registers last, and the modules that
these need. Delays written in the source stand at the statements; others are left to the parts files.
Instances without a name have none here either: reports tell them by kind and line of this text. Does not
check the design.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from tardigate.netlist.batches import batches
from tardigate.netlist.flat import CONSTANT_NAMES, Flat
from tardigate.netlist.write_cells import CellText
from tardigate.netlist.write_instances import Desk, sort_of, statements
from tardigate.netlist.write_sheet import Sheet
from tardigate.netlist.write_words import is_whole, spelled
from tardigate.parts.kind import Kind


def write_flat(flat: Flat, top: str, cells: Sequence[CellText] = ()) -> str:
    """Return the text, with the definitions of `cells`; characters are bytes of the source (ISO 8859-1)."""
    groups = sorted(batches(flat), key=lambda batch: int(batch.members[0]))
    whole = all(_is_whole(batch.kind) for batch in groups)
    primitives = frozenset(cell.name for cell in cells if cell.primitive)
    parts = {batch.kind.name for batch in groups if batch.kind.group == "part"}
    taken = {top, *parts, *(cell.name for cell in cells)}
    desk = Desk(Sheet(flat), whole, primitives, taken)
    lines = np.empty(flat.instances, object)
    last = np.zeros(flat.instances, np.bool_)
    for batch in groups:
        lines[batch.members] = statements(batch, desk)
        last[batch.members] = sort_of(batch.kind) == "register"
    ports = desk.sheet.ports()
    header = f"module {spelled(top)} ({', '.join(ports)});" if ports else f"module {spelled(top)};"
    body = [
        *desk.sheet.declarations(),
        *desk.sheet.pulls(),
        *lines[~last].tolist(),
        *lines[last].tolist(),
        *_joins(desk),
    ]
    flat_module = "\n  ".join([header, *body]) + "\nendmodule\n"
    opening = "`resetall\n`timescale 1fs/1fs\n" if whole else "`resetall\n"  # without one: 1 ns, unrounded
    return "\n".join([opening + flat_module, *desk.helpers, *(cell.text for cell in cells)])


def _is_whole(kind: Kind) -> bool:
    return all(is_whole(delay) for delay in (kind.source, *kind.control_sources))


def _joins(desk: Desk) -> list[str]:
    """Return the instances that make nets one, or one with a constant (which only an input may be)."""
    made: dict[str, str] = {}
    lines = []
    for one, other in desk.sheet.same_nets():
        way, wish = ("input", "same_constant") if other in CONSTANT_NAMES else ("inout", "same_net")
        if way not in made:
            made[way] = desk.free_module(wish)
            desk.helpers.append(f"module {made[way]} (.a(net), .b(net));\n  {way} net;\nendmodule\n")
        lines.append(f"{made[way]} {desk.sheet.free('same')} ({one}, {other});")
    return lines
