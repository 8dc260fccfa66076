"""Published sequential examples: when the data settles and stirs at the D pins.

The publications go on to clock periods and hold margins. Those sums are made here by hand, from the times at
the D pins; the clock's own arrival is not looked at.
"""

from collections.abc import Callable
from typing import Any

import pytest

Fixture = Callable[..., Any]

TO_THREE_GATES_AND_ONE = """
module m(input ck, a, b, c, d, output x, y);
  FF ra(.D(a), .CK(ck), .Q(qa)); FF rb(.D(b), .CK(ck), .Q(qb));
  FF rc(.D(c), .CK(ck), .Q(qc)); FF rd(.D(d), .CK(ck), .Q(qd));
  and g1(n1, qa, qb);
  or  g2(n2, n1, qc);
  not g3(x_next, n2);
  nor g4(y_next, n2, qd);
  FF rx(.D(x_next), .CK(ck), .Q(x)); FF ry(.D(y_next), .CK(ck), .Q(y));
endmodule"""
"""Longest way three gates, shortest one; the kinds of the gates are ours, the figure was not to be had."""


def test_three_gates_and_one_between_flip_flops(figures: Fixture, flip_flop: Fixture) -> None:
    """Harris and Harris, slides to Digital Design and Computer Architecture, ch. 3, "Timing analysis"."""
    parts = flip_flop("30:-:50", "ps") + "default ps { tpd 25:-:35; }"
    found = figures(TO_THREE_GATES_AND_ONE, parts, "ps")
    assert found.both("x_next") == (30 + 2 * 25, 50 + 3 * 35)
    assert found.both("y_next") == (30 + 25, 50 + 3 * 35)
    assert found.settles("y_next") + 60 == 215  # with tsu: the published period
    assert found.stirs("y_next") - 70 == -15  # with th: the published violation


def test_the_same_with_a_buffer_in_the_short_way(figures: Fixture, flip_flop: Fixture) -> None:
    """The same slides: one buffer more mends the hold and leaves the period."""
    parts = flip_flop("30:-:50", "ps") + "default ps { tpd 25:-:35; }"
    verilog = TO_THREE_GATES_AND_ONE.replace("n2, qd)", "n2, qd2); buf g5(qd2, qd)")
    found = figures(verilog, parts, "ps")
    assert found.stirs("y_next") - 70 == 10
    assert found.settles("y_next") + 60 == 215


def test_ddca_example_3_10(figures: Fixture, flip_flop: Fixture) -> None:
    """Harris and Harris, Digital Design and Computer Architecture, example 3.10 (its number from memory)."""
    parts = flip_flop("30:-:80", "ps") + "default ps { tpd 25:-:40; }"
    found = figures(TO_THREE_GATES_AND_ONE, parts, "ps")
    assert found.settles("y_next") + 50 == 250
    assert found.stirs("y_next") - 60 == -5


def test_ddca_example_3_11(figures: Fixture, flip_flop: Fixture) -> None:
    """The same, example 3.11 (from memory): a buffer in the short way, 80 ps against a hold time of 60 ps."""
    parts = flip_flop("30:-:80", "ps") + "default ps { tpd 25:-:40; }"
    found = figures(TO_THREE_GATES_AND_ONE.replace("n2, qd)", "n2, qd2); buf g5(qd2, qd)"), parts, "ps")
    assert (found.stirs("y_next"), found.settles("y_next") + 50) == (80, 250)


def test_a_wire_in_the_longest_way(figures: Fixture, flip_flop: Fixture) -> None:
    """A course's variant of example 3.10: 30 ps of wire in the longest way, period 280 ps."""
    parts = flip_flop("30:-:80", "ps") + "default ps { tpd 25:-:40; }"
    verilog = "`timescale 1ps/1ps" + TO_THREE_GATES_AND_ONE.replace(
        "n2, n1, qc)", "n2, n1w, qc); buf #30 w(n1w, n1)"
    )
    assert figures(verilog, parts, "ps").settles("y_next") + 50 == 280


def test_minimum_and_maximum_on_data_and_clock_ways(figures: Fixture, flip_flop: Fixture) -> None:
    """VLSI concepts (web log), practical set-up and hold examples, part 3c, problem 1. Recomputed."""
    verilog = """
      module m(input clk, d, output q);
        buf #(1:1.5:2) w1(c1, clk);
        FF f1(.D(d), .CK(c1), .Q(q1));
        buf #(1:1.5:2) w2(n1, q1);
        not #(6:7:9)   g1(n2, n1);
        buf #(1:1.5:2) w3(d2, n2);
        buf #(2:2.5:3) w4(c2, clk);
        buf #(5:7:9)   b1(c3, c2);
        buf #(2:2.5:3) w5(c4, c3);
        FF f2(.D(d2), .CK(c4), .Q(q));
      endmodule"""
    found = figures(verilog, flip_flop("9:-:11"))
    launch, data, capture = found.both("c1"), found.both("d2"), found.both("c4")
    assert (launch, capture) == ((1, 2), (9, 15))
    assert data == (17, 24)  # counted from the clock pin of f1
    assert launch[0] + data[0] == 18
    assert launch[0] + data[0] - (capture[1] + 2) == 1  # hold margin
    assert (15 + capture[0] - 4) - (launch[1] + data[1]) == -6  # setup margin at a period of 15 ns


