"""The way back from a text with plain stretches cut out to the text it was cut from. Data only."""

from __future__ import annotations

from bisect import bisect_right
from typing import NamedTuple


class Cuts(NamedTuple):
    """The map from a coarse text back to the placed text: `coarse[i]` is what stands at `placed[i]`."""

    coarse: list[int]
    placed: list[int]

    def where(self, offset: int) -> int:
        """Return the offset in the placed text."""
        at = max(0, bisect_right(self.coarse, offset) - 1)
        return self.placed[at] + offset - self.coarse[at]
