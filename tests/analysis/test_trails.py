from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest

from tardigate.analysis.audit import audit
from tardigate.analysis.dump import dump_trail
from tardigate.analysis.select import both_edges, clock_vertices, clock_vertices_on, sink_nets
from tardigate.analysis.sweep import sweep
from tardigate.analysis.trails import fastest, slowest
from tardigate.graph.build import build
from tardigate.netlist.flat import Flat
from tardigate.parts.kind import Kind

MakeKind = Callable[..., Kind]
MakeFlat = Callable[..., Flat]


@pytest.fixture
def nand(make_kind: MakeKind) -> Kind:
    return make_kind("nand", "A B > Y", ("A", "-", "Y", (10, 20, 30)), ("B", "-", "Y", (1, 2, 3)))


@pytest.fixture
def register(make_kind: MakeKind) -> Kind:
    return make_kind(
        "ff", "D C > Q", ("C", "rr", "Q", (1, 2, 5)), ("C", "rf", "Q", (2, 3, 4)), launches="C", sinks="D"
    )


def test_the_slowest_trails_come_slowest_first(make_flat: MakeFlat, nand: Kind) -> None:
    graph = build(make_flat("a b > y", ("u1", nand, "a b n"), ("u2", nand, "n b y")))
    assert [dump_trail(graph, trail) for trail in slowest(graph, count=99)] == [
        "4r -0:30-> 7f -1:30-> 6r = 60",
        "4f -0:30-> 7r -1:30-> 6f = 60",
        "5r -0:3-> 7f -1:30-> 6r = 33",
        "5f -0:3-> 7r -1:30-> 6f = 33",
        "5f -1:3-> 6r = 3",
        "5r -1:3-> 6f = 3",
    ]
    assert [trail.total for trail in fastest(graph, count=99)] == [1, 1, 11, 11, 20, 20]


def test_parallel_hops_make_trails_apart(make_flat: MakeFlat, nand: Kind) -> None:
    graph = build(make_flat("a > y", ("u1", nand, "a a y")))
    found = slowest(graph, count=9)
    assert [trail.total for trail in found] == [30, 30, 3, 3]
    assert len({tuple(trail.hops) for trail in found}) == 4


def test_a_trail_may_have_no_hop(make_flat: MakeFlat) -> None:
    graph = build(make_flat("a > a"))
    assert [dump_trail(graph, trail) for trail in slowest(graph, count=9)] == ["4r = 0", "4f = 0"]


def test_an_inout_port_in_the_middle_begins_and_carries_trails(make_flat: MakeFlat, nand: Kind) -> None:
    graph = build(make_flat("a > y < m", ("u1", nand, "a 1 m"), ("u2", nand, "m 1 y")))
    found = [dump_trail(graph, trail) for trail in slowest(graph, sinks=np.array([10]), count=9)]
    assert found == ["4r -0:30-> 6f -1:30-> 5r = 60", "6f -1:30-> 5r = 30"]


def test_trails_run_from_clock_pins_to_data_pins(make_flat: MakeFlat, nand: Kind, register: Kind) -> None:
    flat = make_flat("c > ", ("r1", register, "d c q"), ("r2", register, "q c p"), ("u1", nand, "q p d"))
    graph = build(flat)
    assert [dump_trail(graph, trail) for trail in slowest(graph, count=3)] == [
        "@0.1r -0:5-> 6r -2:30-> 5f = 35",
        "@0.1r -0:4-> 6f -2:30-> 5r = 34",
        "@1.1r -1:5-> 7r -2:3-> 5f = 8",
    ]
    chosen = slowest(
        graph, count=9, sources=clock_vertices(graph, [1]), sinks=both_edges(sink_nets(flat, [0]))
    )
    assert [trail.total for trail in chosen] == [8, 7]
    assert clock_vertices_on(flat, graph, [4]).tolist() == graph.sources[2:].tolist()
    assert len(clock_vertices_on(flat, graph, [5])) == 0


def test_no_sink_that_is_reached_gives_no_trail(make_flat: MakeFlat, nand: Kind) -> None:
    graph = build(make_flat("a > y", ("u1", nand, "n p y")))
    assert slowest(graph, count=5) == []
    assert fastest(graph, count=5) == []
    assert slowest(graph, count=5, sinks=np.array([], np.int64)) == []


def test_a_longer_list_begins_with_the_shorter_one_however_many_tie(
    make_kind: MakeKind, make_flat: MakeFlat
) -> None:
    xor = make_kind("xor", "A B > Y", ("A", "x", "Y", (1, 1, 1)), ("B", "x", "Y", (1, 1, 1)))
    parts = [(f"u{i}", xor, f"n{i} n{i} n{i + 1}") for i in range(5)]
    graph = build(make_flat("n0 > n5", *parts))
    longest = [dump_trail(graph, trail) for trail in slowest(graph, count=5000)]
    assert len(longest) == 2 * 4**5
    for count in (1, 2, 3, 100, 1000):
        assert [dump_trail(graph, trail) for trail in slowest(graph, count=count)] == longest[:count]


def test_trails_of_100_000_hops_with_side_tracks(make_kind: MakeKind, make_flat: MakeFlat) -> None:
    nand = make_kind("nand", "A B > Y", ("A", "-", "Y", (1, 2, 3)), ("B", "-", "Y", (1, 1, 2)))
    length = 100_000
    parts = [(f"u{i}", nand, f"n{i} n{i} n{i + 1}") for i in reversed(range(length))]
    flat = make_flat(f"n0 > n{length}", *parts)
    graph = build(flat)
    found = slowest(graph, count=20)
    assert [trail.total for trail in found] == [3 * length] * 2 + [3 * length - 1] * 18
    audit(flat, graph, found, "span", late=True, times=sweep(graph), whole=True)
