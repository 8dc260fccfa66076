"""Parameters (IEEE 1364-2005 clauses 4.8, 4.10) and the delays that hang on them (7.14, 19.8)."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from fractions import Fraction

import pytest

from tardigate.netlist.constants import Value, evaluate, words_of
from tardigate.netlist.delays import Delays
from tardigate.netlist.parameters import triple_trees
from tardigate.source.collector import Collector
from tardigate.source.files import SourceFile
from tardigate.source.placed import PlacedText
from tardigate.syntax import tree

Trees = Callable[[list[str]], list[tree.Expression]]
Declared = Callable[..., dict[str, Value]]
Codes = Callable[..., list[str]]
Lines = Callable[..., list[str]]
NONE: Mapping[str, Value] = {}
HALF = Value(Fraction(5, 2), None, True, "real")

CONVERSIONS = {
    # No type and no range: those of the final value.
    ("", "4'd9"): Value(9, 4, False),
    ("", "-1"): Value(-1),
    ("", "2.5"): HALF,
    ("", '"AB"'): Value(0x4142, 16, False, "text"),
    # A range: unsigned, whatever the value.
    ("[3:0]", "-1"): Value(15, 4, False, "", (3, 0)),
    ("[0:7]", "4'sd7"): Value(7, 8, False, "", (0, 7)),
    ("[7:0]", "4'sb1111"): Value(255, 8, False, "", (7, 0)),
    ("[3:0]", "8'hff"): Value(15, 4, False, "", (3, 0)),
    ("[3:0]", "2.5"): Value(3, 4, False, "", (3, 0)),
    ("[23:0]", '"AB"'): Value(0x4142, 24, False, "text", (23, 0)),
    ("[7:0]", '"AB"'): Value(0x42, 8, False, "", (7, 0)),
    # `signed` with and without a range.
    ("signed [3:0]", "15"): Value(-1, 4, True, "", (3, 0)),
    ("signed", "4'd15"): Value(-1, 4, True),
    ("signed", "2.5"): Value(3),
    ("signed", "'hffffffff"): Value(-1),
    # Types.
    ("integer", "4'd15"): Value(15, 32, True),
    ("integer", "-2.5"): Value(-3, 32, True),
    ("integer", "'hffffffff"): Value(-1, 32, True),
    ("time", "-1"): Value(2**64 - 1, 64, False),
    ("real", "4'd9"): Value(Fraction(9), None, True, "real"),
    ("realtime", "2.5"): HALF,
}


@pytest.mark.parametrize("row", CONVERSIONS)
def test_4_10_1_conversion_of_defaults(row: tuple[str, str], declared: Declared) -> None:
    kind, value = row
    assert declared(f"module m;\nparameter {kind} P = {value};\nendmodule\n", NONE) == {"P": CONVERSIONS[row]}


@pytest.mark.parametrize("row", CONVERSIONS)
def test_4_10_1_conversion_of_overrides(row: tuple[str, str], declared: Declared, trees: Trees) -> None:
    kind, value = row
    override = {"P": evaluate(trees([value])[0], NONE)}
    text = f"module m #(parameter {kind} P = 0)();\nendmodule\n"
    assert declared(text, override) == {"P": CONVERSIONS[row]}


def test_5_4_1_a_range_is_the_context_of_its_value(declared: Declared) -> None:
    values = declared("module m;\nparameter [7:0] P = 4'd15 + 4'd1, Q = -4'sd1;\nendmodule\n", NONE)
    assert [value.value for value in values.values()] == [16, 255]


def test_4_10_later_ones_see_earlier_ones(declared: Declared) -> None:
    text = (
        "module m #(parameter W = 4, parameter [W-1:0] INIT = -1)();\nlocalparam N = INIT + W;\nendmodule\n"
    )
    assert [value.value for value in declared(text, NONE).values()] == [4, 15, 19]
    assert [value.value for value in declared(text, {"W": Value(6)}).values()] == [6, 63, 69]


def test_4_10_earlier_ones_do_not_see_later_ones(declared: Declared) -> None:
    declared("module m;\nparameter A = B;\nparameter B = 1;\nendmodule\n", NONE, ["N120"])


def test_4_10_2_a_localparam_keeps_its_value(declared: Declared) -> None:
    text = "module m;\nlocalparam L = 1;\nspecparam S = 2;\nparameter P = 3;\nendmodule\n"
    nine = Value(9)
    values = declared(text, {"L": nine, "S": nine, "P": nine})
    assert [value.value for value in values.values()] == [1, 2, 9]


def test_an_overridden_default_is_not_needed(declared: Declared) -> None:
    text = "module m;\nparameter N = 0;\nparameter P = 8 / N;\nendmodule\n"
    assert declared(text, {"P": Value(1)})["P"] == Value(1)
    declared(text, NONE, ["N120"])


def test_a_name_twice(declared: Declared) -> None:
    assert declared("module m;\nparameter N = 1, N = 2;\nendmodule\n", NONE, ["N110"]) == {"N": Value(1)}


CHOSEN = """
module board(input a, output y);
  pick #(.MODE({})) p (.a(a), .y(y));
