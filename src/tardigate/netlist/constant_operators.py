"""Operators of constant expressions on numbers (IEEE 1364-2005 clauses 5.1 and 17.8, 17.11.1).

Takes operands that already have the width and sign of their context, gives results. Work is bounded: what
would have too many digits raises OverflowError, what has no value ZeroDivisionError.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from fractions import Fraction
from typing import NamedTuple

from tardigate.netlist.constant_value import (
    LARGEST,
    Value,
    assigned,
    pattern,
    real,
    rounded,
    unsized_width,
    wrapped,
)


class Shape(NamedTuple):
    """Type of an expression: `width` None when unsized, `signed`; of a `real` they mean nothing."""

    width: int | None
    signed: bool
    real: bool = False


UNSIZED_SIGNED, BIT, REAL = Shape(None, True), Shape(1, False), Shape(None, True, True)


def joined(one: Shape, other: Shape) -> Shape:
    """Return the type of an operator whose operands share one (clauses 5.4.1 and 5.5.1).

    Unsized is at least 32 bits: beside more it takes these, else it stays without limit.
    """
    if one.real or other.real:
        return REAL
    signed = one.signed and other.signed
    if one.width is not None and other.width is not None:
        return Shape(max(one.width, other.width), signed)
    sized = one.width or other.width or 0
    return Shape(sized if sized > 32 else None, signed)


def shape_of(value: Value) -> Shape:
    """Return the type of a value."""
    return REAL if isinstance(value.value, Fraction) else Shape(value.width, value.signed)


def fitted(value: Value, shape: Shape) -> Value:
    """Return a value in the type of its context: extended by its sign only where all is signed (5.5.2)."""
    if isinstance(value.value, Fraction) or shape == Shape(value.width, value.signed):
        return value
    if shape.signed:
        return wrapped(value.value, shape.width, True)
    bits = wrapped(pattern(value.value, value.width), shape.width, False)
    return bits._replace(form=value.form) if bits.value == value.value else bits


def _divide(a: int, b: int) -> int:
    quotient = abs(a) // abs(b)
    return quotient if (a < 0) == (b < 0) else -quotient


_WHOLE: Mapping[str, Callable[[int, int], int]] = {
    "+": lambda a, b: a + b, "-": lambda a, b: a - b, "*": lambda a, b: a * b, "/": _divide,
    "%": lambda a, b: a - b * _divide(a, b), "&": lambda a, b: a & b, "|": lambda a, b: a | b,
    "^": lambda a, b: a ^ b, "~^": lambda a, b: ~(a ^ b), "^~": lambda a, b: ~(a ^ b),
}  # fmt: skip
_REAL: Mapping[str, Callable[[Fraction, Fraction], Fraction]] = {
    "+": lambda a, b: a + b, "-": lambda a, b: a - b, "*": lambda a, b: a * b, "/": lambda a, b: a / b,
}  # fmt: skip
_COMPARED: Mapping[str, Callable[[Fraction | int, Fraction | int], bool]] = {
    "==": lambda a, b: a == b, "!=": lambda a, b: a != b, "===": lambda a, b: a == b,
    "!==": lambda a, b: a != b, "<": lambda a, b: a < b, "<=": lambda a, b: a <= b, ">": lambda a, b: a > b,
    ">=": lambda a, b: a >= b,
}  # fmt: skip

SHIFTS = ("<<", ">>", "<<<", ">>>")
COMPARISONS = tuple(_COMPARED)
FOR_REALS = frozenset(("+", "-", "*", "/", "**", "<", "<=", ">", ">=", "==", "!=", "!", "&&", "||"))
"""Operators that take reals (table 5-3), besides `?:`."""


def binary(operator: str, left: Value, right: Value, shape: Shape) -> Value:
    """Return what an operator with a type of its own makes of operands (clauses 5.1.5, 5.1.10, 5.1.12)."""
    a, b = left.value, right.value
    if shape.real or isinstance(a, Fraction) or isinstance(b, Fraction):
        one, other = Fraction(a), Fraction(b)
        return real(_real_power(one, other) if operator == "**" else _REAL[operator](one, other))
    if operator in SHIFTS:
        return wrapped(_shifted(operator, a, pattern(b, right.width), shape), shape.width, shape.signed)
    if operator == "**":
        return wrapped(_power(a, b, shape.width), shape.width, shape.signed)
    return wrapped(_WHOLE[operator](a, b), shape.width, shape.signed)


def _shifted(operator: str, a: int, by: int, shape: Shape) -> int:
    if operator in ("<<", "<<<"):
        if shape.width is not None and by >= shape.width:
            return 0
        if a and by + a.bit_length() > LARGEST:
            raise OverflowError
        return a << by if a else 0
    if operator == ">>>" and shape.signed:
        return a >> min(by, LARGEST)
    return pattern(a, shape.width) >> min(by, LARGEST)


def _power(a: int, b: int, width: int | None) -> int:
    """Return a power (table 5-6)."""
    if b < 0:
        if a == 0:
            raise ZeroDivisionError
        return 0 if abs(a) != 1 else a if b % 2 else 1
    if abs(a) > 1 and width is not None and b.bit_length() <= 64:
        return pow(a, b, 1 << width)
    if abs(a) > 1 and b * a.bit_length() > LARGEST:
        raise OverflowError
    return int(a**b) if abs(a) > 1 else a if b % 2 else a * a if b else 1


def _real_power(a: Fraction, b: Fraction) -> Fraction:
    """Return a power: exact for whole exponents, else as precise as a float."""
    if b.denominator == 1:
        size = max(a.numerator.bit_length(), a.denominator.bit_length())
        if abs(b.numerator) * (size - (abs(a) == 1)) > LARGEST:
            raise OverflowError
        return Fraction(a**b.numerator) if abs(a) != 1 else a if b.numerator % 2 else Fraction(1)
    if a < 0:
        raise ZeroDivisionError
    return Fraction(float(a) ** float(b))


def compared(operator: str, left: Value, right: Value) -> Value:
    """Return what a comparison of operands of one type gives (clauses 5.1.7, 5.1.8)."""
    return Value(int(_COMPARED[operator](left.value, right.value)), 1, False)


def unary(operator: str, operand: Value, shape: Shape) -> Value:
    """Return `+`, `-` or `~` of an operand."""
    if isinstance(operand.value, Fraction):
        return real(-operand.value if operator == "-" else operand.value)
    value = {"+": operand.value, "-": -operand.value, "~": ~operand.value}[operator]
    return wrapped(value, shape.width, shape.signed)


def reduced(operator: str, operand: Value) -> Value:
    """Return `!` or a reduction of an operand to one bit (clauses 5.1.9 and 5.1.11)."""
    if operator == "!":
        return Value(int(not operand.value), 1, False)
    number = rounded(operand)
    width = unsized_width(number) if operand.width is None else operand.width
    bits = pattern(number, width)
    result = {"&": bits == (1 << width) - 1, "|": bits != 0, "^": bits.bit_count() & 1 == 1}
    return Value(int(result[operator.strip("~")] ^ ("~" in operator)), 1, False)


def concatenated(parts: list[Value], times: int) -> Value:
    """Return values one after the other, so many times (clause 5.1.14); one without width has 32 bits."""
    value = width = 0
    for part in parts:
        bits = pattern(rounded(part), part.width)
        size = unsized_width(bits) if part.width is None else part.width
        value, width = value << size | bits, width + size
    if times < 0 or width * times > LARGEST:
        raise OverflowError
    one = value
    for _ in range(times - 1):
        value = value << width | one
    return Value(value if times else 0, width * times, False)


def _clog2(operand: Value) -> Value:
    number = pattern(rounded(operand), operand.width)
    return Value(max(0, number - 1).bit_length())


def _signed(operand: Value) -> Value:
    return assigned(operand, operand.width, True)


def _unsigned(operand: Value) -> Value:
    return Value(pattern(rounded(operand), operand.width), operand.width, False)


def _rtoi(operand: Value) -> Value:
    return Value(int(operand.value))  # towards zero


def _itor(operand: Value) -> Value:
    return real(rounded(operand))


FUNCTIONS: Mapping[str, Callable[[Value], Value]] = {
    "$clog2": _clog2, "$signed": _signed, "$unsigned": _unsigned, "$rtoi": _rtoi, "$itor": _itor,
}  # fmt: skip
"""The system functions that a constant may call; each has one argument (clauses 5.5, 17.8, 17.11.1)."""

WHOLE_ONLY = frozenset(("$clog2", "$signed", "$unsigned"))
"""Those whose argument is no real."""


def call_shape(name: str, operand: Shape) -> Shape:
    """Return the type of a function's result."""
    if name == "$itor":
        return REAL
    if name in ("$signed", "$unsigned"):
        return Shape(operand.width, name == "$signed")
    return UNSIZED_SIGNED


def ends_of(mode: str, high: int, low: int, step: int) -> tuple[int, int]:
    """Return the left and right index of what a selection `[high:low]`, `[high]`, or `[high +: low]` means.

    Of the last two modes `low` is the width, and they count up and down from `high` whichever way the vector
    is declared (clause 5.2.1): `step` is 1 where its left index is the larger, else -1.
    """
    if mode not in ("up", "down"):
        return high, low
    bottom = high if mode == "up" else high - low + 1
    return (bottom + low - 1, bottom) if step > 0 else (bottom, bottom + low - 1)


def selected(value: Value, mode: str, high: int, low: int) -> Value | None:
    """Return bits of a parameter; None when they are not there (clause 5.2.1).

    The bits of one without a range count from 0, its least significant.
    """
    msb, lsb = value.bounds or ((LARGEST if value.width is None else value.width) - 1, 0)
    step = 1 if msb >= lsb else -1
    high, low = ends_of(mode, high, low, step)
    first, last = (low - lsb) * step, (high - lsb) * step
    if not 0 <= first <= last <= abs(msb - lsb):
        return None
    width = last - first + 1
    return Value((rounded(value) >> first) & ((1 << width) - 1), width, False)
