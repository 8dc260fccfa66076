"""A module with a specify block as a part: the passes from its tree and body to the one model of a part.

Takes a module's tree, its body and the delays in force there, gives a `Part` with its pins in the order of
the ports. Tells what is wrong with the block (N110, N120, N130 to N134, N15x, N17x, N18x); whether each of
its hops has a time is for `part_kind` to say.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from tardigate.netlist.body import Body
from tardigate.netlist.cell_function import Drive, Functions
from tardigate.netlist.cell_names import CellNames
from tardigate.netlist.cell_registers import body_registers, edge_sources, implied_registers
from tardigate.netlist.cell_rows import timed_rows
from tardigate.netlist.cell_times import CellTimes
from tardigate.netlist.cell_ways import Ways
from tardigate.netlist.delays import Delays
from tardigate.netlist.template import TemplatePort
from tardigate.parts.kind import Way
from tardigate.parts.match import match, uncovered
from tardigate.parts.model import Check, Part, Pin, Place, Register, Row
from tardigate.parts.paths import build_paths
from tardigate.parts.timing_checks import build_checks, delayed_signals
from tardigate.syntax import tree


def cell_part(module: tree.Module, body: Body, delays: Delays) -> Part:
    """Return a module as a part with one column of times; what is wrong is told to the delays' collector."""
    items = [item for each in module.items if isinstance(each, tree.Specify) for item in each.items]
    parameters = [item for item in [*module.items, *items] if isinstance(item, tree.Parameter)]
    times = CellTimes(delays, [item for item in parameters if item.word == "specparam"])
    place = Place(delays.text, module.at, module.at + len(module.name))
    names = CellNames(body, times, place)
    written = [item for item in items if isinstance(item, tree.TimingCheck)]
    names.follow(delayed_signals(written))
    checks = build_checks(written, names)
    ways = Ways(body, names.functions)
    if ways.has_delays and ways.too_many():
        names.tell("N185", module.at, len(module.name), name=module.name)
        ways.has_delays = False
    draft = _Draft(names, place, ways)
    paths = [item for item in items if isinstance(item, tree.Path)]
    rows = build_paths(paths, names, draft.lets_go(), draft.unknown(), body.opaque)
    draft.imply(paths, rows, checks)
    part = draft.part(module.name, rows, checks)
    if draft.unknown() and ways.too_many():
        names.tell("N185", module.at, len(module.name), name=module.name)
        return part
    if rows:
        _tell_uncovered(part, names, ways)
    delays.assumed += times.delays.assumed
    return part._replace(rows=timed_rows(part, ways))


class _Draft:
    """A part under work: what its body does."""

    def __init__(self, names: CellNames, place: Place, ways: Ways) -> None:
        self.names, self.place = names, place
        self.functions: Functions = names.functions
        self.flat = names.body.flat
        self.registers: list[Register] = body_registers(self.functions, place)
        self.value: dict[int, int] = {}
        self.enable: dict[int, int] = {}
        self.outputs = [bit for bit, port in enumerate(self.flat.ports) if self._is_output(bit, port.way)]
        senses = ways.senses()
        for bit in self.outputs:
            drive = self.functions.output(bit)
            if drive is not None and not self._may_glitch(drive, senses.get(bit, {})):
                self.value[bit] = drive.value
                if drive.enable >= 0:
                    self.enable[bit] = drive.enable

    def _is_output(self, bit: int, way: Way) -> bool:
        if way == Way.INOUT:
            return self.functions.is_driven(bit) or self.names.body.opaque
        return way == Way.OUTPUT

    def _may_glitch(self, drive: Drive, senses: Mapping[int, int]) -> bool:
        """Tell whether delays inside let an output move against its function, as by two ways of one pin."""
        network = self.names.network
        holds = any(each >= len(self.flat.ports) for each in network.support(drive.value))
        if not senses or drive.enable >= 0 or holds:
            return False
        allowed = network.polarities(drive.value, {})
        return any(sense & ~allowed.get(tail, 0) for tail, sense in senses.items())

    def lets_go(self) -> set[int]:
        """Return the outputs that can be z."""
        return {*self.enable, *(bit for bit in self.unknown() if self.functions.lets_go(bit))}

    def unknown(self) -> set[int]:
        """Return the outputs whose function is not known."""
        return {bit for bit in self.outputs if bit not in self.value}

    def imply(self, paths: Sequence[tree.Path], rows: Sequence[Row], checks: Sequence[Check]) -> None:
        """Add the registers that hide in the body, where some output is not known."""
        if not self.unknown():
            return
        first = len(self.flat.ports) + len(self.functions.states)
        sources = edge_sources(paths, self.names)
        known = {(register.clock, register.edge) for register in self.registers}
        implied = implied_registers(self.functions, sources, rows, checks, first, self.place)
        self.registers += [each for each in implied if (each.clock, each.edge) not in known]

    def part(self, name: str, rows: Sequence[Row], checks: Sequence[Check]) -> Part:
        """Return the part."""
        top = self.flat.templates[int(self.flat.scope_template[0])]
        bit_names = [port.name for port in self.flat.ports]
        count = max((bit for each in self.registers for bit in each.stores), default=-1) + 1 - len(bit_names)
        states = tuple(Pin(f"state{i + 1}", Way.INPUT) for i in range(max(0, count)))
        pins = tuple(_pin(port, self.outputs, first, self.place) for port, first in _numbered(top.ports))
        return Part(
            name, "", "", 1, pins, states, (), self.names.network, self.value, self.enable,
            tuple(self.registers), tuple(rows), tuple(checks), (), self.place,
            (*bit_names, *(state.name for state in states)),
        )  # fmt: skip


def _numbered(ports: Sequence[TemplatePort]) -> list[tuple[TemplatePort, int]]:
    """Return the ports that have bits, each with the number of its first."""
    found, first = [], 0
    for port in ports:
        if port.bits:
            found.append((port, first))
        first += len(port.bits)
    return found


def _pin(port: TemplatePort, outputs: Sequence[int], first: int, place: Place) -> Pin:
    """Return a port as a pin; an inout that nothing inside drives only listens."""
    way = port.way
    if way == Way.INOUT and first not in outputs:
        way = Way.INPUT
    ends = [bit.rpartition("[")[2].rstrip("]") for bit in (port.bits[0], port.bits[-1])]
    vector = port.bits[0].endswith("]") and port.bits[0] != port.name
    msb, lsb = (int(end) for end in ends) if vector else (0, 0)
    return Pin(port.name, way, msb, lsb, vector, None, place)


def _tell_uncovered(part: Part, names: CellNames, ways: Ways) -> None:
    """Warn of states for which a change has no path nor a delay inside (N180), once for a pair of pins."""
    told = set()
    conditional = any(row.when >= 0 for row in part.rows)
    for need, rows in uncovered(part, match(part, {})) if conditional else ():
        pair = (need.tail, need.head)
        if pair in told or ways.written(*pair):
            continue
        told.add(pair)
        tail, head = (part.bit_names[bit] for bit in pair)
        place = rows[0].place
        names.tell("N180", place.start, place.stop - place.start, tail=tail, head=head)
