from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest

from tardigate.analysis.audit import audit
from tardigate.analysis.model import Trail
from tardigate.analysis.sweep import sweep
from tardigate.analysis.trails import fastest, slowest
from tardigate.graph.build import build
from tardigate.graph.model import Graph
from tardigate.netlist.flat import Flat
from tardigate.parts.kind import Kind
from tardigate.source.faults import InternalFaultError


@pytest.fixture
def flat(make_kind: Callable[..., Kind], make_flat: Callable[..., Flat]) -> Flat:
    nand = make_kind("nand", "A B > Y", ("A", "-", "Y", (10, 20, 30)), ("B", "-", "Y", (1, 2, 3)))
    register = make_kind("ff", "D C > Q", ("C", "rr", "Q", (1, 2, 5)), launches="C", sinks="D")
    return make_flat("a c > y", ("u1", nand, "a q n"), ("u2", nand, "n a y"), ("r", register, "n c q"))


@pytest.fixture
def graph(flat: Flat) -> Graph:
    return build(flat)


def test_what_the_search_finds_passes(flat: Flat, graph: Graph) -> None:
    times = sweep(graph)
    audit(flat, graph, slowest(graph, count=99), "span", late=True, times=times, whole=True)
    audit(flat, graph, fastest(graph, count=99), "span", late=False, times=times, whole=True)


def spoiled_total(trail: Trail) -> Trail:
    return trail._replace(total=trail.total + 1)


def spoiled_delay(trail: Trail) -> Trail:
    return trail._replace(delays=trail.delays + 1)


def spoiled_order_of_hops(trail: Trail) -> Trail:
    return trail._replace(hops=trail.hops[::-1], delays=trail.delays[::-1])


def spoiled_source(trail: Trail) -> Trail:
    return trail._replace(source=trail.source ^ 1)


def spoiled_sink(trail: Trail) -> Trail:
    return trail._replace(sink=trail.sink ^ 1)


def cut_short(trail: Trail) -> Trail:
    hops, delays = trail.hops[1:], trail.delays[1:]
    return trail._replace(hops=hops, delays=delays, total=float(delays.sum()))


@pytest.mark.parametrize(
    "spoil",
    [spoiled_total, spoiled_delay, spoiled_order_of_hops, spoiled_source, spoiled_sink, cut_short],
)
def test_a_spoiled_trail_is_a_fault_of_the_program(
    flat: Flat, graph: Graph, spoil: Callable[[Trail], Trail]
) -> None:
    trails = slowest(graph, count=3)
    trails[1] = spoil(trails[1])
    with pytest.raises(InternalFaultError, match="trail 1"):
        audit(flat, graph, trails, "span")


def test_a_graph_whose_delays_are_not_the_parts_is_a_fault(flat: Flat, graph: Graph) -> None:
    wrong = graph._replace(delays=graph.delays * 2)
    with pytest.raises(InternalFaultError, match="by the parts"):
        audit(flat, graph, slowest(wrong, count=1), "span")
    wrong = graph._replace(row_kind=graph.row_kind + 1)
    with pytest.raises(InternalFaultError, match="another kind"):
        audit(flat, wrong, slowest(graph, count=1), "span")


def test_a_list_out_of_order_or_with_a_trail_twice_is_a_fault(flat: Flat, graph: Graph) -> None:
    trails = slowest(graph, count=9)
    with pytest.raises(InternalFaultError, match="out of order"):
        audit(flat, graph, trails[::-1], "span")
    with pytest.raises(InternalFaultError, match="twice"):
        audit(flat, graph, [trails[0], *trails], "span")


def test_a_list_without_the_slowest_trail_of_a_sink_is_a_fault(flat: Flat, graph: Graph) -> None:
    trails = slowest(graph, count=9)
    with pytest.raises(InternalFaultError, match="in the sweep"):
        audit(flat, graph, trails[1:], "span", times=sweep(graph))


def test_a_trail_from_or_to_the_midst_is_a_fault_where_none_was_asked_for(
    make_kind: Callable[..., Kind], make_flat: Callable[..., Flat]
) -> None:
    inverter = make_kind("not", "A > Y", ("A", "-", "Y", (1, 2, 3)))
    flat = make_flat("a > y", ("u1", inverter, "a n"), ("u2", inverter, "n y"))
    graph = build(flat)
    middle = np.array([12, 13])
    for trails, words in (
        (slowest(graph, count=9, sources=middle), "no port drives"),
        (slowest(graph, count=9, sinks=middle), "nor at a register"),
    ):
        audit(flat, graph, trails, "span")
        with pytest.raises(InternalFaultError, match=words):
            audit(flat, graph, trails, "span", whole=True)
