"""The tables of legal forms of gates (IEEE 1364-2005 clauses 7.1 to 7.8 and A.3)."""

# ruff: noqa: E501 - a case of a table stands on one line
from __future__ import annotations

from collections.abc import Callable

import pytest

Lines = Callable[..., list[str]]
Codes = Callable[..., list[str]]

N_INPUT = ("and", "nand", "or", "nor", "xor", "xnor")
N_OUTPUT = ("buf", "not")
ENABLE = ("bufif0", "bufif1", "notif0", "notif1")
PULLS = ("pullup", "pulldown")
SWITCHES = (
    "nmos",
    "pmos",
    "rnmos",
    "rpmos",
    "cmos",
    "rcmos",
    "tran",
    "rtran",
    "tranif0",
    "tranif1",
    "rtranif0",
    "rtranif1",
)
LEAST = dict.fromkeys(N_INPUT, 2) | dict.fromkeys(N_OUTPUT, 2) | dict.fromkeys(ENABLE, 3)
MOST = dict.fromkeys(N_INPUT, 99) | dict.fromkeys(N_OUTPUT, 99) | dict.fromkeys(ENABLE, 3)
DELAYS = dict.fromkeys(N_INPUT, 2) | dict.fromkeys(N_OUTPUT, 2) | dict.fromkeys(ENABLE, 3)


def _board(body: str) -> str:
    return f"module board(input a, b, output y);\n{body}\nendmodule\n"


def _terminals(gate: str, count: int) -> str:
    outputs = count - 1 if gate in N_OUTPUT else 1
    return ", ".join([*(f"w{at}" for at in range(outputs)), *"ab"[:1], *["b"] * 99][:count])


@pytest.mark.parametrize("gate", LEAST)
@pytest.mark.parametrize("count", [1, 2, 3, 4, 9])
def test_table_7_1_and_a_3_1_how_many_terminals(gate: str, count: int, told: Codes) -> None:
    """Gates with n inputs have one at least, those with n outputs too, three-state gates exactly three."""
    found = [
        code
        for code in told(_board(f"{gate} g ({_terminals(gate, count)});\nbuf h (y, a);"))
        if code != "N202"
    ]
    assert found == ([] if LEAST[gate] <= count <= MOST[gate] else ["N167"])


@pytest.mark.parametrize("gate", DELAYS)
@pytest.mark.parametrize("count", [1, 2, 3, 4])
def test_7_1_3_and_a_3_1_how_many_delays(gate: str, count: int, told: Codes) -> None:
    values = ", ".join(["1:2:3", "4", "5", "6"][:count])
    found = told(_board(f"{gate} #({values}) g ({_terminals(gate, 3)});\nbuf h (y, a);"))
    assert found[:1] == ([] if count <= DELAYS[gate] else ["N150"] if count < 4 else found[:1])
    assert bool(found) == (count > DELAYS[gate])


@pytest.mark.parametrize("gate", ["nand", "buf", "bufif1"])
@pytest.mark.parametrize("low", ["supply0", "strong0", "pull0", "weak0", "highz0"])
@pytest.mark.parametrize("high", ["supply1", "strong1", "pull1", "weak1", "highz1"])
def test_7_1_2_drive_strengths(gate: str, low: str, high: str, told: Codes) -> None:
    """One for 0 and one for 1, in either order; not both of them high impedance."""
    legal = not (low == "highz0" and high == "highz1")
    for strength in (f"({low}, {high})", f"({high}, {low})"):
        found = told(_board(f"{gate} {strength} #2 g ({_terminals(gate, 3)});\nbuf h (y, a);"))
        assert bool(found) != legal, strength


@pytest.mark.parametrize(
    "strength",
    [
        "(strong0)",
        "(strong0, weak0)",
        "(strong1, weak1)",
        "(small)",
        "()",
        "(strong0 strong1)",
        "(strong0, strong1, weak0)",
        "(strong, weak)",
    ],
)
def test_7_1_2_strengths_that_are_refused(strength: str, told: Codes) -> None:
    assert told(_board(f"and {strength} g (y, a, b);"))


@pytest.mark.parametrize(
    ("pull", "legal"),
    [
        ("pullup p (w);", True), ("pulldown p (w);", True), ("pullup (w);", True), ("pullup (strong1) p (w);", True),
        ("pullup (pull1) p1 (w), p2 (v);", True), ("pulldown (weak0) (w);", True), ("pullup (weak0, pull1) p (w);", True),
        ("pullup (pull1, weak0) p (w);", True), ("pulldown (supply0, weak1) p (w);", True), ("pullup p [1:0] (n);", True),
        ("pullup p (n[1]);", True), ("pullup p (w, v);", False), ("pullup p ();", False), ("pullup #1 p (w);", False),
        ("pullup p (1'b1);", False), ("pullup (highz0, highz1) p (w);", False), ("pullup p [2:0] (n);", False),
    ],
)  # fmt: skip
def test_7_8_pullup_and_pulldown(pull: str, legal: bool, told: Codes) -> None:
    found = told(_board(f"wire [1:0] n;\nwire w, v;\n{pull}\nbuf h (y, a);"))
    assert bool(found) != legal, found


