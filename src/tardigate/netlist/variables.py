"""The declared nets of a module, in columns.

A variable is a declared net, scalar or vector. Takes declarations, gives variables with their bits' local net
numbers; nets that nobody declared are added when a connection names them.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.flat import CONSTANTS
from tardigate.source.placed import PlacedText
from tardigate.syntax.intern import Interned

NO_DIRECTION = 3
"""The way of a variable that is no port (others: `Way`)."""

SIGNED, RANGED, REGISTER = 1, 2, 4
"""Flags: signed; declared with a range; a variable (`reg`, `integer`) and no net."""

TYPES = (
    "wire", "tri", "wand", "wor", "triand", "trior", "tri0", "tri1", "supply0", "supply1", "trireg", "uwire",
)  # fmt: skip
"""Types of nets (clause 4.6), by their numbers in the flags from bit TYPE on."""

TYPE = 8

VARIABLES = ("reg", "integer", "time", "real", "realtime", "event")
"""Words that declare no net: the types of variables, and of events (clauses 4.7, 4.8 and 9.7.3)."""


class Shape(NamedTuple):
    """An array: left and right bound of each of its `dimensions`, and last those of its elements' vector."""

    bounds: tuple[tuple[int, int], ...]
    dimensions: int


class Declared(NamedTuple):
    """One name as a generate block declares it, or one that a connection declares by use."""

    name: int
    msb: int
    lsb: int
    width: int
    place: int
    flags: int
    scope: int


@dataclass(slots=True)
class Variables:
    """Variables of a module: one entry each in every column.

    `name` int32 (number in `names`), `base` int32 (local net of bit `lsb`; bit `i` is `base + |i - lsb|`),
    `msb`, `lsb` int32, `width` int32, `place` int64 (offset of the first declaration), `way` uint8, `flags`
    uint16. `nets` counts all local nets so far; those after the variables are operators' results, whose
    offsets are in `results`, and names in `result_names` where they are not called by their line.

    The module's own variables come first; `scope` int32 is the generate block that the others stand in,
    `scoped` finds those by scope and name, `prefixes` are what stands before their names. `arrays` has the
    bounds of those that are arrays of vectors, or of several dimensions: element after element, the
    rightmost index lowest.
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
    flags: NDArray[np.uint16]
    nets: int
    scope: NDArray[np.int32]
    results: list[int] = field(default_factory=list)
    result_names: dict[int, str] = field(default_factory=dict)
    prefixes: list[str] = field(default_factory=lambda: [""])
    scoped: dict[tuple[int, int], int] = field(default_factory=dict)
    arrays: dict[int, Shape] = field(default_factory=dict)

    def __len__(self) -> int:
        return len(self.name)

    def text_of(self, variable: int) -> str:
        """Return a variable's name, with the blocks it stands in."""
        return self.prefixes[int(self.scope[variable])] + self.names.text(int(self.name[variable]))

    def bits(self, variable: int) -> list[int]:
        """Return the local nets of a variable, most significant bit first."""
        base = int(self.base[variable])
        return list(range(base + int(self.width[variable]) - 1, base - 1, -1))

    def add(self, declared: Sequence[Declared] | NDArray[np.int64]) -> None:
        """Add names beyond the module's own declarations, in order: int64[names, 7] like `Declared`."""
        if self.results:
            raise AssertionError("variables come before results")
        before = len(self)
        rows = np.array(declared, np.int64).reshape(-1, 7)
        width = rows[:, 3]
        base = self.nets + np.cumsum(width) - width
        for column, added in (
            ("name", rows[:, 0]), ("base", base), ("msb", rows[:, 1]), ("lsb", rows[:, 2]), ("width", width),
            ("place", rows[:, 4]), ("way", np.full(len(rows), NO_DIRECTION)), ("flags", rows[:, 5]),
            ("scope", rows[:, 6]),
        ):  # fmt: skip
            old = getattr(self, column)
            setattr(self, column, np.concatenate((old, added.astype(old.dtype))))
        self.nets += int(width.sum())
        for row in np.flatnonzero(rows[:, 6]).tolist():
            self.scoped[int(rows[row, 6]), int(rows[row, 0])] = before + row

    def new_result(self, place: int, name: str = "") -> int:
        """Return a new local net for the result of an operator at `place`, or one of that name."""
        if name:
            self.result_names[len(self.results)] = name
        self.results.append(place)
        self.nets += 1
        return self.nets - 1

    def net_places(self) -> NDArray[np.int64]:
        """Return the offset of each local net's declaration, int64[nets]."""
        constants = np.zeros(CONSTANTS, np.int64)
        return np.concatenate(
            (constants, np.repeat(self.place, self.width), np.array(self.results, np.int64))
        )
