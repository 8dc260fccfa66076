"""Delays written in the source: `#` values to femtoseconds (IEEE 1364-2005 clauses 7.14 and 19.8).

Takes a delay's tree and the `timescale` in force, gives a `SourceDelay`. Each value is rounded to the
precision on its own, half away from zero.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from fractions import Fraction

from tardigate.netlist.constants import NotConstantError, Value, evaluate
from tardigate.parts.source_delay import SourceDelay, Triple
from tardigate.parts.units import LONGEST
from tardigate.source.collector import Collector
from tardigate.source.placed import PlacedText
from tardigate.syntax import tree

ASSUMED_UNIT = 10**6
"""Femtoseconds of a delay's unit where no `timescale` is in force: 1 ns, told as an assumption."""

NO_DELAY = SourceDelay(((0.0, 0.0, 0.0),), "#")
"""Inside an assignment with a delay: all of it belongs to the assignment's last operator (clause 6.1.3)."""


@dataclass(slots=True)
class Delays:
    """The delays of one module; `unit` and `precision` in fs, None where no `timescale` is in force.

    `assumed` counts the statements whose unit was assumed. Equal delays give the same object.
    """

    text: PlacedText
    unit: float | None
    precision: float | None
    values: Mapping[str, Value]
    collector: Collector
    known: dict[tuple[Triple, ...], SourceDelay]
    assumed: int = 0
    _read: dict[tuple[int | str | None, ...], SourceDelay | None] = field(default_factory=dict)

    def read(self, delay: tree.Delay | None, most: int) -> SourceDelay | None:
        """Return a delay; None when there is none, or after telling what is wrong (N150 to N153)."""
        if delay is None:
            return None
        if len(delay.values) > most:
            self.collector.tell("N150", self.text.span(delay.at), count=len(delay.values), most=most)
            return None
        if self.unit is None:
            self.assumed += 1
        key = tuple(_plain(value) for value in delay.values)
        if key not in self._read or None in key:
            self._read[key] = self._source_delay(delay)
        return self._read[key]

    def _source_delay(self, delay: tree.Delay) -> SourceDelay | None:
        triples = [self._triple(value) for value in delay.values]
        values = tuple(triple for triple in triples if triple is not None)
        if len(values) < len(triples):
            return None
        return self.known.setdefault(values, SourceDelay(values, "#"))

    def _triple(self, value: tree.Expression) -> Triple | None:
        if not isinstance(value, tree.Triplet):
            time = self._time(value)
            return None if time is None else (time, time, time)
        times = [self._time(part) for part in (value.minimum, value.typical, value.maximum)]
        low, middle, high = times
        if low is None or middle is None or high is None:
            return None
        if not low <= middle <= high:
            self.collector.tell("N152", self.text.span(value.at))
            return None
        return (low, middle, high)

    def _time(self, value: tree.Expression) -> float | None:
        try:
            number = (
                _fraction(value.text)
                if isinstance(value, tree.Decimal)
                else Fraction(evaluate(value, self.values).value)
            )
        except NotConstantError as error:
            self.collector.tell("N120", self.text.span(error.at), reason=error.reason)
            return None
        except (ValueError, OverflowError):
            self.collector.tell("N153", self.text.span(value.at))
            return None
        unit = Fraction(ASSUMED_UNIT if self.unit is None else self.unit)
        time = number * unit
        if number < 0:
            self.collector.tell("N151", self.text.span(value.at))
            return None
        if time > LONGEST:
            self.collector.tell("N153", self.text.span(value.at))
            return None
        if self.precision:
            step = Fraction(self.precision)
            time = (time / step + Fraction(1, 2)).__floor__() * step
        return float(time)


def _plain(value: tree.Expression) -> int | str | None:
    """Return what tells a delay that is a mere number apart from others, None for any other expression."""
    if isinstance(value, tree.Number) and not value.unknown | value.floating:
        return value.value
    return value.text if isinstance(value, tree.Decimal) else None


def _fraction(text: str) -> Fraction:
    """Return a decimal number exactly. Raises ValueError for one that no delay could be."""
    mantissa, _, exponent = text.lower().partition("e")
    if len(exponent) > 4 or len(text) > 4000:  # exact powers of ten beyond would fill the memory
        raise ValueError(text[:40])
    return Fraction(f"{mantissa}e{exponent or 0}")
