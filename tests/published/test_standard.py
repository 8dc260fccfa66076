"""Examples of IEEE 1364-2005 on delays, keyed by clause, and what the clauses say of them."""

from collections.abc import Callable
from typing import Any

import pytest

import tardigate

Fixture = Callable[..., Any]


def alike(rise: float, fall: float) -> dict[tuple[str, str, str, str], tuple[float, float, float]]:
    """Hops of a two-input `and` with one figure an edge."""
    return {
        (pin, edge, "out", edge): (delay,) * 3
        for pin in ("in1", "in2")
        for edge, delay in (("rise", rise), ("fall", fall))
    }


def test_one_and_two_delays_of_a_gate(hops: Fixture) -> None:
    """7.14, example 1: `and #(10)` and `and #(10,12)`."""
    assert hops("module m(input a, b, output y); and #(10) (y, a, b); endmodule") == alike(10, 10)
    assert hops("module m(input a, b, output y); and #(10,12) (y, a, b); endmodule") == alike(10, 12)


def three_state(
    enables: str, rise: tuple[float, ...], fall: tuple[float, ...], off: tuple[float, ...]
) -> dict[tuple[str, str, str, str], tuple[float, ...]]:
    """Hops of a bufif: data, control on (from z), control off (to z; its net then goes either way)."""
    disables = "fall" if enables == "rise" else "rise"
    return {
        ("in", "rise", "out", "rise"): rise,
        ("in", "fall", "out", "fall"): fall,
        ("control", enables, "out", "rise"): rise,
        ("control", enables, "out", "fall"): fall,
        ("control", disables, "out", "rise"): off,
        ("control", disables, "out", "fall"): off,
    }


@pytest.mark.parametrize(("delays", "off"), [("10,12,11", 11), ("10,12", 10), ("12,10", 10)])
def test_three_delays_of_a_three_state_gate(hops: Fixture, delays: str, off: float) -> None:
    """7.14, example 1 and table 7-9 (from memory): the third is to z; without it, the smaller of the two."""
    rise, fall = (float(delay) for delay in delays.split(",")[:2])
    found = hops(f"module m(input d, g, output y); bufif0 #({delays}) (y, d, g); endmodule")
    assert found == three_state("fall", (rise,) * 3, (fall,) * 3, (off,) * 3)


def test_triples_of_three_state_gates(hops: Fixture) -> None:
    """7.14.1, example 1; no order between min, typ and max is asked for by the standard."""
    found = hops("module m(input d, g, output y); bufif0 #(5:7:9, 8:10:12, 15:18:21) (y, d, g); endmodule")
    assert found == three_state("fall", (5, 7, 9), (8, 10, 12), (15, 18, 21))
    found = hops("module m(input d, g, output y); bufif1 #(6:8:10, 5:7:9, 13:17:19) (y, d, g); endmodule")
    assert found == three_state("rise", (6, 8, 10), (5, 7, 9), (13, 17, 19))


@pytest.mark.parametrize("gate", ["and", "nand", "or", "nor", "xor", "xnor", "buf", "not"])
def test_these_gates_take_two_delays_at_most(gate: str) -> None:
    """7.2 and 7.3: delay2 (from memory)."""
    pins = "y, a" if gate in {"buf", "not"} else "y, a, b"
    verilog = f"module m(input a, b, output y); {gate} #(1,2%s) ({pins}); endmodule"
    assert tardigate.read_text(verilog % "").settle().net("y").settles_ns == 2
    with pytest.raises(tardigate.InputRefusedError):
        tardigate.read_text(verilog % ",3")


LATCH = """
  module latch(output qout, nqout, input clock, data, enable%s);
    not #5 n1(ndata, data);
    nand #(3,5) n2(wa, data, clock), n3(wb, ndata, clock);
    nand #(12,15) n4(q, %s, wa), n5(nq, q, wb);
    bufif1 #(3,7,13) q_drive(qout, q, enable), nq_drive(nqout, nq, enable);
  endmodule"""
"""7.14, example 2: a latch of gates. The standard states no totals: those below are our sums by hand."""


def test_the_latch_of_the_standard_is_a_ring() -> None:
    with pytest.raises(tardigate.InputRefusedError) as refused:
        tardigate.read_text(LATCH % ("", "nq")).settle()
    (ring,) = refused.value.diagnostics
    assert ring.code == "G101"
    assert "n4" in ring.message
    assert "n5" in ring.message


def test_the_latch_of_the_standard_with_its_ring_opened(figures: Fixture) -> None:
    """The ring opened where nq comes back to q; times from a change of the data alone."""
    found = figures(LATCH % (", nq_held", "nq_held"), sources=("data",))
    assert found.rise_and_fall("q") == (5 + 12, 3 + 15)
    assert found.rise_and_fall("wb") == (5 + 3, 5 + 5)
    assert found.earliest_rise_and_fall("q") == (17, 18)
    assert found.earliest_rise_and_fall("qout") == (5 + 12 + 3, 3 + 15 + 7)
    opened = LATCH.replace("n5(nq, q, wb)", "n5(nq, q_held, wb)") % (", q_held", "nq")
    found = figures(opened, sources=("data",))
    assert found.rise_and_fall("nq")[0] == 5 + 5 + 12
    assert found.rise_and_fall("nqout")[0] == 25
    assert found.rise_and_fall("q")[1] == 5 + 5 + 12 + 15
    assert found.rise_and_fall("qout")[1] == 44


