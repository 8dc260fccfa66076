from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest

from tardigate.graph.build import build
from tardigate.graph.dump import dump
from tardigate.graph.levels import WIDE, find_levels
from tardigate.netlist.flat import Flat
from tardigate.parts.kind import Kind
from tardigate.source.collector import Collector
from tardigate.source.faults import InputRefusedError

MakeKind = Callable[..., Kind]
MakeFlat = Callable[..., Flat]


@pytest.fixture
def inverter(make_kind: MakeKind) -> Kind:
    return make_kind("not", "A > Y", ("A", "-", "Y", (1, 2, 3)))


@pytest.fixture
def nand(make_kind: MakeKind) -> Kind:
    return make_kind("nand", "A B > Y", ("A", "-", "Y", (1, 2, 3)), ("B", "-", "Y", (1, 2, 4)))


@pytest.fixture
def register(make_kind: MakeKind) -> Kind:
    return make_kind(
        "ff", "D C > Q", ("C", "rr", "Q", (1, 2, 3)), ("C", "rf", "Q", (2, 3, 4)), launches="C", sinks="D"
    )


def test_hops_stand_by_level_and_head(make_flat: MakeFlat, nand: Kind, inverter: Kind) -> None:
    flat = make_flat("a > y", ("u2", nand, "n a y"), ("u1", inverter, "a n"))
    assert dump(build(flat)) == "\n".join(
        [
            "sources 4r 4f",
            "level 1",
            "4f > 6r 1 1.1",
            "4r > 6f 1 1.0",
            "level 2",
            "6f > 5r 0 0.1",
            "4f > 5r 0 0.3",
            "6r > 5f 0 0.0",
            "4r > 5f 0 0.2",
            "sinks 5",
        ]
    )


def test_a_trail_begins_at_each_clock_pin_and_ends_at_data(
    make_flat: MakeFlat, register: Kind, inverter: Kind
) -> None:
    flat = make_flat("c >", ("u1", inverter, "q d"), ("r", register, "d c q"))
    assert dump(build(flat)) == "\n".join(
        [
            "sources 4r 4f @1.1r",
            "level 1",
            "@1.1r > 5r 1 1.0",
            "@1.1r > 5f 1 1.1",
            "level 2",
            "5f > 6r 0 0.1",
            "5r > 6f 0 0.0",
            "sinks 6",
        ]
    )


def test_open_pins_and_constants_carry_no_hop(make_flat: MakeFlat, nand: Kind, register: Kind) -> None:
    flat = make_flat("a > y", ("u1", nand, "a 1 y"), ("u2", nand, "a . ."), ("r", register, "z 1 q"))
    graph = build(flat)
    assert graph.instance.tolist() == [0, 0]
    assert len(graph.clock_pin_instance) == 0
    assert graph.sinks.tolist() == [5]


def test_an_inout_port_is_source_and_sink(make_flat: MakeFlat, inverter: Kind) -> None:
    graph = build(make_flat("a > < b", ("u1", inverter, "a b")))
    assert graph.sources.tolist() == [8, 9, 10, 11]
    assert graph.sinks.tolist() == [5]


def test_parts_that_share_a_net_all_hop_onto_it(make_flat: MakeFlat, inverter: Kind) -> None:
    graph = build(make_flat("a b > y", ("u1", inverter, "a y"), ("u2", inverter, "b y")))
    assert graph.heads.tolist() == [12, 13]
    assert np.diff(graph.head_start).tolist() == [2, 2]


def test_a_design_without_parts_has_an_empty_graph(make_flat: MakeFlat) -> None:
    graph = build(make_flat("a > b"))
    assert (graph.levels, len(graph.tail), graph.vertices) == (0, 0, 12)
    assert (graph.sources.tolist(), graph.sinks.tolist()) == ([8, 9], [5])


@pytest.mark.parametrize("width", [1, WIDE - 1, WIDE, 3 * WIDE])
def test_levels_do_not_depend_on_how_wide_they_are(width: int) -> None:
    rng = np.random.default_rng(width)
    depth = 7
    points = rng.permutation(width * depth).astype(np.int32).reshape(depth, width)
    steps = [(points[i], points[j]) for i in range(depth) for j in range(i + 1, depth)]
    steps += [(points[i], np.roll(points[i + 1], 1)) for i in range(depth - 1)]
    tail, head = (np.concatenate(side) for side in zip(*steps, strict=True))
    level = find_levels(width * depth, tail, head)
    assert (level[points] == np.arange(depth)[:, None]).all()


def test_a_chain_of_200_000_inverters_declared_output_first(make_kind: MakeKind, make_flat: MakeFlat) -> None:
    inverter = make_kind("not", "A > Y", ("A", "-", "Y", (1, 2, 3)))
    length = 200_000
    parts = [(f"u{i}", inverter, f"n{i} n{i + 1}") for i in reversed(range(length))]
    graph = build(make_flat(f"n0 > n{length}", *parts))
    assert graph.levels == length
    assert graph.instance[0] == length - 1


def refusal(flat: Flat) -> InputRefusedError:
    with pytest.raises(InputRefusedError) as caught:
        build(flat, Collector())
    return caught.value


def test_a_loop_is_told_pin_by_pin_with_places(make_flat: MakeFlat, nand: Kind, inverter: Kind) -> None:
    flat = make_flat("a > y", ("u1", nand, "a p q"), ("u2", inverter, "q p"), ("u3", inverter, "p y"))
    (told,) = refusal(flat).diagnostics
    assert told.code == "G101"
    assert [related.label for related in told.related] == ["u1.B → Y", "u2.A → Y"]
    assert [related.span.line for related in told.related] == [1, 2]


def test_each_tangle_is_told_once_by_its_shortest_ring(
    make_flat: MakeFlat, nand: Kind, inverter: Kind
) -> None:
    flat = make_flat(
        "a >",
        ("u1", nand, "c1 a c2"), ("u2", inverter, "c2 c3"), ("u3", inverter, "c3 c1"),
        ("u4", nand, "c3 d2 d1"), ("u5", inverter, "d1 d2"),
        ("u6", nand, "e a e"),
        ("u7", nand, "f1 f3 f2"), ("u8", inverter, "f2 f3"), ("u9", inverter, "f3 f1"),
    )  # fmt: skip
    rings = [[related.label for related in told.related] for told in refusal(flat).diagnostics]
    assert sorted(map(sorted, rings)) == [
        ["u1.A → Y", "u2.A → Y", "u3.A → Y"],
        ["u4.B → Y", "u5.A → Y"],
        ["u6.A → Y"],
        ["u7.B → Y", "u8.A → Y"],
    ]


def test_a_loop_of_100_000_parts_is_found(make_flat: MakeFlat, inverter: Kind) -> None:
    length = 100_000
    parts = [(f"u{i}", inverter, f"n{i} n{(i + 1) % length}") for i in range(length)]
    (told,) = refusal(make_flat("a >", *parts)).diagnostics
    assert "100000 hops" in told.message


def test_a_register_breaks_a_loop_and_a_launch_is_none(
    make_flat: MakeFlat, register: Kind, inverter: Kind
) -> None:
    flat = make_flat("c > q", ("u1", inverter, "q d"), ("r", register, "d c q"), ("r2", register, "q q q2"))
    assert build(flat).levels == 2
