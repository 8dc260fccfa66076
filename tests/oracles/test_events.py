"""Exhaustive two-vector event simulation: no net moves after it settles nor before it stirs.

Every pair of input vectors is simulated at once: a value is one Python integer with a bit for each pair.
All inputs change from the first vector to the second at 0. The model is transport delay with a delay a pin
and edge, in the semantics of IEEE 1076-2008 clause 10.5.2.2: a pin's change that turns the gate's function
books the new output after that pin's delay for that edge, and whatever was booked for the same time or later
falls away. So each move of an output follows some move of an input by one hop, which is all that the sweeps
claim, and the last booking wins, so that the circuit ends in the right state. Pins that change at the same
time are taken one after another: glitches of no width are booked too. Real gates swallow short pulses; that
takes moves away and adds none.
"""

from __future__ import annotations

import random
from collections.abc import Callable
from heapq import heappop, heappush
from itertools import product
from typing import NamedTuple

import pytest

from tardigate.analysis.sweep import sweep
from tardigate.graph.build import build
from tardigate.netlist.flat import Flat
from tardigate.parts.kind import Kind

MakeKind = Callable[..., Kind]
MakeFlat = Callable[..., Flat]
Function = Callable[..., int]
RISE, FALL = 0, 1

FUNCTIONS: tuple[tuple[int, Function], ...] = (
    (1, lambda a: a),
    (1, lambda a: ~a),
    (2, lambda a, b: a & b),
    (2, lambda a, b: ~(a | b)),
    (2, lambda a, b: ~(a & b)),
    (2, lambda a, b: a | b),
    (2, lambda a, b: a ^ b),
    (2, lambda a, b: ~(a ^ b)),
    (3, lambda a, b, c: ~(a & b & c)),
    (3, lambda a, b, s: (a & ~s) | (b & s)),
    (3, lambda a, b, c: ~((a & b) | c)),
)


class Gate(NamedTuple):
    """A gate: its function, the nets of its inputs and its output, and its kind, in topological order."""

    function: Function
    inputs: tuple[int, ...]
    output: int
    kind: Kind


class Circuit(NamedTuple):
    """Nets 0 to `inputs` - 1 are the inputs, each gate adds one."""

    inputs: int
    gates: list[Gate]


def senses(count: int, function: Function) -> list[str]:
    """Return the sense of each input, from the truth table."""
    found = []
    for pin in range(count):
        turns = set()
        for values in product((0, 1), repeat=count):
            low, high = (function(*values[:pin], value, *values[pin + 1 :]) & 1 for value in (0, 1))
            turns |= {"+" if low < high else "-"} if low != high else set()
        found.append(turns.pop() if len(turns) == 1 else "x")
    return found


def add_gate(
    circuit: Circuit, rng: random.Random, make_kind: MakeKind, choice: int, inputs: list[int]
) -> int:
    count, function = FUNCTIONS[choice]
    pins = "ABC"[:count]
    hops = []
    for pin, sense in zip(pins, senses(count, function), strict=True):
        for edges in {"+": ("rr", "ff"), "-": ("rf", "fr"), "x": ("rr", "rf", "fr", "ff")}[sense]:
            delay = tuple(sorted(rng.randint(0, 7) for _ in range(3)))
            hops.append((pin, edges, "Y", delay))
    output = circuit.inputs + len(circuit.gates)
    kind = make_kind(f"gate{output}", f"{' '.join(pins)} > Y", *hops)
    circuit.gates.append(Gate(function, tuple(inputs), output, kind))
    return output


def random_circuit(rng: random.Random, make_kind: MakeKind, inputs: int, gates: int) -> Circuit:
    circuit = Circuit(inputs, [])
    for _ in range(gates):
        choice = rng.randrange(len(FUNCTIONS))
        known = range(inputs + len(circuit.gates))
        weights = [1 + 2 * (net >= inputs) for net in known]
        add_gate(circuit, rng, make_kind, choice, rng.choices(known, weights, k=FUNCTIONS[choice][0]))
    return circuit


def random_tree(rng: random.Random, make_kind: MakeKind, inputs: int) -> Circuit:
    """Return a circuit in which each net goes to one pin: every trail can be the one that decides."""
    circuit = Circuit(inputs, [])
    free = list(range(inputs))
    while len(free) > 1:
        choice = rng.choice([i for i, (count, _) in enumerate(FUNCTIONS) if count <= len(free)])
        rng.shuffle(free)
        taken = [free.pop() for _ in range(FUNCTIONS[choice][0])]
        free.append(add_gate(circuit, rng, make_kind, choice, taken))
    return circuit


def as_flat(circuit: Circuit, make_flat: MakeFlat) -> Flat:
    """Return the flat design; net n of the circuit is net n + 4 there."""
    ports = " ".join(f"n{net}" for net in range(circuit.inputs))
    parts = [
        (f"u{gate.output}", gate.kind, " ".join(f"n{net}" for net in (*gate.inputs, gate.output)))
        for gate in circuit.gates
    ]
    outputs = " ".join(f"n{gate.output}" for gate in circuit.gates)
    return make_flat(f"{ports} > {outputs}", *reversed(parts))


