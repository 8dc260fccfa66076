"""Plain instance statements to columns, all of a module at once.

Takes the plain statements of a module's runs, gives blocks of part instances and, as trees, those statements
that want a closer look (vectors, modules, anything that might be a fault).
"""

from __future__ import annotations

from collections.abc import Callable
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.columns import Block
from tardigate.netlist.flat import CONSTANTS, OPEN
from tardigate.netlist.interface import Interface
from tardigate.netlist.lookup import Lookup
from tardigate.netlist.variables import RANGED, REGISTER, Variables
from tardigate.parts.gates import BUFFERS, THREE_STATE
from tardigate.parts.kind import Way
from tardigate.source.arrays import distinct, spread
from tardigate.syntax.verilog_reader import Unit
from tardigate.syntax.words import GATES


class Rows(NamedTuple):
    """Connections of the statements: `net` int32 local nets (UNCLEAR for a closer look), by statement."""

    start: NDArray[np.int64]
    counts: NDArray[np.int64]
    row: NDArray[np.int64]
    net: NDArray[np.int32]


UNCLEAR = -2

FEW = 10
"""So few instances of one part are sooner read one by one."""


class Bulk:
    """Reads the plain instances of one module."""

    def __init__(
        self,
        unit: Unit,
        lookup: Lookup,
        variables: Variables,
        of_name: NDArray[np.int32],
        gate_kind: Callable[[str, int, int], int],
        part_kind: Callable[[str], tuple[Interface, int] | None],
    ) -> None:
        self.unit, self.plain, self.lookup = unit, unit.plain, lookup
        self.variables, self.of_name = variables, of_name
        self.gate_kind, self.part_kind = gate_kind, part_kind

    def read(self, statements: NDArray[np.int64]) -> tuple[list[Block], NDArray[np.int64]]:
        """Return blocks, and the numbers of the statements that want a closer look."""
        blocks: list[Block] = []
        left: list[NDArray[np.int64]] = []
        heads = self.plain.head[statements]
        gate_numbers = np.array(self.lookup.find_all(GATES), np.int32)
        is_gate = np.isin(heads, gate_numbers[gate_numbers >= 0])
        first = self.unit.scan.at[self.plain.first[statements]]
        if self.unit.scan.escaped is not None:
            is_gate &= np.frombuffer(self.unit.scan.data, np.uint8)[first] != 0x5C
        if is_gate.any():
            self._gates(statements[is_gate], gate_numbers, blocks, left)
        others = statements[~is_gate]
        for head in distinct(heads[~is_gate]).tolist():
            those = others[self.plain.head[others] == head]
            if len(those) < FEW:
                left.append(those)
            else:
                self._parts(those, head, blocks, left)
        return blocks, np.sort(np.concatenate([*left, np.zeros(0, np.int64)]))

    def _count(self, statements: NDArray[np.int64]) -> NDArray[np.int64]:
        return self.plain.start[statements + 1] - self.plain.start[statements]

    def _rows(self, statements: NDArray[np.int64]) -> Rows:
        count = self._count(statements)
        row = spread(self.plain.start[statements], count)
        return Rows(np.cumsum(count) - count, count, row, self._nets(row))

    def _nets(self, row: NDArray[np.int64]) -> NDArray[np.int32]:
        """Return the local net of each connection, UNCLEAR where it is not a single declared bit."""
        names, bit = self.plain.net[row], self.plain.bit[row]
        named = names >= 0
        variable = np.where(named, self.of_name[names], -1)
        known = variable >= 0
        net = np.full(len(row), UNCLEAR, np.int32)
        single = known & (bit < 0) & (self.variables.width[variable] == 1)
        net[single] = self.variables.base[variable[single]]
        selected = np.flatnonzero(known & (bit >= 0))
        if len(selected):
            chosen = variable[selected]
            msb, lsb = self.variables.msb[chosen], self.variables.lsb[chosen]
            low, high = np.minimum(msb, lsb), np.maximum(msb, lsb)
            there = (
                (self.variables.flags[chosen] & RANGED > 0) & (bit[selected] >= low) & (bit[selected] <= high)
            )
            found = self.variables.base[chosen] + np.abs(bit[selected] - lsb)
            net[selected[there]] = found[there]
        constants = names <= -2
        net[constants] = -2 - names[constants]
        net[names == -1] = OPEN
        return net

    def _no_nets(self, nets: NDArray[np.int32]) -> NDArray[np.bool_]:
        """Tell which local nets are variables, which nothing here may drive (clause 7.1.6)."""
        registers = self.variables.flags & REGISTER > 0
        if not registers.any():
            return np.zeros(len(nets), np.bool_)
        of_net = np.concatenate((np.zeros(CONSTANTS, np.bool_), np.repeat(registers, self.variables.width)))
        found: NDArray[np.bool_] = of_net[np.maximum(nets, 0)]
        return found

    def _names_and_places(self, statements: NDArray[np.int64]) -> tuple[NDArray[np.int32], NDArray[np.int64]]:
        name = self.plain.name[statements]
        mark = self.plain.first[statements] + np.where(name >= 0, 1, 2)
        return name, self.unit.scan.at[mark].astype(np.int64)

    def _gates(
        self,
        statements: NDArray[np.int64],
        gate_numbers: NDArray[np.int32],
        blocks: list[Block],
        left: list[NDArray[np.int64]],
    ) -> None:
        rows = self._rows(statements)
        heads = self.plain.head[statements]
        inner = np.ones(len(rows.row), bool)  # rows that are inputs
        inner[rows.start] = False
        many = np.isin(heads, [gate_numbers[GATES.index(gate)] for gate in BUFFERS]) & (rows.counts > 2)
        for statement in np.flatnonzero(many):
            begin = int(rows.start[statement])
            inner[begin : begin + int(rows.counts[statement]) - 1] = False
        unclear = (rows.net == UNCLEAR) | (~inner & ((rows.net < CONSTANTS) | self._no_nets(rows.net)))
        clear = ~np.logical_or.reduceat(unclear, rows.start)
        kind = np.full(len(statements), -1, np.int32)
        widest = int(rows.counts.max()) + 1
        pairs, back = np.unique(heads.astype(np.int64) * widest + rows.counts, return_inverse=True)
        for at, pair in enumerate(pairs.tolist()):
            gate, count = self.unit.scan.names.text(pair // widest), pair % widest
            legal = count == 3 if gate in THREE_STATE else count >= 2
            if legal:
                kind[back == at] = self.gate_kind(gate, *gate_terminals(gate, count))
        clear &= kind >= 0
        if not clear.all():
            left.append(statements[~clear])
            keep = np.repeat(clear, rows.counts)
            statements, kind = statements[clear], kind[clear]
            rows = Rows(rows.start, rows.counts[clear], rows.row[keep], rows.net[keep])
        name, place = self._names_and_places(statements)
        blocks.append(Block(kind, place, name, rows.counts, rows.net))

    def _parts(
        self, statements: NDArray[np.int64], head: int, blocks: list[Block], left: list[NDArray[np.int64]]
    ) -> None:
        known = self.part_kind(self.unit.scan.names.text(head))
        if known is None or any(pin.width != 1 for pin in known[0].pins) or not known[0].pins:
            left.append(statements)
            return
        interface, kind = known
        rows = self._rows(statements)
        owner = np.repeat(np.arange(len(statements)), rows.counts)
        pin = self._pins(rows, interface)
        wrong = (pin < 0) | (pin >= len(interface.pins)) | (rows.net == UNCLEAR)
        ways = np.array([int(p.way) for p in interface.pins])
        drives = ways[np.clip(pin, 0, len(ways) - 1)] != Way.INPUT
        wrong |= drives & (rows.net >= 0) & ((rows.net < CONSTANTS) | self._no_nets(rows.net))
        cell = owner * len(interface.pins) + np.clip(pin, 0, len(interface.pins) - 1)
        wrong |= np.bincount(cell, minlength=len(statements) * len(interface.pins))[cell] > 1
        clear = np.ones(len(statements), bool)
        clear[owner[wrong]] = False
        nets = np.full(len(statements) * len(interface.pins), OPEN, np.int32)
        nets[cell] = rows.net
        nets = nets.reshape(len(statements), -1)[clear].reshape(-1)
        left.append(statements[~clear])
        statements = statements[clear]
        name, place = self._names_and_places(statements)
        count = np.full(len(statements), len(interface.pins), np.int64)
        blocks.append(Block(np.full(len(statements), kind, np.int32), place, name, count, nets))

    def _pins(self, rows: Rows, interface: Interface) -> NDArray[np.int64]:
        """Return the number of the pin of each connection, -1 for one that is not there."""
        names = self.plain.pin[rows.row]
        by_order = np.arange(len(rows.row)) - np.repeat(rows.start, rows.counts)
        distinct, back = np.unique(names, return_inverse=True)
        found = np.array(
            [interface.find(self.unit.scan.names.text(n)) if n >= 0 else -1 for n in distinct.tolist()]
        )
        return np.where(names >= 0, found[back], by_order)


def gate_terminals(gate: str, count: int) -> tuple[int, int]:
    """Return how many inputs and outputs a gate with so many terminals has (clauses 7.2 to 7.4)."""
    return (1, count - 1) if gate in BUFFERS else (count - 1, 1)
