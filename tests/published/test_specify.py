"""Examples of IEEE 1364-2005 clauses 14 and 15 against the parts that their specify blocks become.

Values are those of the examples of the standard as the conformance tests `ieee-1364-2005/test_*` of the
ispras/sv-tests collection (BSD-3) carry them, named beside each check. Where the standard leaves the body
out, a body that does what the text says stands here, or none is known. The standard says what one simulation
does; figures here bound all of them.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import pytest

FORWARD = (("rise", "rise"), ("fall", "fall"))
BACKWARD = (("rise", "fall"), ("fall", "rise"))


def _text(ports: str, body: str, block: str) -> str:
    """Return a design that is one instance of the example."""
    words = ports.replace(",", " ").split()
    names = [word for word in words if word not in ("input", "output") and not word.startswith("[")]
    pins = ", ".join(f".{name}({name})" for name in names)
    return (
        f"`timescale 1 ns / 100 ps\nmodule board({ports});\nexample u ({pins});\nendmodule\n"
        f"module example({ports});\n{body}\nspecify\n{block}\nendspecify\nendmodule\n"
    )


NO_BODY = "initial ;"


def _same(number: float) -> tuple[float, float, float]:
    return (number, number, number)


def test_14_3_3_selection_among_two_inputs(figures: Callable[..., Any]) -> None:
    """test_14_03_03_1: Y rises 6 after A, 5 after B, 5 after both; falls 9 after both."""
    text = _text("input A, B, output Y", "and (Y, A, B);", "(A => Y) = (6, 9); (B => Y) = (5, 11);")
    assert figures(text, sources=("A",)).rise_and_fall("Y") == (6, 9)
    assert figures(text, sources=("B",)).rise_and_fall("Y") == (5, 11)
    both = figures(text)
    assert both.earliest_rise_and_fall("Y") == (5, 9)  # what the standard selects when both change at once
    assert both.rise_and_fall("Y") == (6, 11)


def test_14_3_3_selection_among_active_paths(figures: Callable[..., Any]) -> None:
    """test_14_03_03_2: MODE = 2 gives rise 4, fall 5, the smallest of three active paths; others differ."""
    block = """if (MODE < 5) (A => Y) = (5, 9); if (MODE < 4) (A => Y) = (4, 8);
    if (MODE < 3) (A => Y) = (6, 5); if (MODE < 2) (A => Y) = (3, 2); if (MODE < 1) (A => Y) = (7, 7);
    (MODE *> Y) = 5;"""
    found = figures(_text("input A, input [2:0] MODE, output Y", NO_BODY, block), sources=("A",))
    assert (found.earliest_rise_and_fall("Y"), found.rise_and_fall("Y")) == ((3, 2), (7, 9))


def test_14_2_4_2_exclusive_or_by_state(hops: Callable[..., Any]) -> None:
    """Clause 14.2.4.2, example: slower where the other input is high, and there the gate inverts."""
    block = """specparam noninvrise = 1, noninvfall = 2, invertrise = 3, invertfall = 4;
    if (a) (b => out) = (invertrise, invertfall); if (b) (a => out) = (invertrise, invertfall);
    if (~a) (b => out) = (noninvrise, noninvfall); if (~b) (a => out) = (noninvrise, noninvfall);"""
    found = hops(_text("input a, b, output out", "xor x1 (out, a, b);", block))
    for pin in "ab":
        assert [found[pin, one, "out", other][2] for one, other in FORWARD] == [1, 2]
        assert [found[pin, one, "out", other][2] for one, other in BACKWARD] == [4, 3]


def test_14_3_1_six_and_twelve_values(hops: Callable[..., Any]) -> None:
    """test_14_03_01_4 and _5: 01, 10, 0z, z1, 1z, z0 take 12 to 34; of twelve the six of x have no hop."""
    ports, body = "input c, en, output q", "bufif1 (q, c, en);"
    names = ("01", "10", "0z", "z1", "1z", "z0")
    keys = (
        ("c", "rise", "q", "rise"), ("c", "fall", "q", "fall"), ("en", "fall", "q", "rise"),
        ("en", "rise", "q", "rise"), ("en", "fall", "q", "fall"), ("en", "rise", "q", "fall"),
    )  # fmt: skip
    for values in ((12, 16, 13, 10, 14, 34), (10, 12, 14, 15, 29, 36, 14, 15, 15, 14, 20, 30)):
        written = ", ".join(map(str, values))
        found = hops(_text(ports, body, f"(c, en *> q) = ({written});"))
        assert len(found) == 6
        for name, key, value in zip(names, keys, values, strict=False):
            assert found[key] == _same(value), name


def test_14_2_3_edge_sensitive_paths(hops: Callable[..., Any]) -> None:
    """Clause 14.2.3, example 1: (posedge clock => (out +: in)) = (10, 8); negedge, conditions beside it."""
    ports = "input clock, in, reset, clear, output out"
    found = hops(_text(ports, NO_BODY, "(posedge clock => (out +: in)) = (10, 8);"))
    assert found == {("clock", "rise", "out", "rise"): _same(10), ("clock", "rise", "out", "fall"): _same(8)}
    block = "if (!reset && !clear) (posedge clock => (out +: in)) = (10, 8);"
    assert hops(_text(ports, NO_BODY, block)) == found
    both = "(posedge clock => (out : in)) = (10, 5); (negedge clock => (out : in)) = (20, 12);"
    assert hops(_text(ports, NO_BODY, both)) == {
        ("clock", edge, "out", to): _same(value)
        for edge, pair in (("rise", (10, 5)), ("fall", (20, 12)))
        for to, value in zip(("rise", "fall"), pair, strict=True)
    }


def test_14_2_4_4_ifnone(figures: Callable[..., Any]) -> None:
    """Clause 14.2.4.4, legal: `ifnone` beside an edge-sensitive path with a condition of the same pins."""
    block = """if (RESET) (posedge CLK => (OUT +: IN)) = (15, 8); ifnone (CLK => OUT) = (15, 8);"""
    found = figures(_text("input CLK, IN, RESET, output OUT", NO_BODY, block))
    assert found.rise_and_fall("OUT") == found.earliest_rise_and_fall("OUT") == (15, 8)


def test_14_2_5_full_paths_of_lists(hops: Callable[..., Any]) -> None:
    """Clause 14.2.6: (a, b, c *> q1, q2) = 10 is six paths."""
    found = hops(_text("input a, b, c, output q1, q2", NO_BODY, "(a, b, c *> q1, q2) = 10;"))
    assert {(key[0], key[2]) for key in found} == {(a, q) for a in "abc" for q in ("q1", "q2")}
    assert set(found.values()) == {_same(10)}


def test_14_2_5_eight_bit_selector(hops: Callable[..., Any]) -> None:
    """Clause 14.2.5, example mux8: (in1 => q) = (3, 4); (in2 => q) = (2, 3); (s *> q) = 1."""
    ports = "input [7:0] in1, input [7:0] in2, input s, output [7:0] q"
    block = "(in1 => q) = (3, 4); (in2 => q) = (2, 3); (s *> q) = 1;"
    found = hops(_text(ports, "assign q = s ? in2 : in1;", block))
    for bit in range(8):
        out = f"q[{bit}]"
        assert [found[f"in1[{bit}]", one, out, one][0] for one, _ in FORWARD] == [3, 4]
        assert [found[f"in2[{bit}]", one, out, one][0] for one, _ in FORWARD] == [2, 3]
        assert {found["s", one, out, other][0] for one in ("rise", "fall") for other in ("rise", "fall")} == {
            1
        }
    assert len(found) == 8 * (2 + 2 + 4)


def test_14_2_4_2_partial_function_of_an_alu(figures: Callable[..., Any]) -> None:
    """Clause 14.2.4.2, example ALU: 25.0 adding, 5.6 and 8.0 passing, 6.1 and 6.5 from the opcode."""
    block = """if (opcode == 2'b00) (i1, i2 *> o1) = (25.0, 25.0);
    if (opcode == 2'b01) (i1 => o1) = (5.6, 8.0); if (opcode == 2'b10) (i2 => o1) = (5.6, 8.0);
    (opcode *> o1) = (6.1, 6.5);"""
    ports = "input [7:0] i1, input [7:0] i2, input [2:1] opcode, output [7:0] o1"
    text = _text(ports, NO_BODY, block)
    data, opcode = (figures(text, sources=(pin,)) for pin in ("i1", "opcode"))
    assert (data.earliest_rise_and_fall("o1[3]"), data.rise_and_fall("o1[3]")) == ((5.6, 8), (25, 25))
    assert (opcode.earliest_rise_and_fall("o1[3]"), opcode.rise_and_fall("o1[3]")) == ((6.1, 6.5), (6.1, 6.5))


def test_14_3_specparams_of_a_flip_flop(hops: Callable[..., Any]) -> None:
    """test_14_03_00_1: clk => q 45:150:270 and 60:200:350, clr and pre *> q 35:40:45 and 40:50:65."""
    block = """specparam tRise_clk_q = 45:150:270, tFall_clk_q = 60:200:350;
    specparam tRise_Control = 35:40:45, tFall_control = 40:50:65;
    (clk => q) = (tRise_clk_q, tFall_clk_q);
    (clr, pre *> q) = (tRise_Control, tFall_control);
    specparam PATHPULSE$clk$q = (2, 9), PATHPULSE$clr$q = (0, 4), PATHPULSE$ = 3;"""
    found = hops(_text("input clk, clr, pre, output q", NO_BODY, block))
    for edge in ("rise", "fall"):
        assert found["clk", edge, "q", "rise"] == (45, 150, 270)
        assert found["clk", edge, "q", "fall"] == (60, 200, 350)
        for control in ("clr", "pre"):
            assert found[control, edge, "q", "rise"] == (35, 40, 45)
            assert found[control, edge, "q", "fall"] == (40, 50, 65)


@pytest.mark.parametrize(("inside", "path", "both"), [(22, 5, 22), (1, 22, 22), (7, 7, 7)])
def test_14_4_the_larger_of_path_and_distributed_delay(
    figures: Callable[..., Any], inside: int, path: int, both: int
) -> None:
    """Clause 14.4, from memory: of module path and distributed delay the larger is used."""
    text = _text("input D, output Q", f"buf #{inside} (Q, D);", f"(D => Q) = {path};")
    assert figures(text).both("Q") == (both, both)


FLIP_FLOP = """`timescale 1 ns / 1 ns
primitive ff(q, d, c, nset, nclr); output q; reg q; input d, c, nset, nclr;
table
 ? ? 0 1 : ? : 1; ? ? ? 0 : ? : 0; ? ? r 1 : ? : -; ? ? 1 r : ? : -;
 0 r 1 1 : ? : 0; 1 r 1 1 : ? : 1; ? n 1 1 : ? : -; * ? 1 1 : ? : -;
endtable
endprimitive
module dff(q, clk, d, preset, clear);
output q; input clk, d, preset, clear;
wire enable;
ff f (q, d, clk, preset, clear);
and (enable, preset, clear);
specify
  specparam tSU = 10, tHD = 1, tPW = 25, tWPC = 10, tREC = 5;
  (posedge clk => (q +: d)) = (4:6:9, 5:8:11);
  (preset, clear *> q) = (1, 1);
  $setup(d, posedge clk &&& enable, tSU);
  $hold(posedge clk, d &&& enable, tHD);
  $period(posedge clk, tPW);
  $width(negedge preset, tWPC, 0);
  $width(negedge clear, tWPC, 0);
  $recovery(posedge clear, posedge clk, tREC);
endspecify
endmodule
"""
"""Clause 15.5, example (test_15_05_00_2); the delay of preset and clear is ours."""


def test_15_5_flip_flop_clock_to_output(hops: Callable[..., Any]) -> None:
    board = "module board(input c, d, p, r, output q); dff u (q, c, d, p, r); endmodule\n"
    found = hops(FLIP_FLOP + board)
    assert found["clk", "rise", "q", "rise"] == (4, 6, 9)
    assert found["clk", "rise", "q", "fall"] == (5, 8, 11)
    others = {key for key in found if key[0] != "clk"}
    assert others == {
        ("preset", "fall", "q", "rise"), ("clear", "fall", "q", "fall"),
        ("clear", "rise", "q", "rise"),  # while preset is low: clear wins in this table
    }  # fmt: skip


def test_15_5_flip_flop_that_toggles(figures: Callable[..., Any]) -> None:
    """Derived here: through an inverter of 0 ns d has settled 11 after the clock and stirs 4 after it."""
    board = """module board(input c, output q); wire n; dff u (q, c, n, 1'b1, 1'b1); assign n = ~q; endmodule
    """
    parts = 'operators ns { tpd "~" 0; }'
    found = figures(FLIP_FLOP + board, parts)
    assert (found.settles("n"), found.stirs("n")) == (11, 4)
    assert found.settles("n") + 10 < 25  # so that the least period is what counts: 40 MHz
    assert found.stirs("n") - 1 == 3  # the hold margin
