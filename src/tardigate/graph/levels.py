"""Levels of points: the longest chain of arcs into each.

Takes arcs between points, gives a level a point, -1 for the points in or behind a loop (Kahn 1962,
"Topological sorting of large networks", CACM 5(11)). Wide levels run as arrays, narrow ones one by one.
Does not say where a loop is.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

WIDE = 128
"""Points of a level from which on an array step is quicker than steps one by one."""

IN_LOOP = -1
"""The level of a point in a loop or behind one."""


def find_levels(points: int, tail: NDArray[np.int32], head: NDArray[np.int32]) -> NDArray[np.int32]:
    """Return int32[points]: 0 for points without arcs into them, else one more than the highest tail's."""
    return _Kahn(points, tail, head).run()


class _Kahn:
    """Points are taken once all arcs into them are; `waiting` counts those that are not yet."""

    def __init__(self, points: int, tail: NDArray[np.int32], head: NDArray[np.int32]) -> None:
        packed = np.sort(tail.astype(np.int64) << 32 | head)
        self.out = packed & 0xFFFFFFFF
        self.count = np.bincount(tail, minlength=points)
        self.start = np.concatenate([[0], self.count.cumsum()])
        self.numbers = np.arange(len(tail))
        self.waiting = np.bincount(head, minlength=points)
        self.level = np.full(points, IN_LOOP, np.int32)

    def run(self) -> NDArray[np.int32]:
        level, front = 0, np.flatnonzero(self.waiting == 0)
        self.level[front] = 0
        while len(front):
            if len(front) >= WIDE:
                level += 1
                front = self._wide(front, level)
            else:
                level, front = self._narrow(front, level)
        return self.level

    def _wide(self, front: NDArray[np.int64], level: int) -> NDArray[np.int64]:
        """Take one level as arrays; return the next."""
        count = self.count.take(front, mode="clip")
        end = count.cumsum()
        total = int(end[-1])
        arcs = (self.start.take(front, mode="clip") - end + count).repeat(count)
        arcs += self.numbers[:total]
        reached = self.out.take(arcs, mode="clip")
        reached.sort()
        last = np.ones(total, np.bool_)  # of the arcs that reach the same point
        np.not_equal(reached[1:], reached[:-1], out=last[:-1])
        at = last.nonzero()[0]
        point = reached.take(at, mode="clip")
        arrived = at + 1
        arrived[1:] -= at[:-1] + 1
        left = self.waiting.take(point, mode="clip") - arrived
        self.waiting[point] = left
        front = point[left == 0]
        self.level[front] = level
        return front

    def _narrow(self, front: NDArray[np.int64], level: int) -> tuple[int, NDArray[np.int64]]:
        """Take levels point by point while they are narrow; return the last level's number and points."""
        out, start = self.out.data, self.start.data
        waiting, level_of = self.waiting.data, self.level.data
        here: list[int] = front.tolist()
        while here and len(here) < WIDE:
            level += 1
            reached = []
            for point in here:
                for arc in range(start[point], start[point + 1]):
                    head = out[arc]
                    left = waiting[head] = waiting[head] - 1
                    if not left:
                        level_of[head] = level
                        reached.append(head)
            here = reached
        return level, np.array(here, np.int64)
