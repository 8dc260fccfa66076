"""The textbook register: an `always` that waits for a clock's edge and only moves nets into regs.

Takes its tree, gives a register for each bit that it moves; what is more than that it refuses (V010). Whether
another `always` reads a reg that is moved by `=` at the same edge, it does not check: clause 11.4.2 leaves
open what such a reader gets.
"""

from __future__ import annotations

from collections.abc import Collection, Mapping
from typing import NamedTuple, Protocol

from tardigate.netlist.delays import Delays
from tardigate.netlist.expression import Expressions
from tardigate.netlist.moves import Level, Moved, Moves, NoRegisterError
from tardigate.netlist.wiring import Wiring
from tardigate.parts.function import EXACT
from tardigate.parts.kind import Edge
from tardigate.parts.register_kind import Control
from tardigate.parts.source_delay import SourceDelay
from tardigate.source.diagnostic import Diagnostic
from tardigate.syntax import tree


class Desk(Protocol):
    """Who decides what becomes of an `always` that is no register."""

    def no_register(self, told: Diagnostic) -> None:
        """Take note of one."""


class RegisterBit(NamedTuple):
    """A register for one bit of a reg, nets by local number.

    `q` is what it drives; it stores at `edge` of `clock`. `data`: the nets on which the stored value depends,
    enables and synchronous resets among them, ascending. `controls`: the asynchronous ones, `control_nets`
    their nets, the one that wins first. `delay`: that of the moves at the clock; `place`: its first move.
    """

    q: int
    clock: int
    edge: Edge
    data: tuple[int, ...]
    control_nets: tuple[int, ...]
    controls: tuple[Control, ...]
    delay: SourceDelay | None
    place: int

    @property
    def pins(self) -> list[int]:
        """The nets in the order of its kind's pins (see `parts.register_kind`)."""
        return [self.q, self.clock, *self.control_nets, *self.data]


class _Event(NamedTuple):
    net: int
    word: str
    name: str

    @property
    def edge(self) -> Edge:
        """What its word says."""
        return Edge.RISE if self.word == "posedge" else Edge.FALL


class _Layer(NamedTuple):
    """An asynchronous branch: while the net is at the level, nothing but `moved` happens."""

    condition: Level
    moved: Moved


def registers_of(
    always: tree.Always, module: str, wiring: Wiring, expressions: Expressions, delays: Delays, desk: Desk
) -> list[RegisterBit]:
    """Return the registers of an `always` in order of their first moves, none after telling what it is."""
    try:
        return _registers(always, wiring, Moves(wiring, expressions, delays))
    except NoRegisterError as error:
        if error.reason:
            span = wiring.span(error.at)
            desk.no_register(Diagnostic.of("V010", span, reason=error.reason, module=module))
        return []


def _registers(always: tree.Always, wiring: Wiring, moves: Moves) -> list[RegisterBit]:
    if always.body is None:
        return []
    events = _events(always, wiring)
    layers, body = _layers(always, events, moves)
    clock = events[0]
    moved = moves.run(body)
    _check_blocking(moves)
    places: dict[int, int] = {}
    for phase in (*(layer.moved for layer in layers), moved):
        for net, place in phase.places.items():
            places[net] = min(place, places.get(net, place))
    order = sorted(places, key=lambda net: (places[net], net))
    bits = [_bit(net, clock, layers, moved, places[net], moves) for net in order]
    return [bit for bit in bits if bit is not None]


def _events(always: tree.Always, wiring: Wiring) -> list[_Event]:
    """Return the events: the clock's and those of asynchronous controls."""
    found: list[_Event] = []
    for event in always.events:
        if not event.edge:
            raise NoRegisterError("it does not wait for edges alone", event.at)
        node = event.expression
        if not isinstance(node, tree.Reference) or node.path[0] in wiring.values:
            raise NoRegisterError("it waits for an edge of what is no net", event.at)
        nets = wiring.bits(node)
        if not nets:
            raise NoRegisterError
        if len(nets) > 1:
            raise NoRegisterError("it waits for an edge of several bits", event.at)
        if any(nets[0] == other.net for other in found):
            raise NoRegisterError("it waits for one net twice", event.at)
        found.append(_Event(nets[0], event.edge, ".".join(node.path)))
    if not found:
        raise NoRegisterError("it waits for no edge", always.at)
    return found


