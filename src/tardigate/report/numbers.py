"""Numbers to text: times in one unit for a whole report.

Takes femtoseconds, gives decimal text. Does not choose what is shown.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from fractions import Fraction
from typing import Literal, NamedTuple

from tardigate.parts.units import FEMTOSECONDS

Rounding = Literal["near", "up", "down"]

MOST_DECIMALS = 3

_LIMITS = (("fs", 10**3), ("ps", 10**6), ("ns", 10**11), ("us", 10**14), ("ms", 10**17))
"""A unit serves times below its limit in fs; seconds serve the rest."""


class Scale(NamedTuple):
    """The unit of a report and its number of decimals: every time of the report is written with both."""

    unit: str
    decimals: int

    def text(self, fs: float, rounding: Rounding = "near") -> str:
        """Return a finite time as decimal text without its unit; `near` rounds halves away from 0."""
        step = FEMTOSECONDS[self.unit] // 10**self.decimals
        if rounding == "near":
            steps = math.floor((2 * Fraction(abs(fs)) + step) / (2 * step)) * (-1 if fs < 0 else 1)
        elif rounding == "up":
            steps = -(-math.ceil(fs) // step)
        else:
            steps = math.floor(fs) // step
        return _decimal(steps, self.decimals)


def scale_of(times: Iterable[float]) -> Scale:
    """Return the scale that shows these times (fs) exactly, where `MOST_DECIMALS` allow it.

    Infinite times are left out: a net that never changes has no time to be written.
    """
    finite = [time for time in times if math.isfinite(time)]
    largest = max((abs(time) for time in finite), default=0.0)
    unit = next((unit for unit, limit in _LIMITS if largest < limit), "s") if largest else "ns"
    per_unit = FEMTOSECONDS[unit]
    decimals = 0
    while decimals < MOST_DECIMALS and 10**decimals < per_unit:
        step = per_unit // 10**decimals
        if all(time % step == 0 for time in finite):
            break
        decimals += 1
    return Scale(unit, decimals)


def _decimal(steps: int, decimals: int) -> str:
    sign, digits = ("-" if steps < 0 else ""), str(abs(steps)).rjust(decimals + 1, "0")
    return f"{sign}{digits[:-decimals]}.{digits[-decimals:]}" if decimals else f"{sign}{digits}"
