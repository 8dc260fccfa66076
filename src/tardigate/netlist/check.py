"""Structure checks on the flat design, before any figure.

Takes the flat design, tells of nets with several drivers (N201) or none (N202), of inputs that are connected
to nothing (N203) and of outputs on constants (N204). Does not know delays.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.batches import Batch, batches
from tardigate.netlist.flat import CONSTANTS, FLOATING, OPEN, PULLS, Flat
from tardigate.netlist.names import Names
from tardigate.parts.kind import Way
from tardigate.source.collector import Collector
from tardigate.source.diagnostic import Related

_SHOWN = 4

WIRED = ("wand", "wor", "triand", "trior")
"""Types of nets that say what several drivers come to (clause 4.6.2)."""

DRIVEN = ("tri0", "tri1", "supply0", "supply1", *PULLS)
"""What holds a net without any driver (clauses 4.6.4, 4.6.5, 7.8)."""


def check_structure(flat: Flat, names: Names, collector: Collector, *, complete: bool) -> None:
    """Tell what is wrong; without `complete` (undescribed instances) nets without driver are passed over."""
    groups = batches(flat)
    _open_inputs(names, collector, groups)
    driving, drivers_of = _drivers(groups)
    drivers = np.bincount(drivers_of, minlength=flat.nets)
    held = np.bincount(drivers_of[~_lets_go(flat, groups)[driving]], minlength=flat.nets)
    inputs = np.array([port.net for port in flat.ports if port.way == Way.INPUT], np.int64)
    np.add.at(drivers, inputs, 1)
    np.add.at(held, inputs, 1)
    clash = (drivers > 1) & (held > 0)
    clash[flat.of_type(WIRED)] = False
    single = flat.of_type(("uwire",))
    clash[single] = drivers[single] > 1
    clash[:CONSTANTS] = drivers[:CONSTANTS] > 0
    for clashing in np.flatnonzero(clash).tolist():
        _tell_clash(flat, names, collector, clashing, np.sort(driving[drivers_of == clashing]))
    if complete:
        _undriven(flat, names, collector, drivers, groups)


def _nets_of(groups: Sequence[Batch], way: Way) -> NDArray[np.int32]:
    """Return the nets at all pins of a way."""
    found = [batch.nets[batch.kind.ways == way].reshape(-1) for batch in groups]
    nets: NDArray[np.int32] = np.concatenate([*found, np.zeros(0, np.int32)])
    return nets[np.flatnonzero(nets != OPEN)]


def _drivers(groups: Sequence[Batch]) -> tuple[NDArray[np.int32], NDArray[np.int32]]:
    """Return the instance and the net of each output that is connected."""
    instances, nets = [np.zeros(0, np.int32)], [np.zeros(0, np.int32)]
    for batch in groups:
        for pin in np.flatnonzero(batch.kind.ways == Way.OUTPUT):
            connected = batch.nets[pin] != OPEN
            instances.append(batch.members[connected])
            nets.append(batch.nets[pin][connected])
    return np.concatenate(instances), np.concatenate(nets)


def _lets_go(flat: Flat, groups: Sequence[Batch]) -> NDArray[np.bool_]:
    """Tell which part instances may let go of their nets: three-state parts, and `s ? a : 1'bz`."""
    lets_go = np.zeros(flat.instances, np.bool_)
    for batch in groups:
        if batch.kind.three_state:
            lets_go[batch.members] = True
        elif batch.kind.name == "assign ?:":
            lets_go[batch.members] = (batch.nets == FLOATING).any(axis=0)
    return lets_go


def _open_inputs(names: Names, collector: Collector, groups: Sequence[Batch]) -> None:
    for batch in groups:
        if not (batch.nets == OPEN).any():
            continue
        for pin in np.flatnonzero(batch.kind.ways == Way.INPUT).tolist():
            for inst in batch.members[batch.nets[pin] == OPEN].tolist():
                collector.tell(
                    "N203", names.place(inst), instance=names.instance(inst), pin=batch.kind.pins[pin]
                )


def _tell_clash(flat: Flat, names: Names, collector: Collector, net: int, drivers: NDArray[np.int32]) -> None:
    related = tuple(
        Related(names.place(inst), f"driven by `{names.instance(inst)}`")
        for inst in drivers[:_SHOWN].tolist()
    )
    if net < CONSTANTS:
        for inst in drivers.tolist():
            collector.tell("N204", names.place(inst), instance=names.instance(inst), value=names.net(net))
        return
    ports = [port.name for port in flat.ports if port.net == net and port.way == Way.INPUT]
    also = f", one of them the input port `{ports[0]}`" if ports else ""
    count = len(drivers) + len(ports)
    collector.tell("N201", names.net_place(net), net=names.net(net), count=count, also=also, related=related)


def _undriven(
    flat: Flat, names: Names, collector: Collector, drivers: NDArray[np.int64], groups: Sequence[Batch]
) -> None:
    """Tell of nets that something reads and nothing drives."""
    driven = drivers > 0
    driven[:CONSTANTS] = True
    driven[flat.of_type(DRIVEN)] = True
    driven[[port.net for port in flat.ports if port.way == Way.INOUT]] = True
    driven[_nets_of(groups, Way.INOUT)] = True
    read = np.zeros(flat.nets, bool)
    read[_nets_of(groups, Way.INPUT)] = True
    read[[port.net for port in flat.ports if port.way == Way.OUTPUT]] = True
    for net in np.flatnonzero(read & ~driven).tolist():
        hint = names.meant(net, driven) if collector.room("N202") else None
        collector.tell("N202", names.net_place(net), net=names.net(net), hint=hint)
