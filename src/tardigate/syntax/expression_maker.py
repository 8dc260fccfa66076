"""Makes expressions, delays and references while the parser reduces: what every other rule is made of.

One method a rule of `verilog.lark`; offsets are those of the placed text.
"""

from __future__ import annotations

from collections.abc import Callable
from itertools import pairwise
from typing import Any

from tardigate.syntax import tree
from tardigate.syntax.lalr import Token
from tardigate.syntax.numbers import BadNumberError, read_number
from tardigate.syntax.precedence import resolve


def word_of(token: Token) -> str:
    """Return the name that a token stands for, an escaped one without its backslash."""
    text = str(token)
    return text[1:] if text[0] == "\\" else text


def child_of(children: list[Any], kind: type | tuple[type, ...]) -> Any:
    """Return the first child of a type, or None."""
    return next((child for child in children if isinstance(child, kind)), None)


class ExpressionMaker:
    """The callbacks of expressions. `begin` sets what one parse needs."""

    def begin(
        self,
        where: Callable[[int], int],
        runs: dict[int, tree.Run],
        ports: dict[int, tree.PlainPorts],
    ) -> None:
        """Prepare for a text: `where` maps its offsets to the placed text's."""
        self._where, self._runs, self._plain_ports = where, runs, ports
        self._generated: list[tree.Run] = []

    def _at(self, token: Token) -> int:
        return self._where(token.start_pos or 0)

    # Delays

    def short_delay(self, children: list[Any]) -> tree.Delay:
        token = children[0]
        at = self._at(token)
        if token.type == "NUMBER":
            return tree.Delay((self._number(token),), at)
        return tree.Delay((tree.Reference((word_of(token),), (), at),), at)

    def delay(self, children: list[Any]) -> tree.Delay:
        return tree.Delay(tuple(children), children[0].at)

    def triple(self, children: list[Any]) -> tree.Expression:
        return children[0] if len(children) == 1 else self.grouped_triple(children)

    # Expressions

    def conditional(self, children: list[Any]) -> tree.Conditional:
        condition = resolve(*children[0])
        return tree.Conditional(condition, children[1], children[2], condition.at)

    def resolved(self, children: list[Any]) -> tree.Expression:
        return resolve(*children[0])

    def operands(self, children: list[Any]) -> tuple[list[Any], list[int]]:
        if len(children) == 1:
            return [children[0]], []
        row, places = children[0]
        row += (str(children[1]), children[2])
        places.append(self._at(children[1]))
        return row, places

    def unary(self, children: list[Any]) -> tree.Expression:
        if len(children) == 1:
            child = children[0]
            if not isinstance(child, Token):
                return child  # type: ignore[no-any-return]
            if child.type == "STRING":
                return tree.String(str(child)[1:-1], self._at(child))
            return self._number(child)
        return tree.Unary(str(children[0]), children[1], self._at(children[0]))

    def _number(self, token: Token) -> tree.Number | tree.Decimal:
        return read_number(str(token), self._at(token))

    def call(self, children: list[Any]) -> tree.Call:
        return tree.Call(str(children[0]), tuple(children[1:]), self._at(children[0]))

    def grouped(self, children: list[Any]) -> tree.Expression:
        return children[0]  # type: ignore[no-any-return]

    def grouped_triple(self, children: list[Any]) -> tree.Triplet:
        low, middle, high = children
        return tree.Triplet(low, middle, high, low.at)

    def reference(self, children: list[Any]) -> tree.Reference:
        at = self._at(children[0])
        if len(children) == 1:
            return tree.Reference((word_of(children[0]),), (), at)
        starts = [place for place, child in enumerate(children) if isinstance(child, Token)]
        path = tuple(word_of(children[place]) for place in starts)
        selections = tuple(children[starts[-1] + 1 :])
        indices = tuple(self._index(children[start + 1 : stop]) for start, stop in pairwise(starts))
        return tree.Reference(path, selections, at, indices if any(indices) else ())

    def _index(self, selections: list[tree.Selection]) -> tree.Expression | None:
        """Return the index behind a name of a path: one bit-select or none (A.9.3)."""
        if not selections:
            return None
        if len(selections) > 1 or selections[0].mode != "bit":
            high = selections[0].high
            raise BadNumberError("[:]", "each name in a hierarchical name has one index at most", high.at)
        return selections[0].high

    def selection(self, children: list[Any]) -> tree.Selection:
        return tree.Selection("bit", children[0], None)

    def part(self, children: list[Any]) -> tree.Selection:
        return tree.Selection("part", children[0], children[1])

    def part_up(self, children: list[Any]) -> tree.Selection:
        return tree.Selection("up", children[0], children[-1])

    def part_down(self, children: list[Any]) -> tree.Selection:
        return tree.Selection("down", children[0], children[-1])

    def range(self, children: list[Any]) -> tree.Range:
        return tree.Range(children[0], children[1], children[0].at)

    def concatenation(self, children: list[Any]) -> tree.Concatenation:
        return tree.Concatenation(tuple(children), children[0].at)

    def replication(self, children: list[Any]) -> tree.Replication:
        return tree.Replication(children[0], tuple(children[1:]), children[0].at)
