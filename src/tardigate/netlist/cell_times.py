"""Times of a specify block: path values and limits to femtoseconds (IEEE 1364-2005 clauses 14.3, 4.10.3).

Takes expressions over parameters and specparams, gives triples. A limit may be negative; everything else is
for `Delays` to say.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import replace

from tardigate.netlist.constants import MAX, MIN, TYP, NotConstantError, Value, evaluate
from tardigate.netlist.delays import Delays, graded_values
from tardigate.parts.source_delay import Triple
from tardigate.syntax import tree

PULSE = "PATHPULSE$"
"""What the names of pulse limits begin with (14.6.1): they are read and have no effect on any figure."""


class CellTimes:
    """The times of one module, whose specparams are `declarations` in order of the text."""

    def __init__(self, delays: Delays, declarations: Iterable[tree.Parameter]) -> None:
        """Begin; tells of a specparam that is declared twice (N110)."""
        self.collector, self.text = delays.collector, delays.text
        trees = dict(delays.trees)
        own: set[str] = set()
        for named in (named for declaration in declarations for named in declaration.names):
            if named.name.startswith(PULSE) or named.value is None:
                continue
            if named.name in own:
                span = self.text.span(named.at, named.at + len(named.name))
                self.collector.tell("N110", span, name=named.name)
                continue
            own.add(named.name)
            trees[named.name] = named.value
        self.delays = replace(delays, trees=trees, assumed=0, _graded=None, _read={})

    def constants(self) -> Mapping[str, Value]:
        """Return parameters and specparams by name; of a triple the typical value."""
        try:
            return graded_values(self.delays.values, self.delays.trees, TYP)
        except NotConstantError:
            return self.delays.values  # told where a time reads it

    def triple(self, value: tree.Expression, negative: bool = False) -> Triple | None:
        """Return a time in fs, None after telling what is wrong with it (N120, N151 to N153)."""
        if not negative:
            return self.delays.triple(value)
        members = (value,) * 3
        if isinstance(value, tree.Triplet):
            members = (value.minimum, value.typical, value.maximum)
        times = [self._signed(each, grade) for each, grade in zip(members, (MIN, TYP, MAX), strict=True)]
        low, middle, high = times
        return None if low is None or middle is None or high is None else (low, middle, high)

    def _signed(self, value: tree.Expression, grade: int) -> float | None:
        """Return a member of a limit, by the delay that is as long."""
        sign = 1
        try:
            graded = graded_values(self.delays.values, self.delays.trees, grade)
            if not isinstance(value, tree.Decimal) and evaluate(value, graded, grade=grade).value < 0:
                sign, value = -1, tree.Unary("-", value, value.at)
        except NotConstantError as error:
            self.collector.tell("N120", self.text.span(error.at), reason=error.reason)
            return None
        triple = self.delays.triple(value)
        return None if triple is None else sign * triple[grade]
