"""Constant expressions against pyslang, a front end of IEEE 1800, on random expressions.

Wanted differences, each with its clause of IEEE 1364-2005:
- an unsized number grows beyond 32 bits here (3.5.1: at least 32); such expressions are left out;
- reals are exact fractions here, doubles there (4.8);
- `===` and `!==` take no reals here (table 5-3);
- what is x somewhere is refused here, even where the result is known for other reasons (5.1.10);
- an unsized number shifted left by a negative amount is refused as too large here; there it is 0 (5.1.12);
- the value of an override is converted to the parameter's type here; there the type is the context of the
  expression too (4.10.1 says only the former).
"""

from __future__ import annotations

import re
import time
from collections.abc import Callable, Mapping
from fractions import Fraction
from typing import Any

import pytest
from hypothesis import given, settings, strategies as st
from pyslang.ast import Compilation
from pyslang.syntax import SyntaxTree

from tardigate.netlist import constants
from tardigate.netlist.constant_value import pattern, words_of
from tardigate.netlist.constants import NotConstantError, Value, evaluate, evaluate_whole, rounded
from tardigate.syntax import tree

Trees = Callable[[list[str]], list[tree.Expression]]
Declared = Callable[..., dict[str, Value]]

SIZED = st.builds(
    lambda width, value, base, sign: (
        f"{width}'{sign}{base}{value % 2**width:{'b' if base == 'b' else 'x' if base == 'h' else 'd'}}"
    ),
    st.integers(1, 40), st.integers(0, 2**40), st.sampled_from("bhd"), st.sampled_from(["", "s"]),
)  # fmt: skip
SMALL = st.integers(0, 20).map(str)
DECIMALS = st.sampled_from(["0.5", "1.5", "2.25", "2.5e1", "3.0", "1_0.125", "12.5e-2"])
STRINGS = st.sampled_from(['"A"', '"FAST"', '"\\n"', '""', '"\\101b"'])
LEAVES = st.one_of(SMALL, SIZED, SIZED, st.sampled_from(["'hff", "'sd3", "'o17"]), STRINGS)
ODD = st.one_of(LEAVES, DECIMALS, DECIMALS, st.sampled_from(["4'b1x0z", "1/0"]))
UNARY = ["-", "+", "~", "!", "&", "|", "^", "~&", "~|", "~^"]
BINARY = [
    "+", "-", "*", "/", "%", "&", "|", "^", "~^", "==", "!=", "===", "!==", "<", "<=", ">", ">=", "&&", "||",
    "<<", ">>", ">>>", "<<<", "**",
]  # fmt: skip


POWERS = ["<<", ">>", ">>>", "**"]


def _above(below: st.SearchStrategy[str]) -> st.SearchStrategy[str]:
    closed = below.map(lambda text: f"({text})")
    return st.one_of(
        st.builds(lambda operator, a: f"({operator} {a})", st.sampled_from(UNARY), closed),
        st.builds(lambda a, operator, b: f"({a} {operator} {b})", closed, st.sampled_from(BINARY), closed),
        st.builds(lambda a, operator, b: f"{a} {operator} {b}", SMALL, st.sampled_from(BINARY), SMALL),
        st.builds(
            lambda a, operator, b: f"({a} {operator} {b})", closed, st.sampled_from(POWERS),
            st.integers(0, 5).map(str),
        ),
        st.builds(lambda a, b, c: f"({a} ? {b} : {c})", closed, closed, closed),
        st.builds(lambda a, b: f"{{{a}, {b}}}", SIZED, SIZED | STRINGS),
        st.builds(lambda times, a: f"{{{times}{{{a}}}}}", st.integers(1, 3), SIZED),
        st.builds(
            lambda name, a: f"{name}({a})",
            st.sampled_from(["$clog2", "$signed", "$unsigned", "$rtoi", "$itor"]), below,
        ),
    )  # fmt: skip


EXPRESSIONS = st.recursive(LEAVES, _above, max_leaves=6)
MIXED = st.recursive(ODD, _above, max_leaves=5)


class Other:
    """What pyslang makes of parameters."""

    def __init__(self, text: str) -> None:
        self._tree = SyntaxTree.fromText(text)  # kept, as what is found points into both
        self._compilation = Compilation()
        self._compilation.addSyntaxTree(self._tree)
        self.symbols: dict[str, Any] = {}
        work = list(self._compilation.getRoot().topInstances)
        while work:
            for symbol in work.pop().body:
                if "InstanceSymbol" in type(symbol).__name__:
                    work.append(symbol)
                self.symbols[symbol.name] = symbol

    def value(self, name: str) -> Value | None:
        """Return a parameter's value, None for an error or an x."""
        symbol = self.symbols[name]
        found = symbol.value.value
        if isinstance(found, float):
            return Value(Fraction(found), None, True, "real") if abs(found) < 1e300 else None
        if found is None or found.hasUnknown:
            return None
        return Value(int(found), symbol.type.bitWidth, symbol.type.isSigned)


