"""What an analysis finds: integers and times in femtoseconds, no names. Data only."""

from __future__ import annotations

from typing import Literal, NamedTuple

import numpy as np
from numpy.typing import NDArray

Grade = Literal["min", "typ", "max", "span"]
"""Which of min, typ, max of a delay triple is used; `span`: max for settles, min for stirs."""

GRADES: tuple[Grade, ...] = ("span", "min", "typ", "max")


class Times(NamedTuple):
    """When each vertex settles and stirs, float64[vertices], fs.

    A vertex that no source reaches never changes: it settles at -inf and stirs at +inf.
    """

    settles: NDArray[np.float64]
    stirs: NDArray[np.float64]


class Trail(NamedTuple):
    """A chain of hops from a source to a sink.

    `source` and `sink` are vertices (the sink's point is one of `Graph.sinks`); `hops` int64, numbers of the
    graph's hops in the order in which the change runs through them; `delays` float64, the delay of each, fs;
    `total` their sum. A trail may have no hop: an input that is itself an output.
    """

    source: int
    sink: int
    hops: NDArray[np.int64]
    delays: NDArray[np.float64]
    total: float
