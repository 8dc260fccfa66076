"""What a part's body computes: the node of each net, function and enable of each output.

Takes a body, gives nodes of one network. A net that several outputs drive, that hangs in a loop of gates or
on something unknown has no node (`UNKNOWN`): nothing is guessed. Iterative. Does not look at delays.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from tardigate.netlist.body import Body, Inner
from tardigate.netlist.flat import FLOATING, OPEN, PULLS
from tardigate.netlist.gate_nodes import Maker
from tardigate.parts.function import Network
from tardigate.parts.gates import THREE_STATE, operator_of
from tardigate.parts.kind import Edge, Kind, Way
from tardigate.parts.model import Part, Pin, Place, Register
from tardigate.parts.register_kind import REGISTER

UNKNOWN = -1


class Driver(NamedTuple):
    """An output pin of an instance."""

    instance: int
    pin: int


class Drive(NamedTuple):
    """What drives an output: nodes of its value and of what makes it drive (-1: always)."""

    value: int
    enable: int = -1


class Functions:
    """The nodes of one body's nets; bits are those of the part: ports, then `states`."""

    def __init__(self, body: Body, network: Network, follows: dict[int, int], place: Place) -> None:
        """Begin; `follows`: nets that only a delay tells from another net (15.5.1)."""
        self.body, self.flat, self.network, self.place = body, body.flat, network, place
        self.maker = Maker(network)
        self.follows = follows
        self._neither = (self.maker.free(), self.maker.free())
        self.drivers: dict[int, list[Driver]] = {}
        self.states: dict[Driver, int] = {}
        self.lost: frozenset[int] = frozenset()
        self._cells: dict[int, Inner] = dict(body.cells)
        self._kinds: list[int] = self.flat.inst_kind.tolist()
        self._starts = self.flat.pin_start.tolist()
        self._nets = self.flat.pin_net.tolist()
        self._inputs = {
            port.net: bit
            for bit, port in reversed(list(enumerate(self.flat.ports)))
            if port.way != Way.OUTPUT
        }
        for inst, kind in enumerate(self._kinds):
            for pin, way in enumerate(self.flat.kinds[kind].ways.tolist()):
                net = self._nets[self._starts[inst] + pin]
                if way != Way.INPUT and net != OPEN:
                    self.drivers.setdefault(net, []).append(Driver(inst, pin))
            self._number_states(inst)
        self.forget()

    def _number_states(self, inst: int) -> None:
        inner = self.inner(inst)
        for register in inner.part.registers if inner else ():
            for bit in register.stores:
                self.states[Driver(inst, bit)] = len(self.flat.ports) + len(self.states)

    def forget(self) -> None:
        """Forget the nodes: `lost` has changed, the instances whose registers cannot be told."""
        constants = (*self.maker.constants, *self._neither)
        self._nodes = {UNKNOWN: UNKNOWN} | dict(enumerate(constants))

    # Instances

    def kind(self, inst: int) -> Kind:
        """Return an instance's kind."""
        kind: Kind = self.flat.kinds[self._kinds[inst]]
        return kind

    def inner(self, inst: int) -> Inner | None:
        """Return what an instance does, where that is not in the name of its kind."""
        number = self._kinds[inst]
        if number not in self._cells and self.flat.kinds[number].name == REGISTER:
            self._cells[number] = Inner(register_part(self.flat.kinds[number], self.place))
        return self._cells.get(number)

    def net(self, inst: int, pin: int) -> int:
        """Return the net of a pin; `FLOATING` for an open one."""
        net = self._nets[self._starts[inst] + pin]
        return FLOATING if net == OPEN else net

    def _input_nets(self, inst: int) -> list[int]:
        ways = self.kind(inst).ways.tolist()
        return [self.net(inst, pin) for pin, way in enumerate(ways) if way == Way.INPUT]

    def _real_drivers(self, net: int) -> list[Driver]:
        """Return a net's drivers without pulls, which yield to any other (clause 7.8)."""
        some = self.drivers.get(net, [])
        return [d for d in some if self.kind(d.instance).name not in PULLS] or some

    # Nets

    def node(self, net: int) -> int:
        """Return the node of a net, or UNKNOWN."""
        work, on_way = [(net, False)], set[int]()
        nodes = self._nodes
        while work:
            at, ready = work.pop()
            if ready:
                on_way.discard(at)
                if at not in nodes:
                    nodes[at] = self._value(at)
            elif at in on_way:
                nodes[at] = UNKNOWN  # a loop
            elif at not in nodes:
                on_way.add(at)
                work.append((at, True))
                work += [(below, False) for below in self._below(at) if below not in nodes]
        return nodes[net]

    def _below(self, net: int) -> list[int]:
        """Return the nets that a net's value comes from."""
        if net in self._inputs:
            return []
        drivers = self._real_drivers(net)
        if not drivers:
            return [self.follows[net]] if net in self.follows else []
        if len(drivers) > 1:
            return []
        (driver,) = drivers
        inner = self.inner(driver.instance)
        if inner is None:
            return self._input_nets(driver.instance)
        part = inner.part
        roots = (part.functions.get(driver.pin, -1), part.enables.get(driver.pin, -1))
        return [net for root in roots if root >= 0 for net in self.read(inner, driver.instance, root)]

    def read(self, inner: Inner, inst: int, root: int) -> list[int]:
        """Return the nets that a node of an inner part reads."""
        bits = sorted(inner.part.network.support(root))
        pins = range(inner.part.pin_bits)
        return [self.net(inst, bit) for bit in bits if bit in pins and Driver(inst, bit) not in self.states]

    def _value(self, net: int) -> int:
        if net in self._inputs:
            return self.network.add("bit", self._inputs[net])
        drivers = self._real_drivers(net)
        if not drivers:
            if net in self.follows:
                return self._nodes[self.follows[net]]
            return UNKNOWN if self.body.opaque else self.maker.free()
        drive = self._driven(drivers[0]) if len(drivers) == 1 else None
        return UNKNOWN if drive is None or drive.enable >= 0 else drive.value

    def _driven(self, driver: Driver) -> Drive | None:
        """Return what a driver puts on its net, None when it cannot be told; its inputs have their nodes."""
        inst = driver.instance
        kind, inner = self.kind(inst), self.inner(inst)
        if inner is not None:
            return self._inner_drive(inner, driver)
        if kind.name in PULLS:
            return Drive(self.maker.constants[kind.name == "pullup"])
        nets = self._input_nets(inst)
        inputs = [self.node(net) for net in nets]
        if kind.name == "assign ?:" and FLOATING in nets[-2:]:
            return self._choice_drive(nets, inputs)
        if UNKNOWN in inputs:
            return None
        if kind.group == "gate":
            value = self.maker.gate(kind.name, inputs)
            enable = self.maker.enable(kind.name, inputs[1]) if kind.name in THREE_STATE else -1
        else:
            value, enable = None, -1
            if kind.group == "operator":
                value = self.maker.operator(operator_of(kind), inputs)
        return None if value is None else Drive(value, enable)

    def _choice_drive(self, nets: list[int], inputs: list[int]) -> Drive | None:
        """Return what `enable ? a : 1'bz` drives."""
        yes, no = nets[-2] != FLOATING, nets[-1] != FLOATING
        if UNKNOWN in inputs[:-2] or yes == no:
            return None
        condition = self.maker.joined("or", inputs[:-2])
        value = inputs[-2] if yes else inputs[-1]
        return (
            None if value == UNKNOWN else Drive(value, condition if yes else self.maker.inverted(condition))
        )

    def _inner_drive(self, inner: Inner, driver: Driver) -> Drive | None:
        inst, bit = driver
        if driver in self.states:
            value = UNKNOWN if inst in self.lost else self.network.add("bit", self.states[driver])
        else:
            value = self.embedded(inner, inst, inner.part.functions.get(bit, -1))
        enable = inner.part.enables.get(bit, -1)
        made = self.embedded(inner, inst, enable) if enable >= 0 else -1
        return None if value == UNKNOWN or (enable >= 0 and made == UNKNOWN) else Drive(value, made)

    def embedded(self, inner: Inner, inst: int, root: int) -> int:
        """Return a node of an inner part's network as one of this network, or UNKNOWN."""
        if root < 0:
            return UNKNOWN
        made: dict[int, int] = {-1: UNKNOWN}
        network = inner.part.network
        for number in network.cone(root):
            form, a, b, c = network.nodes[number]
            if form == "bit":
                made[number] = self._inner_bit(inner, inst, a)
            elif form == "const":
                made[number] = self.maker.constants[a]
            elif UNKNOWN in [made[operand] for operand in (a, b, c) if operand >= 0]:
                made[number] = UNKNOWN
            elif form == "not":
                made[number] = self.maker.inverted(made[a])
            elif form == "mux":
                made[number] = self.maker.mux(made[a], made[b], made[c])
            else:
                made[number] = self.maker.pair(form, made[a], made[b])
        return made[root]

    def _inner_bit(self, inner: Inner, inst: int, bit: int) -> int:
        if bit < 0:
            known = inner.values.get(bit)
            return self.maker.free() if known is None else self.maker.constants[known]
        state = self.states.get(Driver(inst, bit))
        if state is not None:
            return UNKNOWN if inst in self.lost else self.network.add("bit", state)
        return self.node(self.net(inst, bit)) if bit < inner.part.pin_bits else UNKNOWN

    def sources(self, net: int) -> list[int]:
        """Return the nets that a net may come from by any hop but that of a clock, whatever is computed."""
        found = [self.follows[net]] if net in self.follows else []
        for inst, pin in self.drivers.get(net, []):
            kind = self.kind(inst)
            at = np.flatnonzero((kind.hop_to == pin) & ~kind.launches)
            found += [self.net(inst, tail) for tail in kind.hop_from[at].tolist()]
        return found

    # Outputs

    def output(self, bit: int) -> Drive | None:
        """Return what drives a bit of an output port, None when it cannot be told."""
        net = self.flat.ports[bit].net
        drivers = self._real_drivers(net)
        if not drivers:
            node = self.node(net)  # of an input that goes right through, a constant, or nothing
            return None if node == UNKNOWN else Drive(node)
        drives = [self._driven(driver) for driver in drivers]
        known = [drive for drive in drives if drive is not None]
        if len(known) < len(drives):
            return None
        if len(known) == 1:
            return known[0]
        if any(drive.enable < 0 for drive in known):
            return None
        value = known[-1].value
        for drive in known[-2::-1]:
            value = self.maker.mux(drive.enable, drive.value, value)
        return Drive(value, self.maker.joined("or", [drive.enable for drive in known]))

    def is_driven(self, bit: int) -> bool:
        """Tell whether something in the body drives a port's bit."""
        return self.flat.ports[bit].net in self.drivers

    def lets_go(self, bit: int) -> bool:
        """Tell whether a driver of a port's bit can let go of it."""
        return any(self.kind(d.instance).three_state for d in self.drivers.get(self.flat.ports[bit].net, []))


