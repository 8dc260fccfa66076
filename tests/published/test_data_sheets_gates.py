"""Switching tables of published data sheets of gates and a flip-flop, checked hop by hop.

The documents are named as sources; the parts are called neutrally. Figures are ns.
"""

from collections.abc import Callable
from itertools import product
from typing import Any

import pytest

Fixture = Callable[..., Any]

NAND2 = "module m(input a, b, output y); NAND2_A u(.A(a), .B(b), .Y(y)); endmodule"
XOR2 = "module m(input a, b, output y); XOR2_A u(.A(a), .B(b), .Y(y)); endmodule"


@pytest.mark.parametrize(
    ("condition", "rise", "fall"),
    [
        ("v3", (2.0, 7.0, 9.5), (1.5, 5.5, 8.0)), ("v3_warm", (2.0, None, 10.0), (1.0, None, 8.5)),
        ("v5", (1.5, 6.0, 8.0), (1.5, 4.5, 6.5)), ("v5_warm", (1.5, None, 8.5), (1.0, None, 7.0)),
    ],
)  # fmt: skip
def test_nand_with_minima_under_four_conditions(
    hops: Fixture, condition: str, rise: tuple[float, ...], fall: tuple[float, ...]
) -> None:
    """Motorola, FACT data, MC74AC00, p. 5-3, at 50 pF."""
    parts = """
      conditions { v3 3.3 V, 25 C; v3_warm 3.3 V, -40..85 C; v5 5.0 V, 25 C; v5_warm 5.0 V, -40..85 C; }
      part NAND2_A { package 4; inputs A, B; output Y = ~(A & B); load 50 pF; times ns {
        tPLH A, B => Y   2.0:7.0:9.5 | 2.0:-:10.0 | 1.5:6.0:8.0 | 1.5:-:8.5;
        tPHL A, B => Y   1.5:5.5:8.0 | 1.0:-:8.5  | 1.5:4.5:6.5 | 1.0:-:7.0; } }"""
    expected = {
        (pin, edge_in, "Y", edge_out): times
        for pin in "AB"
        for edge_in, edge_out, times in (("fall", "rise", rise), ("rise", "fall", fall))
    }
    assert hops(NAND2, parts, condition) == expected


def test_exclusive_or_by_the_state_of_the_other_input(hops: Fixture, figures: Fixture) -> None:
    """Renesas, HD74LS86, Rev. 2.00, Feb. 2005: other input low 12/23 and 10/17, high 20/30 and 13/22."""
    rows = "".join(
        f"tPLH {pin} => Y when ~{other} -:12:23; tPHL {pin} => Y when ~{other} -:10:17;"
        f"tPLH {pin} => Y when {other} -:20:30;  tPHL {pin} => Y when {other} -:13:22;"
        for pin, other in ("AB", "BA")
    )
    part = f"part XOR2_A {{ inputs A, B; output Y = A ^ B; times ns {{ {rows} }} }}"
    found = hops(XOR2, part)
    for pin in "AB":
        assert found[pin, "rise", "Y", "rise"] == (None, 12, 23)
        assert found[pin, "fall", "Y", "fall"] == (None, 10, 17)
        assert found[pin, "fall", "Y", "rise"] == (None, 20, 30)
        assert found[pin, "rise", "Y", "fall"] == (None, 13, 22)
    assert len(found) == 8
    assert figures(XOR2, part).rise_and_fall("y") == (30, 22)
    assert figures(XOR2, part, grade="typ").rise_and_fall("y") == (20, 13)


# Maximum at 25, 85 and 125 C, by supply (2.0, 4.5, 6.0 V).
EXCLUSIVE_OR = {"2.0": (120, 150, 180), "4.5": (24, 30, 36), "6.0": (20, 26, 31)}
AND = {"2.0": (90, 115, 135), "4.5": (18, 23, 27), "6.0": (15, 20, 23)}


def column(supply: str, degrees: int) -> str:
    return f"v{supply.replace('.', '_')}_{degrees}"


