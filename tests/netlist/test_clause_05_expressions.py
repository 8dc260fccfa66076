"""Operators to gates, widths and signs (IEEE 1364-2005 clauses 5.1, 5.4, 5.5), constants (5.1, 4.10)."""

# ruff: noqa: E501 - a case of a table stands on one line
from __future__ import annotations

from collections.abc import Callable

import pytest

Lines = Callable[..., list[str]]
Codes = Callable[..., list[str]]

HEAD = "module board(input [3:0] a, b, input c, d, input signed [2:0] s, t, output [3:0] y, output z, output [7:0] w);\n"


def _module(*lines: str) -> str:
    return HEAD + "\n".join(lines) + "\nendmodule\n"


def _pins(line: str) -> tuple[str, list[str]]:
    """Return the operator and its nets, output first."""
    kind, _, pins = line.partition(": out=")
    return kind.rpartition(" ")[0], [pin.rpartition("=")[2] for pin in pins.split(", ")]


OPERATORS = {
    "z = ~c": ("assign ~", ["z", "c"]),
    "z = !c": ("assign !", ["z", "c"]),
    "z = !a": ("assign !", ["z", "a[0]", "a[1]", "a[2]", "a[3]"]),
    "z = c & d": ("assign &", ["z", "c", "d"]),
    "z = c | d": ("assign |", ["z", "c", "d"]),
    "z = c ^ d": ("assign ^", ["z", "c", "d"]),
    "z = c ~^ d": ("assign ~^", ["z", "c", "d"]),
    "z = c ^~ d": ("assign ~^", ["z", "c", "d"]),
    "z = c && d": ("assign &&", ["z", "c", "d"]),
    "z = a || d": ("assign ||", ["z", "a[0]", "a[1]", "a[2]", "a[3]", "d"]),
    "z = &s": ("assign reduce &", ["z", "s[0]", "s[1]", "s[2]"]),
    "z = |s": ("assign reduce |", ["z", "s[0]", "s[1]", "s[2]"]),
    "z = ^s": ("assign reduce ^", ["z", "s[0]", "s[1]", "s[2]"]),
    "z = ~&s": ("assign reduce ~&", ["z", "s[0]", "s[1]", "s[2]"]),
    "z = ~|s": ("assign reduce ~|", ["z", "s[0]", "s[1]", "s[2]"]),
    "z = ~^s": ("assign reduce ~^", ["z", "s[0]", "s[1]", "s[2]"]),
    "z = ^~s": ("assign reduce ~^", ["z", "s[0]", "s[1]", "s[2]"]),
    "z = s == t": ("assign ==", ["z", "s[0]", "s[1]", "s[2]", "t[0]", "t[1]", "t[2]"]),
    "z = s === t": ("assign ==", ["z", "s[0]", "s[1]", "s[2]", "t[0]", "t[1]", "t[2]"]),
    "z = c != d": ("assign !=", ["z", "c", "d"]),
    "z = c !== d": ("assign !=", ["z", "c", "d"]),
    "z = c == 1'b1": ("assign ==", ["z", "c", "1'b1"]),
    "z = s == 0": ("assign ==", ["z", "s[0]", "s[1]", "s[2]", "1'b0", "1'b0", "1'b0"]),
    "z = c ? a[1] : b[2]": ("assign ?:", ["z", "c", "a[1]", "b[2]"]),
    "z = a[1:0] ? c : d": ("assign ?:", ["z", "a[0]", "a[1]", "c", "d"]),
    "z = c": ("assign", ["z", "c"]),
    "z = (((c)))": ("assign", ["z", "c"]),
    "z = +c": ("assign", ["z", "c"]),
    "z = 1'b1": ("assign", ["z", "1'b1"]),
    "z = 1'bz": ("assign", ["z", "1'bz"]),
    "z = 2 > 1": ("assign", ["z", "1'b1"]),
    "z = a[2]": ("assign", ["z", "a[2]"]),
}


@pytest.mark.parametrize("assignment", OPERATORS)
def test_5_1_each_operator_is_a_gate(assignment: str, instances: Lines) -> None:
    assert [_pins(line) for line in instances(_module(f"assign {assignment};"))] == [OPERATORS[assignment]]


def _driven(instances: Lines, assignment: str) -> dict[str, str]:
    """Return what each net is driven by: `op(inputs)`, through results of other operators."""
    made = {
        pins[0]: (kind.removeprefix("assign").strip(), pins[1:])
        for kind, pins in map(_pins, instances(_module(f"assign {assignment};")))
    }

    def text(net: str) -> str:
        if net not in made:
            return net
        operator, inputs = made[net]
        inner = " ".join(text(pin) for pin in inputs)
        return f"({operator} {inner})" if operator else inner

    return {net: text(net) for net in made if not net.startswith("assign:")}


