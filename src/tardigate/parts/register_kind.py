"""The textbook register as a kind: what an `always` that moves nets into regs becomes, one for each bit.

Takes its clock edge, asynchronous controls, number of data nets and delays, gives a `Kind`. Does not look
delays up.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

from tardigate.parts.gates import DelayOf, source_delays
from tardigate.parts.kind import Edge, Kind, Origin, Way
from tardigate.parts.kind_maker import KindHop, make_kind
from tardigate.parts.source_delay import SourceDelay

REGISTER = "register"
"""Its name, in reports and among the operators of a parts file."""


class Control(NamedTuple):
    """An asynchronous control: at `level` (1: high) it sets or clears, after a `delay` from the source."""

    level: int
    sets: bool
    delay: SourceDelay | None = None


def register_kind(
    edge: Edge, controls: Sequence[Control], data: int, delay: SourceDelay | None, delay_of: DelayOf
) -> Kind:
    """Make the kind of a register: pins `q`, `clock`, its controls (`clear`, `set`), `d1`, ...

    The clock's edge launches either edge of `q`; a control that becomes active moves `q` to its level (IEEE
    1364-2005 clause 9.2.2: after the delay of that assignment). Without a `delay` in the source, `delay_of`
    gives that of the transition. The controls and the data are sinks.
    """
    after = source_delays(delay) if delay else delay_of
    hops = [
        KindHop(1, 0, edge, Edge.RISE, after("LH"), launches=True),
        KindHop(1, 0, edge, Edge.FALL, after("HL"), launches=True),
    ]
    for pin, control in enumerate(controls, start=2):
        after = source_delays(control.delay) if control.delay else delay_of
        active = Edge.RISE if control.level else Edge.FALL
        forced = Edge.RISE if control.sets else Edge.FALL
        hops.append(KindHop(pin, 0, active, forced, after("LH" if control.sets else "HL")))
    pins = ["q", "clock", *_control_names(controls), *(f"d{i + 1}" for i in range(data))]
    hops = [_said(hop, pins) for hop in hops]
    ways = [Way.OUTPUT] + [Way.INPUT] * (len(pins) - 1)
    sinks = range(2, len(pins))
    return make_kind(REGISTER, "operator", pins, ways, hops, sinks=sinks, register=True)


def _said(hop: KindHop, pins: Sequence[str]) -> KindHop:
    """Return a hop that says which change has no time, if it has none."""
    if hop.delay.origin != Origin.MISSING or hop.delay.words:
        return hop
    return hop._replace(delay=hop.delay._replace(words=f"no `#` where {pins[hop.tail]} moves it"))


def _control_names(controls: Sequence[Control]) -> list[str]:
    """Return `clear` and `set`, numbered where there are several of one sort."""
    words = ["set" if control.sets else "clear" for control in controls]
    return [
        word if words.count(word) == 1 else f"{word}{words[: at + 1].count(word)}"
        for at, word in enumerate(words)
    ]
