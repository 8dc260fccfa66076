"""The condition and the step of a generate loop, round after round (IEEE 1364-2005 clause 12.4.1).

Takes an expression and the loop's counter, gives its value for each value of the counter. `i < N` and
`i + 1`, with what stands behind them a constant of the loop, are not evaluated anew.
"""

from __future__ import annotations

import operator
from collections.abc import Callable, Mapping

from tardigate.netlist.constants import Value, evaluate, evaluate_whole, whole
from tardigate.syntax import tree

_QUICK: Mapping[str, Callable[[int, int], int]] = {
    "<": operator.lt, "<=": operator.le, ">": operator.gt, ">=": operator.ge, "==": operator.eq,
    "!=": operator.ne, "+": operator.add, "-": operator.sub,
}  # fmt: skip


class Round:
    """One expression of a loop."""

    def __init__(self, expression: tree.Expression, counter: str, values: Mapping[str, Value]) -> None:
        """Prepare. Raises NotConstantError."""
        self._expression, self._counter = expression, counter
        self._call: Callable[[int, int], int] | None = None
        self._other = 0
        if isinstance(expression, tree.Binary) and expression.operator in _QUICK:
            self._prepare(expression, values)

    def _prepare(self, expression: tree.Binary, values: Mapping[str, Value]) -> None:
        left, right = expression.left, expression.right
        if not isinstance(left, tree.Reference) or left.path != (self._counter,) or left.selections:
            return
        names = (node for node in tree.walk(right) if isinstance(node, tree.Reference))
        if any(node.path[0] == self._counter or node.selections for node in names):
            return
        value = evaluate(right, values)
        if value.signed and not value.form:  # as the counter: no conversion
            self._call, self._other = _QUICK[expression.operator], whole(value, right.at)

    def value(self, values: Mapping[str, Value]) -> int:
        """Return the value while the counter is what `values` has. Raises NotConstantError."""
        if self._call is not None:
            counter = values[self._counter].value
            assert isinstance(counter, int)
            return int(self._call(counter, self._other))
        return evaluate_whole(self._expression, values)
