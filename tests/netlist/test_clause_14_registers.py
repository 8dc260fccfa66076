"""Cells that store: primitives, textbook registers and latches inside modules with a specify block."""

from __future__ import annotations

from collections.abc import Callable

from tardigate.netlist.flat import Flat
from tardigate.parts.dump import dump_kind

NS = 10**6


FLIP_FLOP = """primitive dff(q, d, c, r); output q; reg q; input d, c, r;
table
 0 r 1 : ? : 0; 1 r 1 : ? : 1; ? n 1 : ? : -; * ? 1 : ? : -; ? ? 0 : ? : 0; ? ? p : ? : -;
endtable
endprimitive
"""
LATCH = """primitive lat(q, d, g); output q; reg q; input d, g;
table
 0 1 : ? : 0; 1 1 : ? : 1; ? 0 : ? : -;
endtable
endprimitive
"""


def test_a_flip_flop_primitive(cell_board: Callable[..., str], elaborate: Callable[..., Flat]) -> None:
    body = "wire n; dff (n, d, ck, rn); not (qn, n); buf (q, n);"
    block = """if (rn) (posedge ck => (q +: d)) = (4, 5); (posedge ck => (qn -: d)) = 6;
    (negedge rn => (q +: 1'b0)) = (8, 7); (rn => qn) = 9;"""
    text = cell_board("input d, ck, rn, output q, qn", body, block) + FLIP_FLOP
    assert dump_kind(elaborate(text).kinds[0]).splitlines() == [
        "part cell_ PARTS register",
        "  ck rise -> q rise 4:4:4 launches", "  ck rise -> q fall 5:5:5 launches",
        "  rn fall -> q fall 7:7:7",
        "  ck rise -> qn rise 6:6:6 launches", "  ck rise -> qn fall 6:6:6 launches",
        "  rn fall -> qn rise 9:9:9",
        "  sinks d rn",
    ]  # fmt: skip


def test_a_latch_primitive_with_an_inverted_gate(
    cell_board: Callable[..., str], elaborate: Callable[..., Flat]
) -> None:
    body = "wire g; not (g, gn); lat (q, d, g);"
    text = cell_board("input d, gn, output q", body, "(d => q) = (1, 2); (gn => q) = 3;") + LATCH
    assert dump_kind(elaborate(text).kinds[0]).splitlines() == [
        "part cell_ PARTS register",
        "  gn fall -> q rise 3:3:3 launches", "  gn fall -> q fall 3:3:3 launches",
        "  d rise -> q rise 1:1:1", "  d fall -> q fall 2:2:2",
        "  sinks d",
    ]  # fmt: skip


def test_14_4_a_latch_primitive_with_a_delay_of_its_own(
    cell_board: Callable[..., str], elaborate: Callable[..., Flat]
) -> None:
    text = cell_board("input d, g, output q", "lat #5 (q, d, g);", "(d => q) = (1, 9); (g => q) = 3;") + LATCH
    assert dump_kind(elaborate(text).kinds[0]).splitlines() == [
        "part cell_ PARTS register",
        "  g rise -> q rise 5:5:5 launches", "  g rise -> q fall 5:5:5 launches",
        "  d rise -> q rise 5:5:5", "  d fall -> q fall 9:9:9",
        "  sinks d",
    ]  # fmt: skip


def test_a_latch_before_the_gate_that_its_own_clock_closes(
    cell_board: Callable[..., str], elaborate: Callable[..., Flat]
) -> None:
    body = "wire g, n; not (g, ck); lat (n, e, g); and (y, n, ck);"
    text = cell_board("input e, ck, output y", body, "(ck => y) = (1, 2); $setup(e, posedge ck, 1);") + LATCH
    assert dump_kind(elaborate(text).kinds[0]).splitlines() == [
        "part cell_ PARTS register", "  ck rise -> y rise 1:1:1", "  ck fall -> y fall 2:2:2", "  sinks e",
    ]  # fmt: skip


def test_states_with_one_time_are_one_hop(
    cell_board: Callable[..., str], elaborate: Callable[..., Flat]
) -> None:
    block = "if (b) (a => y) = 1; if (c) (a => y) = 1; ifnone (a => y) = 1; (b, c *> y) = 1;"
    kind = elaborate(cell_board("input a, b, c, output y", "assign y = a & (b | c);", block)).kinds[0]
    assert kind.hops == 6


def test_a_gated_clock_is_taken_from_the_block(
    cell_board: Callable[..., str], elaborate: Callable[..., Flat]
) -> None:
    body = "wire c; and (c, ck, en); dff (q, d, c, 1'b1);"
    block = "(posedge ck => (q +: d)) = 4; $setup(d, posedge ck, 1);"
    text = cell_board("input d, ck, en, output q", body, block) + FLIP_FLOP
    assert dump_kind(elaborate(text).kinds[0]).splitlines() == [
        "part cell_ PARTS register",
        "  ck rise -> q rise 4:4:4 launches", "  ck rise -> q fall 4:4:4 launches", "  sinks d",
    ]  # fmt: skip


def test_a_textbook_register(cell_board: Callable[..., str], elaborate: Callable[..., Flat]) -> None:
    ports = "input d, ck, rn, output reg q"
    body = "always @(posedge ck or negedge rn) if (!rn) q <= 0; else q <= d;"
    block = "(posedge ck => (q +: d)) = 4; (negedge rn => (q +: 1'b0)) = 5;"
    text = cell_board(ports, body, block).replace("output reg q", "output q", 1)
    assert dump_kind(elaborate(text).kinds[0]).splitlines() == [
        "part cell_ PARTS register",
        "  ck rise -> q rise 4:4:4 launches", "  ck rise -> q fall 4:4:4 launches",
        "  rn fall -> q fall 5:5:5",
        "  sinks d rn",
    ]  # fmt: skip


def test_delayed_signals_of_a_check_are_what_they_follow(
    cell_board: Callable[..., str], elaborate: Callable[..., Flat]
) -> None:
    body = "wire dck, dd; dff (q, dd, dck, 1'b1);"
    block = "(posedge ck => (q +: d)) = 4; $setuphold(posedge ck, d, -1, 2, , , , dck, dd);"
    text = cell_board("input d, ck, output q", body, block) + FLIP_FLOP
    assert dump_kind(elaborate(text).kinds[0]).splitlines() == [
        "part cell_ PARTS register",
        "  ck rise -> q rise 4:4:4 launches", "  ck rise -> q fall 4:4:4 launches", "  sinks d",
    ]  # fmt: skip


def test_14_4_delays_of_a_primitive_and_of_buffers_before_it(
    cell_board: Callable[..., str], elaborate: Callable[..., Flat]
) -> None:
    body = "wire c; buf #2 (c, ck); dff #(1, 6) (q, d, c, 1'b1);"
    text = cell_board("input d, ck, output q", body, "(posedge ck => (q +: d)) = 4;") + FLIP_FLOP
    assert dump_kind(elaborate(text).kinds[0]).splitlines() == [
        "part cell_ PARTS register",
        "  ck rise -> q rise 4:4:4 launches", "  ck rise -> q fall 8:8:8 launches", "  sinks d",
    ]  # fmt: skip
