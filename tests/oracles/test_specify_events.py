"""Cells with module paths against an event simulation of body and paths: the slow, obvious twin.

A random cell has gates, some with a delay, and paths, some with a condition. For each pair of input vectors
the body is simulated with transport delays, all inputs changing at 0; then each move of the output is held
back until the delay of a module path after the change of the input that it comes from (IEEE 1364-2005 clauses
14.3.3 and 14.4: of those paths whose condition holds, the smallest; the body's own time if that is larger).
No move may come later than the cell's latest hop from that edge says, nor before the earliest. Inputs that
change at the same time are taken one after another, and gates without delay in the order of the signal.
"""

from __future__ import annotations

import random
from collections.abc import Callable
from heapq import heapify, heappop, heappush
from itertools import product
from typing import NamedTuple

import pytest

import tardigate

INPUTS = "abcd"
EDGES = ("rise", "fall")

FUNCTIONS: dict[str, Callable[[list[int]], int]] = {
    "and": lambda v: min(v),
    "or": lambda v: max(v),
    "nand": lambda v: 1 - min(v),
    "nor": lambda v: 1 - max(v),
    "xor": lambda v: sum(v) & 1,
    "xnor": lambda v: 1 - (sum(v) & 1),
}


class Gate(NamedTuple):
    """A gate; `delay` is None where none is written."""

    word: str
    output: str
    inputs: list[str]
    delay: tuple[int, int] | None


class ModulePath(NamedTuple):
    """A path to the output; `condition` is an input and its value, `ifnone` its complement."""

    tail: str
    condition: tuple[str, int] | None
    ifnone: bool
    values: tuple[int, int]

    def holds(self, vector: dict[str, int], of_pair: list[ModulePath]) -> bool:
        if self.ifnone:
            return not any(each.holds(vector, []) for each in of_pair if each.condition)
        return self.condition is None or vector[self.condition[0]] == self.condition[1]


class Cell(NamedTuple):
    """The last gate drives `y`."""

    gates: list[Gate]
    paths: list[ModulePath]

    def text(self) -> str:
        gates = [
            f"{gate.word} {'' if gate.delay is None else f'#{gate.delay}'} "
            f"({', '.join([gate.output, *gate.inputs])});"
            for gate in self.gates
        ]
        paths = []
        for path in self.paths:
            state = "ifnone " if path.ifnone else ""
            if path.condition is not None:
                state = f"if ({'' if path.condition[1] else '!'}{path.condition[0]}) "
            paths.append(f"{state}({path.tail} => y) = {path.values};")
        pins = ", ".join(f".{pin}({pin})" for pin in (*INPUTS, "y"))
        ports = f"input {', '.join(INPUTS)}, output y"
        wires = ", ".join(gate.output for gate in self.gates[:-1])
        return "\n".join(
            [
                f"`timescale 1 ns / 1 ns\nmodule board({ports});\ncell_ u ({pins});\nendmodule",
                f"module cell_({ports});\nwire {wires};",
                *gates,
                "specify",
                *paths,
                "endspecify\nendmodule",
            ]
        )


def random_cell(rng: random.Random, delays: str) -> Cell:
    """Return a cell; `delays`: `none` in the body, `some` gates, or `all` (then a path may be left out)."""
    gates: list[Gate] = []
    for place in range(count := rng.randint(2, 5)):
        known = [*INPUTS, *(gate.output for gate in gates)]
        inputs = rng.sample(known[-5:], rng.choice((2, 2, 3)))
        written = delays == "all" or (delays == "some" and rng.random() < 0.5)
        delay = (rng.randint(0, 9), rng.randint(0, 9)) if written else None
        gates.append(
            Gate(rng.choice([*FUNCTIONS]), "y" if place == count - 1 else f"n{place}", inputs, delay)
        )
    paths = []
    for tail in INPUTS:
        form = rng.choice(("plain", "both", "ifnone", *(("none", "if") if delays == "all" else ())))
        other = rng.choice(INPUTS)
        values = [(rng.randint(0, 12), rng.randint(0, 12)) for _ in range(2)]
        if form == "plain":
            paths.append(ModulePath(tail, None, False, values[0]))
        elif form != "none":
            paths.append(ModulePath(tail, (other, 1), False, values[0]))
        if form == "both":
            paths.append(ModulePath(tail, (other, 0), False, values[1]))
        elif form == "ifnone":
            paths.append(ModulePath(tail, None, True, values[1]))
    return Cell(gates, paths)


class Move(NamedTuple):
    """A move of `y` inside the body: to a value, because of a change of a pin, the pins being so."""

    time: int
    value: int
    cause: str
    pins: dict[str, int]


def body_moves(cell: Cell, first: dict[str, int], second: dict[str, int]) -> list[Move]:
    """Return the moves of `y`, inputs changing from `first` to `second` at 0, one after another."""
    values = dict(first)
    for gate in cell.gates:
        values[gate.output] = FUNCTIONS[gate.word]([values[net] for net in gate.inputs])
    aimed = {gate.output: values[gate.output] for gate in cell.gates}
    queue: list[tuple[int, int, str, int, str]] = []
    for place, pin in enumerate(INPUTS):
        if first[pin] != second[pin]:
            heappush(queue, (0, place, pin, second[pin], pin))
    moves: list[Move] = []
    number = len(INPUTS)
    while queue:
        time, _, net, value, cause = heappop(queue)
        values[net] = value
        changed = {net}
        for gate in cell.gates:
            made = FUNCTIONS[gate.word]([values[each] for each in gate.inputs])
            if changed.isdisjoint(gate.inputs) or made == aimed[gate.output]:
                continue
            aimed[gate.output] = made
            at = time + (0 if gate.delay is None else gate.delay[0 if made else 1])
            queue = [each for each in queue if each[2] != gate.output or each[0] < at]
            heapify(queue)
            if at > time:
                number += 1
                heappush(queue, (at, number, gate.output, made, cause))
            elif values[gate.output] != made:
                values[gate.output] = made
                changed.add(gate.output)
        if "y" in changed:
            moves.append(Move(time, values["y"], cause, {pin: values[pin] for pin in INPUTS}))
    return moves


def hops_of(text: str) -> dict[tuple[str, str, str], list[float]]:
    """Return the delays of the cell's hops by pin, edge and the output's edge, in ns."""
    found: dict[tuple[str, str, str], list[float]] = {}
    for (_, edge_in), (_, edge_out), hop in tardigate.read_text(text).networkx().edges(data=True):
        found.setdefault((hop["from_pin"], edge_in, edge_out), []).append(hop["delay_max_ns"])
    return found


@pytest.mark.parametrize("delays", ["none", "some", "all"])
@pytest.mark.parametrize("seed", range(25))
def test_no_move_later_or_earlier_than_the_hops_say(seed: int, delays: str) -> None:
    rng = random.Random(f"{delays} {seed}")
    cell = random_cell(rng, delays)
    hops = hops_of(cell.text())
    of_tail = {tail: [path for path in cell.paths if path.tail == tail] for tail in INPUTS}
    vectors = [dict(zip(INPUTS, bits, strict=True)) for bits in product((0, 1), repeat=len(INPUTS))]
    for first, second in product(vectors, repeat=2):
        for move in body_moves(cell, first, second):
            paths = of_tail[move.cause]
            outer = [path.values[1 - move.value] for path in paths if path.holds(move.pins, paths)]
            at = max([move.time, min(outer)] if outer else [move.time])
            allowed = hops[move.cause, EDGES[first[move.cause]], EDGES[1 - move.value]]
            assert min(allowed) <= at <= max(allowed), (cell.text(), first, second, move, allowed)