class Watch:
    """Notices unsized numbers that leave 32 bits."""

    def __init__(self, monkeypatch: pytest.MonkeyPatch) -> None:
        self.overflow = False
        self._bounded = constants._bounded
        monkeypatch.setattr(constants, "_bounded", self)

    def __call__(self, result: constants.Result, at: int) -> constants.Result:
        if isinstance(result, Value) and isinstance(result.value, int) and result.width is None:
            low, high = (-(1 << 31), 1 << 31) if result.signed else (0, 1 << 32)
            self.overflow |= not low <= result.value < high
        return self._bounded(result, at)


def _same(ours: Value, other: Value) -> bool:
    if isinstance(ours.value, Fraction) or isinstance(other.value, Fraction):
        near = abs(float(ours.value) - float(other.value)) <= abs(float(other.value)) * 1e-12
        return isinstance(ours.value, Fraction) and isinstance(other.value, Fraction) and near
    shapes = (ours.width or 32, ours.signed) == (other.width, other.signed)
    return shapes and ours.value == other.value


HARMLESS = ("x and z", "division by zero", "too large", "`===` takes", "`!==` takes")


def _evaluated(expression: tree.Expression) -> Value | str:
    try:
        return evaluate(expression, {})
    except NotConstantError as error:
        return error.reason


@pytest.mark.parametrize("kind", ["whole", "mixed"])
def test_against_pyslang(kind: str, trees: Trees, monkeypatch: pytest.MonkeyPatch) -> None:
    watch, seen = Watch(monkeypatch), {"same": 0, "refused": 0}

    @settings(max_examples=60, deadline=None, derandomize=True)
    @given(st.lists(EXPRESSIONS if kind == "whole" else MIXED, min_size=20, max_size=20))
    def law(texts: list[str]) -> None:
        lines = "".join(f"localparam P{i} = {text};\n" for i, text in enumerate(texts))
        other = Other(f"module m;\n{lines}endmodule\n")
        for i, (text, expression) in enumerate(zip(texts, trees(texts), strict=True)):
            watch.overflow = False
            wanted = other.value(f"P{i}")
            ours = _evaluated(expression)
            if isinstance(ours, str):
                assert wanted is None or any(word in ours for word in HARMLESS), text
                seen["refused"] += 1
                continue
            if watch.overflow:
                continue
            assert wanted is not None, text
            assert _same(ours, wanted), (text, ours, wanted)
            seen["same"] += 1

    law()
    assert seen["same"] > 500
    assert seen["same"] > seen["refused"]


TYPES = st.sampled_from(
    ["", "signed", "integer", "real", "realtime", "time", "[7:0]", "signed [7:0]", "[3:10]", "signed [0:3]",
     "[40:1]"]
)  # fmt: skip
SIMPLE = st.one_of(SMALL, SIZED, STRINGS, DECIMALS, SMALL.map("-{}".format), DECIMALS.map("-{}".format))


@pytest.mark.parametrize("overridden", [False, True])
def test_parameters_against_pyslang(
    overridden: bool, declared: Declared, trees: Trees, monkeypatch: pytest.MonkeyPatch
) -> None:
    watch, same = Watch(monkeypatch), []

    @settings(max_examples=40, deadline=None, derandomize=True)
    @given(
        st.lists(st.tuples(TYPES, SIMPLE if overridden else EXPRESSIONS, SIMPLE), min_size=10, max_size=10)
    )
    def law(rows: list[tuple[str, str, str]]) -> None:
        lines = "".join(f"parameter {kind} P{i} = {value};\n" for i, (kind, value, _) in enumerate(rows))
        pins = ", ".join(f".P{i}({value})" for i, (_, _, value) in enumerate(rows))
        child = f"module m;\n{lines}endmodule\n"
        other = Other(child + f"module top; m #({pins if overridden else ''}) u(); endmodule\n")
        overrides: dict[str, Value] = {}
        if overridden:
            values = trees([value for _, _, value in rows])
            overrides = {f"P{i}": evaluate(value, {}) for i, value in enumerate(values)}
        plain = [_evaluated(value) for value in trees([value for _, value, _ in rows])]
        watch.overflow = False
        ours = declared(child, overrides, None)
        if watch.overflow:
            return
        for i, row in enumerate(rows):
            wanted = other.value(f"P{i}")
            if wanted is not None and not isinstance(plain[i], str):
                assert _same(ours[f"P{i}"], wanted), (row, ours[f"P{i}"], wanted)
                same.append(row)

    law()
    assert len(same) > 150