def _vector(name: str, values: list[str]) -> dict[str, str]:
    return {f"{name}[{len(values) - 1 - at}]": value for at, value in enumerate(values)}


WIDTHS = {
    # The context widens operands before the operator works (table 5-22).
    "y = a[1:0] & b[2:0]": ["(& 1'b0 1'b0)", "(& 1'b0 b[2])", "(& a[1] b[1])", "(& a[0] b[0])"],
    "y = ~a[1:0]": ["(~ 1'b0)", "(~ 1'b0)", "(~ a[1])", "(~ a[0])"],
    # A concatenation is self-determined, so nothing is widened inside it.
    "y = {~a[1:0]}": ["1'b0", "1'b0", "(~ a[1])", "(~ a[0])"],
    "y = {a[0], b[1:0], c}": ["a[0]", "b[1]", "b[0]", "c"],
    "y = {2{a[1:0]}}": ["a[1]", "a[0]", "a[1]", "a[0]"],
    "y = {2{c, d}}": ["c", "d", "c", "d"],
    "y = {c, {2{d}}, 1'b1}": ["c", "d", "d", "1'b1"],
    # Shifts: the left operand takes the context's width, the right one is self-determined.
    "y = a[1:0] << 1": ["1'b0", "a[1]", "a[0]", "1'b0"],
    "y = a >> 1": ["1'b0", "a[3]", "a[2]", "a[1]"],
    "y = a << 9": ["1'b0"] * 4,
    "y = a <<< 2": ["a[1]", "a[0]", "1'b0", "1'b0"],
    "y = (a << 1) >> 1": ["1'b0", "a[2]", "a[1]", "a[0]"],
    # Signs (5.5): widened by the sign only where every operand is signed.
    "y = s": ["s[2]", "s[2]", "s[1]", "s[0]"],
    "y = s >>> 1": ["s[2]", "s[2]", "s[2]", "s[1]"],
    "y = s >> 1": ["1'b0", "s[2]", "s[2]", "s[1]"],
    "y = s & t": ["(& s[2] t[2])", "(& s[2] t[2])", "(& s[1] t[1])", "(& s[0] t[0])"],
    "y = s & a[2:0]": ["(& 1'b0 1'b0)", "(& s[2] a[2])", "(& s[1] a[1])", "(& s[0] a[0])"],
    "y = s[2:0]": ["1'b0", "s[2]", "s[1]", "s[0]"],
    "y = {s}": ["1'b0", "s[2]", "s[1]", "s[0]"],
    "y = ~s": ["(~ s[2])", "(~ s[2])", "(~ s[1])", "(~ s[0])"],
    "y = c ? s : t": ["(?: c s[2] t[2])", "(?: c s[2] t[2])", "(?: c s[1] t[1])", "(?: c s[0] t[0])"],
    "y = c ? s : a[0]": ["(?: c 1'b0 1'b0)", "(?: c s[2] 1'b0)", "(?: c s[1] 1'b0)", "(?: c s[0] a[0])"],
    "y = a >>> 1": ["1'b0", "a[3]", "a[2]", "a[1]"],
    # Constants.
    "y = 5": ["1'b0", "1'b1", "1'b0", "1'b1"],
    "y = -4'sd1": ["1'b1"] * 4,
    "y = 2'sb10": ["1'b1", "1'b1", "1'b1", "1'b0"],
    "y = 2'b10": ["1'b0", "1'b0", "1'b1", "1'b0"],
    "y = 4'bz1x0": ["1'bz", "1'b1", "1'bx", "1'b0"],
    "y = 'bz": ["1'bz"] * 4,
    "y = 2 * 3 + 1": ["1'b0", "1'b1", "1'b1", "1'b1"],
    "y = 1 << 2": ["1'b0", "1'b1", "1'b0", "1'b0"],
    "y = a ^ 2'b11": ["(^ a[3] 1'b0)", "(^ a[2] 1'b0)", "(^ a[1] 1'b1)", "(^ a[0] 1'b1)"],
    # Cut on the left.
    "y[1:0] = a": ["a[1]", "a[0]"],
    "y[1:0] = ~a": ["(~ a[1])", "(~ a[0])"],
    "{z, y[2:0]} = a": {"z": "a[3]", "y[2]": "a[2]", "y[1]": "a[1]", "y[0]": "a[0]"},
    # Precedence, grouping (5.1.2).
    "z = c | d & a[0] ^ b[0]": {"z": "(| c (^ (& d a[0]) b[0]))"},
    "z = ~c & d": {"z": "(& (~ c) d)"},
    "z = c ? d : a[0] ? a[1] : a[2]": {"z": "(?: c d (?: a[0] a[1] a[2]))"},
    "z = (c ? d : a[0]) ? a[1] : a[2]": {"z": "(?: (?: c d a[0]) a[1] a[2])"},
    "z = ~&a[1:0] & ~|b[1:0]": {"z": "(& (reduce ~& a[0] a[1]) (reduce ~| b[0] b[1]))"},
    "z = !c == d": {"z": "(== (! c) d)"},
    "z = c & &a[1:0]": {"z": "(& c (reduce & a[0] a[1]))"},
    "z = - 1 == 1": {"z": "1'b0"},
}  # fmt: skip


