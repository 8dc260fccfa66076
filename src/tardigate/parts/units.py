"""Quantities with units: the only place where "3 ns" becomes a number.

Times inside the program are femtoseconds in float64. IEEE 1364-2005 clause 19.8 knows nothing finer than
1 fs, so every time that can be written in a source is a whole number here, and sums of whole numbers are
exact up to 2**53 fs (9 s): results depend neither on the unit written nor on the order of the additions.
"""

from __future__ import annotations

from collections.abc import Mapping

FEMTOSECONDS: Mapping[str, int] = {
    "s": 10**15,
    "ms": 10**12,
    "us": 10**9,
    "ns": 10**6,
    "ps": 10**3,
    "fs": 1,
}
"""Units of time in femtoseconds (SI prefixes)."""

FEMTOFARADS: Mapping[str, int] = {"uF": 10**9, "nF": 10**6, "pF": 10**3, "fF": 1}
"""Units of capacitance in femtofarads."""

MICROMETRES: Mapping[str, int] = {"m": 10**6, "cm": 10**4, "mm": 10**3, "um": 1}
"""Units of length in micrometres."""

VOLTS: Mapping[str, int] = {"kV": 10**6, "V": 1000, "mV": 1}
"""Units of voltage in millivolts."""

CELSIUS: Mapping[str, int] = {"C": 1}
"""Temperature has one unit: degrees Celsius."""

UNITS: Mapping[str, Mapping[str, int]] = {
    unit: table for table in (FEMTOSECONDS, FEMTOFARADS, MICROMETRES, VOLTS, CELSIUS) for unit in table
}
"""Every unit and the table that it stands in."""

LONGEST = 2.0**53
"""Femtoseconds; beyond it sums would no longer be exact."""


def time_in_fs(number: str, unit: str) -> float:
    """Return the time `number` `unit` in femtoseconds, correctly rounded.

    Raises KeyError for an unknown unit, ValueError for what is no decimal number, OverflowError beyond
    `LONGEST`.
    """
    value = amount(number, unit, FEMTOSECONDS)
    if abs(value) > LONGEST:
        raise OverflowError(number)
    return value


def amount(number: str, unit: str, units: Mapping[str, int]) -> float:
    """Return `number` `unit` in the unit that `units` counts in, correctly rounded.

    Raises KeyError for an unknown unit, ValueError for what is no decimal number, OverflowError for a number
    of more than 60 digits or beyond 1e60.
    """
    if len(number) > 60:
        raise OverflowError(number[:60])
    mantissa, _, exponent = number.lower().partition("e")
    if exponent and abs(int(exponent)) > 60:
        raise OverflowError(number)
    whole, _, part = mantissa.partition(".")
    power = int(exponent or "0") - len(part)
    value = int(whole + part) * units[unit] * 10 ** max(0, power)
    quotient: float = value / 10 ** max(0, -power)  # of integers: correctly rounded
    return quotient
