"""Net delays: `wire #3 w;` (IEEE 1364-2005 clauses 6.1.3 and 7.14).

Takes the delays that declarations give to nets and a module's columns; puts a part instance `wire` before
each such bit and moves every driver to the net before it, readers stay. Tells of nets that may be driven from
both sides (N169).
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import NamedTuple, Protocol

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.columns import Block, Instances
from tardigate.netlist.delays import Delays
from tardigate.netlist.flat import FLOATING
from tardigate.netlist.interface import Interface
from tardigate.netlist.name_columns import NetNames
from tardigate.netlist.template import Child, TemplatePort
from tardigate.netlist.wiring import Wiring
from tardigate.parts.gates import NET, THREE_STATE_NET
from tardigate.parts.kind import Kind, Way
from tardigate.parts.source_delay import SourceDelay
from tardigate.syntax import tree


class NetDelay(NamedTuple):
    """The delay of a declared net, its name and where it is declared."""

    delay: SourceDelay
    name: str
    place: int


class Desk(Protocol):
    """What the pass needs from outside a module."""

    def operator(self, operator: str, inputs: int, delay: SourceDelay | None) -> int:
        """Return the number of an operator's kind."""

    def kind(self, number: int) -> Kind:
        """Return a kind by number."""

    def interface_of(self, template: int) -> Interface:
        """Return the interface of a module below."""


class Delayed(NamedTuple):
    """A module's instances, ports and children with its net delays in place.

    `wires`: local net of each delayed bit → the net before its delay.
    """

    columns: Block
    ports: tuple[TemplatePort, ...]
    children: list[Child]
    wires: Mapping[int, int]


def declared_delays(declaration: tree.Declaration, wiring: Wiring, delays: Delays) -> dict[int, NetDelay]:
    """Return the delays of a declaration's nets, by local net; tells of what is wrong (N150 to N153).

    A delay beside a value belongs to that assignment instead (clause 6.1.3). The third of a `trireg` is the
    time in which its charge decays, and no delay of a change (clause 7.14.2).
    """
    names = [named for named in declaration.names if named.value is None]
    if declaration.delay is None or not names:
        return {}
    delay = delays.read(declaration.delay, 3)
    if delay is None:
        return {}
    if declaration.net_type == "trireg":
        values = delay.values[:2]
        delay = delays.known.setdefault(values, SourceDelay(values, delay.words))
    found: dict[int, NetDelay] = {}
    for named in names:
        variable = wiring.variable(named.name)
        if variable >= 0:
            one = NetDelay(delay, named.name, named.at)
            found.update(dict.fromkeys(wiring.variables.bits(variable), one))
    return found


def delay_nets(
    delays: Mapping[int, NetDelay], columns: Block, ports: tuple[TemplatePort, ...],
    children: list[Child], wiring: Wiring, desk: Desk,
) -> Delayed:  # fmt: skip
    """Put the delays of nets in place. `delays` by local net."""
    work = _Pass(delays, wiring, desk)
    columns = work.instances(columns)
    children = [work.child(child) for child in children]
    ports = tuple(work.port(port) for port in ports)
    return Delayed(work.with_wires(columns), ports, children, work.before)


