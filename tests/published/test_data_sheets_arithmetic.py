"""Switching tables of published data sheets of adders, a counter and an arithmetic unit, checked hop by hop.

The documents are named as sources; the parts are called neutrally. Figures are ns.
"""

from collections.abc import Callable
from typing import Any

Fixture = Callable[..., Any]


def adder() -> str:
    """Motorola, FAST and LS TTL data, SN74LS83A, p. 5-83: typical and maximum, 25 C, 5 V, 15 pF."""
    carry, outputs = "C0", []
    for bit in range(1, 5):
        outputs.append(f"S{bit} = A{bit} ^ B{bit} ^ ({carry})")
        carry = f"A{bit} & B{bit} | (A{bit} | B{bit}) & ({carry})"
    operands = ", ".join(f"{name}{bit}" for name in "AB" for bit in range(1, 5))
    sums = ["S1", "S2", "S3", "S4"]
    rows = (f"tpd A{n}, B{n} *> {', '.join(sums[n - 1 :])} -:15:24;" for n in range(1, 5))
    return f"""part ADD4_A {{ inputs C0, {operands}; outputs {", ".join(outputs)}, C4 = {carry};
      times ns {{
        tPLH C0 *> {", ".join(sums)}  -:16:24;  tPHL C0 *> {", ".join(sums)}  -:15:24;
        tPLH C0 => C4      -:11:17;  tPHL C0 => C4      -:15:22;
        {" ".join(rows)}
        tPLH {operands} *> C4  -:11:17;  tPHL {operands} *> C4  -:12:17;
      }} }}"""


def package(name: str, low: int, carry_in: str, carry_out: str) -> str:
    bits = range(low, low + 4)
    sides = [", ".join(f"{side}[{bit}]" for bit in bits) for side in "abs"]
    return f"ADD4_A {name}({carry_in}, {', '.join(sides)}, {carry_out});"


def test_four_bit_adder_hop_by_hop(hops: Fixture) -> None:
    verilog = "module m(input [3:0] a, b, input c0, output [3:0] s, output c4);" + package("u", 0, "c0", "c4")
    found = hops(verilog + "endmodule", adder())
    for bit in range(1, 5):
        assert (
            found["C0", "rise", f"S{bit}", "rise"] == found["C0", "fall", f"S{bit}", "rise"] == (None, 16, 24)
        )
        assert found["C0", "fall", f"S{bit}", "fall"] == (None, 15, 24)
        for pin in (f"A{bit}", f"B{bit}"):
            assert found[pin, "rise", "C4", "rise"] == (None, 11, 17)
            assert found[pin, "fall", "C4", "fall"] == (None, 12, 17)
            assert (pin, "rise", "C4", "fall") not in found  # a carry never moves against an operand
            assert found[pin, "rise", "S4", "fall"] == (None, 15, 24)
    assert found["C0", "rise", "C4", "rise"] == (None, 11, 17)
    assert found["C0", "fall", "C4", "fall"] == (None, 15, 22)
    assert ("A2", "rise", "S1", "rise") not in found  # a sum does not depend on higher operands


def test_two_adders_in_a_row(figures: Fixture) -> None:
    """Our sum from the same table: the operands to C4 17, C0 to the sums 24, in all 41 ns."""
    verilog = "module m(input [7:0] a, b, input c0, output [7:0] s, output c8);"
    verilog += package("low", 0, "c0", "c4") + package("high", 4, "c4", "c8") + "endmodule"
    operands = tuple(f"{side}[{bit}]" for side in "ab" for bit in range(8))
    assert figures(verilog, adder(), sources=operands).settles("s[7]") == 17 + 24
    assert figures(verilog, adder()).settles("s[7]") == 22 + 24  # from the carry in


def test_adder_with_a_figure_for_each_output(figures: Fixture) -> None:
    """Philips, 74HC283, Dec. 1990, typical at 5 V, 15 pF, from the carry in."""
    typical = {"S1": 16, "S2": 18, "S3": 20, "S4": 23, "C4": 20}
    carry = " ".join(f"tpd C0 => {out} -:{time}:-;" for out, time in typical.items())
    operands = ", ".join(f"{name}{bit}" for name in "AB" for bit in range(1, 5))
    part = f"""part ADD4_A {{ inputs C0, {operands}; outputs S1, S2, S3, S4, C4;
      times ns {{ {carry} tpd {operands} *> S1, S2, S3, S4 -:21:-; tpd {operands} *> C4 -:20:-; }} }}"""
    verilog = "module m(input [3:0] a, b, input c0, output [3:0] s, output c4);" + package("u", 0, "c0", "c4")
    found = figures(verilog + "endmodule", part, sources=("c0",), grade="typ")
    assert [found.settles(net) for net in ("s[0]", "s[1]", "s[2]", "s[3]", "c4")] == list(typical.values())


def test_modes_of_an_arithmetic_unit(hops: Fixture) -> None:
    """Fairchild, 74LS181, maxima at 15 pF: A to F 32, 25 in sum mode, 33, 29 in logic mode; Cn to F 26, 20.

    One bit of it, with a function that lets each mode have its own edges.
    """
    part = """part ALU_A { inputs A, C, M; output F = M ? A : ~A & C; times ns {
        tPLH A => F when ~M -:-:32;  tPHL A => F when ~M -:-:25;
        tPLH A => F when M  -:-:33;  tPHL A => F when M  -:-:29;
        tPLH C => F         -:-:26;  tPHL C => F         -:-:20;
        tpd  M => F         -:-:33; } }"""
    verilog = "module m(input a, c, mode, output f); ALU_A u(.A(a), .C(c), .M(mode), .F(f)); endmodule"
    found = hops(verilog, part)
    assert found["A", "rise", "F", "rise"] == (None, None, 33)  # in logic mode alone
    assert found["A", "fall", "F", "rise"] == (None, None, 32)  # in sum mode alone
    assert found["A", "fall", "F", "fall"] == (None, None, 29)
    assert found["A", "rise", "F", "fall"] == (None, None, 25)
    assert found["C", "rise", "F", "rise"] == (None, None, 26)


def test_counters_in_a_row(figures: Fixture) -> None:
    """Philips, 74HC/HCT161, Dec. 1990, in words: 1/fmax = tP CP to TC, and tsu of the enable, 55 ns here.

    Figures: Renesas, HD74LS161A, Rev. 2.00: CLK to RCO 35, ENT to RCO 14; tsu of the enable 20 from memory.
    """
    part = """part COUNT_A { inputs CK, ENT; output Q, RCO = Q & ENT; register posedge CK { Q = Q ^ ENT; }
      times ns { tPLH CK => Q -:13:24; tPHL CK => Q -:18:27; tPLH CK => RCO -:20:35; tPHL CK => RCO -:18:35;
                 tpd ENT => RCO -:9:14; } }"""
    verilog = """module m(input ck, en, output q0, q1, r1);
      COUNT_A low(ck, en, q0, r0); COUNT_A high(ck, r0, q1, r1); endmodule"""
    found = figures(verilog, part, sources=("low.CK", "high.CK"))
    assert found.settles("r0") + 20 == 55
    assert found.settles("r1") == 35 + 14
    assert found.rise_and_fall("q0") == (24, 27)
