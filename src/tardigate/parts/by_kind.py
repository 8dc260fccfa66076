"""Which delay a gate or operator has: the entry of a parts file that is nearest to it.

Takes the entries of all families under the chosen condition, gives a delay for each transition of the output:
that of just so many inputs, then that of any number, then the default, then none.
"""

from __future__ import annotations

from collections.abc import Iterable
from typing import NamedTuple

from tardigate.parts.kind import Origin
from tardigate.parts.kind_maker import MISSING, UNKNOWN, Delay, given
from tardigate.parts.model import Entry

LIKE = {"ZH": "LH", "ZL": "HL", "HZ": "HL", "LZ": "LH"}
"""Transitions that a plain `tpd` serves as well, and the one whose entry they take then."""


class ByKind:
    """Entries of one table, by name and transition."""

    def __init__(self) -> None:
        self.entries: dict[tuple[str, str], list[tuple[Entry, Delay]]] = {}
        self.empty: dict[tuple[str, str], list[tuple[Entry, Delay]]] = {}

    def add(
        self, entries: Iterable[Entry], column: int, origin: Origin, told: str = "", condition: str = ""
    ) -> None:
        """Take entries with the delays of one column; a row of nothing but `-` counts as not there."""
        under = f" under condition {condition}" if condition else ""
        for entry in entries:
            triple = entry.columns[column]
            key = (entry.name, entry.transition)
            if given(triple):
                delay = Delay(triple, origin, f"{told}{entry.place}")
                self.entries.setdefault(key, []).append((entry, delay))
            else:
                words = f"{entry.symbol} {entry.name} has no number{under}, {entry.place}"
                missing = Delay(UNKNOWN, Origin.MISSING, words)
                self.empty.setdefault(key, []).append((entry, missing))

    def find(self, name: str, inputs: int, transition: str) -> Delay | None:
        """Return the delay of an entry, or None."""
        found = self._nearest(name, inputs, transition)
        if found is None and transition in LIKE:
            found = self._nearest(name, inputs, LIKE[transition])
            if found is not None and found[0].symbol != "tpd" and name:  # the default serves everything
                return None
        return None if found is None else found[1]

    def _nearest(self, name: str, inputs: int, transition: str) -> tuple[Entry, Delay] | None:
        return _nearest(self.entries.get((name, transition), ()), inputs)

    def why_missing(self, name: str, inputs: int, transition: str) -> Delay:
        """Return the unknown delay that says which row has no number, if there is such a row."""
        found = _nearest(self.empty.get((name, transition), ()), inputs)
        return MISSING if found is None else found[1]


def _nearest(entries: Iterable[tuple[Entry, Delay]], inputs: int) -> tuple[Entry, Delay] | None:
    anyhow = None
    for entry, delay in entries:
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
        found = table.find(name, inputs, transition) or self.default.find("", 0, transition)
        return found or table.why_missing(name, inputs, transition)