def test_flip_flop_logic_flip_flop(figures: Fixture, flip_flop: Fixture) -> None:
    """Exploreroots, "Q2 maximum frequency": 27 ns. ERRATUM there: 3.7 MHz, where 1/27 ns is 37 MHz."""
    verilog = """
      module m(input ck, d, output q);
        FF f1(.D(d), .CK(ck), .Q(q1)); buf #13 g(d2, q1); FF f2(.D(d2), .CK(ck), .Q(q));
      endmodule"""
    assert figures(verilog, flip_flop("9")).settles("d2") + 5 == 27


def test_two_ways_in_parallel(figures: Fixture, flip_flop: Fixture) -> None:
    """Exploreroots, "maximum-frequency-6": 18 ns, the capturing clock 2 ns late. ERRATUM there: 5.55 MHz."""
    verilog = """
      module m(input ck, d, output q);
        FF f1(.D(d), .CK(ck), .Q(q1)); FF f3(.D(d), .CK(ck), .Q(q3));
        or #4 g1(a1, q1, q3); not #2 g2(a2, a1);
        not #2 g3(b1, q1); not #2 g4(b2, b1);
        and #4 g5(unused, a2, b2);
        buf #2 g6(late, ck);
        FF f2(.D(a2), .CK(late), .Q(q)); FF f4(.D(b2), .CK(late), .Q(q4));
      endmodule"""
    found = figures(verilog, flip_flop("9"))
    assert found.settles("a2") == 9 + 6
    assert found.settles("b2") == 9 + 4
    assert found.settles("a2") + 5 - found.stirs("late") == 18


GATE_RULE = "gates ns { tpd not 1.1; tpd and(2), xor(2) 1.2; }"
"""1 + 0.1 k ns for a gate of k inputs."""

COUNTER = """
  module m(input ck, en, output q0, q1, q2, q3);
    FF f0(.D(d0), .CK(ck), .Q(q0)); FF f1(.D(d1), .CK(ck), .Q(q1));
    FF f2(.D(d2), .CK(ck), .Q(q2)); FF f3(.D(d3), .CK(ck), .Q(q3));
    xor x0(d0, q0, en); and g1(a1, en, q0);
    xor x1(d1, q1, a1); and g2(a2, a1, q1);
    xor x2(d2, q2, a2); and g3(a3, a2, q2);
    xor x3(d3, q3, a3);
  endmodule"""


def test_toggle_flip_flop(figures: Fixture, flip_flop: Fixture) -> None:
    """Brown and Vranesic, Fundamentals of Digital Logic with Verilog, sec. 5.15, numbers from memory."""
    verilog = "module m(input ck, output q); FF f(.D(d), .CK(ck), .Q(q)); not g(d, q); endmodule"
    found = figures(verilog, flip_flop("0.8:-:1.0") + GATE_RULE)
    assert found.both("d") == (1.9, 2.1)
    assert found.settles("d") + 0.6 == pytest.approx(2.7, abs=1e-9)


def test_four_bit_counter(figures: Fixture, flip_flop: Fixture) -> None:
    """The same section, numbers from memory: Q0 to Q3 6.4 ns, Q0 to Q2 5.2 ns, the shortest way 2.0 ns."""
    clocks = ("f0.CK", "f1.CK", "f2.CK", "f3.CK")
    found = figures(COUNTER, flip_flop("0.8:-:1.0") + GATE_RULE, sources=clocks)
    assert found.settles("d3") + 0.6 == pytest.approx(6.4, abs=1e-9)
    assert found.settles("d2") + 0.6 == pytest.approx(5.2, abs=1e-9)
    assert min(found.stirs(net) for net in ("d0", "d1", "d2", "d3")) == 2.0


