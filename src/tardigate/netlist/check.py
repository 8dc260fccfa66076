"""Structure checks on the flat design, before any figure.

Takes the flat design, tells of nets with several drivers (N201) or none (N202), of inputs that are connected
to nothing (N203) and of outputs on constants (N204). Does not know delays.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.flat import CONSTANTS, FLOATING, OPEN, Flat
from tardigate.netlist.names import Names
from tardigate.parts.kind import Way
from tardigate.source.collector import Collector
from tardigate.source.diagnostic import Related

_SHOWN = 4


def pin_table(flat: Flat) -> tuple[NDArray[np.int32], NDArray[np.int64]]:
    """Return the instance of each pin, int32[pins], and its number in the kinds' pins joined, int64[pins]."""
    count = np.diff(flat.pin_start)
    instance = np.repeat(np.arange(flat.instances, dtype=np.int32), count)
    within = np.arange(len(flat.pin_net)) - np.repeat(flat.pin_start[:-1], count)
    base = np.cumsum([0, *(len(kind.pins) for kind in flat.kinds)])
    return instance, np.repeat(base[flat.inst_kind], count) + within


def check_structure(flat: Flat, names: Names, collector: Collector, *, complete: bool) -> None:
    """Tell what is wrong; without `complete` (undescribed instances) nets without driver are passed over."""
    instance, cell = pin_table(flat)
    way = np.concatenate([*(kind.ways for kind in flat.kinds), np.zeros(0, np.uint8)])[cell]
    net = flat.pin_net
    _open_inputs(flat, names, collector, np.flatnonzero((way == Way.INPUT) & (net == OPEN)), instance)
    drives = np.flatnonzero((way == Way.OUTPUT) & (net != OPEN))
    drivers = np.bincount(net[drives], minlength=flat.nets)
    holds = ~_lets_go(flat, instance)[instance[drives]]
    held = np.bincount(net[drives][holds], minlength=flat.nets)
    inputs = np.array([port.net for port in flat.ports if port.way == Way.INPUT], np.int64)
    both = np.array([port.net for port in flat.ports if port.way == Way.INOUT], np.int64)
    np.add.at(drivers, inputs, 1)
    np.add.at(held, inputs, 1)
    clash = (drivers > 1) & (held > 0)
    clash[flat.wired] = False
    clash[:CONSTANTS] = drivers[:CONSTANTS] > 0
    for clashing in np.flatnonzero(clash).tolist():
        _tell_clash(flat, names, collector, clashing, instance[drives[net[drives] == clashing]])
    if complete:
        _undriven(flat, names, collector, drivers, way, both)


def _lets_go(flat: Flat, instance: NDArray[np.int32]) -> NDArray[np.bool_]:
    """Tell which part instances may let go of their nets: three-state parts, and `s ? a : 1'bz`."""
    three_state = np.array([kind.three_state for kind in flat.kinds], bool)[flat.inst_kind]
    chooses = np.array([kind.name == "assign ?:" for kind in flat.kinds], bool)[flat.inst_kind]
    chooses[np.setdiff1d(np.flatnonzero(chooses), instance[flat.pin_net == FLOATING])] = False
    lets_go: NDArray[np.bool_] = three_state | chooses
    return lets_go


def _open_inputs(
    flat: Flat, names: Names, collector: Collector, pins: NDArray[np.int64], instance: NDArray[np.int32]
) -> None:
    for pin in pins.tolist():
        inst = int(instance[pin])
        kind = flat.kinds[flat.inst_kind[inst]]
        name = kind.pins[pin - int(flat.pin_start[inst])]
        collector.tell("N203", names.place(inst), instance=names.instance(inst), pin=name)


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
    flat: Flat, names: Names, collector: Collector, drivers: NDArray[np.int64], way: NDArray[np.uint8],
    both: NDArray[np.int64],
) -> None:  # fmt: skip
    """Tell of nets that something reads and nothing drives."""
    driven = drivers > 0
    driven[:CONSTANTS] = True
    driven[flat.driven] = True
    driven[both] = True
    driven[flat.pin_net[(way == Way.INOUT) & (flat.pin_net != OPEN)]] = True
    read = np.zeros(flat.nets, bool)
    read[flat.pin_net[(way == Way.INPUT) & (flat.pin_net != OPEN)]] = True
    read[[port.net for port in flat.ports if port.way == Way.OUTPUT]] = True
    for net in np.flatnonzero(read & ~driven).tolist():
        collector.tell("N202", names.net_place(net), net=names.net(net))
