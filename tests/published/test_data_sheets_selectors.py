"""Switching tables of published data sheets of decoders and multiplexers, checked hop by hop.

The documents are named as sources; the parts are called neutrally. Figures are ns.
"""

from collections.abc import Callable
from typing import Any

import pytest

Fixture = Callable[..., Any]


OUTPUTS = ", ".join(f"Y{n}" for n in range(8))
DECODER = (
    "module m(input [2:0] a, input e, e1_n, e2_n, output [7:0] y); DEC8_A u(a[2], a[1], a[0], e, e1_n, e2_n, "
    "y[0], y[1], y[2], y[3], y[4], y[5], y[6], y[7]); endmodule"
)


def decoder(times: str) -> str:
    terms = (
        " & ".join(name if n >> bit & 1 else f"~{name}" for bit, name in ((2, "C"), (1, "B"), (0, "A")))
        for n in range(8)
    )
    outputs = ", ".join(f"Y{n} = ~(E & ~E1N & ~E2N & {term})" for n, term in enumerate(terms))
    return f"part DEC8_A {{ inputs C, B, A, E, E1N, E2N; outputs {outputs}; times ns {{ {times} }} }}"


ADDRESS = (135, 170, 205, 90, 125, 165, 27, 34, 41, 23, 29, 35)
ENABLE = (110, 140, 165, 85, 100, 125, 22, 28, 33, 19, 24, 28)
ENABLE_LOW = (120, 150, 180, 90, 120, 150, 24, 30, 36, 20, 26, 31)


@pytest.mark.parametrize("column", range(12))
def test_decoder_under_twelve_conditions(hops: Fixture, column: int) -> None:
    """onsemi, MC74HC138A, maxima at 50 pF: 2, 3, 4.5, 6 V, each at 25, 85, 125 C."""
    names = [f"v{volts}_{degrees}" for volts in ("2", "3", "4_5", "6") for degrees in (25, 85, 125)]
    rows = "".join(
        f"tpd {pins} *> {OUTPUTS} {' | '.join(f'-:-:{most}' for most in table)};"
        for pins, table in (("A, B, C", ADDRESS), ("E", ENABLE), ("E1N, E2N", ENABLE_LOW))
    )
    conditions = f"conditions {{ {' '.join(f'{name};' for name in names)} }}"
    found = hops(DECODER, conditions + decoder(rows), names[column])
    most = {"A": ADDRESS, "B": ADDRESS, "C": ADDRESS, "E": ENABLE, "E1N": ENABLE_LOW, "E2N": ENABLE_LOW}
    assert len(found) == 6 * 8 * 2
    assert all(times == (None, None, most[pin][column]) for (pin, *_), times in found.items())
    for n in range(8):  # an address bit that this output wants high lets it fall by rising
        against = ("A", "rise", f"Y{n}", "fall") in found
        assert against == bool(n & 1)
        assert ("E", "rise", f"Y{n}", "fall") in found
        assert ("E1N", "rise", f"Y{n}", "rise") in found


FAST = """
  tPLH A, B, C *> {y}  3.0:-:7.5 | 3.0:-:8.5;   tPHL A, B, C *> {y}  3.0:-:8.0 | 3.0:-:9.0;
  tPLH E1N, E2N *> {y} 3.5:-:7.0 | 3.5:-:8.0;   tPHL E1N, E2N *> {y} 3.0:-:7.0 | 3.0:-:7.5;
  tPLH E *> {y}        4.0:-:8.0 | 4.0:-:9.0;   tPHL E *> {y}        3.5:-:7.5 | 3.5:-:8.5;
"""


@pytest.mark.parametrize(
    ("condition", "address", "enable", "enable_low"),
    [("room", (7.5, 8.0), (8.0, 7.5), (7.0, 7.0)), ("wide", (8.5, 9.0), (9.0, 8.5), (8.0, 7.5))],
)
def test_decoder_with_minima(
    hops: Fixture,
    condition: str,
    address: tuple[float, float],
    enable: tuple[float, float],
    enable_low: tuple[float, float],
) -> None:
    """Motorola, 74F138, p. 4-54: 25 C, and 0 to 70 C at 5 V, 10 %. Our copy has some rows out of order."""
    conditions = "conditions { room 5.0 V, 25 C; wide 4.5..5.5 V, 0..70 C; }"
    found = hops(DECODER, conditions + decoder(FAST.format(y=OUTPUTS)), condition)
    assert found["A", "fall", "Y1", "rise"] == (3.0, None, address[0])
    assert found["A", "rise", "Y1", "fall"] == (3.0, None, address[1])
    assert found["A", "rise", "Y0", "rise"] == (3.0, None, address[0])
    assert found["E", "fall", "Y7", "rise"] == (4.0, None, enable[0])
    assert found["E", "rise", "Y7", "fall"] == (3.5, None, enable[1])
    assert found["E2N", "rise", "Y7", "rise"] == (3.5, None, enable_low[0])
    assert found["E2N", "fall", "Y7", "fall"] == (3.0, None, enable_low[1])


