"""Quantities with units: the only place where "3 ns" becomes a number.

Times inside the program are femtoseconds in float64. IEEE 1364-2005 clause 19.8 knows nothing finer than
1 fs, so every time that can be written in a source is a whole number here, and sums of whole numbers are
exact up to 2**53 fs (9 s): results depend neither on the unit written nor on the order of the additions.
"""

from __future__ import annotations

from fractions import Fraction

FEMTOSECONDS = {"s": 10**15, "ms": 10**12, "us": 10**9, "ns": 10**6, "ps": 10**3, "fs": 1}
"""Units of time in femtoseconds (SI prefixes)."""

LONGEST = 2.0**53
"""Femtoseconds; beyond it sums would no longer be exact."""


def time_in_fs(number: str, unit: str) -> float:
    """Return the time `number` `unit` in femtoseconds, correctly rounded.

    Raises KeyError for an unknown unit, ValueError for what is no decimal number, OverflowError beyond
    `LONGEST`.
    """
    if len(number) > 60:
        raise OverflowError(number[:60])
    mantissa, _, exponent = number.lower().partition("e")
    if exponent and abs(int(exponent)) > 60:
        raise OverflowError(number)
    value = Fraction(mantissa + (f"e{exponent}" if exponent else "")) * FEMTOSECONDS[unit]
    if abs(value) > LONGEST:
        raise OverflowError(number)
    return float(value)