def test_7_8_a_pulled_net_needs_no_driver_and_takes_three_state_ones(told: Codes, instances: Lines) -> None:
    text = _board("wire w;\npullup p (w);\n{}and g (y, a, w);")
    assert told(text.format("")) == []
    assert told(text.format("bufif1 h (w, a, b);\n")) == []
    assert "and g: out=y, in1=a, in2=w" in instances(text.format(""))


@pytest.mark.parametrize("switch", SWITCHES)
def test_7_5_to_7_7_switches_are_refused_by_name(switch: str, told: Codes) -> None:
    """Switches of transistors pass strength both ways or by another's level: no gates with a delay."""
    assert told(_board(f"{switch} s (y, a, b);"))[:1] == ["V005"]


@pytest.mark.parametrize(
    ("form", "names"),
    [
        ("and g (y, a, b);", ["g"]), ("and (y, a, b);", ["and:2"]), ("and g (y, a, b), h (w, a, b);", ["g", "h"]),
        ("and g (y, a, b), (w, a, b);", ["and:2", "g"]), ("and g [0:0] (y, a, b);", ["g[0]"]), ("and #1 (y, a, b);", ["and:2"]),
        ("and (strong0, strong1) (y, a, b);", ["and:2"]), ("and \\g+ (y, a, b);", ["g+"]),
    ],
)  # fmt: skip
def test_7_1_4_names_of_gates(form: str, names: list[str], instances: Lines) -> None:
    assert [line.split()[1].rstrip(":") for line in instances(_board(form))] == names


@pytest.mark.parametrize(
    "form",
    [
        "and [1:0] (y, a, b);",
        "and g [1] (y, a, b);",
        "and g (y, a, b) h (w, a, b);",
        "and g y, a, b;",
        "and g;",
        "and;",
        "and #1;",
    ],
)
def test_a_3_1_forms_that_the_syntax_has_not(form: str, told: Codes) -> None:
    assert any(code[0] == "V" for code in told(_board(form)))


@pytest.mark.parametrize("bounds", ["[1:0]", "[0:1]", "[-1:0]", "[5:4]", "[P:P-1]", "[7:7+1]"])
def test_7_1_5_ranges_of_arrays(bounds: str, instances: Lines) -> None:
    """The right-hand index is that of the least significant bit; either end may be the larger, or negative."""
    text = (
        f"module board(input [1:0] a, output [1:0] y);\nparameter P = 3;\nbuf g {bounds} (y, a);\nendmodule\n"
    )
    right = {"[1:0]": 0, "[0:1]": 1, "[-1:0]": 0, "[5:4]": 4, "[P:P-1]": 2, "[7:7+1]": 8}[bounds]
    assert f"buf g[{right}]: out=y[0], in=a[0]" in instances(text)
    assert len(instances(text)) == 2


def test_7_1_5_one_name_for_one_array(told: Codes) -> None:
    """The clause's own fault: two ranges of one name."""
    text = "module board(input [7:0] a, output [7:0] y);\nnand t [0:3] (y[3:0], a[3:0], a[7:4]);\nnand t [4:7] (y[7:4], a[3:0], a[7:4]);\nendmodule\n"
    assert told(text) == ["N115"]


@pytest.mark.parametrize(
    ("terminals", "legal"),
    [
        ("y, a", True), ("y, s", True), ("y[1:0], a[2:1]", True), ("{y[0], y[1]}, {2{s}}", True), ("y, 2'b01", True),
        ("y, 1'b1", True), ("s2, a", True), ("y, b", False), ("y, 3'b0", False), ("{y, s2}, a", False), ("y[0], a", True),
    ],
)  # fmt: skip
def test_7_1_6_one_bit_for_all_or_one_for_each(terminals: str, legal: bool, told: Codes) -> None:
    text = f"module board(input [2:1] a, input [2:0] b, input s, output [1:0] y);\nwor s2;\nwor [1:0] z;\nbufif1 g [1:0] ({terminals}, s);\nendmodule\n"
    found = [code for code in told(text) if code != "N202"]
    assert found == ([] if legal else ["N166"])
