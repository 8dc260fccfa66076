"""Tables from the numbers of a file's names to what they mean in one module.

A table is as long as the file has names, so it is made once and used again: who takes one gives it back with
the names that were filled in.
"""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.variables import Variables
from tardigate.syntax.verilog_reader import Unit


class NameTables:
    """The tables that are at hand, by file."""

    def __init__(self) -> None:
        self._free: dict[int, list[NDArray[np.int32]]] = {}

    @contextmanager
    def of(self, unit: Unit, variables: Variables) -> Iterator[NDArray[np.int32]]:
        """Lend a table, int32[names + 1]: the variable that each name means in the module, -1 for none.

        The entry after the last is that of a name which the file does not have. Names of variables that are
        added in the meantime may be filled in.
        """
        free = self._free.setdefault(id(unit), [])
        table = free.pop() if free else np.full(len(unit.scan.names) + 1, -1, np.int32)
        own = np.flatnonzero(variables.scope == 0)
        table[variables.name[own]] = own
        table[-1] = -1
        yield table
        table[variables.name] = -1
        free.append(table)
