"""The hops of a flat design, kind by kind, before they are in any order.

Takes the flat columns, gives columns of hops and of arcs (hops without their edges). Hops from or to an
open pin or a constant net are left out. Does not check anything.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.batches import Batch
from tardigate.netlist.flat import CONSTANTS
from tardigate.source.arrays import distinct

Ints = NDArray[np.int32]


class ClockPins(NamedTuple):
    """Register clock pins on a net, one a point beyond the nets: `instance`, `pin` int32, in that order."""

    instance: Ints
    pin: Ints


class Hops(NamedTuple):
    """Hops in order of kind, row and instance: int32 columns `tail`, `head` (vertices), `row`, `instance`."""

    tail: Ints
    head: Ints
    row: Ints
    instance: Ints


class Arcs(NamedTuple):
    """Hops without their edges, by points: int32 columns `tail`, `head`, `instance`, `pin_in`, `pin_out`."""

    tail: Ints
    head: Ints
    instance: Ints
    pin_in: Ints
    pin_out: Ints


def find_clock_pins(groups: Sequence[Batch]) -> ClockPins:
    """Return the register clock pins that launch a hop onto a net, in order of instance and pin."""
    found = [np.empty(0, np.int64)]
    for batch in groups:
        kind = batch.kind
        for pin in distinct(kind.hop_from[kind.launches]).tolist():
            heads = kind.hop_to[kind.launches & (kind.hop_from == pin)]
            live = (batch.nets[pin] >= CONSTANTS) & (batch.nets[heads] >= CONSTANTS).any(axis=0)
            found.append(_pack(batch.members[live], pin))
    keys = np.sort(np.concatenate(found))
    return ClockPins((keys >> 32).astype(np.int32), (keys & 0xFFFFFFFF).astype(np.int32))


def expand_hops(groups: Sequence[Batch], nets: int, clock_pins: ClockPins) -> Hops:
    """Return every hop of every part instance."""
    found: list[tuple[Ints, ...]] = []
    for batch in groups:
        kind = batch.kind
        tail, head, live = _ends(batch, kind.hop_from, kind.hop_to, kind.launches, nets, clock_pins)
        tail = 2 * tail + kind.from_edge[:, None]
        head = 2 * head + kind.to_edge[:, None]
        row = np.broadcast_to(np.arange(kind.hops, dtype=np.int32)[:, None] + batch.first_row, tail.shape)
        found.append(_picked(live, tail, head, row, np.broadcast_to(batch.members, tail.shape)))
    return Hops(*_joined(found, 4))


def expand_arcs(groups: Sequence[Batch], nets: int, clock_pins: ClockPins) -> Arcs:
    """Return an arc for each pair of pins of each part instance that hops join."""
    found: list[tuple[Ints, ...]] = []
    for batch in groups:
        kind = batch.kind
        triples = zip(kind.hop_from.tolist(), kind.hop_to.tolist(), kind.launches.tolist(), strict=True)
        ways = np.array(sorted(set(triples)), np.int32).reshape(-1, 3)
        pin_in, pin_out, launches = ways[:, 0], ways[:, 1], ways[:, 2].astype(bool)
        tail, head, live = _ends(batch, pin_in, pin_out, launches, nets, clock_pins)
        members = np.broadcast_to(batch.members, tail.shape)
        pins = (np.broadcast_to(pin.astype(np.int32)[:, None], tail.shape) for pin in (pin_in, pin_out))
        found.append(_picked(live, tail, head, members, *pins))
    return Arcs(*_joined(found, 5))


def _ends(
    batch: Batch,
    pin_in: NDArray[np.integer],
    pin_out: NDArray[np.integer],
    launches: NDArray[np.bool_],
    nets: int,
    clock_pins: ClockPins,
) -> tuple[Ints, Ints, NDArray[np.bool_]]:
    """Return the points at both ends, int32[ways, members], and which of them are both on a net."""
    tail, head = batch.nets[pin_in], batch.nets[pin_out]
    live = (tail >= CONSTANTS) & (head >= CONSTANTS)
    for way in np.flatnonzero(launches):
        tail[way] = nets + _clock_point(clock_pins, batch.members, int(pin_in[way]))
    return tail, head, live


def _clock_point(clock_pins: ClockPins, members: Ints, pin: int) -> Ints:
    """Return the number of each member's clock pin, or any number where it has none."""
    keys = clock_pins.instance.astype(np.int64) << 32 | clock_pins.pin
    return np.searchsorted(keys, _pack(members, pin)).astype(np.int32)


def _pack(members: Ints, pin: int) -> NDArray[np.int64]:
    return members.astype(np.int64) << 32 | pin


def _picked(live: NDArray[np.bool_], *columns: Ints) -> tuple[Ints, ...]:
    if live.all():
        return tuple(column.reshape(-1) for column in columns)
    return tuple(column[live] for column in columns)


def _joined(found: list[tuple[Ints, ...]], width: int) -> list[Ints]:
    if not found:
        return [np.empty(0, np.int32) for _ in range(width)]
    return [np.concatenate(column).astype(np.int32, copy=False) for column in zip(*found, strict=True)]
