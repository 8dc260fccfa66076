"""Numbers get the right names, and running sums along a trail are the sums."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest

from tardigate.analysis.sweep import sweep
from tardigate.analysis.trails import slowest
from tardigate.graph.build import build
from tardigate.netlist.flat import Flat
from tardigate.netlist.names import Names
from tardigate.parts.kind import Edge, Kind, Origin
from tardigate.report.model import FoldRecord, HopRecord
from tardigate.report.records import Records
from tardigate.report.survey import clock_records, hierarchy_records, kind_records, port_counts


@pytest.fixture
def flat(make_kind: Callable[..., Kind], make_flat: Callable[..., Flat]) -> Flat:
    nand = make_kind("nand", "A B > Y", ("A", "-", "Y", (1, 2, 3)), ("B", "-", "Y", (1, 2, 4)))
    inv = make_kind("not", "A > Y", ("A", "rf", "Y", (2, 3, 5)), ("A", "fr", "Y", (2, 3, 6)))
    ff = make_kind(
        "FF",
        "D CK > Q",
        ("CK", "rr", "Q", (7, 8, 9)),
        ("CK", "rf", "Q", (7, 8, 10)),
        launches="CK",
        sinks="D",
    )
    return make_flat(
        "a b ck > y q tied",
        ("u1", nand, "a b n"),
        ("u2", inv, "n y"),
        ("f1", ff, "n ck q"),
        ("u3", inv, "1 tied"),
        ("f2", ff, "q ck m"),
        ("", inv, "m k"),
    )


@pytest.fixture
def records(flat: Flat) -> Records:
    return Records(flat, Names(flat), build(flat))


def test_outputs_are_recorded_slowest_first_with_what_never_changes_last(
    flat: Flat, records: Records
) -> None:
    outputs = records.outputs(sweep(build(flat)), None)
    assert [(sink.name, sink.settles, sink.stirs) for sink in outputs.shown] == [
        ("y", (10.0, 9.0), (3.0, 3.0)),
        ("q", (9.0, 10.0), (7.0, 7.0)),
        ("tied", (None, None), (None, None)),
    ]
    assert [sink.window for sink in outputs.shown] == [(3.0, 10.0), (7.0, 10.0), None]


def test_what_is_not_shown_is_counted_with_the_time_it_has_settled(flat: Flat, records: Records) -> None:
    times = sweep(build(flat))
    outputs = records.outputs(times, 1)
    assert ([sink.name for sink in outputs.shown], outputs.total, outputs.rest) == (["y"], 3, 10.0)
    assert records.outputs(times, 2).rest is None
    assert records.outputs(times, 0).shown == ()


def test_register_pins_are_recorded_by_instance_and_pin(flat: Flat, records: Records) -> None:
    pins = records.register_pins(sweep(build(flat)), None)
    assert [(sink.name, sink.settles) for sink in pins.shown] == [("f2.D", (9.0, 10.0)), ("f1.D", (4.0, 4.0))]
    assert {Names(flat).net(int(net)) for net in records.register_nets()} == {"n", "q"}


def test_a_trail_is_told_hop_by_hop(flat: Flat, records: Records) -> None:
    trail = records.trail(slowest(build(flat))[0], None, places=True)
    assert (trail.source.name, trail.source.what, trail.source.edge) == ("b", "input port", Edge.RISE)
    assert (trail.sink.name, trail.sink.what, trail.sink.edge) == ("y", "output port", Edge.RISE)
    told = [
        (hop.instance, hop.kind, hop.from_pin, hop.to_pin, hop.net, hop.delay, hop.begins, hop.over)
        for hop in trail.hops
        if isinstance(hop, HopRecord)
    ]
    assert told == [
        ("u1", "nand", "B", "Y", "n", 4.0, 0.0, 4.0),
        ("u2", "not", "A", "Y", "y", 6.0, 4.0, 10.0),
    ]
    assert [str(hop.place) for hop in trail.hops if isinstance(hop, HopRecord)] == [
        "board.v:1:1",
        "board.v:2:1",
    ]


def test_a_trail_from_a_register_begins_at_its_clock_pin(flat: Flat, records: Records) -> None:
    graph = build(flat)
    trail = slowest(graph, sources=graph.sources[graph.sources >= 2 * graph.nets])[0]
    record = records.trail(trail, None, places=False)
    assert (record.source.name, record.source.what, record.sink.name) == ("f1.CK", "clock pin", "q")
    assert all(hop.place is None for hop in record.hops if isinstance(hop, HopRecord))


def test_ends_may_be_register_pins_and_plain_nets(flat: Flat, records: Records) -> None:
    graph = build(flat)
    nets = {Names(flat).net(net): net for net in range(flat.nets)}
    first = slowest(graph, sources=np.array([2 * nets["a"]]), sinks=np.array([2 * nets["n"] + 1]))[0]
    assert records.trail(first, None, places=False).sink.name == "f1.D"
    second = slowest(graph, sources=np.array([2 * nets["m"]]), sinks=np.array([2 * nets["k"] + 1]))[0]
    record = records.trail(second, None, places=False)
    assert [(end.name, end.what) for end in (record.source, record.sink)] == [("m", "net"), ("k", "net")]


def test_a_folded_trail_keeps_its_sums(
    make_kind: Callable[..., Kind], make_flat: Callable[..., Flat]
) -> None:
    inv = make_kind("not", "A > Y", ("A", "-", "Y", (1, 2, 3)))
    slow = make_kind("buf", "A > Y", ("A", "+", "Y", (5, 6, 7)))
    chain = [(f"u{i}", slow if i == 5 else inv, f"n{i} n{i + 1}") for i in range(10)]
    flat = make_flat("n0 > n10", *chain)
    graph = build(flat)
    record = Records(flat, Names(flat), graph).trail(slowest(graph)[0], 3, places=False)
    assert [(row.begins, row.over, row.delay) for row in record.hops] == [
        (0.0, 3.0, 3.0),
        (3.0, 15.0, 12.0),
        (15.0, 22.0, 7.0),
        (22.0, 31.0, 9.0),
        (31.0, 34.0, 3.0),
    ]
    assert [row.hops for row in record.hops if isinstance(row, FoldRecord)] == [4, 3]
    assert (record.length, record.total) == (10, 34.0)


def test_a_survey_counts_kinds_clocks_and_ports(flat: Flat) -> None:
    counted = [(kind.name, kind.instances, kind.origin, kind.register) for kind in kind_records(flat)]
    assert counted == [
        ("FF", 2, "parts file", True),
        ("not", 3, "parts file", False),
        ("nand", 1, "parts file", False),
    ]
    registers, clocks = clock_records(flat, Names(flat))
    assert (registers, [(clock.net, clock.registers) for clock in clocks]) == (2, [("ck", 2)])
    assert port_counts(flat) == (3, 3, 0)


def test_kinds_without_a_delay_are_called_missing(
    make_kind: Callable[..., Kind], make_flat: Callable[..., Flat]
) -> None:
    bare = make_kind("xor", "A B > Y", ("A", "x", "Y", (np.nan,) * 3), origin=Origin.MISSING)
    flat = make_flat("a b > y", ("u1", bare, "a b y"))
    assert [(kind.origin, kind.inputs) for kind in kind_records(flat)] == [("missing", 2)]


def test_a_flat_design_has_a_hierarchy_of_one(flat: Flat) -> None:
    assert [(scope.module, scope.own, scope.total, scope.lasts) for scope in hierarchy_records(flat)] == [
        ("board", 6, 6, ())
    ]
