"""What numpy has only at a price, or not at all.

Takes arrays, gives arrays.
"""

from __future__ import annotations

from typing import TypeVar

import numpy as np
from numpy.typing import NDArray

Integer = TypeVar("Integer", bound=np.integer)


def distinct(values: NDArray[Integer]) -> NDArray[Integer]:
    """Return the values that occur, ascending, each once.

    `np.unique` does the same, but imports masked arrays on first use, a tenth of a short run.
    """
    ordered = np.sort(values, axis=None)
    if len(ordered):
        first = np.ones(len(ordered), np.bool_)
        np.not_equal(ordered[1:], ordered[:-1], out=first[1:])
        ordered = ordered[first]
    return ordered


class Places:
    """Where each number stands in a column; made once, so that each question is a bisection."""

    def __init__(self, column: NDArray[np.int32]) -> None:
        self._order = np.argsort(column, kind="stable")
        self._numbers = column[self._order]

    def of(self, number: int) -> list[int]:
        """Return the places where a number stands, ascending."""
        bounds = np.array((number, number + 1), np.int32)  # of one type: no copy
        first, last = np.searchsorted(self._numbers, bounds).tolist()
        found: list[int] = self._order[first:last].tolist()
        return found


def spread(start: NDArray[np.int64], count: NDArray[np.int64]) -> NDArray[np.int64]:
    """Return the numbers `start[i]` to `start[i] + count[i]` of all `i`, joined."""
    joined: NDArray[np.int64] = np.arange(count.sum()) + np.repeat(start - (np.cumsum(count) - count), count)
    return joined
