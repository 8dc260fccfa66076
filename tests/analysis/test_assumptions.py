from __future__ import annotations

from collections.abc import Callable
from math import nan

from tardigate.analysis.assumptions import find_assumptions
from tardigate.analysis.model import Grade
from tardigate.analysis.sweep import sweep
from tardigate.graph.build import build
from tardigate.netlist.flat import Flat
from tardigate.parts.kind import Kind, Origin


def test_each_assumption_is_counted(make_kind: Callable[..., Kind], make_flat: Callable[..., Flat]) -> None:
    no_min = make_kind("buf", "A B > Y", ("A", "+", "Y", (nan, 2, 3)), ("B", "+", "Y", (nan, 2, 3)))
    no_min = no_min._replace(unknown_function=True)
    default = make_kind("not", "A > Y", ("A", "-", "Y", (1, 2, 3)), origin=Origin.DEFAULT)
    wire = make_kind("assign", "A > Y", ("A", "+", "Y", (0, 0, 0)), origin=Origin.WIRE)
    register = make_kind("ff", "D C > Q", ("C", "rr", "Q", (1, 2, 5)), launches="C", sinks="D")
    flat = make_flat(
        "a c > y",
        ("u1", no_min, "a q n"), ("u2", no_min, "a 1 m"), ("u3", default, "n p"), ("u4", wire, "p y"),
        ("r", register, "p c q"), ("u5", default, "e f"),
    )  # fmt: skip
    graph = build(flat)

    def counts(grade: Grade) -> dict[str, int]:
        return {found.key: found.count for found in find_assumptions(flat, graph, grade, sweep(graph, grade))}

    stated = {
        "inputs_at_zero": 2,
        "clock_pins_at_zero": 1,
        "wires_at_zero": 9,
        "on_family_default": 2,
        "unknown_functions": 2,
        "tied_inputs": 1,
        "assigned_wires": 1,
        "never_changing_nets": 2,
    }
    minima = {"minima_at_zero": 6, "parts_with_minima_at_zero": 2}
    assert counts("span") == stated | minima
    assert counts("min") == stated | minima
    assert counts("max") == stated


def test_clocks_that_come_through_logic_are_counted(
    make_kind: Callable[..., Kind], make_flat: Callable[..., Flat]
) -> None:
    buffer = make_kind("buf", "A > Y", ("A", "+", "Y", (1, 2, 3)))
    register = make_kind("ff", "D C > Q", ("C", "rr", "Q", (1, 2, 5)), launches="C", sinks="D")
    flat = make_flat(
        "d c > q",
        ("b", buffer, "c k"),
        ("r1", register, "d c p"),
        ("r2", register, "p k q"),
        ("r3", register, "p 1 o"),
    )
    graph = build(flat)
    found = {a.key: a.count for a in find_assumptions(flat, graph, "span", sweep(graph, "span"))}
    assert found["clocks_through_logic"] == 1