def rows_of(table: dict[str, tuple[float, ...]]) -> str:
    return " | ".join(f"-:-:{most}" for supply in table for most in table[supply])


def part_of(function: str, table: dict[str, tuple[float, ...]]) -> str:
    times = f"times ns {{ tpd A, B => Y {rows_of(table)}; }}"
    return f"part XOR2_A {{ inputs A, B; output Y = {function}; {times} }}"


def conditions_of(table: dict[str, tuple[float, ...]]) -> str:
    names = (column(supply, degrees) for supply, degrees in product(table, (25, 85, 125)))
    return f"conditions {{ {' '.join(f'{name};' for name in names)} }}"


@pytest.mark.parametrize(
    ("function", "table"), [("A ^ B", EXCLUSIVE_OR), ("A & B", AND)], ids=["HC86", "HC08"]
)
def test_maxima_over_supply_and_temperature(
    hops: Fixture, function: str, table: dict[str, tuple[float, ...]]
) -> None:
    """NXP, 74HC_HCT86, Rev. 4, Dec. 2015, table 7; TI (Harris), CD74HC08. Both at 50 pF."""
    part = part_of(function, table)
    for supply in table:
        for degrees, most in zip((25, 85, 125), table[supply], strict=True):
            found = hops(XOR2, conditions_of(table) + part, column(supply, degrees))
            assert set(found.values()) == {(None, None, most)}
            assert len(found) == (8 if "^" in function else 4)


@pytest.mark.parametrize("table", [EXCLUSIVE_OR, AND], ids=["HC86", "HC08"])
def test_the_family_scales_as_it_should(figures: Fixture, table: dict[str, tuple[float, ...]]) -> None:
    """Pattern of the tables (the rule itself, JESD7-A, from memory), as near as they are rounded.

    At 85 C 1.25 times, at 125 C 1.5 times the figure of 25 C; at 2.0 V 5 times, at 6.0 V 0.85 times that of
    4.5 V. Steps are 5 ns at 2.0 V, else 1 ns; one figure (20 for 18.75) is off by more than a step.
    """
    part = conditions_of(table) + part_of("A & B", table)
    at = {
        (supply, degrees): figures(XOR2, part, condition=column(supply, degrees)).settles("y")
        for supply, degrees in product(table, (25, 85, 125))
    }
    rounded = {"2.0": 5, "4.5": 1.5, "6.0": 1.5}
    for supply, off in rounded.items():
        assert at[supply, 85] == pytest.approx(1.25 * at[supply, 25], abs=off)
        assert at[supply, 125] == pytest.approx(1.5 * at[supply, 25], abs=off)
    assert at["2.0", 25] == pytest.approx(5 * at["4.5", 25], abs=5)
    assert at["6.0", 25] == pytest.approx(0.85 * at["4.5", 25], abs=1)


def test_flip_flop_with_preset(hops: Fixture) -> None:
    """Fairchild, DM74LS74A (DS006373), at 15 pF: CLK to Q 25 and 30, PR to Q 25 and 30 maximum."""
    part = """part DFF_A { inputs D, CK, PRE; outputs Q, QN = ~Q;
      register posedge CK { Q = D; set ~PRE; }
      times ns { tPLH CK => Q, QN -:-:25; tPHL CK => Q, QN -:-:30;
                 tPLH PRE => Q    -:-:25; tPHL PRE => QN   -:-:30; } }"""
    verilog = "module m(input d, ck, pre, output q, qn); DFF_A u(d, ck, pre, q, qn); endmodule"
    assert hops(verilog, part) == {
        ("CK", "rise", "Q", "rise"): (None, None, 25),
        ("CK", "rise", "Q", "fall"): (None, None, 30),
        ("CK", "rise", "QN", "rise"): (None, None, 25),
        ("CK", "rise", "QN", "fall"): (None, None, 30),
        ("PRE", "fall", "Q", "rise"): (None, None, 25),
        ("PRE", "fall", "QN", "fall"): (None, None, 30),
    }
