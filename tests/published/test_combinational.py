"""Combinational examples of Harris and Harris, Digital Design and Computer Architecture.

Each is a netlist that is wired for it.
"""

from collections.abc import Callable
from math import log2
from typing import Any

import pytest

Fixture = Callable[..., Any]


def test_ripple_carry_adder_of_32_bits(figures: Fixture, block: Fixture) -> None:
    """Example 5.1: full adders of 300 ps, 9.6 ns."""
    adders = "".join(f"FA fa{n}(a[{n}], b[{n}], c[{n}], s[{n}], c[{n + 1}]);" for n in range(32))
    verilog = f"""module m(input [31:0] a, b, input cin, output [31:0] s, output cout);
      wire [32:0] c; assign c[0] = cin; assign cout = c[32]; {adders} endmodule"""
    found = figures(verilog, block("FA", "A, B, C", "S, CO", 300, "ps"))
    assert found.settles("s[31]") == found.settles("cout") == 9.6


def test_carry_lookahead_adder_of_32_bits(figures: Fixture, block: Fixture) -> None:
    """Example 5.1: blocks of 4 bits; tpg 100, of a block 600, AND and OR 200, full adder 300 ps: 3.3 ns."""
    lines = []
    for n in range(32):
        lines.append(f"PG pg{n}(a[{n}], b[{n}], p[{n}], g[{n}]);")
        carry = f"k[{n // 4}]" if n % 4 == 0 else f"r[{n}]"
        lines.append(f"FA fa{n}(a[{n}], b[{n}], {carry}, s[{n}], r[{n + 1}]);")
    for j in range(7):
        bits = ", ".join(f"{name}[{4 * j + i}]" for name in "pg" for i in range(4))
        lines.append(
            f"BLOCK_PG bpg{j}({bits}, bp[{j}], bg[{j}]); AND_OR ao{j}(bp[{j}], bg[{j}], k[{j}], k[{j + 1}]);"
        )
    verilog = f"""module m(input [31:0] a, b, input cin, output [31:0] s);
      wire [31:0] p, g, bp, bg; wire [32:0] k, r; assign k[0] = cin; {"".join(lines)} endmodule"""
    parts = (
        block("FA", "A, B, C", "S, CO", 300, "ps") + block("PG", "A, B", "P, G", 100, "ps")
        + block("BLOCK_PG", "P0, P1, P2, P3, G0, G1, G2, G3", "P, G", 600, "ps")
        + block("AND_OR", "P, G, C", "Y", 200, "ps")
    )  # fmt: skip
    assert figures(verilog, parts).settles("s[31]") == 3.3


@pytest.mark.parametrize("bits", [8, 16, 32])
def test_prefix_adder(figures: Fixture, block: Fixture, bits: int) -> None:
    """Example 5.2 (from memory): tpg + log2(N) tpg of a prefix cell + tXOR; 1.2 ns for 32 bits.

    Column -1 carries the carry in; a Ladner and Fischer tree, as the book draws it.
    """
    lines = ["assign g0[0] = cin; assign p0[0] = 1'b0;"]
    lines += [f"PG pg{n}(a[{n}], b[{n}], p0[{n + 1}], g0[{n + 1}]);" for n in range(bits - 1)]
    levels = int(log2(bits))
    for level in range(levels):
        for n in range(bits):
            now, then = f"[{n}]", f"{level + 1}[{n}]"
            if n >> level & 1:
                low = f"[{(n >> level << level) - 1}]"
                pins = f"p{level}{now}, g{level}{now}, p{level}{low}, g{level}{low}, p{then}, g{then}"
                lines.append(f"CELL c{level}_{n}({pins});")
            else:
                lines.append(f"assign p{then} = p{level}{now}; assign g{then} = g{level}{now};")
    lines += [f"SUM x{n}(a[{n}], b[{n}], g{levels}[{n}], s[{n}]);" for n in range(bits)]
    wires = ", ".join(f"{name}{level}" for level in range(levels + 1) for name in "pg")
    verilog = f"""module m(input [{bits - 1}:0] a, b, input cin, output [{bits - 1}:0] s);
      wire [{bits - 1}:0] {wires}; {"".join(lines)} endmodule"""
    parts = (
        block("PG", "A, B", "P, G", 100, "ps") + block("CELL", "PH, GH, PL, GL", "P, G", 200, "ps")
        + block("SUM", "A, B, G", "S", 100, "ps")
    )  # fmt: skip
    found = figures(verilog, parts, "ps")
    slowest = max(found.settles(f"s[{n}]") for n in range(bits))
    assert slowest == 100 + levels * 200 + 100
    assert bits != 32 or slowest == 1200