endmodule
module pick #(parameter MODE = "SLOW", parameter real T = 1.5)(input a, output y);
  buf #(MODE == "FAST" ? T : MODE == "slow" ? 2 * T : 4) g (y, a);
endmodule
"""


@pytest.mark.parametrize(
    ("mode", "time"), [('"FAST"', 1.5e6), ('"slow"', 3e6), ('"fast"', 4e6), ('{"FA", "ST"}', 1.5e6)]
)
def test_3_6_strings_choose(mode: str, time: float, delays: Callable[[str], dict[str, list[float]]]) -> None:
    assert delays(CHOSEN.format(mode))["p.g in>out rr"] == [time] * 3


def test_a_real_is_no_index(told: Codes) -> None:
    text = "module board(input [3:0] a, output y);\nparameter P = {};\n{}\nendmodule\n"
    assert told(text.format("2.0", "buf (y, a[P]);")) == ["N133"]
    assert told(text.format("2.0", "wire [P:0] w;\nbuf (y, a[0]);")) == ["N120"]
    assert told(text.format("2.0", "assign y = P;")) == ["N120"]
    assert told(text.format("2", "buf (y, a[P]);")) == []


# Delays


def _delays(values: Mapping[str, Value], trees_of: Mapping[str, tree.Expression]) -> Delays:
    text = PlacedText.whole(SourceFile("board.v", b" " * 400))
    return Delays(text, 1e6, 1e3, values, Collector(), {}, trees=trees_of)


def _triple(declared: Declared, trees: Trees, lines: str, value: str) -> tuple[float, ...] | list[str] | None:
    """Return a path value in ns, or the codes told."""
    names = ["".join(line.partition("=")[0].split()[-1:]) for line in lines.split(";") if line.strip()]
    texts = [f"({line.partition('=')[2]})" for line in lines.split(";") if line.strip()]
    written = dict(zip(names, trees(texts), strict=True))
    parameters = [
        tree.Parameter(False, None, (tree.Named(name, node, 0),), 0) for name, node in written.items()
    ]
    values = declared(f"module m;\n{lines}\nendmodule\n", NONE)
    delays = _delays(values, triple_trees(parameters))
    found = delays.triple(trees([value])[0])
    if found is None:
        return [told.code for told in delays.collector.all()]
    return tuple(time / 1e6 for time in found)


@pytest.mark.parametrize(
    ("lines", "value", "wanted"),
    [
        ("parameter T = 2.5;", "T * 2", (5, 5, 5)),
        ("specparam t = 1:2:3;", "t", (1, 2, 3)),
        ("specparam t = 1:2:3; specparam u = t * 1.5;", "u + 1", (2.5, 4, 5.5)),
        ("parameter T = (1.5:2.5:4);", "T", (1.5, 2.5, 4)),
        ("parameter integer T = (1.5:2.5:4);", "T", (2, 3, 4)),
        ("parameter N = 3; specparam t = 1:N:N*2;", "t + N", (4, 6, 9)),
        ("specparam t = 1:2:3;", "10 - t", ["N152"]),
        ("specparam t = 1:5:3;", "t", (1, 5, 3)),
        ("specparam t = 1:2:3;", "t - 2", ["N151"]),
        ("specparam t = 1:2:3;", "nobody", ["N120"]),
        ("specparam t = 1:2:3;", "1e999999", ["N153"]),
        ("specparam t = 1:2:3;", "0.0004", (0, 0, 0)),
        ("specparam t = 1:2:3;", "0.0005", (0.001, 0.001, 0.001)),
    ],
)
def test_14_3_values_of_paths(
    lines: str, value: str, wanted: tuple[float, ...] | list[str], declared: Declared, trees: Trees
) -> None:
    assert _triple(declared, trees, lines, value) == wanted


def test_words() -> None:
    assert words_of(Value(Fraction(1, 3), None, True, "real")) == "0.333333"
