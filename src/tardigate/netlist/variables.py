"""The declared nets of a module, in columns.

A variable is a declared net, scalar or vector. Takes declarations, gives variables with their bits' local net
numbers; nets that nobody declared are added when a connection names them.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.flat import CONSTANTS
from tardigate.source.placed import PlacedText
from tardigate.syntax.intern import Interned

NO_DIRECTION = 3
"""The way of a variable that is no port (others: `Way`)."""

SIGNED, WIRED, DRIVEN, RANGED = 1, 2, 4, 8
"""Flags: signed; a net type that may have several drivers; one that drives itself; declared with a range."""


@dataclass(slots=True)
class Variables:
    """Variables of a module: one entry each in every column.

    `name` int32 (number in `names`), `base` int32 (local net of bit `lsb`; bit `i` is `base + |i - lsb|`),
    `msb`, `lsb` int32, `width` int32, `place` int64 (offset of the first declaration), `way` uint8, `flags`
    uint8. `nets` counts all local nets so far; those after the variables are operators' results, whose
    offsets are in `results`.
    """

    names: Interned
    text: PlacedText
    name: NDArray[np.int32]
    base: NDArray[np.int32]
    msb: NDArray[np.int32]
    lsb: NDArray[np.int32]
    width: NDArray[np.int32]
    place: NDArray[np.int64]
    way: NDArray[np.uint8]
    flags: NDArray[np.uint8]
    nets: int
    results: list[int] = field(default_factory=list)

    def __len__(self) -> int:
        return len(self.name)

    def text_of(self, variable: int) -> str:
        """Return a variable's name."""
        return self.names.text(int(self.name[variable]))

    def bits(self, variable: int) -> list[int]:
        """Return the local nets of a variable, most significant bit first."""
        base = int(self.base[variable])
        return list(range(base + int(self.width[variable]) - 1, base - 1, -1))

    def add_scalars(self, names: NDArray[np.int32], places: NDArray[np.int64]) -> None:
        """Add undeclared nets, one bit each (implicit declarations, clause 4.5)."""
        count = len(names)
        if self.results:
            raise AssertionError("variables come before results")
        self.name = np.concatenate((self.name, names))
        self.base = np.concatenate((self.base, self.nets + np.arange(count, dtype=np.int32))).astype(np.int32)
        zero, one = np.zeros(count, np.int32), np.ones(count, np.int32)
        self.msb, self.lsb = np.concatenate((self.msb, zero)), np.concatenate((self.lsb, zero))
        self.width = np.concatenate((self.width, one))
        self.place = np.concatenate((self.place, places))
        self.way = np.concatenate((self.way, np.full(count, NO_DIRECTION, np.uint8)))
        self.flags = np.concatenate((self.flags, np.zeros(count, np.uint8)))
        self.nets += count

    def new_result(self, place: int) -> int:
        """Return a new local net for the result of an operator at `place`."""
        self.results.append(place)
        self.nets += 1
        return self.nets - 1

    def net_places(self) -> NDArray[np.int64]:
        """Return the offset of each local net's declaration, int64[nets]."""
        constants = np.zeros(CONSTANTS, np.int64)
        return np.concatenate(
            (constants, np.repeat(self.place, self.width), np.array(self.results, np.int64))
        )
