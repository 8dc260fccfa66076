"""Random circuits: the one home of random input to the oracles.

Each strategy gives flat designs without loops, small enough for a slow twin to list everything.
"""

from __future__ import annotations

from collections.abc import Callable
from math import nan

import pytest
from hypothesis import strategies as st

from tardigate.netlist.flat import Flat
from tardigate.parts.kind import Kind

SENSES = ("+", "-", "x", "rr", "fr")
FEW_FS = st.integers(0, 6)


@st.composite
def triples(draw: st.DrawFn) -> tuple[float, float, float]:
    low, middle, high = sorted(draw(st.tuples(FEW_FS, FEW_FS, FEW_FS)))
    return (nan if draw(st.booleans()) else low, middle, high)


@st.composite
def gates(draw: st.DrawFn, make_kind: Callable[..., Kind]) -> Kind:
    """Draw a kind with one to three inputs and one or two outputs; an input may reach only some of them."""
    inputs, outputs = "ABC"[: draw(st.integers(1, 3))], "YZ"[: draw(st.integers(1, 2))]
    hops = [
        (pin_in, draw(st.sampled_from(SENSES)), pin_out, draw(triples()))
        for pin_in in inputs
        for pin_out in outputs
        if draw(st.integers(0, 4))
    ]
    return make_kind("gate", f"{' '.join(inputs)} > {' '.join(outputs)}", *hops)


@st.composite
def registers(draw: st.DrawFn, make_kind: Callable[..., Kind]) -> Kind:
    edge = draw(st.sampled_from("rf"))
    hops = [("C", edge + to, "Q", draw(triples())) for to in "rf"]
    reset = [("R", "ff", "Q", draw(triples()))] if draw(st.booleans()) else []
    return make_kind("register", "D C R > Q", *hops, *reset, launches="C", sinks="D R")


@st.composite
def circuits(
    draw: st.DrawFn, make_kind: Callable[..., Kind], make_flat: Callable[..., Flat], most: int
) -> Flat:
    """Draw a design of up to `most` layers of up to three gates, and up to two registers.

    A gate takes nets of earlier layers and drives nets of its own layer, so there is no loop, but nets with
    several drivers, without any, parallel hops, open and constant pins. The order of the parts in the file
    says nothing about their order in the circuit.
    """
    kinds = draw(st.lists(gates(make_kind), min_size=1, max_size=3))
    register = draw(registers(make_kind))
    held = [f"q{number}" for number in range(draw(st.integers(0, 2)))]
    known = ["a", "b", *held]
    parts: list[tuple[str, Kind, str]] = []
    for layer in range(draw(st.integers(0, most))):
        inputs = st.sampled_from([*known * 3, "0", "1", "."])
        outputs = st.sampled_from([f"n{layer}_0", f"n{layer}_1", "."])
        for number in range(draw(st.integers(1, 3))):
            kind = draw(st.sampled_from(kinds))
            pins = [draw(outputs if way else inputs) for way in kind.ways]
            parts.append((f"u{layer}_{number}", kind, " ".join(pins)))
        known += [f"n{layer}_0", f"n{layer}_1"]
    any_net = st.sampled_from([*known, "0", "."])
    resets = st.sampled_from("ab0.")  # a reset from the register's own output would be a loop
    parts += [(f"r_{q}", register, f"{draw(any_net)} {draw(any_net)} {draw(resets)} {q}") for q in held]
    ends = draw(st.lists(st.sampled_from(known), max_size=4, unique=True))
    both = [name for name in ends[:1] if name not in "ab"]
    only_out = [name for name in ends if name not in both]
    return make_flat(f"a b > {' '.join(only_out)} < {' '.join(both)}", *draw(st.permutations(parts)))


@pytest.fixture(scope="session")
def random_circuit(
    make_kind: Callable[..., Kind], make_flat: Callable[..., Flat]
) -> Callable[[int], st.SearchStrategy[Flat]]:
    """`random_circuit(4)`: designs of up to four layers."""
    return lambda most: circuits(make_kind, make_flat, most)
