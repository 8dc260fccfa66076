"""A template: one module elaborated for one set of parameters, ready to be stamped. Data only.

Net numbers are local to the template: 0 to 3 are the constants 0, 1, x, z, then the module's own net bits.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from types import MappingProxyType
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from tardigate.parts.kind import Way
from tardigate.source.placed import PlacedText


class TemplatePort(NamedTuple):
    """A port: its name in the header (empty for none), way, and local nets, most significant bit first.

    `bits` are the names of its bits: `a`, or `bus[3]` and so on.
    """

    name: str
    way: Way
    nets: Sequence[int]
    bits: Sequence[str]


class Child(NamedTuple):
    """An instance of a module below: its name, its template's number, the local nets its ports' bits are on.

    `joins` is int32[bits]: for each bit of the child's ports, in order of ports and bits, the net of this
    template, or -1 where the port is open. `place` is the offset of the instance in the text.
    """

    name: str
    template: int
    joins: NDArray[np.int32]
    place: int


class Link(NamedTuple):
    """A local net that is one with a net of a module below: the children on the way, the net there."""

    net: int
    path: tuple[str, ...]
    inside: int


class Template(NamedTuple):
    """An elaborated module.

    `net_names` names the local nets (the first four are the constants), bit by bit (`bus[3]`); `net_place`
    int64 their declarations' offsets in `text`. Part instances are columns: `kind` int32 (numbers in the
    design's kinds), `pin_start` int64[instances + 1] into `pin_net` int32 (OPEN -1), `inst_names` (an empty
    name for one that has none), `inst_place` int64. `parameters` is the canonical list, `N=4, W=8`.
    `typed`: local nets, int32, by the type that they are declared with (`wand`, `tri1`, …; those of plain
    `wire` are not listed) and by what pulls them (`pullup`). `links`: what hierarchical names join with
    nets below.
    """

    module: str
    parameters: str
    text: PlacedText
    place: int
    ports: tuple[TemplatePort, ...]
    net_names: Sequence[str]
    net_place: NDArray[np.int64]
    kind: NDArray[np.int32]
    pin_start: NDArray[np.int64]
    pin_net: NDArray[np.int32]
    inst_names: Sequence[str]
    inst_place: NDArray[np.int64]
    children: tuple[Child, ...]
    typed: Mapping[str, NDArray[np.int32]] = MappingProxyType({})
    links: tuple[Link, ...] = ()

    @property
    def nets(self) -> int:
        """Number of local nets, the constants included."""
        return len(self.net_names)