def test_decoder_settles_and_stirs(figures: Fixture) -> None:
    """The same table, at 25 C: any output at most 8.0 after any input, and no sooner than 3.0."""
    conditions = "conditions { room 5.0 V, 25 C; wide 4.5..5.5 V, 0..70 C; }"
    found = figures(DECODER, conditions + decoder(FAST.format(y=OUTPUTS)))
    assert {found.both(f"y[{n}]") for n in range(8)} == {(3.0, 8.0)}


def test_three_state_multiplexer(hops: Fixture) -> None:
    """Nexperia, 74HCT253, Rev. 9, at 4.5 V, 25 C typical and maximum, and maximum at 85 and 125 C."""
    part = """
      conditions { room 25 C; warm 85 C; hot 125 C; }
      part MUX4_A { inputs I0, I1, I2, I3, S0, S1, OEN;
        output Y = (S1 ? (S0 ? I3 : I2) : (S0 ? I1 : I0)) when ~OEN;
        times ns {
          tpd  I0, I1, I2, I3 *> Y  -:20:38 | -:-:48 | -:-:57;
          tpd  S0, S1 *> Y          -:22:40 | -:-:50 | -:-:60;
          ten  OEN => Y             -:14:30 | -:-:38 | -:-:45;
          tdis OEN => Y             -:13:30 | -:-:38 | -:-:45;
        } }"""
    verilog = "module m(input [3:0] i, input s0, s1, oen, output y);"
    verilog += "MUX4_A u(i[0], i[1], i[2], i[3], s0, s1, oen, y); endmodule"
    found = hops(verilog, part)
    assert {pair: times for pair, times in found.items() if pair[0] == "OEN"} == {
        ("OEN", "fall", "Y", "rise"): (None, 14, 30),
        ("OEN", "fall", "Y", "fall"): (None, 14, 30),
        ("OEN", "rise", "Y", "rise"): (None, 13, 30),
        ("OEN", "rise", "Y", "fall"): (None, 13, 30),
    }
    assert found["I2", "rise", "Y", "rise"] == (None, 20, 38)
    assert ("I2", "rise", "Y", "fall") not in found
    assert found["S1", "rise", "Y", "fall"] == found["S1", "rise", "Y", "rise"] == (None, 22, 40)
    for condition, data, select, enable in (("warm", 48, 50, 38), ("hot", 57, 60, 45)):
        found = hops(verilog, part, condition)
        assert found["I0", "fall", "Y", "fall"] == (None, None, data)
        assert found["S0", "fall", "Y", "rise"] == (None, None, select)
        assert found["OEN", "rise", "Y", "rise"] == found["OEN", "fall", "Y", "rise"] == (None, None, enable)


def test_multiplexer_with_minima_over_supply(hops: Fixture, figures: Fixture) -> None:
    """TI, CD74AC253, minimum and maximum, -40 to 85 C, 50 pF."""
    part = """
      conditions { v5 4.5..5.5 V; v3 3.0..3.6 V; }
      part MUX4_A { inputs I0, I1, I2, I3, S0, S1, OEN;
        output Y = (S1 ? (S0 ? I3 : I2) : (S0 ? I1 : I0)) when ~OEN;
        times ns {
          tpd  I0, I1, I2, I3 *> Y  3.4:-:12.1 | 4.8:-:16.9;
          tpd  S0, S1 *> Y          5.2:-:18.2 | 7.2:-:25;
          ten  OEN => Y             3:-:10.5   | 4.5:-:15.7;
          tdis OEN => Y             3:-:10.5   | 4.5:-:15.7;
        } }"""
    verilog = "module m(input [3:0] i, input s0, s1, oen, output y);"
    verilog += "MUX4_A u(i[0], i[1], i[2], i[3], s0, s1, oen, y); endmodule"
    assert figures(verilog, part, sources=("i[0]", "s0")).both("y") == (3.4, 18.2)
    assert hops(verilog, part, "v3")["S0", "rise", "Y", "fall"] == (7.2, None, 25)
    assert hops(verilog, part, "v3")["OEN", "rise", "Y", "fall"] == (4.5, None, 15.7)