def register_part(kind: Kind, place: Place) -> Part:
    """Return a textbook register (`parts.register_kind`) as a part.

    What it stores depends on each of its data pins, either way: more its kind does not say.
    """
    maker = Maker(network := Network())
    pins = tuple(Pin(name, Way(int(way))) for name, way in zip(kind.pins, kind.ways, strict=True))
    edge = Edge.RISE
    forced: dict[Edge, list[int]] = {Edge.RISE: [], Edge.FALL: []}
    controls = {1}
    hops = zip(kind.hop_from.tolist(), kind.from_edge.tolist(), kind.to_edge.tolist(), strict=True)
    for tail, tail_edge, head_edge in hops:
        if tail == 1:
            edge = Edge(tail_edge)
        else:
            node = network.add("bit", tail)
            forced[Edge(head_edge)].append(maker.inverted(node) if tail_edge == Edge.FALL else node)
            controls.add(tail)
    data = [network.add("bit", pin) for pin in range(2, len(pins)) if pin not in controls]
    stored = maker.joined("xor", [maker.constants[0], *data])
    clear, force = (maker.joined("or", forced[to]) if forced[to] else -1 for to in (Edge.FALL, Edge.RISE))
    register = Register(False, edge, 1, {0: stored}, clear, force, place)
    return Part(
        kind.name, "", "", 1, pins, (), (), network, {}, {}, (register,), (), (), (), place, kind.pins
    )
