"""A delay written in the Verilog source on a gate or an assignment. Data only."""

from __future__ import annotations

from typing import NamedTuple

Triple = tuple[float, float, float]
"""min, typ, max in femtoseconds; NaN where nobody gave a number."""


class SourceDelay(NamedTuple):
    """One to three values: rise; fall; turn-off (IEEE 1364-2005 clauses 7.14 and 6.1.3).

    One value serves every transition; with two, rise and fall, the turn-off takes the smaller. `words` says
    how it stands in the source (`#(2,3)`).
    """

    values: tuple[Triple, ...]
    words: str = ""