def test_three_gates_deep_two_at_least(figures: Fixture) -> None:
    """Example 2.15 (from memory): all gates tPD 100, tCD 60 ps, three at most, two at least: 300 and 120 ps.

    The kinds of the gates are ours: the book's figure was not to be had.
    """
    verilog = """module m(input a, b, c, d, output y);
      and g1(n1, a, b); or g2(n2, n1, c); nand g3(n3, c, d); or g4(y, n2, n3); endmodule"""
    assert figures(verilog, "default ps { tpd 60:-:100; }", "ps").both("y") == (120, 300)


MUX_GATES = """gates ps { tpd not 30; tpd and(2) 60; tpd and(3) 80; tpd or(4) 90;
  tpd bufif0, bufif1 50; ten bufif0, bufif1 35; tdis bufif0, bufif1 35; }"""


def from_control_and_data(figures: Fixture, body: str) -> tuple[float, float]:
    verilog = f"module m(input s0, s1, d0, d1, d2, d3, output y); {body} endmodule"
    control, data = (("s0", "s1"), ("d0", "d1", "d2", "d3"))
    return (
        figures(verilog, MUX_GATES, "ps", control).settles("y"),
        figures(verilog, MUX_GATES, "ps", data).settles("y"),
    )


def test_four_way_multiplexers_in_three_styles(figures: Fixture) -> None:
    """Example 2.16 (from memory): NOT 30, AND2 60, AND3 80, OR4 90, three-state data 50, enable 35 ps."""
    selects = [("n1, n0", "d0"), ("n1, s0", "d1"), ("s1, n0", "d2"), ("s1, s0", "d3")]
    inverters = "not i0(n0, s0), i1(n1, s1);"
    ands = "".join(f"and a{n}(p{n}, {select}, {data});" for n, (select, data) in enumerate(selects))
    assert from_control_and_data(figures, f"{inverters} {ands} or o(y, p0, p1, p2, p3);") == (200, 170)
    drivers = "".join(
        f"and a{n}(e{n}, {select}); bufif1 t{n}(y, {data}, e{n});" for n, (select, data) in enumerate(selects)
    )
    assert from_control_and_data(figures, f"{inverters} {drivers}") == (125, 50)
    tree = """bufif0 t0(x0, d0, s0), t2(x1, d2, s0), t4(y, x0, s1);
      bufif1 t1(x0, d1, s0), t3(x1, d3, s0), t5(y, x1, s1);"""
    assert from_control_and_data(figures, tree) == (85, 100)


DDCA_GATES = """gates ps {
  tpd not 10:-:15; tpd nand(2) 15:-:20; tpd nand(3) 25:-:30; tpd nor(2) 25:-:30; tpd nor(3) 35:-:45;
  tpd and(2) 25:-:30; tpd and(3) 30:-:40; tpd or(2) 30:-:40; tpd or(3) 45:-:55; tpd xor(2) 40:-:60; }"""
"""Table 2.8, tCD and tPD; parts of it from memory."""


def test_way_through_gates_of_table_2_8(figures: Fixture) -> None:
    """Exercise to figure 2.83: AND2, NOR2, NOR2, NAND2 take 110 ps; tCD 80 ps by NAND3, NAND2, NOR2, NAND2.

    The figure was not to be had: these are two rows of gates with those kinds.
    """
    long = "and g1(n1, a, b); nor g2(n2, n1, c); nor g3(n3, n2, d); nand g4(y, n3, e);"
    verilog = f"module m(input a, b, c, d, e, output y); {long} endmodule"
    assert figures(verilog, DDCA_GATES, "ps", ("a",)).settles("y") == 110
    short = "nand g1(n1, a, b, c); nand g2(n2, n1, d); nor g3(n3, n2, d); nand g4(y, n3, e);"
    verilog = f"module m(input a, b, c, d, e, output y); {short} endmodule"
    assert figures(verilog, DDCA_GATES, "ps", ("a",)).stirs("y") == 80
