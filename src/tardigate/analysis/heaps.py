"""Persistent heaps: an insertion leaves the old heap as it was and shares nearly all of it.

A heap is None or a `Node`. Leftist trees (Crane 1972; Knuth, TAOCP vol. 3, 5.2.3) made of tuples, so
that a million of them stay light.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple, Optional

Sidetrack = tuple[float, int]
"""What is lost against the best way, fs, and the hop taken instead; `-1 - vertex` begins the trail there."""


class Node(NamedTuple):
    """The sidetracks of one vertex, least loss first, above heaps that lose no less.

    `rank` is the number of nodes on the way down to the right, at most the logarithm of the heap's size.
    """

    loss: float
    sidetracks: Sequence[Sidetrack]
    left: Optional[Node]  # noqa: UP045 - the tuple's own name is not known yet to `|`
    right: Optional[Node]  # noqa: UP045
    rank: int


def insert(heap: Node | None, sidetracks: Sequence[Sidetrack]) -> Node:
    """Return the heap with one vertex's sidetracks more; of equal ones the newer go on top."""
    loss = sidetracks[0][0]
    spine = []
    while heap is not None and heap.loss < loss:
        spine.append(heap)
        heap = heap.right
    new = Node(loss, sidetracks, heap, None, 1)
    for above in reversed(spine):
        new = _join(above, new)
    return new


def _join(above: Node, below: Node) -> Node:
    """Return `above` with `below` in the place of its right heap, the deeper of both to the left."""
    left, right = above.left, below
    if left is None:
        return Node(above.loss, above.sidetracks, right, None, 1)
    if left.rank < right.rank:
        left, right = right, left
    return Node(above.loss, above.sidetracks, left, right, 1 + right.rank)
