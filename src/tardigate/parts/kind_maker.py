"""Hops as a list to a kind as columns.

Takes one tuple a hop, gives a `Kind`; its origin is the weakest of its hops'. Does not check them.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

import numpy as np

from tardigate.parts.kind import Edge, Kind, Origin, Way
from tardigate.parts.source_delay import Triple

NAN = float("nan")
UNKNOWN: Triple = (NAN, NAN, NAN)
"""Nobody gave a number."""


def given(triple: Triple) -> bool:
    """Say whether any of the three numbers is there."""
    return any(number == number for number in triple)  # NaN differs from itself


class Delay(NamedTuple):
    """A delay, where it comes from, and that in words."""

    triple: Triple
    origin: Origin
    words: str = ""


MISSING = Delay(UNKNOWN, Origin.MISSING)


class KindHop(NamedTuple):
    """A hop of a kind; pins by number."""

    tail: int
    head: int
    tail_edge: Edge
    head_edge: Edge
    delay: Delay
    launches: bool = False


def make_kind(
    name: str,
    group: str,
    pins: Sequence[str],
    ways: Sequence[Way],
    hops: Sequence[KindHop],
    *,
    sinks: Sequence[int] = (),
    register: bool = False,
    three_state: bool = False,
    words: str = "",
    unknown_function: bool = False,
) -> Kind:
    """Make a kind; `words` stand in where the hops give none."""
    origin = max((hop.delay.origin for hop in hops), default=Origin.PARTS)
    told = next((hop.delay.words for hop in hops if hop.delay.origin == origin and hop.delay.words), words)
    return Kind(
        name,
        group,
        tuple(pins),
        np.array(ways, np.uint8),
        np.array([hop.tail for hop in hops], np.int32),
        np.array([hop.head for hop in hops], np.int32),
        np.array([hop.tail_edge for hop in hops], np.uint8),
        np.array([hop.head_edge for hop in hops], np.uint8),
        np.array([hop.delay.triple for hop in hops], np.float64).reshape(len(hops), 3),
        np.array([hop.launches for hop in hops], np.bool_),
        np.array(sinks, np.int32),
        origin,
        told,
        register,
        three_state,
        unknown_function,
    )
