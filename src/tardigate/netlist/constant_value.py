"""The value of a constant: whole number, real or text (IEEE 1364-2005 clauses 3.5, 3.6, 4.8).

Takes numbers, gives `Value` with its width and sign; converts between them. Unsized numbers are at least 32
bits wide: here they grow without limit. Reals are exact fractions. Does not know expressions.
"""

from __future__ import annotations

import re
from fractions import Fraction
from typing import NamedTuple

LARGEST = 1 << 13
"""Bits of the largest value that a constant expression may reach; its digits can still be told."""

UNSIZED = 32
"""Bits of an unsized number where its bits are looked at; one that needs more has as many times 32."""

_ESCAPE = re.compile(r"\\([0-7]{1,3}|.)", re.DOTALL)
_ESCAPED = {"n": "\n", "t": "\t"}


class NotConstantError(Exception):
    """An expression is no constant: `reason` in words, `at` where."""

    def __init__(self, reason: str, at: int) -> None:
        super().__init__(reason)
        self.reason = reason
        self.at = at


class Value(NamedTuple):
    """A constant.

    `value` is a whole number, or a Fraction where `form` is `real`. `width` in bits, None of an unsized
    number and of a real. `form` is `text` for what was written as a string, of 8 bits a character (clause
    3.6), and else empty. `bounds` are msb and lsb of a parameter with a range: its selections count by them.
    """

    value: int | Fraction
    width: int | None = None
    signed: bool = True
    form: str = ""
    bounds: tuple[int, int] | None = None


def whole(value: Value, at: int) -> int:
    """Return a whole number. Raises NotConstantError for a real (clause 4.8.1: no index, count or range)."""
    if isinstance(value.value, Fraction):
        raise NotConstantError("this is no whole number", at)
    return value.value


def rounded(value: Value) -> int:
    """Return a value as an integer: a real is rounded half away from zero (clause 4.8.2)."""
    number = value.value
    if isinstance(number, int):
        return number
    size = (abs(number) + Fraction(1, 2)).__floor__()
    return size if number >= 0 else -size


def real(number: int | Fraction) -> Value:
    """Return a real."""
    return Value(Fraction(number), None, True, "real")


def wrapped(value: int, width: int | None, signed: bool) -> Value:
    """Return a number cut to a width, or the bits of a negative one taken as unsigned (clause 5.4)."""
    if width is None:
        return Value(value if signed else pattern(value, None), None, signed)
    value &= (1 << width) - 1
    if signed and width and value >> (width - 1):
        value -= 1 << width
    return Value(value, width, signed)


def pattern(value: int, width: int | None) -> int:
    """Return the bits of a number as a number that is not negative."""
    if value >= 0 and width is None:
        return value
    return value & ((1 << (unsized_width(value) if width is None else width)) - 1)


def unsized_width(value: int) -> int:
    """Return how many bits an unsized number has: 32, or as many times 32 as it needs."""
    bits = value.bit_length() if value >= 0 else (~value).bit_length() + 1
    return max(1, -(-bits // UNSIZED)) * UNSIZED


def assigned(value: Value, width: int | None, signed: bool) -> Value:
    """Return a value converted as an assignment does (clauses 4.8.2 and 5.5.3); `width` None: unsized."""
    number = rounded(value)
    if width is None and signed and not value.signed:  # the top bit becomes the sign
        width = unsized_width(number)
        return Value(wrapped(number, width, True).value, None, True)
    return wrapped(number, width, signed)


def text_value(text: str) -> Value:
    """Return a string's value: unsigned, 8 bits a character, escapes read (clause 3.6.3); "" is one NUL."""

    def read(escape: re.Match[str]) -> str:
        word = escape[1]
        return chr(int(word, 8) & 255) if word[0] in "01234567" else _ESCAPED.get(word, word)

    plain = _ESCAPE.sub(read, text)
    try:
        data = plain.encode("latin-1")
    except UnicodeEncodeError:
        data = plain.encode("utf-8", "replace")
    data = data or b"\0"
    return Value(int.from_bytes(data, "big"), 8 * len(data), False, "text")


def words_of(value: Value) -> str:
    """Return a value as one would write it: `4`, `2.5`, `"FAST"`; a real to six digits."""
    number = value.value
    if isinstance(number, Fraction):
        return f"{float(number):.6g}" if abs(number) < 10**300 else "1e300 or more"
    if value.form == "text":
        data = number.to_bytes(max(1, (number.bit_length() + 7) // 8), "big").decode("latin-1")
        return f'"{data}"' if data.isprintable() else str(number)
    return str(number)


def literal(value: Value) -> str:
    """Return an expression of constants that has exactly this value, type and width."""
    number = value.value
    if isinstance(number, Fraction):
        return (
            f"{number.numerator}.0"
            if number.denominator == 1
            else f"({number.numerator}.0 / {number.denominator}.0)"
        )
    if value.width is None:
        return str(number)
    return f"{value.width}'{'s' * value.signed}h{number & (1 << value.width) - 1:x}"


def decimal(text: str) -> Fraction:
    """Return a decimal number exactly. Raises ValueError for one with absurdly many digits."""
    mantissa, _, exponent = text.lower().partition("e")
    if len(exponent.lstrip("+-").lstrip("0")) > 4 or len(text) > 4000:  # its power of ten fills the memory
        raise ValueError(text[:40])
    return Fraction(f"{mantissa}e{int(exponent or 0)}")
