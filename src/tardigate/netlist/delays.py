"""Delays written in the source: values to femtoseconds (IEEE 1364-2005 clauses 7.14, 14.3 and 19.8).

Takes a delay's tree and the `timescale` in force, gives a `SourceDelay`; of a module path's value a triple.
Each value is rounded to the precision on its own, half away from zero.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from fractions import Fraction

from tardigate.netlist.constant_value import assigned, decimal
from tardigate.netlist.constants import MAX, MIN, TYP, NotConstantError, Value, evaluate
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

    `assumed` counts the statements whose unit was assumed. Equal delays give the same object. `trees` are
    the values, as written and in order, of names whose value may hang on a `min:typ:max`: specparams, and
    the parameters that `triple_trees` finds. A name in both counts as in `trees`, but for its type.
    """

    text: PlacedText
    unit: float | None
    precision: float | None
    values: Mapping[str, Value]
    collector: Collector
    known: dict[tuple[Triple, ...], SourceDelay]
    assumed: int = 0
    trees: Mapping[str, tree.Expression] = field(default_factory=dict)
    _graded: tuple[Mapping[str, Value], ...] | None = None
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

    def triple(self, value: tree.Expression) -> Triple | None:
        """Return a value of a module path (clause 14.3) in fs; None after telling (N120, N151 to N153).

        Counts as one statement for `assumed`.
        """
        if self.unit is None:
            self.assumed += 1
        return self._triple(value)

    def _triple(self, value: tree.Expression) -> Triple | None:
        simple = isinstance(value, tree.Number | tree.Decimal)
        times: list[float] = []
        for grade in (TYP,) if simple else (MIN, TYP, MAX):
            time = self._time(value, grade)
            if time is None:
                return None
            times.append(time)
        low, middle, high = times * 3 if simple else times
        if low > high:  # clause 7.14.1 asks for no order, but stirs must not come after settles
            self.collector.tell("N152", self.text.span(value.at))
            return None
        return (low, middle, high)

    def _time(self, value: tree.Expression, grade: int) -> float | None:
        try:
            number = self._number(value, grade)
        except NotConstantError as error:
            self.collector.tell("N120", self.text.span(error.at), reason=error.reason)
            return None
        except ValueError:
            self.collector.tell("N153", self.text.span(value.at))
            return None
        if number < 0:
            self.collector.tell("N151", self.text.span(value.at))
            return None
        above, below = number.numerator * int(self.unit or ASSUMED_UNIT), number.denominator
        if above > int(LONGEST) * below:
            self.collector.tell("N153", self.text.span(value.at))
            return None
        if not self.precision:
            return above / below
        step = int(self.precision)
        return float((2 * above + below * step) // (2 * below * step) * step)  # half a step goes up

    def _number(self, value: tree.Expression, grade: int) -> Fraction:
        """Return a value in units. Raises NotConstantError, and ValueError for too many digits."""
        if isinstance(value, tree.Triplet):
            value = (value.minimum, value.typical, value.maximum)[grade]
        if isinstance(value, tree.Decimal):
            return decimal(value.text)
        if self._graded is None or self._graded[0] is not self.values:  # another scope's turn
            made = [graded_values(self.values, self.trees, each) for each in (MIN, TYP, MAX)]
            self._graded = (self.values, *made)
        if isinstance(value, tree.Reference) and len(value.path) == 1 and not value.selections:
            known = self._graded[1 + grade].get(value.path[0])
            if known is not None:  # the usual specparam
                return Fraction(known.value)
        return Fraction(evaluate(value, self._graded[1 + grade], grade=grade).value)


def graded_values(
    values: Mapping[str, Value], trees: Mapping[str, tree.Expression], grade: int
) -> Mapping[str, Value]:
    """Return values in which those of `trees` are of a grade. Raises NotConstantError.

    One that has a value is converted to its width and sign: it was declared with a range or a type.
    """
    if not trees:
        return values
    found = dict(values)
    for name, expression in trees.items():
        value, before = evaluate(expression, found, grade=grade), values.get(name)
        sized = before is not None and before.width is not None
        found[name] = assigned(value, before.width, before.signed) if before is not None and sized else value
    return found


def _plain(value: tree.Expression) -> int | str | None:
    """Return what tells a delay that is a mere number apart from others, None for any other expression."""
    if isinstance(value, tree.Number) and not value.unknown | value.floating:
        return value.value
    return value.text if isinstance(value, tree.Decimal) else None