@dataclass
class _Pass:
    """The pass over one module: `before` is the net before each delayed one, `lets_go` says which may float.

    Nets that nothing drives have no delay: nothing passes through it.
    """

    delays: Mapping[int, NetDelay]
    wiring: Wiring
    desk: Desk
    before: dict[int, int] = field(default_factory=dict)
    lets_go: set[int] = field(default_factory=set)
    _told: set[int] = field(default_factory=set)

    def __post_init__(self) -> None:
        nets = self.wiring.variables.nets
        self._names = NetNames(self.wiring.variables)
        self.is_delayed = np.zeros(nets + 1, np.bool_)
        self.is_delayed[list(self.delays)] = True

    def moved(self, nets: NDArray[np.int32]) -> NDArray[np.int32]:
        """Return where drivers of nets go: before the delay, to a net made when the first one comes."""
        for net in nets[self.is_delayed[nets]].tolist():
            if net not in self.before:
                name = f"{self._names.one(net)}:in"  # of the instance that is the delay
                self.before[net] = self.wiring.variables.new_result(self.delays[net].place, name)
        return np.array([self.before.get(net, net) for net in nets.tolist()], np.int32)

    def instances(self, columns: Block) -> Block:
        """Move the outputs of part instances."""
        start = np.cumsum(columns.counts) - columns.counts
        pins = columns.pins.copy()
        for number in np.unique(columns.kind).tolist():
            kind, rows = self.desk.kind(number), np.flatnonzero(columns.kind == number)
            for pin in np.flatnonzero(kind.ways != Way.INPUT).tolist():
                cells = start[rows] + pin
                hit = self.is_delayed[columns.pins[cells]]
                if not hit.any():
                    continue
                nets = columns.pins[cells[hit]]
                if kind.ways[pin] == Way.INOUT:
                    self._refuse(nets)
                    continue
                floating = _floating(kind, start[rows[hit]], columns.pins)
                self.lets_go.update(nets[floating].tolist())
                pins[cells[hit]] = self.moved(nets)
        return columns._replace(pins=pins)

    def child(self, child: Child) -> Child:
        """Move the output ports of a module below."""
        if not self.is_delayed[child.joins].any():
            return child
        joins = child.joins.copy()
        interface = self.desk.interface_of(child.template)
        for port, first in zip(interface.pins, interface.first_bit, strict=False):
            some = slice(first, first + port.width)
            nets = child.joins[some]
            nets = nets[self.is_delayed[nets]]
            if port.way == Way.INOUT:
                self._refuse(nets)
            elif port.way == Way.OUTPUT:
                self._may_float(nets)
                joins[some] = self.moved(child.joins[some])
        return child._replace(joins=joins)

    def port(self, port: TemplatePort) -> TemplatePort:
        """Move an input port of the module: it drives."""
        nets = np.array(port.nets, np.int32)
        hit = nets[self.is_delayed[nets]]
        if port.way == Way.OUTPUT or not len(hit):
            return port
        if port.way == Way.INOUT:
            self._refuse(hit)
            return port
        self._may_float(hit)
        return port._replace(nets=tuple(self.moved(nets).tolist()))

    def _may_float(self, nets: NDArray[np.int32]) -> None:
        """Take note of nets with a driver out of sight: that it may float only a turn-off delay tells."""
        self.lets_go.update(net for net in nets.tolist() if len(self.delays[net].delay.values) > 2)

    def _refuse(self, nets: NDArray[np.int32]) -> None:
        for net in nets.tolist():
            delay = self.delays[net]
            if delay.place not in self._told:
                self._told.add(delay.place)
                span = self.wiring.span(delay.place, len(delay.name))
                self.wiring.collector.tell("N169", span, net=delay.name)

    def with_wires(self, columns: Block) -> Block:
        """Add the instance before each delayed net, at the place of its declaration."""
        merged = Instances()
        merged.add_block(columns)
        for net, before in self.before.items():
            delay = self.delays[net]
            operator = THREE_STATE_NET if net in self.lets_go else NET
            kind = self.desk.operator(operator, 1, delay.delay)
            merged.add(kind, delay.place, -1, [net, before])
        return merged.columns()


def _floating(kind: Kind, start: NDArray[np.int64], pins: NDArray[np.int32]) -> NDArray[np.bool_]:
    """Tell which instances of a kind may let go of their output: three-state ones, and those fed with a z."""
    if kind.three_state:
        return np.ones(len(start), np.bool_)
    if kind.group != "operator":
        return np.zeros(len(start), np.bool_)
    fed: NDArray[np.bool_] = (pins[start[:, None] + np.arange(len(kind.pins))] == FLOATING).any(axis=1)
    return fed
