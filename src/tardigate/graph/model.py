"""The graph of (net, edge) vertices and hops, in the order in which a sweep runs over it. Data only.

A vertex is `2 * point + edge` (`Edge.RISE` 0, `Edge.FALL` 1). Points 0 to nets - 1 are the nets of the flat
design; the points after them are register clock pins, where trails begin, one a pin.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray


class Graph(NamedTuple):
    """The graph.

    Hops are sorted by level of their head, then by head: `tail`, `head` int32[hops] are vertices; `delay_row`
    int32[hops] is the row of `delays` float64[rows, 3] (fs; min, typ, max; NaN where nobody gave a number);
    `instance` int32[hops] the part instance that the hop crosses.

    `heads` int32: the vertices that have hops into them, in order; the hops into `heads[i]` are
    `head_start[i]` to `head_start[i + 1]` (int64). `level_start` int64[levels + 1]: the heads of level `l`
    are `heads[level_start[l] : level_start[l + 1]]`; every tail of a hop lies on a level before its head's.

    `sources` int32: vertices where trails begin (both edges of each input port bit and the edges of register
    clock pins that launch). `sinks` int32: points where trails end, each once: nets of output ports and of
    register data and control pins.

    `clock_pin_instance`, `clock_pin_pin` int32, one a point beyond the nets: the register and its pin.
    """

    nets: int
    tail: NDArray[np.int32]
    head: NDArray[np.int32]
    delay_row: NDArray[np.int32]
    instance: NDArray[np.int32]
    delays: NDArray[np.float64]
    row_kind: NDArray[np.int32]
    row_hop: NDArray[np.int32]
    heads: NDArray[np.int32]
    head_start: NDArray[np.int64]
    level_start: NDArray[np.int64]
    sources: NDArray[np.int32]
    sinks: NDArray[np.int32]
    clock_pin_instance: NDArray[np.int32]
    clock_pin_pin: NDArray[np.int32]

    @property
    def vertices(self) -> int:
        """Number of vertices."""
        return 2 * (self.nets + len(self.clock_pin_instance))

    @property
    def levels(self) -> int:
        """Number of levels that have hops into them."""
        return len(self.level_start) - 1
