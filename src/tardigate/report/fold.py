"""Which hops of a long trail are told one by one.

Takes the delays of a trail's hops, gives runs of hops. Does not know names.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

WORTH_IT = 3


def fold(delays: NDArray[np.float64], most: int | None) -> list[tuple[int, int, bool]]:
    """Return runs (first, stop, folded) that cover the hops in order.

    Told one by one, in runs of one, are the first hop, the last, and the longest of the others, `most` (2 or
    more) in all; of equally long ones the earlier. What lies between is folded, but for a lone hop, which is
    told as well. Where folding would save less than `WORTH_IT` runs all are told.
    """
    count = len(delays)
    every = [(i, i + 1, False) for i in range(count)]
    if most is None or count <= most:
        return every
    inner = np.argsort(-delays[1:-1], kind="stable")[: most - 2] + 1
    told = [0, *sorted(inner.tolist()), count - 1]
    runs = []
    at = 0
    for hop in told:
        if hop > at:
            runs.append((at, hop, hop - at > 1))
        runs.append((hop, hop + 1, False))
        at = hop + 1
    return runs if count - len(runs) >= WORTH_IT else every
