"""References to nets: names, selections, constants.

Takes references of a module's trees, gives local nets, least significant bit first. Tells of names that are
not declared and of indices that are not there.
"""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.constants import NotConstantError, Value, evaluate
from tardigate.netlist.declare import WIDEST, Declarer
from tardigate.netlist.lookup import Lookup
from tardigate.netlist.variables import RANGED, SIGNED, Variables
from tardigate.source.collector import Collector
from tardigate.source.span import Span
from tardigate.syntax import tree
from tardigate.syntax.verilog_reader import Unit


class Wiring:
    """The nets of one module by name."""

    def __init__(
        self,
        declarer: Declarer,
        variables: Variables,
        values: Mapping[str, Value],
        of_name: NDArray[np.int32],
    ) -> None:
        self.declarer, self.variables, self.values = declarer, variables, values
        self.unit: Unit = declarer.unit
        self.lookup: Lookup = declarer.lookup
        self.collector: Collector = declarer.collector
        self._of_name = of_name

    def span(self, at: int, length: int = 1) -> Span:
        """Return a place in the module's text."""
        return self.unit.text.span(at, at + length)

    def variable(self, name: str) -> int:
        """Return the number of a variable, -1 when there is none."""
        number = self.lookup.find(name)
        return int(self._of_name[number]) if number >= 0 else -1

    def variables_of(self, numbers: NDArray[np.int32]) -> NDArray[np.int32]:
        """Return the variables of names given by number in the file, -1 where there is none."""
        return self._of_name[numbers]

    def is_signed(self, reference: tree.Reference) -> bool:
        """Tell whether a reference is signed: a whole net that is declared so (clause 5.5.1)."""
        if len(reference.path) > 1 or reference.selections:
            return False
        if reference.path[0] in self.values:
            return self.values[reference.path[0]].signed
        variable = self.variable(reference.path[0])
        return variable >= 0 and bool(self.variables.flags[variable] & SIGNED)

    def bits(self, reference: tree.Reference) -> list[int]:
        """Return the nets of a reference, least significant bit first; empty after telling of a fault."""
        if len(reference.path) > 1:
            dotted = ".".join(reference.path)
            self.collector.tell("N137", self.span(reference.at, len(dotted)), name=dotted)
            return []
        name = reference.path[0]
        variable = self.variable(name)
        if variable < 0:
            hint = self.declarer.suggestion(name, self.variables) if self.collector.room("N130") else None
            self.collector.tell("N130", self.span(reference.at, len(name)), name=name, hint=hint)
            return []
        base, width = int(self.variables.base[variable]), int(self.variables.width[variable])
        if not reference.selections:
            return list(range(base, base + width))
        if len(reference.selections) > 1 or not self.variables.flags[variable] & RANGED:
            self.collector.tell("N131", self.span(reference.at, len(name)), name=name)
            return []
        return self._selected(reference, variable)

    def _selected(self, reference: tree.Reference, variable: int) -> list[int]:
        chosen = reference.selections[0]
        msb, lsb = int(self.variables.msb[variable]), int(self.variables.lsb[variable])
        base, step = int(self.variables.base[variable]), 1 if msb >= lsb else -1
        try:
            high = evaluate(chosen.high, self.values).value
            low = high if chosen.low is None else evaluate(chosen.low, self.values).value
        except NotConstantError as error:
            self.collector.tell("N133", self.span(error.at), reason=error.reason)
            return []
        if chosen.mode in ("up", "down"):
            count, start = low, high
            if not 0 < count <= WIDEST:
                self.collector.tell("N121", self.span(reference.at), most=WIDEST)
                return []
            # `[b +: w]` counts up from b whichever way the net is declared (clause 5.2.1).
            bottom = start if chosen.mode == "up" else start - count + 1
            high, low = (bottom + count - 1, bottom) if step > 0 else (bottom, bottom + count - 1)
        first, last = (low - lsb) * step, (high - lsb) * step
        if first < 0 or last < 0 or max(first, last) > abs(msb - lsb):
            name = reference.path[0]
            self.collector.tell(
                "N132", self.span(reference.at, len(name)), name=name, range=f"[{msb}:{lsb}]",
                index=high if chosen.low is None else f"{high}:{low}",
            )  # fmt: skip
            return []
        if first > last:
            self.collector.tell("N134", self.span(reference.at), name=reference.path[0])
            return []
        return list(range(base + first, base + last + 1))