@pytest.mark.parametrize(
    ("expression", "value"),
    [
        ("0 ? 1/0 : 3", 3), ("1 ? 3 : 4'bx", 3), ("0 && 1/0", 0), ("1/0 || 1", 1), ("1 << 40 >> 40", 1),
        ('"FAST" == "FAST"', 1), ('"AB" == "\\000AB"', 1), ('"" == 8\'d0', 1), ('"ab" == {"a", "b"}', 1),
        ("-1 < 8'd5", 0), ("4'sb1111 < 4'sd0", 1), ("(4'd15 + 4'd1) == 5'd16", 1), ("-1 == 'hffffffff", 1),
        ("-1 >> 28", 15), ("-1 >>> 28", -1), ("$unsigned(-1) >> 28", 15), ("$signed(4'hf) >>> 1", -1),
        ("0.1 + 0.2 == 0.3", 1), ("1 / 2 + 0.5 == 0.5", 1), ("2 ** 0.5 > 1.414", 1), ("$rtoi(-2.9)", -2),
        ("$itor(7) / 2 == 3.5", 1), ("$clog2(16'hffff)", 16), ("40'hff_ffff_ffff + 1", 0), ("!0.0", 1),
        ("2 ** -1", 0), ("(-1) ** -3", -1), ("4'd3 ** 2", 9), ("4'd3 ** 3", 11), ("{2{1'b1, {0{1'b0}}}}", 3),
        ("1 ? 2 : 0.5", 2),
    ],
)  # fmt: skip
def test_5_values(expression: str, value: int, trees: Trees) -> None:
    assert evaluate(trees([expression])[0], {}).value == value


@pytest.mark.parametrize(
    ("expression", "words"),
    [
        ("4'bx", "x and z"), ("1/0", "division"), ("5 % 0", "division"), ("0 ** -1", "division"),
        ("1.0 / 0", "division"), ("2.0 % 2", "`%` takes no real"), ("1.5 & 1", "`&` takes"),
        ("~1.5", "`~` takes"), ("1.0 === 1.0", "`===` takes"), ("1 << 1.5", "`<<` takes"),
        ("{1.5, 1'b1}", "no whole number"), ("{2.0{1'b1}}", "no whole number"), ("$clog2(2.5)", "no whole"),
        ("{1, 1'b1}", "only sized"), ("{0{1'b1}}", "no bit"), ("{(-1){1'b1}}", "negative count"),
        ("$random(1)", "`$random` is no function"), ("$sin(0.5)", "`$sin` is no function"),
        ("$clog2(1, 2)", "one argument"), ("nobody", "no parameter"), ("a.b", "no parameter"),
        ("1e999999", "too large"), ("1e-999999", "too large"), ("9 ** 99999999", "too large"),
        ("1.5 ** 1e9", "too large"), ("1 << 99999", "too large"), ("(-8.0) ** 0.5", "division"),
        ("1e4000 * 1e4000", "too large"), ("1 + 2 ** 99999", "too large"), ("{9999{1'b1}}", "too large"),
    ],
)  # fmt: skip
def test_what_is_no_constant(expression: str, words: str, trees: Trees) -> None:
    begun = time.perf_counter()
    with pytest.raises(NotConstantError, match=re.escape(words)):
        evaluate(trees([expression])[0], {})
    assert time.perf_counter() - begun < 2


def test_whole_numbers_only(trees: Trees) -> None:
    assert evaluate_whole(trees(["3 + 4"])[0], {}) == 7
    with pytest.raises(NotConstantError):
        evaluate_whole(trees(["3.0"])[0], {})


def test_4_8_2_rounding() -> None:
    for number, wanted in ((5, 3), (-5, -3), (3, 2), (-3, -2), (1, 1), (-1, -1)):
        assert rounded(Value(Fraction(number, 2), None, True, "real")) == wanted


SELECTIONS: Mapping[str, Mapping[str, int | None]] = {
    "[7:4]": {"P[4]": 0, "P[7]": 1, "P[5:4]": 2, "P[4+:2]": 2, "P[7-:3]": 5, "P[3]": None, "P[8]": None},
    "[0:3]": {"P[0]": 1, "P[3]": 0, "P[0:1]": 2, "P[0+:2]": 2, "P[3-:3]": 2, "P[3:0]": None, "P[4]": None},
    "": {"P[0]": 0, "P[3]": 1, "P[3:2]": 2, "P[4]": None},
}


@pytest.mark.parametrize("bounds", SELECTIONS)
def test_5_2_1_selections_count_by_the_range(bounds: str, declared: Declared, trees: Trees) -> None:
    values = declared(f"module m;\nparameter {bounds} P = 4'b1010;\nendmodule\n", {})
    for text, wanted in SELECTIONS[bounds].items():
        expression = trees([text])[0]
        if wanted is None:
            with pytest.raises(NotConstantError):
                evaluate(expression, values)
        else:
            assert evaluate(expression, values).value == wanted, text


def test_a_deep_expression(trees: Trees) -> None:
    assert evaluate(trees(["+".join(["1"] * 20000)])[0], {}).value == 20000


@given(st.integers(-(1 << 70), 1 << 70), st.integers(1, 80))
def test_a_pattern_has_the_bits_of_its_number(value: int, width: int) -> None:
    assert (pattern(value, width) - value) % (1 << width) == 0
    assert 0 <= pattern(value, width) < 1 << width


def test_values_in_words() -> None:
    shown = [Value(4), Value(Fraction(5, 2), None, True, "real"), Value(0x4142, 16, False, "text")]
    assert [words_of(value) for value in shown] == ["4", "2.5", '"AB"']
