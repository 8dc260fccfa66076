from __future__ import annotations

from collections.abc import Callable
from math import nan

import numpy as np
import pytest

from tardigate.analysis.check import missing_numbers, refuse_missing
from tardigate.analysis.dump import dump_times
from tardigate.analysis.model import GRADES, Grade
from tardigate.analysis.sweep import WIDE, sweep
from tardigate.graph.build import build
from tardigate.netlist.flat import Flat
from tardigate.parts.kind import Kind
from tardigate.source.collector import Collector
from tardigate.source.faults import InputRefusedError

MakeKind = Callable[..., Kind]
MakeFlat = Callable[..., Flat]


@pytest.fixture
def nand(make_kind: MakeKind) -> Kind:
    return make_kind("nand", "A B > Y", ("A", "-", "Y", (10, 20, 30)), ("B", "-", "Y", (1, 2, 3)))


def test_settles_takes_the_longest_and_stirs_the_shortest_way(make_flat: MakeFlat, nand: Kind) -> None:
    graph = build(make_flat("a b > y", ("u1", nand, "a b n"), ("u2", nand, "n b y")))
    assert dump_times(graph, sweep(graph)).splitlines() == [
        "4r stirs 0 settles 0",
        "4f stirs 0 settles 0",
        "5r stirs 0 settles 0",
        "5f stirs 0 settles 0",
        "6r stirs 1 settles 60",
        "6f stirs 1 settles 60",
        "7r stirs 1 settles 30",
        "7f stirs 1 settles 30",
    ]


def test_edges_are_kept_apart(make_kind: MakeKind, make_flat: MakeFlat) -> None:
    slow_rise = make_kind("not", "A > Y", ("A", "fr", "Y", (7, 8, 9)), ("A", "rf", "Y", (1, 2, 3)))
    graph = build(
        make_flat("a > y", ("u1", slow_rise, "a n"), ("u2", slow_rise, "n y"), ("u3", slow_rise, "y z3"))
    )
    times = sweep(graph)
    assert times.settles[[10, 11, 12, 13, 14, 15]].tolist() == [12, 12, 9, 3, 21, 15]
    assert times.stirs[[10, 11, 12, 13, 14, 15]].tolist() == [8, 8, 7, 1, 15, 9]


@pytest.mark.parametrize(
    ("grade", "settles", "stirs"), [("span", 3, 1), ("min", 1, 1), ("typ", 2, 2), ("max", 3, 3)]
)
def test_the_grade_chooses_the_column(
    make_kind: MakeKind, make_flat: MakeFlat, grade: Grade, settles: float, stirs: float
) -> None:
    graph = build(make_flat("a > y", ("u1", make_kind("buf", "A > Y", ("A", "+", "Y", (1, 2, 3))), "a y")))
    times = sweep(graph, grade)
    assert (times.settles[10], times.stirs[10]) == (settles, stirs)


def test_what_no_source_reaches_never_changes(make_flat: MakeFlat, nand: Kind) -> None:
    graph = build(make_flat("a > y", ("u1", nand, "0 1 n"), ("u2", nand, "n p y")))
    times = sweep(graph)
    assert (times.settles[10:] == -np.inf).all()
    assert (times.stirs[10:] == np.inf).all()


def test_an_inout_port_changes_at_zero_whatever_drives_it(make_kind: MakeKind, make_flat: MakeFlat) -> None:
    late = make_kind("buf", "A > Y", ("A", "+", "Y", (5, 6, 7)))
    early = make_kind("sdf", "A > Y", ("A", "+", "Y", (-7, -6, -5)))
    for width in (1, WIDE):
        bits = range(width)
        parts = [(f"u{i}", late, f"a b{i}") for i in bits] + [(f"v{i}", early, f"a c{i}") for i in bits]
        inouts = " ".join(f"b{i} c{i}" for i in bits)
        times = sweep(build(make_flat(f"a > < {inouts}", *parts)))
        late_bits, early_bits = 2 * (5 + 2 * np.arange(width)), 2 * (6 + 2 * np.arange(width))
        assert (times.settles[late_bits] == 7).all()
        assert (times.stirs[late_bits] == 0).all()
        assert (times.settles[early_bits] == 0).all()
        assert (times.stirs[early_bits] == -7).all()


def test_chosen_sources_alone_change(make_flat: MakeFlat, nand: Kind) -> None:
    graph = build(make_flat("a b > y", ("u1", nand, "a b y")))
    times = sweep(graph, sources=np.array([10]))
    assert dump_times(graph, times) == "5r stirs 0 settles 0\n6f stirs 1 settles 3"


@pytest.mark.parametrize("width", [1, WIDE // 2, WIDE, 2 * WIDE])
def test_wide_and_narrow_levels_agree(make_flat: MakeFlat, nand: Kind, width: int) -> None:
    depth = 5
    parts = [
        (f"u{i}_{j}", nand, f"n{i}_{j} n{i}_{(j + 1) % width} n{i + 1}_{j}")
        for i in range(depth)
        for j in range(width)
    ]
    flat = make_flat(" ".join(f"n0_{j}" for j in range(width)) + " > n5_0", *parts)
    times = sweep(build(flat))
    end = 2 * flat.ports[-1].net
    assert (times.settles[end], times.stirs[end]) == (30 * depth, depth)


def test_a_missing_min_counts_as_zero_and_other_numbers_are_asked_for(
    make_kind: MakeKind, make_flat: MakeFlat
) -> None:
    no_min = make_kind("buf", "A > Y", ("A", "+", "Y", (nan, 2, 3)))
    no_max = make_kind("not", "A > Y", ("A", "-", "Y", (1, 2, nan)))
    unused = make_kind("ff", "A > Y", ("A", "-", "Y", (nan, nan, nan)))
    flat = make_flat("a > y", ("u1", no_min, "a n"), ("u2", no_max, "n y"), ("u3", unused, "0 p"))
    graph = build(flat)
    assert sweep(graph, "span").stirs[12] == 0
    assert {grade: missing_numbers(graph, grade).tolist() for grade in GRADES} == {
        "span": [2, 3],
        "max": [2, 3],
        "typ": [],
        "min": [],
    }
    refuse_missing(flat, graph, "typ", Collector())
    with pytest.raises(InputRefusedError) as caught:
        refuse_missing(flat, graph, "span", Collector())
    (told,) = caught.value.diagnostics
    assert (told.code, "not has no max delay from A to Y" in told.message) == ("G102", True)


def test_a_chain_of_200_000_parts_settles(make_kind: MakeKind, make_flat: MakeFlat) -> None:
    inverter = make_kind("not", "A > Y", ("A", "-", "Y", (1, 2, 3)))
    length = 200_000
    parts = [(f"u{i}", inverter, f"n{i} n{i + 1}") for i in reversed(range(length))]
    flat = make_flat(f"n0 > n{length}", *parts)
    times = sweep(build(flat))
    end = 2 * flat.ports[1].net
    assert (times.settles[end], times.stirs[end]) == (3 * length, length)
