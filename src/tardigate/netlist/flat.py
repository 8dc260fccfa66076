"""The flat design: columns, not objects.

Nets and part instances are numbers. Nets 0 to 3 are the constants 0, 1, x and z. The hierarchy is kept as
scopes, each a template stamped at an offset, so that names and places are found again when asked for.
Data only.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from types import MappingProxyType
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.template import Template
from tardigate.parts.kind import Kind, Way

CONSTANTS = 4
"""Nets 0, 1, 2, 3 stand for the constants 0, 1, x, z."""

FLOATING = 3
"""The net of the constant z."""

CONSTANT_NAMES = ("1'b0", "1'b1", "1'bx", "1'bz")

PULLS = ("pullup", "pulldown")
"""What pulls nets (IEEE 1364-2005 clause 7.8), by the words of `Flat.typed` and the names of kinds."""

OPEN = -1
"""The net number of a pin that is connected to nothing."""


class Port(NamedTuple):
    """One bit of a port of the top module: its name (`a`, `bus[3]`), way and net."""

    name: str
    way: Way
    net: int


class Flat(NamedTuple):
    """The flat design.

    `kinds`: the kinds in use; `inst_kind` int32[instances]: the kind of each part instance; `pin_start`
    int64[instances + 1]: where its pins begin in `pin_net` int32[pins], the net of each pin (OPEN for none),
    in the order of `Kind.pins`. `nets`: number of nets. `ports`: bits of the top module's ports.

    Scopes are in stamp order, parents before children, the top first: `scope_template` int32, number in
    `templates`; `scope_parent` int32, -1 for the top; `scope_name` the instance's name in its parent;
    `scope_inst` int64[scopes + 1]: its own part instances are these; `scope_net` int64[scopes + 1]: its
    template's own nets in raw numbering. `net_raw` int64[nets]: the raw number, in the outermost scope that
    has the net, that gives each net its name. `typed`: nets, int32, by the types that they are declared with
    anywhere (`wand`, `tri1`, …; plain `wire` left out) and by what pulls them (`pullup`, `pulldown`).
    """

    kinds: tuple[Kind, ...]
    inst_kind: NDArray[np.int32]
    pin_start: NDArray[np.int64]
    pin_net: NDArray[np.int32]
    nets: int
    ports: tuple[Port, ...]
    templates: tuple[Template, ...]
    scope_template: NDArray[np.int32]
    scope_parent: NDArray[np.int32]
    scope_name: tuple[str, ...]
    scope_inst: NDArray[np.int64]
    scope_net: NDArray[np.int64]
    net_raw: NDArray[np.int64]
    typed: Mapping[str, NDArray[np.int32]] = MappingProxyType({})

    def of_type(self, words: Sequence[str]) -> NDArray[np.int32]:
        """Return the nets that are declared with, or pulled by, one of the words."""
        found = [self.typed[word] for word in words if word in self.typed]
        return np.concatenate([*found, np.zeros(0, np.int32)]).astype(np.int32)

    @property
    def instances(self) -> int:
        """Number of part instances."""
        return len(self.inst_kind)
