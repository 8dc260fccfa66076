"""Names of a module's nets and part instances, made when asked for.

Takes the numbers of names in a file, gives columns that read like sequences of text and can be searched.
"""

from __future__ import annotations

import re
from abc import abstractmethod
from collections.abc import Sequence
from typing import overload

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.flat import CONSTANT_NAMES, CONSTANTS
from tardigate.netlist.variables import RANGED, Shape, Variables
from tardigate.syntax.intern import Interned

_INDICES = re.compile(r"(\[-?\d+\])+$")


class Column(Sequence[str]):
    """Names by number."""

    @abstractmethod
    def one(self, index: int) -> str:
        """Make the name with a number."""

    @abstractmethod
    def positions(self, text: str) -> list[int]:
        """Return where `text` stands, or bits or members of what is called so."""

    @overload
    def __getitem__(self, index: int) -> str: ...
    @overload
    def __getitem__(self, index: slice) -> list[str]: ...
    def __getitem__(self, index: int | slice) -> str | list[str]:
        if isinstance(index, slice):
            return [self.one(i) for i in range(*index.indices(len(self)))]
        return self.one(index)


class NetNames(Column):
    """The names of a module's local nets, made when asked for: `a`, `bus[3]`, `assign:12.0` for a result."""

    def __init__(self, variables: Variables) -> None:
        self._variables = variables
        self._first_result = CONSTANTS + int(variables.width.sum())

    def __len__(self) -> int:
        return self._variables.nets

    def one(self, index: int) -> str:
        """Make a name."""
        variables = self._variables
        if index < CONSTANTS:
            return CONSTANT_NAMES[index]
        if index >= self._first_result:
            result = index - self._first_result
            if result in variables.result_names:
                return variables.result_names[result]
            return f"assign:{variables.text.span(variables.results[result]).line}.{result}"
        at = int(np.searchsorted(variables.base, np.int32(index), "right")) - 1  # of one type: no copy
        return bit_name(variables, at, index - int(variables.base[at]))

    def positions(self, text: str) -> list[int]:
        """Return the local nets that are called `text`, or are bits of the vector that is."""
        variables = self._variables
        found = self._bits_of(text, None)
        name, bracket, index = text.rpartition("[")
        if bracket and index[:-1].lstrip("-").isdigit() and index[-1] == "]":
            found += self._bits_of(name, int(index[:-1]))
            found += self._elements(text)
        if text.startswith("assign:"):
            found += [at for at in range(self._first_result, variables.nets) if self[at] == text]
        return found

    def _bits_of(self, name: str, index: int | None) -> list[int]:
        variables = self._variables
        found: list[int] = []
        for at in self._called(name):
            bits = variables.bits(at)
            if index is None:
                found += bits
            elif variables.flags[at] & RANGED:
                found += [bit for bit in bits if self[bit].endswith(f"[{index}]")]
        return found

    def _elements(self, text: str) -> list[int]:
        """Return the bits of the element of an array that is called `text`, or of all that begins so."""
        variables = self._variables
        found: list[int] = []
        for at in self._called(_INDICES.sub("", text)) if variables.arrays else ():
            names = [bit_name(variables, at, offset) for offset in range(int(variables.width[at]))]
            base = int(variables.base[at])
            found += [
                base + offset
                for offset, name in enumerate(names)
                if at in variables.arrays and (name == text or name.startswith(f"{text}["))
            ]
        return found

    def _called(self, name: str) -> list[int]:
        """Return the variables that are called so, those in blocks with the blocks' names."""
        variables = self._variables
        inner = name.rpartition(".")[2]
        candidates = np.flatnonzero(variables.name == variables.names.find(inner)).tolist()
        candidates += np.flatnonzero(variables.name == variables.names.find(name)).tolist() * (inner != name)
        return [at for at in candidates if variables.text_of(at) == name]


def bit_name(variables: Variables, variable: int, offset: int) -> str:
    """Return the name of bit `offset` of a variable, counted from its least significant."""
    name = variables.text_of(variable)
    if variable in variables.arrays:
        return name + element_name(variables.arrays[variable], offset)
    if not variables.flags[variable] & RANGED:
        return name
    msb, lsb = int(variables.msb[variable]), int(variables.lsb[variable])
    return f"{name}[{lsb + (offset if msb >= lsb else -offset)}]"


def element_name(shape: Shape, offset: int) -> str:
    """Return the indices of bit `offset` of an array, the leftmost dimension first."""
    indices = []
    for left, right in reversed(shape.bounds):
        offset, place = divmod(offset, abs(left - right) + 1)
        indices.append(right + place if left >= right else right - place)
    return "".join(f"[{index}]" for index in reversed(indices))


class InstanceNames(Column):
    """The names of a module's part instances, made when asked for.

    `numbers` int32[instances]: a name's number in the file, -1 for none, or -2 - i for `others[i]`.
    """

    def __init__(self, names: Interned, numbers: NDArray[np.int32], others: list[str]) -> None:
        self._names, self._numbers, self._others = names, numbers, others

    def __len__(self) -> int:
        return len(self._numbers)

    def one(self, index: int) -> str:
        """Make a name."""
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