@pytest.mark.parametrize("assignment", WIDTHS)
def test_5_4_widths_and_5_5_signs(assignment: str, instances: Lines) -> None:
    wanted = WIDTHS[assignment]
    if isinstance(wanted, list):
        wanted = _vector("y", wanted)
    assert _driven(instances, assignment) == wanted


def test_w_is_filled_when_wider_than_its_operator(instances: Lines) -> None:
    wanted = [*["1'b0"] * 7, "(== c d)"]
    assert _driven(instances, "w = c == d") == _vector("w", wanted)


def test_an_unsized_z_fills_a_wide_net(instances: Lines) -> None:
    lines = instances("module board(output [39:0] y);\nassign y = 'bz;\nendmodule\n")
    assert {_pins(line)[1][1] for line in lines} == {"1'bz"}
    assert len(lines) == 40


SELECTS = {
    "z = a[3]": {"z": "a[3]"},
    "y[1:0] = a[2:1]": {"y[1]": "a[2]", "y[0]": "a[1]"},
    "y[1:0] = a[1+:2]": {"y[1]": "a[2]", "y[0]": "a[1]"},
    "y[1:0] = a[2-:2]": {"y[1]": "a[2]", "y[0]": "a[1]"},
    "y[0+:2] = a[1:0]": {"y[1]": "a[1]", "y[0]": "a[0]"},
    "z = a[1+1]": {"z": "a[2]"},
}


@pytest.mark.parametrize("assignment", SELECTS)
def test_5_2_1_selections(assignment: str, instances: Lines) -> None:
    assert _driven(instances, assignment) == SELECTS[assignment]


def test_5_2_1_ranges_that_ascend(instances: Lines) -> None:
    text = "module board(input [0:3] a, output [5:6] y, output z);\n{}\nendmodule\n"
    lines = instances(text.format("assign y = a[1:2]; assign z = a[0];"))
    assert [_pins(line)[1] for line in lines] == [["y[5]", "a[1]"], ["y[6]", "a[2]"], ["z", "a[0]"]]
    lines = instances(text.format("assign y = a[1+:2];"))
    assert [_pins(line)[1] for line in lines] == [["y[5]", "a[1]"], ["y[6]", "a[2]"]]
    lines = instances(text.format("assign y = a[2-:2];"))
    assert [_pins(line)[1] for line in lines] == [["y[5]", "a[1]"], ["y[6]", "a[2]"]]
    assert [_pins(line)[1] for line in instances(text.format("assign y = a;"))] == [
        ["y[5]", "a[2]"],
        ["y[6]", "a[3]"],
    ]


def test_4_3_negative_bounds(instances: Lines) -> None:
    text = "module board(input [1:-1] a, output y, z);\nbuf (y, a[-1]);\nassign z = a[1];\nendmodule\n"
    assert [_pins(line)[1] for line in instances(text)] == [["z", "a[1]"], ["y", "a[-1]"]]


@pytest.mark.parametrize(
    ("line", "code"),
    [
        ("assign z = a[4];", "N132"),
        ("assign z = a[-1];", "N132"),
        ("assign y = a[4:1];", "N132"),
        ("assign y = a[3+:2];", "N132"),
        ("assign y = a[0-:2];", "N132"),
        ("assign y = a[1+:0];", "N121"),
        ("assign y = a[0:1];", "N134"),
        ("assign z = c[0];", "N131"),
        ("assign z = a[1][0];", "N131"),
        ("assign z = a[c];", "N133"),
        ("assign z = a[1'bx];", "N133"),
        ("assign z = nobody;", "N130"),
        ("assign z = top.a;", "N137"),
        ("assign z = c & 1.5;", "N135"),
        ("assign y = {a, 1};", "N136"),
        ("assign y = {0{a}};", "N121"),
        ("assign y = {c{a}};", "N120"),
        ("assign y = {1000000000{a}};", "N121"),
        ("assign y = a + b;", "N140"),
        ("assign z = a < b;", "N140"),
        ("assign y = -a;", "N140"),
        ("assign y = $clog2(a);", "N140"),
        ("assign y = a << b;", "N141"),
        ("assign y = a >> b[0];", "N141"),
        ("assign y = 1/0;", "N120"),
        ("assign 1'b0 = c;", "V001"),
        ("assign {c & d} = 1'b0;", "N165"),
        ("assign a & b = c;", "V001"),
        ("wire [8:1] n = 9 ** 99999999;", "N120"),
        ("wire n = a[1 << 20000];", "N133"),
        ("wire n = a[16384'h" + "f" * 4096 + "];", "N133"),
        ("wire n = 0'b0;", "V009"),
        ("wire n = 2'b2;", "V009"),
    ],
)  # fmt: skip
def test_what_is_refused(line: str, code: str, told: Codes) -> None:
    assert told(_module(line)) == [code]