class Simulation:
    """All pairs of vectors at once, with `delays[gate][pin, edge in, edge out]`.

    `first` and `last` are the times of the first and last move of each net and edge in any pair.
    """

    def __init__(self, circuit: Circuit, delays: list[dict[tuple[int, int, int], int]]) -> None:
        self.circuit, self.delays = circuit, delays
        self.all = (1 << (1 << 2 * circuit.inputs)) - 1
        self.net = [self.column(number) for number in range(circuit.inputs)]
        for gate in circuit.gates:
            self.net.append(gate.function(*(self.net[net] for net in gate.inputs)) & self.all)
        self.function = self.net[circuit.inputs :]
        self.pins = [[self.net[net] for net in gate.inputs] for gate in circuit.gates]
        self.booked: list[dict[int, tuple[int, int]]] = [{} for _ in circuit.gates]
        self.agenda: list[tuple[int, int]] = []
        self.first: dict[tuple[int, int], int] = {}
        self.last: dict[tuple[int, int], int] = {}

    def column(self, number: int) -> int:
        """Return one input's value in each pair: a column of the truth table of both vectors."""
        half = 1 << number
        value, width = ((1 << half) - 1) << half, 2 * half
        while width < 1 << 2 * self.circuit.inputs:
            value, width = value | value << width, 2 * width
        return value

    def run(self) -> None:
        for net in range(self.circuit.inputs):
            self.move(net, self.net[net] ^ self.column(self.circuit.inputs + net), 0)
        while self.agenda:
            now, number = heappop(self.agenda)
            pairs, value = self.booked[number].pop(now)
            output = self.circuit.gates[number].output
            self.move(output, pairs & (value ^ self.net[output]), now)

    def move(self, net: int, pairs: int, now: int) -> None:
        """Turn a net over in some pairs."""
        if not pairs:
            return
        self.net[net] ^= pairs
        for edge, turned in ((RISE, pairs & self.net[net]), (FALL, pairs & ~self.net[net])):
            if turned:
                self.first.setdefault((net, edge), now)
                self.last[net, edge] = now
        for number, gate in enumerate(self.circuit.gates):
            for pin, source in enumerate(gate.inputs):
                if source == net:
                    self.turn_pin(number, pin, pairs, now)

    def turn_pin(self, number: int, pin: int, pairs: int, now: int) -> None:
        pins = self.pins[number]
        pins[pin] ^= pairs
        after = self.circuit.gates[number].function(*pins) & self.all
        turned = after ^ self.function[number]
        self.function[number] = after
        for edge_in, moved in ((RISE, turned & pins[pin]), (FALL, turned & ~pins[pin])):
            for edge_out, booked in ((RISE, moved & after), (FALL, moved & ~after)):
                if booked:
                    when = now + self.delays[number][pin, edge_in, edge_out]
                    self.book(number, when, booked, edge_out == RISE)

    def book(self, number: int, when: int, pairs: int, high: bool) -> None:
        booked = self.booked[number]
        for later in booked:
            if later >= when:
                booked[later] = (booked[later][0] & ~pairs, booked[later][1])
        if when not in booked:
            heappush(self.agenda, (when, number))
        kept, value = booked.get(when, (0, 0))
        booked[when] = (kept | pairs, value | pairs if high else value & ~pairs)

    def final_state(self) -> list[int]:
        """Return what each net must end at, from the second vector alone."""
        net = [self.column(self.circuit.inputs + number) for number in range(self.circuit.inputs)]
        for gate in self.circuit.gates:
            net.append(gate.function(*(net[source] for source in gate.inputs)) & self.all)
        return net


def simulate(circuit: Circuit, choose: Callable[[float, float], float]) -> Simulation:
    """Simulate with a delay for each hop of each gate, chosen between its min and max."""
    delays = [
        {
            (int(gate.kind.hop_from[hop]), int(gate.kind.from_edge[hop]), int(gate.kind.to_edge[hop])): int(
                choose(gate.kind.delays[hop, 0], gate.kind.delays[hop, 2])
            )
            for hop in range(gate.kind.hops)
        }
        for gate in circuit.gates
    ]
    simulation = Simulation(circuit, delays)
    simulation.run()
    assert simulation.net == simulation.final_state()
    return simulation


SIZES = [(inputs, gates) for inputs in range(1, 11) for gates in (4, 8, 12, 16, 20, 24)]


@pytest.mark.parametrize(("seed", "inputs", "gates"), [(i, *size) for i, size in enumerate(SIZES)])
def test_no_net_moves_after_it_settles_nor_before_it_stirs(
    make_kind: MakeKind, make_flat: MakeFlat, seed: int, inputs: int, gates: int
) -> None:
    rng = random.Random(seed)
    circuit = random_circuit(rng, make_kind, inputs, gates)
    times = sweep(build(as_flat(circuit, make_flat)))
    simulation = simulate(circuit, lambda low, high: rng.randint(int(low), int(high)))
    assert any(net >= inputs for net, _ in simulation.first), "nothing moved"
    for (net, edge), moment in simulation.last.items():
        assert moment <= times.settles[2 * (net + 4) + edge]
    for (net, edge), moment in simulation.first.items():
        assert moment >= times.stirs[2 * (net + 4) + edge]


@pytest.mark.parametrize("seed", range(12))
def test_without_fan_out_each_bound_is_reached(make_kind: MakeKind, make_flat: MakeFlat, seed: int) -> None:
    rng = random.Random(seed)
    circuit = random_tree(rng, make_kind, 2 + seed % 6)
    times = sweep(build(as_flat(circuit, make_flat)))
    slow, fast = simulate(circuit, lambda _, high: high), simulate(circuit, lambda low, _: low)
    nets = circuit.inputs + len(circuit.gates)
    vertices = [(net, edge) for net in range(nets) for edge in (RISE, FALL)]
    assert [slow.last[vertex] for vertex in vertices] == times.settles[8 : 8 + 2 * nets].tolist()
    assert [fast.first[vertex] for vertex in vertices] == times.stirs[8 : 8 + 2 * nets].tolist()
