"""Part instances of a module on their way into columns.

Takes instances one by one or in bulk, in any order, gives the columns of a template in order of place.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from tardigate.parts.kind import Kind


class Kinds:
    """The kinds in use, numbered as they are met."""

    def __init__(self) -> None:
        self.kinds: list[Kind] = []
        self._numbers: dict[int, int] = {}

    def number(self, kind: Kind) -> int:
        """Return the number of a kind; the same object always has the same."""
        number = self._numbers.setdefault(id(kind), len(self.kinds))
        if number == len(self.kinds):
            self.kinds.append(kind)
        return number


class Block(NamedTuple):
    """Instances in columns: `pins` int32 holds the nets of all, `counts` int64 says how many each has."""

    kind: NDArray[np.int32]
    place: NDArray[np.int64]
    name: NDArray[np.int32]
    counts: NDArray[np.int64]
    pins: NDArray[np.int32]


class Instances:
    """The part instances of one module; `others` are names that do not stand in its file."""

    def __init__(self) -> None:
        self.others: list[str] = []
        self._blocks: list[Block] = []
        self._kind: list[int] = []
        self._place: list[int] = []
        self._name: list[int] = []
        self._count: list[int] = []
        self._pins: list[int] = []

    def add(self, kind: int, place: int, name: int, pins: Sequence[int]) -> None:
        """Add one instance; `name` is a number in the file, -1 for none, or what `other_name` gave."""
        self._kind.append(kind)
        self._place.append(place)
        self._name.append(name)
        self._count.append(len(pins))
        self._pins.extend(pins)

    def other_name(self, name: str) -> int:
        """Return a number for a name that does not stand in the file."""
        self.others.append(name)
        return -1 - len(self.others)

    def add_block(self, block: Block) -> None:
        """Add instances in bulk."""
        self._blocks.append(block)

    def columns(self) -> Block:
        """Return all instances in order of place, those of one place as they were added."""
        single = Block(
            np.array(self._kind, np.int32), np.array(self._place, np.int64), np.array(self._name, np.int32),
            np.array(self._count, np.int64), np.array(self._pins, np.int32),
        )  # fmt: skip
        blocks = [block for block in (*self._blocks, single) if len(block.kind)]
        if not blocks:
            return single
        kind, place, name, count, pins = (
            np.concatenate([getattr(block, column) for block in blocks])
            for column in ("kind", "place", "name", "counts", "pins")
        )
        if (place[1:] >= place[:-1]).all():
            return Block(kind, place, name, count, pins)
        order = np.argsort(place, kind="stable")
        start = np.cumsum(count) - count
        count = count[order]
        moved = np.repeat(start[order] - (np.cumsum(count) - count), count) + np.arange(len(pins))
        return Block(kind[order], place[order], name[order], count, pins[moved])
