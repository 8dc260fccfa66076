"""Which delay a gate or operator has: the entry of a parts file that is nearest to it.

Takes the entries of all families under the chosen condition, gives a delay for each transition of the output:
that of just so many inputs, then that of any number, then the default, then none.
"""

from __future__ import annotations

from collections.abc import Iterable
from typing import NamedTuple

from tardigate.parts.kind import Origin
from tardigate.parts.kind_maker import MISSING, Delay, given
from tardigate.parts.model import Entry

LIKE = {"ZH": "LH", "ZL": "HL", "HZ": "HL", "LZ": "LH"}
"""Transitions that a plain `tpd` serves as well, and the one whose entry they take then."""


class ByKind:
    """Entries of one table, by name and transition."""

    def __init__(self) -> None:
        self.entries: dict[tuple[str, str], list[tuple[Entry, Delay]]] = {}

    def add(self, entries: Iterable[Entry], column: int, origin: Origin, told: str = "") -> None:
        """Take entries with the delays of one column; a row of nothing but `-` counts as not there."""
        for entry in entries:
            triple = entry.columns[column]
            if given(triple):
                delay = Delay(triple, origin, f"{told}{entry.place}")
                self.entries.setdefault((entry.name, entry.transition), []).append((entry, delay))

    def find(self, name: str, inputs: int, transition: str) -> Delay | None:
        """Return the delay of an entry, or None."""
        found = self._nearest(name, inputs, transition)
        if found is None and transition in LIKE:
            found = self._nearest(name, inputs, LIKE[transition])
            if found is not None and found[0].symbol != "tpd" and name:  # the default serves everything
                return None
        return None if found is None else found[1]

    def _nearest(self, name: str, inputs: int, transition: str) -> tuple[Entry, Delay] | None:
        anyhow = None
        for entry, delay in self.entries.get((name, transition), ()):
            if entry.low <= inputs <= entry.high:
                return entry, delay
            if entry.high == 0:
                anyhow = (entry, delay)
        return anyhow


class Choice(NamedTuple):
    """The tables of all families together."""

    gates: ByKind
    operators: ByKind
    default: ByKind

    def delay(self, table: ByKind, name: str, inputs: int, transition: str) -> Delay:
        """Return the delay that wins for a gate or operator; without any, one of unknown numbers."""
        return table.find(name, inputs, transition) or self.default.find("", 0, transition) or MISSING
