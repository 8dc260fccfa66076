from __future__ import annotations

from collections.abc import Callable
from math import nan

from tardigate.graph.build import build
from tardigate.graph.export import to_networkx
from tardigate.netlist.flat import Flat
from tardigate.netlist.names import Names
from tardigate.parts.kind import Kind


def test_the_export_has_names_and_delays_in_ns(
    make_kind: Callable[..., Kind], make_flat: Callable[..., Flat]
) -> None:
    inverter = make_kind("not", "A > Y", ("A", "-", "Y", (nan, 1_500_000, 2_000_000)))
    register = make_kind("ff", "D C > Q", ("C", "rr", "Q", (0, 0, 1)), launches="C", sinks="D")
    flat = make_flat("c > y", ("u1", inverter, "q y"), ("r", register, "y c q"))
    graph = to_networkx(flat, build(flat), Names(flat))
    assert set(graph) == {(name, edge) for name in ("c", "y", "q", "r.C") for edge in ("rise", "fall")}
    assert graph.nodes["y", "fall"] == {"net": 5}
    assert graph.nodes["r.C", "rise"] == {"net": None}
    assert graph.number_of_edges() == 3
    assert graph.edges[("q", "rise"), ("y", "fall"), 0] == {
        "delay_min_ns": None,
        "delay_typ_ns": 1.5,
        "delay_max_ns": 2.0,
        "instance": "u1",
        "kind": "not",
        "from_pin": "A",
        "to_pin": "Y",
    }
    assert graph.has_edge(("r.C", "rise"), ("q", "rise"))


def test_parallel_hops_stay_apart(make_kind: Callable[..., Kind], make_flat: Callable[..., Flat]) -> None:
    nand = make_kind("nand", "A B > Y", ("A", "-", "Y", (1, 2, 3)), ("B", "-", "Y", (1, 2, 4)))
    flat = make_flat("a > y", ("u1", nand, "a a y"))
    graph = to_networkx(flat, build(flat), Names(flat))
    pins = {words["from_pin"] for words in graph.get_edge_data(("a", "rise"), ("y", "fall")).values()}
    assert pins == {"A", "B"}
