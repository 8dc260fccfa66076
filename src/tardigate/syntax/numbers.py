"""Reads the numbers of Verilog (IEEE 1364-2005 clause 3.5).

Takes the text of a number, gives a `Number` or a `Decimal`. Does not know about units.
"""

from __future__ import annotations

from tardigate.syntax.tree import Decimal, Number

LARGEST_WIDTH = 1 << 20
"""Bits; a wider constant is cut there, and the netlist refuses it."""

_BITS = {"b": 1, "o": 3, "h": 4}
_DIGITS = {"b": "01", "o": "01234567", "d": "0123456789", "h": "0123456789abcdef"}


class BadNumberError(Exception):
    """What looks like a number is none: its `text`, the `reason` in words, `at` where."""

    def __init__(self, text: str, reason: str, at: int) -> None:
        super().__init__(reason)
        self.text, self.reason, self.at = text, reason, at


def read_number(text: str, at: int) -> Number | Decimal:
    """Return the number that `text` writes; `at` is its offset.

    Unsized whole decimals become `Number` with width None, `1.5` and `1e3` become `Decimal`. In a based
    number `x` and `z` (or `?`) set bits of the masks; a leading one fills up to the width (clause 3.5.1).
    Raises BadNumberError for a digit that the base does not have, and for a width of 0.
    """
    size, quote, rest = text.replace("_", "").partition("'")
    if not quote:
        if size.isdigit():
            return Number(_whole(size), None, 0, 0, True, at)
        return Decimal(size, at)
    rest = "".join(rest.split()).lower()
    signed = rest[0] == "s"
    rest = rest.lstrip("s")
    base, digits = rest[0], rest[1:]
    width = _whole(size.strip()) if size.strip() else None
    reason = _fault(base, digits, width)
    if reason:
        raise BadNumberError(text, reason, at)
    wide = min(32 if width is None else width, LARGEST_WIDTH)
    value = unknown = floating = 0
    if base == "d":
        full = (1 << wide) - 1
        if digits[0] in "xz?":
            unknown, floating = (full, 0) if digits[0] == "x" else (0, full)
        else:
            value = _whole(digits)
    else:
        value, unknown, floating = _masks(base, digits, wide)
    mask = (1 << wide) - 1
    return Number(value & mask, width, unknown & mask, floating & mask, signed, at)


def _fault(base: str, digits: str, width: int | None) -> str:
    """Return what is wrong with a based number, empty when nothing is."""
    if width == 0:
        return "a width of 0 leaves no bit"
    if not digits:
        return "it has no digit"
    floats = "" if base == "d" and len(digits) > 1 else "xz?"
    wrong = digits.strip(_DIGITS[base] + floats)
    return f"base {base} has no digit {wrong[0]}" if wrong else ""


def _whole(digits: str) -> int:
    """Return a whole number; of one with absurdly many digits a number that is too large for anything."""
    return int(digits) if len(digits) <= 400 else 1 << 1024


def _masks(base: str, digits: str, wide: int) -> tuple[int, int, int]:
    step = _BITS[base]
    fill = digits[0] if digits[0] in "xz?" else "0"
    digits = digits[-(wide // step + 1) :].rjust(-(-wide // step), fill)
    radix = 1 << step
    full = f"{radix - 1:x}"
    value = int("".join("0" if d in "xz?" else d for d in digits), radix) if digits else 0
    unknown = int("".join(full if d == "x" else "0" for d in digits), radix) if digits else 0
    floating = int("".join(full if d in "z?" else "0" for d in digits), radix) if digits else 0
    return value, unknown, floating