def _layers(
    always: tree.Always, events: list[_Event], moves: Moves
) -> tuple[list[_Layer], tree.Statement | None]:
    """Take the asynchronous branches off the body; of `events` the clock's is left."""
    layers: list[_Layer] = []
    at, rest = always.at, always.body
    while rest is not None and len(events) > 1:
        if isinstance(rest, tree.Begin) and len(rest.statements) == 1:
            rest = rest.statements[0]
            continue
        if not isinstance(rest, tree.If):
            break
        at = rest.condition.at
        chosen = moves.constant(rest.condition)
        if chosen is not None:
            rest = rest.yes if chosen else rest.no
            continue
        layer = _layer(rest, events, moves)
        if layer is None:
            break
        layers.append(layer)
        rest = rest.no
    if len(events) > 1:
        names = " and ".join(f"`{event.name}`" for event in events)
        raise NoRegisterError(f"no `if` asks first which of {names} is active", at)
    return layers, rest


def _layer(statement: tree.If, events: list[_Event], moves: Moves) -> _Layer | None:
    """Take the event that an `if` asks for off the list, and return its branch; None when there is none."""
    condition = moves.level(statement.condition)
    event = next((event for event in events if event.net == condition.net), None)
    if event is None:
        return None
    if (event.edge == Edge.RISE) != (condition.level == 1):
        level = "high" if condition.level else "low"
        raise NoRegisterError(
            f"it waits for the {event.word} of `{event.name}`, then asks whether it is {level}",
            statement.condition.at,
        )
    events.remove(event)
    return _Layer(condition, moves.run(statement.yes, constants=True))


def _check_blocking(moves: Moves) -> None:
    """Refuse `=` where it is not the same as `<=` (clause 9.2.1)."""
    for net, at in moves.blocking.items():
        if net in moves.flowing:
            raise NoRegisterError("it moves one reg by `=` and by `<=`", at)
        if net in moves.read:
            raise NoRegisterError("it reads what it has moved by `=`; write `<=`", moves.read[net])


def _bit(
    net: int, clock: _Event, layers: list[_Layer], moved: Moved, place: int, moves: Moves
) -> RegisterBit | None:
    """Return the register of a bit, None when it only ever keeps what it has."""
    node = moved.nodes.get(net, moves.hold)
    controls: list[tuple[Level, Control]] = []
    for layer in reversed(layers):
        value = layer.moved.nodes.get(net)
        if value is None:  # nothing happens to this bit then: the control is an enable for it
            node = moves.choose(layer.condition, moves.hold, node)
            continue
        sets = moves.network.nodes[value] == ("const", 1, -1, -1)
        control = Control(layer.condition.level, sets, layer.moved.delays.get(net))
        controls.insert(0, (layer.condition, control))
    if node == moves.hold and not controls:
        return None
    forced = tuple(condition.net for condition, _ in controls)
    known = {condition.net: 1 - control.level for condition, control in controls}
    known[clock.net] = int(clock.edge == Edge.RISE)
    data = _support(node, known, moves)
    moves.spend(place, len(data))
    delay = moved.delays[net] if net in moved.delays else controls[0][1].delay if controls else None
    kinds = tuple(control for _, control in controls)
    return RegisterBit(net, clock.net, clock.edge, tuple(data), forced, kinds, delay, place)


def _support(node: int, known: Mapping[int, int], moves: Moves) -> list[int]:
    """Return the nets on which a node depends at the clock's edge, ascending; `known`: what they are then.

    Exact for as many nets as are tabulated; of more, those that it reads.
    """
    form, bit, *_ = moves.network.nodes[node]
    found: Collection[int] = (bit,) if form == "bit" else moves.network.support(node)
    if form != "bit" and len(found) <= EXACT:
        found = moves.network.polarities(node, known)
    return sorted(net for net in found if net >= 0 and net not in known)
