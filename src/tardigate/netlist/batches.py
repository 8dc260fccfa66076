"""The part instances of a flat design kind by kind: what a kind says is said of all its instances at once.

Takes the flat design, gives a batch for each kind in use. Data and its making only.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.flat import Flat
from tardigate.parts.kind import Kind

Ints = NDArray[np.int32]


class Batch(NamedTuple):
    """The part instances of one kind, the first row of its delays, and `nets` int32[pins, members]."""

    kind: Kind
    first_row: int
    members: Ints
    nets: Ints


def batches(flat: Flat) -> list[Batch]:
    """Return the part instances kind by kind, in order of kind, in order of instance within."""
    narrow = np.uint16 if len(flat.kinds) <= 1 << 16 else np.int32  # 16 bits are sorted by digits
    order = np.argsort(flat.inst_kind.astype(narrow), kind="stable").astype(np.int32)
    start = np.concatenate(([0], np.cumsum(np.bincount(flat.inst_kind, minlength=len(flat.kinds)))))
    row, found = 0, []
    for number, kind in enumerate(flat.kinds):
        members = order[start[number] : start[number + 1]]
        if len(members):
            pins = flat.pin_start[members] + np.arange(len(kind.pins))[:, None]
            found.append(Batch(kind, row, members, flat.pin_net[pins]))
        row += kind.hops
    return found
