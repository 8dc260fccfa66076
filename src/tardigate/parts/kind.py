"""A kind: what all part instances that behave alike share, down to the bit.

This is what the netlist counts and the graph expands: one kind for each part under the chosen condition,
each gate with so many inputs, each operator, each delay written in the source. Data only.
"""

from __future__ import annotations

from enum import IntEnum
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from tardigate.parts.source_delay import SourceDelay


class Edge(IntEnum):
    """Direction of a change: the low bit of a vertex number."""

    RISE = 0
    FALL = 1


class Way(IntEnum):
    """Direction of a pin, seen from the part."""

    INPUT = 0
    OUTPUT = 1
    INOUT = 2


class Origin(IntEnum):
    """Where a kind's delays come from, in the order in which one beats the other."""

    SOURCE = 0  # a delay written in the Verilog source
    PARTS = 1  # an entry of a parts file for just this
    DEFAULT = 2  # a family default of a parts file
    WIRE = 3  # nothing to delay: an assignment without operator, taken as a wire
    MISSING = 4  # nowhere: the design is refused


class Kind(NamedTuple):
    """A kind of part instance.

    `name` is what reports call it (`nand`, `HX00`, `assign &`); `group` sorts reports: `gate`, `operator` or
    `part`. Pins are single bits in the order in which an instance's connections are stored: `pins` their
    names, `ways` their `Way` (uint8).

    Hops, one row each (`hops` rows): `hop_from`, `hop_to` pin numbers (int32); `from_edge`, `to_edge` (uint8,
    `Edge`); `delays` float64[hops, 3] in fs, columns min, typ, max, NaN where nobody gave a number. A hop of
    a register's clock pin (`launches`, bool[hops]) begins a trail there rather than going on.

    `sinks` (int32) are the pins where trails end: data and control pins of registers. `register` says that
    the part holds state. `words` is one line for the reader: where the delays stand (`parts file:line`).
    Of a kind without delays (origin `MISSING`) they say what is missing, where that is known.
    `three_state`: outputs that can let go of their net (several may drive one net). `unknown_function`: an
    output lets both edges pass both ways because nothing says what it does.

    What an instance needs to be written again: `source`, the delay in the source that made the kind;
    `control_sources`, those of a register's asynchronous controls, in order of their pins; `parameters`, the
    values of a part's parameters that are known, in declared order.
    """

    name: str
    group: str
    pins: tuple[str, ...]
    ways: NDArray[np.uint8]
    hop_from: NDArray[np.int32]
    hop_to: NDArray[np.int32]
    from_edge: NDArray[np.uint8]
    to_edge: NDArray[np.uint8]
    delays: NDArray[np.float64]
    launches: NDArray[np.bool_]
    sinks: NDArray[np.int32]
    origin: Origin
    words: str = ""
    register: bool = False
    three_state: bool = False
    unknown_function: bool = False
    source: SourceDelay | None = None
    parameters: tuple[tuple[str, int | str], ...] = ()
    control_sources: tuple[SourceDelay | None, ...] = ()

    @property
    def inputs(self) -> int:
        """Number of input bits."""
        return int((self.ways == Way.INPUT).sum())

    @property
    def hops(self) -> int:
        """Number of hops."""
        return len(self.hop_from)