def test_processor_ways(figures: Fixture, flip_flop: Fixture, block: Fixture) -> None:
    """Harris and Harris, Digital Design and Computer Architecture, 2nd ed., tables 7.6 and 7.7, from memory.

    A load in one cycle, the longest step of several cycles, and the half cycle of the decode stage.
    """
    parts = flip_flop("30", "ps") + "".join(
        block(name, inputs, "Y", delay, "ps")
        for name, inputs, delay in (
            ("MUX", "A, B", 25), ("ALU", "A, B", 200), ("MEMORY", "A", 250), ("REGISTERS", "A", 150),
            ("EQUAL", "A, B", 40), ("AND", "A, B", 15),
        )
    )  # fmt: skip
    single = """
      module m(input ck, next, output pc);
        FF counter(.D(next), .CK(ck), .Q(pc));
        MEMORY fetch(.A(pc), .Y(word)); REGISTERS file(.A(word), .Y(a));
        ALU alu(.A(a), .B(word), .Y(address)); MEMORY data(.A(address), .Y(read));
        MUX back(.A(address), .B(read), .Y(written));
      endmodule"""
    assert figures(single, parts, "ps").settles("written") + 20 == 925
    several = """
      module m(input ck, x, output q);
        FF r(.D(x), .CK(ck), .Q(q)); MUX before(.A(q), .B(x), .Y(a));
        ALU alu(.A(a), .B(q), .Y(b)); MUX after(.A(b), .B(a), .Y(sum)); MEMORY data(.A(a), .Y(read));
      endmodule"""
    found = figures(several, parts, "ps", ("r.CK",))
    assert max(found.settles("sum"), found.settles("read")) + 20 == 325
    decode = """
      module m(input word, other);
        REGISTERS file(.A(word), .Y(a)); MUX forward(.A(a), .B(other), .Y(b));
        EQUAL equal(.A(b), .B(other), .Y(same)); AND branch(.A(same), .B(other), .Y(taken));
        MUX next(.A(taken), .B(other), .Y(pc));
      endmodule"""
    assert 2 * (figures(decode, parts, "ps").settles("pc") + 20) == 550


def test_instructions_of_one_cycle(figures: Fixture) -> None:
    """Patterson and Hennessy, Computer Organization and Design, introduction of pipelining, from memory."""
    verilog = """`timescale 1ps/1ps
      module m(input pc, output load, store, r_type, branch);
        buf #200 fetch(word, pc);
        buf #100 file(a, word);
        buf #200 alu(branch, a);
        buf #200 write(store, branch);
        buf #200 read(data, branch);
        buf #100 back(load, data);
        buf #100 result(r_type, branch);
      endmodule"""
    found = figures(verilog, unit="ps")
    assert [found.settles(net) for net in ("load", "store", "r_type", "branch")] == [800, 700, 600, 500]


@pytest.mark.parametrize(("gates", "period"), [(3, 430), (2, 330)])
def test_nands_in_a_row(figures: Fixture, gates: int, period: int) -> None:
    """Chipworld (web log, 2023), static timing examples, ex. 3: tPD 100, tCD 51 ps; tpcq + tsu are 130 ps."""
    chain = "".join(f"nand g{n}(n{n + 1}, n{n}, n0);" for n in range(gates))
    found = figures(f"module m(input n0); {chain} endmodule", "gates ps { tpd nand 51:-:100; }", "ps")
    assert found.settles(f"n{gates}") + 130 == period
    assert found.stirs(f"n{gates}") == 51  # n0 also reaches the last gate alone


def test_toggle_flip_flop_of_the_standard(figures: Fixture) -> None:
    """IEEE 1364-2005, 15.5: rise 4:6:9, fall 5:8:11; tsu 10, th 1. The toggle around it is ours."""
    part = """part FF { inputs D, CK; outputs Q; register posedge CK { Q = D; }
      times ns { tPLH CK => Q 4:6:9; tPHL CK => Q 5:8:11; } }"""
    verilog = "module m(input ck, output q); FF f(.D(d), .CK(ck), .Q(q)); not #0 g(d, q); endmodule"
    found = figures(verilog, part)
    assert found.rise_and_fall("q") == (9, 11)
    assert found.earliest_rise_and_fall("q") == (4, 5)
    assert found.rise_and_fall("d") == (11, 9)
    assert found.settles("d") + 10 == 21  # below the least period of 25 that the standard's example checks
    assert found.stirs("d") - 1 == 3


def test_correlator_as_drawn(figures: Fixture, flip_flop: Fixture) -> None:
    """Leiserson and Saxe, "Retiming synchronous circuitry", Algorithmica 6, 1991, from memory: 24 units.

    Comparators 3, adders 7 units, registers without delay of their own.
    """
    verilog = """
      module m(input ck, x, c1, c2, c3, c4, output y);
        FF r1(.D(x), .CK(ck), .Q(x1)); FF r2(.D(x1), .CK(ck), .Q(x2));
        FF r3(.D(x2), .CK(ck), .Q(x3)); FF r4(.D(x3), .CK(ck), .Q(x4));
        COMPARE k1(.A(x1), .B(c1), .Y(e1)); COMPARE k2(.A(x2), .B(c2), .Y(e2));
        COMPARE k3(.A(x3), .B(c3), .Y(e3)); COMPARE k4(.A(x4), .B(c4), .Y(e4));
        ADD a5(.A(e3), .B(e4), .Y(s5)); ADD a6(.A(e2), .B(s5), .Y(s6)); ADD a7(.A(e1), .B(s6), .Y(y));
      endmodule"""
    parts = flip_flop("0") + "".join(
        f"part {name} {{ inputs A, B; output Y; times ns {{ tpd A, B *> Y {delay}; }} }}"
        for name, delay in (("COMPARE", 3), ("ADD", 7))
    )
    assert figures(verilog, parts).settles("y") == 24