def test_exclusive_or_by_state(hops: Fixture, figures: Fixture) -> None:
    """14.2.4.2, example 1, its four conditional paths as rows: worst rise 3, fall 4; best 1 and 2."""
    rows = "".join(
        f"tPLH {one} => Y when {other} {rise}; tPHL {one} => Y when {other} {fall};"
        for one, other, rise, fall in (
            ("B", "A", 3, 4),
            ("A", "B", 3, 4),
            ("B", "~A", 1, 2),
            ("A", "~B", 1, 2),
        )
    )
    part = f"part XOR2_A {{ inputs A, B; output Y = A ^ B; times ns {{ {rows} }} }}"
    verilog = "module m(input a, b, output y); XOR2_A u(.A(a), .B(b), .Y(y)); endmodule"
    found = hops(verilog, part)
    for pin in "AB":  # with the other input low the output moves with this one, with it high against it
        assert found[pin, "rise", "Y", "rise"] == (1, 1, 1)
        assert found[pin, "fall", "Y", "fall"] == (2, 2, 2)
        assert found[pin, "fall", "Y", "rise"] == (3, 3, 3)
        assert found[pin, "rise", "Y", "fall"] == (4, 4, 4)
    assert figures(verilog, part).rise_and_fall("y") == (3, 4)
    assert figures(verilog, part).earliest_rise_and_fall("y") == (1, 2)


def pairs(hops: Fixture, pins: str, arrow: str, connections: str, ports: str) -> set[tuple[str, str]]:
    part = f"part P {{ {pins} times ns {{ tpd {arrow} 1; }} }}"
    found = hops(f"module m({ports}); P u({connections}); endmodule", part)
    return {(pin_in, pin_out) for pin_in, _, pin_out, _ in found}


def test_full_and_parallel_connections(hops: Fixture) -> None:
    """14.2.5 and its example: `(a, b, c *> q1, q2)` is six paths; `=>` joins bit to bit."""
    scalars = "inputs A, B, C; outputs Q1, Q2;"
    by_name = ".A(a), .B(b), .C(c), .Q1(q), .Q2(r)"
    found = pairs(hops, scalars, "A, B, C *> Q1, Q2", by_name, "input a, b, c, output q, r")
    assert found == {(pin_in, pin_out) for pin_in in "ABC" for pin_out in ("Q1", "Q2")}
    vectors, by_name, ports = (
        "inputs A[3:0]; outputs Y[3:0];",
        ".A(a), .Y(y)",
        "input [3:0] a, output [3:0] y",
    )
    each = {(f"A[{bit}]", f"Y[{bit}]") for bit in range(4)}
    assert pairs(hops, vectors, "A => Y", by_name, ports) == each
    every = {(f"A[{bit}]", f"Y[{other}]") for bit in range(4) for other in range(4)}
    assert pairs(hops, vectors, "A *> Y", by_name, ports) == every


def test_a_parallel_connection_wants_equal_widths() -> None:
    """14.2.5."""
    parts = "family F { part P { inputs A[3:0]; outputs Y[2:0]; times ns { tpd A => Y 1; } } }"
    with pytest.raises(tardigate.InputRefusedError) as refused:
        tardigate.read_text("module m(input [3:0] a, output [2:0] y); P u(a, y); endmodule", parts=parts)
    assert {fault.code[0] for fault in refused.value.diagnostics} == {"P"}


def test_polarity_of_a_path(hops: Fixture) -> None:
    """14.2.6: `+` passes the edge on, `-` the other one; without either, both may follow."""
    edges = {"+=>": {("rise", "rise"), ("fall", "fall")}, "-=>": {("rise", "fall"), ("fall", "rise")}}
    for arrow, expected in (*edges.items(), ("=>", edges["+=>"] | edges["-=>"])):
        part = f"part P {{ input A; output Y; times ns {{ tpd A {arrow} Y 1; }} }}"
        found = hops("module m(input a, output y); P u(.A(a), .Y(y)); endmodule", part)
        assert {(edge_in, edge_out) for _, edge_in, _, edge_out in found} == expected


def test_delays_are_rounded_to_the_precision_one_by_one(figures: Fixture) -> None:
    """19.8, example: `timescale 10 ns / 1 ns`, 1.55 is 16 ns, the second after it at 32 ns."""
    verilog = """`timescale 10 ns / 1 ns
      module m(input a, output y); buf #1.55 g1(n, a), g2(y, n); endmodule"""
    found = figures(verilog)
    assert (found.settles("n"), found.settles("y")) == (16, 32)


def test_three_decimals_and_tenths(figures: Fixture) -> None:
    """19.8: 1 ns / 1 ps keeps three decimals; 10 us / 100 ns rounds to tenths of a microsecond."""
    fine = "`timescale 1 ns / 1 ps\nmodule m(input a, output y); buf #2.71828 g(y, a); endmodule"
    assert figures(fine).settles("y") == 2.718
    coarse = "`timescale 10 us / 100 ns\nmodule m(input a, output y); buf #1.237 g(y, a); endmodule"
    assert figures(coarse).settles("y") == 12_400
