"""The body of a module that is a part: elaborated and flat, with what its instances do. Data only."""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType
from typing import NamedTuple

import numpy as np

from tardigate.netlist.flat import Flat
from tardigate.netlist.wiring import Wiring
from tardigate.parts.function import Values
from tardigate.parts.model import Part

NO_VALUES: Values = MappingProxyType({})


class Inner(NamedTuple):
    """What a kind of instance that is no gate and no operator does: a part, with known parameter bits."""

    part: Part
    values: Values = NO_VALUES


class Body(NamedTuple):
    """A body.

    `flat` has the module as its top; `wiring` is that of the module (its local nets are those of
    `flat.templates[flat.scope_template[0]]`). `cells`: number in `flat.kinds` → what such an instance does,
    for primitives of the user, registers and parts; a kind that is neither there nor a gate or operator is
    unknown. `opaque`: there is procedural code that nobody understands, or an instance of what nobody
    describes: what no other thing drives may do anything.
    """

    flat: Flat
    wiring: Wiring
    cells: Mapping[int, Inner]
    opaque: bool


def flat_nets(flat: Flat) -> list[int]:
    """Return the flat net of each of the top's local nets; -1 where several were joined and none is told."""
    local = np.arange(flat.templates[int(flat.scope_template[0])].nets)
    at = np.minimum(np.searchsorted(flat.net_raw, local), max(0, len(flat.net_raw) - 1))
    found: list[int] = np.where(flat.net_raw[at] == local, at, -1).tolist()
    top = flat.templates[int(flat.scope_template[0])]
    nets = [net for port in top.ports for net in port.nets]
    for net, port in zip(nets, flat.ports, strict=True):  # a port may share its net with another
        found[net] = port.net
    return found
