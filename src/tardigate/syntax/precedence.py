"""Puts operators in order of precedence (IEEE 1364-2005 table 5-4).

Takes operands and binary operators in a row, gives one tree; iterative, so depth has no limit.
"""

from __future__ import annotations

from tardigate.syntax.tree import Binary, Expression

LEVELS = {
    operator: level
    for level, operators in enumerate(
        (
            ("||",), ("&&",), ("|",), ("^", "~^", "^~"), ("&",), ("==", "!=", "===", "!=="),
            ("<", "<=", ">", ">="), ("<<", ">>", "<<<", ">>>"), ("+", "-"), ("*", "/", "%"), ("**",),
        )
    )
    for operator in operators
}  # fmt: skip
"""Binary operators from weakest to strongest; all of them group from left to right."""


def resolve(row: list[Expression | str], places: list[int]) -> Expression:
    """Return the tree of operand, operator, operand, …; `places` are the operators' offsets.

    The two-stack method (Dijkstra 1961, the shunting yard).
    """
    if len(row) == 1:
        assert not isinstance(row[0], str)
        return row[0]
    operands: list[Expression] = []
    waiting: list[tuple[str, int]] = []

    def reduce() -> None:
        operator, at = waiting.pop()
        right = operands.pop()
        operands.append(Binary(operator, operands.pop(), right, at))

    place = iter(places)
    for piece in row:
        if isinstance(piece, str):
            while waiting and LEVELS[waiting[-1][0]] >= LEVELS[piece]:
                reduce()
            waiting.append((piece, next(place)))
        else:
            operands.append(piece)
    while waiting:
        reduce()
    return operands[0]
