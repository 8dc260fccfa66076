"""The values of a module path to transitions of its output (IEEE 1364-2005 clause 14.3.1, table 14-2).

Takes one, two, three, six or twelve triples, gives one for each transition of the output that the model
knows. Transitions to and from x, the last six of twelve, are beyond the model: read and left out.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from types import MappingProxyType

from tardigate.parts.source_delay import Triple

ORDERS: Mapping[int, Mapping[str, int]] = MappingProxyType(
    {
        1: {"LH": 0, "HL": 0, "LZ": 0, "ZH": 0, "HZ": 0, "ZL": 0},
        2: {"LH": 0, "HL": 1, "LZ": 0, "ZH": 0, "HZ": 1, "ZL": 1},
        3: {"LH": 0, "HL": 1, "LZ": 2, "ZH": 0, "HZ": 2, "ZL": 1},
        6: {"LH": 0, "HL": 1, "LZ": 2, "ZH": 3, "HZ": 4, "ZL": 5},
        12: {"LH": 0, "HL": 1, "LZ": 2, "ZH": 3, "HZ": 4, "ZL": 5},
    }
)
"""Number of values → transition → which of them it takes: `LZ` is from 0 to z."""

GROUPS = (("LH", "HL", "tpd"), ("ZH", "ZL", "ten"), ("HZ", "LZ", "tdis"))
"""Transitions that may stand in one row, and the letter symbol of both together."""


def by_transition(values: Sequence[Triple]) -> dict[str, Triple]:
    """Return the triple of each transition. Raises KeyError for a number of values that cannot be."""
    return {transition: values[at] for transition, at in ORDERS[len(values)].items()}
