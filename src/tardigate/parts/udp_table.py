"""What the table of a user-defined primitive says over 0 and 1 (IEEE 1364-2005 clause 8).

Takes a primitive that its reader has found legal, gives its output in every state as arrays. Changes to and
from x are left out; x as an output stays. Does not say what the table is good for.
"""

from __future__ import annotations

from collections.abc import Iterable
from typing import NamedTuple, TypeVar

import numpy as np
from numpy.typing import NDArray

from tardigate.syntax.tree import Primitive, Row

ZERO, ONE, X, NONE = 0, 1, 2, 3
"""Values in the arrays; `NONE`: nothing is said."""

Scalar = TypeVar("Scalar", bound=np.generic)

Values = NDArray[np.uint8]
"""One value for each state; bit `i` of the index is the value of variable `i`."""

_LEVELS = {"0": (True, False), "1": (False, True), "x": (False, False), "?": (True, True), "b": (True, True)}
"""Whether a level symbol stands for 0, for 1 (table 8-1)."""

_EDGES = {"*": "??", "r": "01", "f": "10", "p": "01", "n": "10"}
"""The edge between 0 and 1 that an edge symbol stands for, as two levels (table 8-1)."""


class Steps(NamedTuple):
    """What a sequential table does; variables are the inputs, then the present state.

    `levels`: what rows without an edge say, `NONE` where there is none. `after[i]`: the output when input `i`
    has just changed to its value in the state (clauses 8.4 and 8.8).
    """

    levels: Values
    after: NDArray[np.uint8]


def combinational(primitive: Primitive) -> Values:
    """Return the output of a combinational table: x where no row fits (clause 8.2)."""
    found = np.full(1 << (len(primitive.ports) - 1), X, np.uint8)
    for row in primitive.rows:
        found[_fits(map(_level, row.inputs))] = _OUTPUTS[row.output]
    return found


def sequential(primitive: Primitive) -> Steps:
    """Return what a sequential table does: level-sensitive rows dominate, what fits no row gives x.

    Where a row that keeps the state meets one that gives a value, the value is taken: the output can change.
    """
    inputs = len(primitive.ports) - 1
    present = np.repeat(np.array((ZERO, ONE), np.uint8), 1 << inputs)
    levels = np.full(2 << inputs, NONE, np.uint8)
    moves = np.full((inputs, 2 << inputs), X, np.uint8)
    for row in sorted(primitive.rows, key=lambda row: row.output != "-"):
        place = edge_place(row)
        fits = _fits([*map(_level, row.inputs), _LEVELS[row.state]])
        target = levels if place < 0 else moves[place]
        target[fits] = present[fits] if row.output == "-" else _OUTPUTS[row.output]
    return Steps(levels, np.where(levels == NONE, moves, levels))


_OUTPUTS = {"0": ZERO, "1": ONE, "x": X}


def edge_place(row: Row) -> int:
    """Return which input of a row has an edge, or -1."""
    return next((i for i, symbol in enumerate(row.inputs) if symbol not in _LEVELS), -1)


def _level(symbol: str) -> tuple[bool, bool]:
    """Return whether the value of an input may be 0, may be 1; after the change where it is an edge."""
    if symbol in _LEVELS:
        return _LEVELS[symbol]
    before, after = (_LEVELS[level] for level in _EDGES.get(symbol, symbol))
    return before[1] and after[0], before[0] and after[1]


def _fits(allowed: Iterable[tuple[bool, bool]]) -> NDArray[np.bool_]:
    """Return the states in which each variable has a value that is allowed."""
    fits = np.ones(1, np.bool_)
    for low, high in allowed:
        fits = np.concatenate((fits & low, fits & high))
    return fits


def half(values: NDArray[Scalar], variable: int, value: int) -> NDArray[Scalar]:
    """Return the states in which a variable has a value, that variable left out."""
    return values.reshape(-1, 2, 1 << variable)[:, value].reshape(-1)


def flipped(values: NDArray[Scalar], variable: int) -> NDArray[Scalar]:
    """Return for each state what stands in the one that differs in a variable."""
    return values.reshape(-1, 2, 1 << variable)[:, ::-1].reshape(-1)
