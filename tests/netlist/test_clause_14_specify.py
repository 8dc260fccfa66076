"""IEEE 1364-2005 clause 14: modules with a specify block as parts, from text to the hops of their kind."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from tardigate.netlist.flat import Flat
from tardigate.parts.dump import dump_kind
from tardigate.parts.kind import Origin

Hops = dict[str, list[float]]
Cell = Callable[..., dict[str, tuple[float, ...]]]

NS = 10**6


BUFFER = ("input a, output y", "buf (y, a);")
AND = ("input a, b, output y", "and (y, a, b);")
EITHER = ("input a, b, output y", "xor (y, a, b);")


def _same(number: float) -> tuple[float, ...]:
    return (number,) * 3


# 14.2: forms of paths


def test_14_2_1_polarity_comes_from_the_function(cell: Cell) -> None:
    found = cell("input a, b, output y", "nand (y, a, b);", "(a *> y) = (1, 2); (b => y) = 3;")
    assert found == {"a>y rf": _same(2), "a>y fr": _same(1), "b>y rf": _same(3), "b>y fr": _same(3)}


@pytest.mark.parametrize("sign", ["", "+", "-"])
def test_14_2_2_a_sign_speaks_where_the_function_is_unknown(cell: Cell, sign: str) -> None:
    body = "reg r; initial r = 0; buf (y, r);"
    found = cell("input a, output y", body, f"(a {sign}=> y) = (1, 2);")
    ways = {"": {"rr", "rf", "fr", "ff"}, "+": {"rr", "ff"}, "-": {"rf", "fr"}}[sign]
    assert found == {f"a>y {way}": _same(1 if way[1] == "r" else 2) for way in ways}


def test_14_2_3_edge_sensitive_paths(cell: Cell) -> None:
    ports, body = "input ck, d, rn, output q", "reg r; initial r = 0; buf (q, r);"
    block = (
        "(posedge ck => (q +: d)) = (10, 8); (negedge rn => (q +: 1'b0)) = (5, 6); $setup(d, posedge ck, 1);"
    )
    assert cell(ports, body, block) == {
        "ck>q rr": _same(10), "ck>q rf": _same(8), "rn>q ff": _same(6),
    }  # fmt: skip


def test_14_2_4_1_conditions_that_can_hold_else_none(
    cell: Cell,
) -> None:
    block = "if (b) (a => y) = (3, 4); if (!b) (a => y) = (1, 2); (b => y) = 9;"
    found = cell(*EITHER, block)  # while b is high the gate inverts
    assert {key: t[0] for key, t in found.items() if key[0] == "a"} == {
        "a>y fr": 3, "a>y rf": 4, "a>y rr": 1, "a>y ff": 2,
    }  # fmt: skip


@pytest.mark.parametrize(
    "condition",
    ["b", "b == 1'b1", "b === 1", "~!b", "!(~b)", "&{b, 1'b1}", "b ? 1 : 0", "P & b", "b ^ Z", "w", "{c, b}"],
)
def test_14_2_4_1_operators_of_conditions(cell: Cell, condition: str) -> None:
    body = "parameter P = 1; wire w; buf (w, b); assign y = c | (a ^ b);"
    block = f"specparam Z = 0; if ({condition}) (a => y) = 3; ifnone (a => y) = 1; (b, c *> y) = 9;"
    found = cell("input a, b, c, output y", body, block)
    assert {key: t for key, t in found.items() if key[0] == "a"} == {
        "a>y fr": _same(3), "a>y rf": _same(3), "a>y rr": _same(1), "a>y ff": _same(1),
    }  # fmt: skip


@pytest.mark.parametrize("condition", ["m < 2", "hidden", "hidden == b"])
def test_a_condition_that_is_not_looked_into_can_hold(
    cell_board: Callable[..., str],
    delays: Callable[[str], Hops],
    elaborate: Callable[..., Flat],
    condition: str,
) -> None:
    body = "reg hidden; initial hidden = 0; xor (y, a, b);"
    block = f"if ({condition}) (a => y) = 3; ifnone (a => y) = 1; (b, m *> y) = 9;"
    text = cell_board("input a, b, input [1:0] m, output y", body, block)
    rows = [line for line in dump_kind(elaborate(text).kinds[0]).splitlines() if line.startswith("  a rise")]
    assert sorted(row.split()[5] for row in rows) == ["1:1:1", "1:1:1", "3:3:3", "3:3:3"]
    assert delays(text)["u b>y rr"] == [9 * NS] * 3


def test_14_2_4_4_ifnone(cell: Cell) -> None:
    found = cell(*AND, "if (b) (a => y) = 2; ifnone (a => y) = 9; ifnone (b => y) = 4;")
    assert found == {"a>y rr": _same(2), "a>y ff": _same(2), "b>y rr": _same(4), "b>y ff": _same(4)}


def test_14_2_5_parallel_and_full(cell: Cell) -> None:
    ports = "input [1:0] a, output [1:0] y"
    body = "assign y = {^a, ^a};"
    whole = cell(ports, body, "(a *> y) = 1;")
    assert {key.split()[0] for key in whole} == {f"a[{i}]>y[{j}]" for i in (0, 1) for j in (0, 1)}
    mixed = cell(ports, body, "(a => y) = 2; (a[1] => y[0]) = 3; (a[0:0] *> y[1]) = 4;")
    assert {key: t[0] for key, t in mixed.items() if key.endswith("rr")} == {
        "a[1]>y[1] rr": 2, "a[0]>y[0] rr": 2, "a[1]>y[0] rr": 3, "a[0]>y[1] rr": 4,
    }  # fmt: skip


# 14.3: values


@pytest.mark.parametrize(
    ("values", "rise", "fall", "zh", "zl", "hz", "lz"),
    [
        ("1", 1, 1, 1, 1, 1, 1),
        ("(1, 2)", 1, 2, 1, 2, 2, 1),
        ("1, 2", 1, 2, 1, 2, 2, 1),
        ("(1, 2, 3)", 1, 2, 1, 2, 3, 3),
        ("(1, 2, 3, 4, 5, 6)", 1, 2, 4, 6, 5, 3),
        ("(1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12)", 1, 2, 4, 6, 5, 3),
    ],
)
def test_table_14_2_values_of_a_three_state_output(
    cell: Cell, values: str, rise: int, fall: int, zh: int, zl: int,
    hz: int, lz: int,
) -> None:  # fmt: skip
    found = cell("input a, en, output y", "bufif1 (y, a, en);", f"(a, en *> y) = {values};")
    assert {key: t[0] for key, t in found.items()} == {
        "a>y rr": rise, "a>y ff": fall, "en>y rr": zh, "en>y rf": zl, "en>y ff": hz, "en>y fr": lz,
    }  # fmt: skip


def test_14_3_specparams_triples_and_expressions(cell: Cell) -> None:
    block = """specparam tR = 4:6:9, tF = tR + 1;
    specparam PATHPULSE$a$y = (2, 9), PATHPULSE$ = 3;
    (a => y) = (tR, tF * 2);"""
    assert cell(*BUFFER, block) == {"a>y rr": (4, 6, 9), "a>y ff": (10, 14, 20)}


def test_4_10_3_specparams_outside_the_block_and_parameters(
    cell: Cell,
) -> None:
    body = "parameter N = 3; specparam t = N * 2; buf (y, a);"
    assert cell("input a, output y", body, "(a => y) = (t, t + N);") == {
        "a>y rr": _same(6), "a>y ff": _same(9),
    }  # fmt: skip


def test_19_8_values_are_rounded_to_the_precision(
    cell_board: Callable[..., str], delays: Callable[[str], Hops]
) -> None:
    text = cell_board(*BUFFER, "(a => y) = (1.5504, 2.0005);")
    assert delays(text) == {"u a>y rr": [1.550 * NS] * 3, "u a>y ff": [2.001 * NS] * 3}


@pytest.mark.parametrize(
    ("block", "code"),
    [
        ("(a => y) = (3:2:1);", "N152"),
        ("(a => y) = -1;", "N151"),
        ("(a => y) = b;", "N120"),
        ("specparam t = 1, t = 2; (a => y) = t;", "N110"),
        ("(nobody => y) = 1;", "N130"),
        ("(a[1] => y) = 1;", "N131"),
        ("if (nobody) (a => y) = 1;", "N130"),
        ("(a => y) = (1, 2, 3, 4);", "N174"),
    ],
)
def test_faults_are_told_once_for_a_cell(
    cell_board: Callable[..., str], told: Callable[..., list[str]], block: str, code: str
) -> None:
    text = cell_board("input a, b, output y", "and (y, a, b);", f"(b => y) = 1; {block}")
    text = text.replace("endmodule\n", "cell_ v (.a(a), .b(b), .y());\nendmodule\n", 1)
    assert told(text).count(code) == 1


# 14.4: delays inside the module and module paths together


def test_14_4_the_larger_of_the_two(cell: Cell) -> None:
    found = cell("input a, output y", "buf #(2, 7) (y, a);", "(a => y) = (4, 5);")
    assert found == {"a>y rr": _same(4), "a>y ff": _same(7)}


def test_14_4_longest_and_shortest_way_inside(
    cell_board: Callable[..., str],
    elaborate: Callable[..., Flat],
) -> None:
    body = "wire w; buf #5 (w, a); and (y, w, a);"
    kind = elaborate(cell_board("input a, output y", body, "(a => y) = 3;")).kinds[0]
    rows = [line.split() for line in dump_kind(kind).splitlines() if "a rise -> y rise" in line]
    assert sorted(row[5] for row in rows) == ["3:3:3", "5:5:5"]


def test_14_4_two_ways_of_one_pin_may_glitch(
    cell_board: Callable[..., str], elaborate: Callable[..., Flat]
) -> None:
    body = "wire w; not #5 (w, a); and (y, w, a);"  # y is always 0 at last
    rows = dump_kind(elaborate(cell_board("input a, output y", body, "(a => y) = 3;")).kinds[0]).splitlines()
    assert sorted(rows[1:]) == [
        "  a fall -> y fall 3:3:3", "  a fall -> y rise 5:5:5",
        "  a rise -> y fall 5:5:5", "  a rise -> y rise 3:3:3",
    ]  # fmt: skip


def test_14_4_what_no_path_times_takes_the_delay_inside(
    cell: Cell,
) -> None:
    body = "wire w; buf #(1:2:3) (w, b); and (y, a, w);"
    found = cell("input a, b, output y", body, "(a => y) = 6;")
    assert (found["b>y rr"], found["a>y rr"]) == ((1, 2, 3), _same(6))


def test_what_nothing_times_is_named(cell_board: Callable[..., str], elaborate: Callable[..., Flat]) -> None:
    kind = elaborate(cell_board("input a, b, output y", "and (y, a, b);", "(a => y) = 6;")).kinds[0]
    assert kind.origin == Origin.MISSING
    assert "b => y" in kind.words
    assert "board.v:5" in kind.words


def test_what_nothing_times_takes_the_default(
    cell_board: Callable[..., str], elaborate: Callable[..., Flat]
) -> None:
    text = cell_board("input a, b, output y", "and (y, a, b);", "(a => y) = 6;")
    kind = elaborate(text, "family F { default ns { tpd 8; } }").kinds[0]
    assert kind.origin == Origin.DEFAULT
    assert "b rise -> y rise 8:8:8" in dump_kind(kind)


def test_a_gate_inside_takes_no_time_from_a_parts_file(
    cell_board: Callable[..., str], elaborate: Callable[..., Flat]
) -> None:
    parts = "family F { gates ns { tpd and 8; } }"
    kind = elaborate(cell_board(*AND, "(a, b *> y) = 6;"), parts).kinds[0]
    assert set(kind.delays.ravel().tolist()) == {6.0 * NS}


# What the body does


@pytest.mark.parametrize(
    ("body", "edges"),
    [
        ("assign y = a & b;", "rr ff"), ("assign y = ~(a | b);", "rf fr"),
        ("assign y = a == b;", "rr rf fr ff"),
        ("assign y = b ? a : 1'b1;", "rr ff"), ("wire w; not (w, a); nor (y, w, b);", "rr ff"),
        ("wire [1:0] w; assign w = {a, b}; assign y = &w;", "rr ff"),
        ("wire w; half h (.p(a), .q(w)); or (y, w, b);", "rf fr"), ("assign y = !a || b;", "rf fr"),
        ("assign y = a && b;", "rr ff"), ("wire w; and (y, a, w); buf (w, b);", "rr ff"),
    ],
)  # fmt: skip
def test_polarity_through_the_body(
    cell_board: Callable[..., str], delays: Callable[[str], Hops], body: str, edges: str
) -> None:
    text = cell_board("input a, b, output y", body, "(a, b *> y) = 1;")
    text += "module half(input p, output q);\nnot (q, p);\nendmodule\n" if "half" in body else ""
    found = {key.split()[2] for key in delays(text) if key.startswith("u a>y")}
    assert found == set(edges.split())


def test_a_loop_of_gates_takes_the_paths_at_their_word(
    cell: Cell,
) -> None:
    body = "nand (q, s, n); nand (n, r, q);"
    found = cell("input s, r, output q, n", body, "(s, r *> q, n) = (2, 3);")
    assert len(found) == 16


def test_a_register_of_a_parts_file_inside(
    cell_board: Callable[..., str], elaborate: Callable[..., Flat]
) -> None:
    parts = """family F { part DFF { inputs D, C; outputs Q; register posedge C { Q = D; }
    times ns { tpd C => Q 1; } } }"""
    body = "wire c, m; not (c, ckn); mux_ m0 (m, d, e, s); DFF f (.D(m), .C(c), .Q(q)); not (qn, q);"
    block = "(negedge ckn => (q +: d)) = 4; (negedge ckn => (qn -: d)) = 5;"
    text = cell_board("input d, e, s, ckn, output q, qn", body, block)
    text += "module mux_(output y, input a, b, s);\nassign y = s ? b : a;\nendmodule\n"
    kind = elaborate(text, parts).kinds[0]
    assert dump_kind(kind).splitlines() == [
        "part cell_ PARTS register",
        "  ckn fall -> q rise 4:4:4 launches", "  ckn fall -> q fall 4:4:4 launches",
        "  ckn fall -> qn rise 5:5:5 launches", "  ckn fall -> qn fall 5:5:5 launches",
        "  sinks d e s",
    ]  # fmt: skip


def test_a_latch_that_hides_in_the_body(
    cell_board: Callable[..., str], elaborate: Callable[..., Flat]
) -> None:
    body = "reg r; initial r = 0; buf (q, r);"
    block = "(d +=> q) = 1; (g => q) = 2; $setup(d, negedge g, 1);"
    lines = dump_kind(elaborate(cell_board("input d, g, output q", body, block)).kinds[0]).splitlines()
    assert lines == [
        "part cell_ PARTS register",
        "  d rise -> q rise 1:1:1", "  d fall -> q fall 1:1:1",
        "  g rise -> q rise 2:2:2 launches", "  g rise -> q fall 2:2:2 launches",
        "  sinks d",
    ]  # fmt: skip


def test_an_inout_that_is_driven_and_heard(cell: Cell) -> None:
    body = "bufif1 (io, d, en); buf (q, io);"
    found = cell("input d, en, inout io, output q", body, "(d, en *> io) = (2, 3); (io => q) = 1;")
    assert {key.split()[0] for key in found} == {"d>io", "en>io", "io>q"}


def test_parameters_choose_what_a_cell_does(delays: Callable[[str], Hops]) -> None:
    text = """`timescale 1 ns / 1 ps
    module board(input a, output y, z); inv_ u (.a(a), .y(y)); inv_ #(.T(0)) v (.a(a), .y(z)); endmodule
    module inv_(input a, output y); parameter T = 1; assign y = a ^ T;
    specify (a => y) = 2 + T; endspecify endmodule"""
    three, two = [3 * NS] * 3, [2 * NS] * 3
    assert delays(text) == {"u a>y rf": three, "u a>y fr": three, "v a>y rr": two, "v a>y ff": two}


def test_a_parts_file_that_describes_the_name_wins(
    cell_board: Callable[..., str], elaborate: Callable[..., Flat]
) -> None:
    parts = "family F { part cell_ { inputs a; outputs y = a; times ns { tpd a => y 7; } } }"
    kind = elaborate(cell_board(*BUFFER, "(a => y) = 6;"), parts).kinds[0]
    assert set(kind.delays.ravel().tolist()) == {7.0 * NS}


# Registers of the body: primitives and textbook registers


def test_a_condition_may_be_as_deep_as_it_likes(cell: Cell) -> None:
    deep = "(" * 3000 + "b" + ")" * 3000 + " ^ b" * 3000
    found = cell(*EITHER, f"if ({'~' * 3000}{deep}) (a => y) = 3; ifnone (a => y) = 4; (b => y) = 1;")
    assert {t[0] for key, t in found.items() if key[0] == "a"} == {3, 4}