CONSTANTS = {
    "7 / 2": 3, "-7 / 2": -3, "-7 % 3": -1, "2 ** 5": 32, "4'd15 + 4'd1": 0, "4'sd7 + 4'sd1": -8,
    "5 & 3": 1, "5 | 3": 7, "5 ^ 3": 6, "~0": -1, "!5": 0, "5 && 0": 0, "3 < 4": 1, "3 >= 4": 0, "-8 >>> 1": -4,
    "1 ? 2 : 3": 2, "$clog2(9)": 4, "$clog2(8)": 3, "$clog2(1)": 0, "$clog2(0)": 0, "{2'b10, 2'b01}": 9,
    "{3{2'b01}}": 21, "&3'b111": 1, "^3'b110": 0, "~&2'b11": 0, "|4'b0": 0, "~^2'b10": 0, "P": 5, "P[2]": 1,
    "P[1:0]": 1, "4'b1010 ~^ 4'b1001": 12, "(1 << 4) - 1": 15, "3 == 3": 1, "3 !== 3": 0, "8'hf0 >> 4": 15,
    "-1 < 0": 1, "1 << 40 >> 40": 1, "2 + 3 * 4": 14, "2 ** 3 ** 2": 64, "10 - 4 - 3": 3, "-2 ** 2": 4,
}  # fmt: skip


@pytest.mark.parametrize("expression", CONSTANTS)
def test_constant_expressions(expression: str, told: Codes, instances: Lines) -> None:
    """Four more than the value, as an index: selecting the one bit that is there shows the value."""
    value = CONSTANTS[expression]
    text = (
        f"module board(input [{value}:{value}] a, output y);\nparameter P = 5;\n"
        f"buf g (y, a[{expression}]);\nendmodule\n"
    )
    assert instances(text) == [f"buf g: out=y, in=a[{value}]"]
    other = text.replace(f"[{value}:{value}]", f"[{value + 1}:{value + 1}]")
    assert told(other) == ["N132"]


def test_5_1_14_a_replication_of_zero_times_stands_beside_others(instances: Lines, told: Codes) -> None:
    """It has no bits; alone, or as an operand of anything but a concatenation, it is refused."""
    found = [_pins(line) for line in instances(_module("assign y = {{0{c}}, a};"))]
    assert [pins for _, pins in found] == [[f"y[{i}]", f"a[{i}]"] for i in range(4)]
    for alone in ("{0{c}}", "{{0{c}}}", "{0{c}} & a", "~{0{c}}"):
        assert told(_module(f"assign y = {alone};")) == ["N121"], alone


def test_5_2_3_strings_are_compared_as_numbers(instances: Lines, told: Codes) -> None:
    """Constants by then: `"A" == "A"` is 1; a string is eight bits a character, padded on the left with 0."""
    lines = ('localparam S = "MINI";', 'assign z = c & (S != "NONE");', 'assign w = "AB";')
    found = [_pins(line) for line in instances(_module(*lines))]
    assert found[0] == ("assign &", ["z", "c", "1'b1"])
    assert "".join(pins[1][-1] for _, pins in reversed(found[1:])) == f"{ord('B'):08b}"
    assert "N135" not in told(_module('assign z = c & ("" == "A");'))


def test_5_5_signed_and_unsigned_change_no_bit(instances: Lines) -> None:
    found = [_pins(line)[1] for line in instances(_module("assign w = $signed(a);"))]
    assert found == [[f"w[{i}]", f"a[{min(i, 3)}]"] for i in range(8)]
    found = [_pins(line)[1] for line in instances(_module("assign w = $unsigned(s);"))]
    assert found == [[f"w[{i}]", f"s[{i}]" if i < 3 else "1'b0"] for i in range(8)]
