"""Gates and operators: polarity against the truth tables of IEEE 1364-2005, delays against clause 7.14."""

import math
from collections.abc import Callable
from functools import reduce
from itertools import product

import pytest

from tardigate.parts.dump import dump_kind
from tardigate.parts.gates import GATES, OPERATORS, THREE_STATE
from tardigate.parts.kind import Kind, Origin
from tardigate.parts.library import Library
from tardigate.parts.source_delay import SourceDelay

EMPTY = Library([], [])
NAN = math.nan


def parity(bits: tuple[int, ...]) -> int:
    return reduce(lambda a, b: a ^ b, bits)


TRUTH: dict[str, Callable[[tuple[int, ...]], int]] = {
    "and": min, "nand": lambda v: 1 - min(v), "or": max, "nor": lambda v: 1 - max(v), "xor": parity,
    "xnor": lambda v: 1 - parity(v), "buf": min, "not": lambda v: 1 - v[0],
    "~": lambda v: 1 - v[0], "&": min, "|": max, "^": parity, "~^": lambda v: 1 - parity(v),
    "reduce &": min, "reduce |": max, "reduce ^": parity, "reduce ~&": lambda v: 1 - min(v),
    "reduce ~|": lambda v: 1 - max(v), "reduce ~^": lambda v: 1 - parity(v), "!": lambda v: 1 - max(v),
    "&&": min, "||": max, "==": lambda v: int(v[: len(v) // 2] == v[len(v) // 2 :]),
    "!=": lambda v: int(v[: len(v) // 2] != v[len(v) // 2 :]),
    "?:": lambda v: v[-2] if max(v[:-2]) else v[-1], "copy": min,
}  # fmt: skip
WIDTHS = {"buf": (1,), "not": (1,), "~": (1,), "copy": (1,), "==": (2, 4), "!=": (2, 4), "?:": (3, 4)}


def moves(truth: Callable[[tuple[int, ...]], int], inputs: int) -> set[tuple[int, int, int]]:
    """Return (input, its edge, edge of the output), 0 for a rise, over all states."""
    found = set()
    for state in product((0, 1), repeat=inputs):
        for i in range(inputs):
            after = (*state[:i], 1 - state[i], *state[i + 1 :])
            if truth(state) != truth(after):
                found.add((i, state[i], truth(state)))
    return found


def hops(kind: Kind) -> set[tuple[int, int, int]]:
    """Return the hops to the first output: input counted from 0, edges."""
    first = sum(1 for way in kind.ways if way == 1)
    rows = zip(kind.hop_from, kind.hop_to, kind.from_edge, kind.to_edge, strict=True)
    return {(int(tail) - first, int(a), int(b)) for tail, head, a, b in rows if head == 0}


@pytest.mark.parametrize(
    ("name", "inputs"), [(name, n) for name in GATES if name in TRUTH for n in WIDTHS.get(name, (1, 2, 3, 5))]
)
def test_a_gate_passes_just_what_its_truth_table_does(name: str, inputs: int) -> None:
    assert hops(EMPTY.gate_kind(name, inputs)) == moves(TRUTH[name], inputs)


@pytest.mark.parametrize(
    ("name", "inputs"), [(name, n) for name in OPERATORS for n in WIDTHS.get(name, (1, 2, 3, 5))]
)
def test_an_operator_passes_just_what_its_truth_table_does(name: str, inputs: int) -> None:
    assert hops(EMPTY.operator_kind(name, inputs)) == moves(TRUTH[name], inputs)


@pytest.mark.parametrize("name", THREE_STATE)
def test_a_three_state_gate_takes_three_delays(name: str) -> None:
    rise, fall, off = (1e6, 2e6, 3e6), (4e6, 5e6, 6e6), (7e6, 8e6, 9e6)
    kind = EMPTY.gate_kind(name, 2, 1, SourceDelay((rise, fall, off), "#(1,2,3)"))
    on, not_on = ("rise", "fall") if name.endswith("1") else ("fall", "rise")
    up, down = ("rise", "fall") if name.startswith("buf") else ("fall", "rise")
    assert set(dump_kind(kind).splitlines()) == {
        f"gate {name} SOURCE three-state",
        f"  in {up} -> out rise 1:2:3",
        f"  in {down} -> out fall 4:5:6",
        f"  control {on} -> out rise 1:2:3",
        f"  control {on} -> out fall 4:5:6",
        f"  control {not_on} -> out fall 7:8:9",
        f"  control {not_on} -> out rise 7:8:9",
    }
    assert kind.words == "#(1,2,3)"


def test_of_two_delays_the_turn_off_takes_the_smaller() -> None:
    kind = EMPTY.gate_kind("bufif1", 2, 1, SourceDelay(((1e6, 5e6, NAN), (2e6, 4e6, 6e6))))
    assert "  control fall -> out fall 1:4:-" in dump_kind(kind).splitlines()


def test_one_delay_serves_every_change() -> None:
    kind = EMPTY.gate_kind("notif0", 2, 1, SourceDelay(((1.0, 2.0, 3.0),)))
    assert {tuple(row) for row in kind.delays.tolist()} == {(1.0, 2.0, 3.0)}


def test_several_outputs_of_a_buffer_are_joined_each() -> None:
    kind = EMPTY.gate_kind("not", 1, 3)
    assert kind.pins == ("out1", "out2", "out3", "in")
    assert sorted(zip(kind.hop_from.tolist(), kind.hop_to.tolist(), strict=True)) == [
        (3, 0), (3, 0), (3, 1), (3, 1), (3, 2), (3, 2),
    ]  # fmt: skip


def test_without_a_number_anywhere_hops_stand_and_are_missing() -> None:
    kind = EMPTY.gate_kind("nand", 2)
    assert kind.origin == Origin.MISSING
    assert kind.hops == 4
    assert all(math.isnan(number) for number in kind.delays.ravel())


def test_a_plain_assignment_is_a_wire() -> None:
    kind = EMPTY.operator_kind("copy", 1)
    assert (kind.name, kind.origin, kind.delays.max()) == ("assign", Origin.WIRE, 0.0)


def test_equal_questions_get_the_same_kind() -> None:
    delay = SourceDelay(((NAN, 2.0, 3.0),), "#2")
    again = SourceDelay(((float("nan"), 2.0, 3.0),), "#2")
    assert EMPTY.gate_kind("nand", 2, 1, delay) is EMPTY.gate_kind("nand", 2, 1, again)
    assert EMPTY.operator_kind("&", 2) is EMPTY.operator_kind("&", 2)
    assert EMPTY.gate_kind("nand", 2) is not EMPTY.gate_kind("nand", 3)
