"""The declared nets of a module, in columns.

A variable is a declared net, scalar or vector. Takes declarations, gives variables with their bits' local net
numbers; nets that nobody declared are added when a connection names them.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import overload

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


class NetNames(Sequence[str]):
    """The names of a module's local nets, made when asked for: `a`, `bus[3]`, `assign:12.0` for a result."""

    def __init__(self, variables: Variables) -> None:
        self._variables = variables
        self._first_result = CONSTANTS + int(variables.width.sum())

    def __len__(self) -> int:
        return self._variables.nets

    @overload
    def __getitem__(self, index: int) -> str: ...
    @overload
    def __getitem__(self, index: slice) -> list[str]: ...
    def __getitem__(self, index: int | slice) -> str | list[str]:
        if isinstance(index, slice):
            return [self[i] for i in range(*index.indices(len(self)))]
        variables = self._variables
        if index < CONSTANTS:
            return ("1'b0", "1'b1", "1'bx", "1'bz")[index]
        if index >= self._first_result:
            result = index - self._first_result
            return f"assign:{variables.text.span(variables.results[result]).line}.{result}"
        at = int(np.searchsorted(variables.base, np.int32(index), "right")) - 1  # of one type: no copy
        name = variables.text_of(at)
        if not variables.flags[at] & RANGED:
            return name
        msb, lsb = int(variables.msb[at]), int(variables.lsb[at])
        step = 1 if msb >= lsb else -1
        return f"{name}[{lsb + step * (index - int(variables.base[at]))}]"

    def positions(self, text: str) -> list[int]:
        """Return the local nets that are called `text`, or are bits of the vector that is."""
        variables = self._variables
        found = self._bits_of(text, None)
        name, bracket, index = text.rpartition("[")
        if bracket and index[:-1].lstrip("-").isdigit() and index[-1] == "]":
            found += self._bits_of(name, int(index[:-1]))
        if text.startswith("assign:"):
            found += [at for at in range(self._first_result, variables.nets) if self[at] == text]
        return found

    def _bits_of(self, name: str, index: int | None) -> list[int]:
        variables = self._variables
        found: list[int] = []
        for at in np.flatnonzero(variables.name == variables.names.find(name)).tolist():
            bits = variables.bits(at)
            if index is None:
                found += bits
            elif variables.flags[at] & RANGED:
                found += [bit for bit in bits if self[bit].endswith(f"[{index}]")]
        return found


class InstanceNames(Sequence[str]):
    """The names of a module's part instances, made when asked for.

    `numbers` int32[instances]: a name's number in the file, -1 for none, or -2 - i for `others[i]`.
    """

    def __init__(self, names: Interned, numbers: NDArray[np.int32], others: list[str]) -> None:
        self._names, self._numbers, self._others = names, numbers, others

    def __len__(self) -> int:
        return len(self._numbers)

    @overload
    def __getitem__(self, index: int) -> str: ...
    @overload
    def __getitem__(self, index: slice) -> list[str]: ...
    def __getitem__(self, index: int | slice) -> str | list[str]:
        if isinstance(index, slice):
            return [self[i] for i in range(*index.indices(len(self)))]
        number = int(self._numbers[index])
        if number == -1:
            return ""
        return self._names.text(number) if number >= 0 else self._others[-2 - number]

    def positions(self, text: str) -> list[int]:
        """Return the instances that are called `text`, or are in the array that is."""
        numbers = [
            -2 - at for at, name in enumerate(self._others) if name == text or name.startswith(f"{text}[")
        ]
        named = self._names.find(text)
        wanted = [*numbers, named] if named >= 0 else numbers
        found: list[int] = np.flatnonzero(np.isin(self._numbers, wanted)).tolist() if wanted else []
        return found
