"""What is in a design: counts of its parts, clocks and hierarchy, with names.

Takes the flat design and its names, gives records. Does not look at any time.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.flat import CONSTANTS, Flat
from tardigate.netlist.names import Names
from tardigate.parts.kind import Kind, Origin, Way
from tardigate.report.model import ClockRecord, KindRecord, ScopeRecord
from tardigate.source.arrays import distinct

ORIGINS = {
    Origin.SOURCE: "Verilog",
    Origin.PARTS: "parts file",
    Origin.DEFAULT: "family default",
    Origin.WIRE: "wire",
    Origin.MISSING: "missing",
}

DEEPEST = 4
"""Levels of the hierarchy that are recorded."""


def kind_records(flat: Flat) -> tuple[KindRecord, ...]:
    """Record the kinds in use: parts, gates, operators, each sort by falling count.

    Kinds that differ only in their delays are one record.
    """
    counts = np.bincount(flat.inst_kind, minlength=len(flat.kinds)).tolist()
    found: dict[tuple[str, str, int, str, str, bool], int] = {}
    for kind, count in zip(flat.kinds, counts, strict=True):
        key = (kind.name, kind.group, kind.inputs, ORIGINS[kind.origin], kind.words, kind.register)
        found[key] = found.get(key, 0) + count
    groups = {"part": 0, "gate": 1, "operator": 2}
    records = [KindRecord(*key, count) for key, count in found.items() if count]
    return tuple(sorted(records, key=lambda r: (groups.get(r.group, 3), -r.instances, r.name, r.inputs)))


def port_counts(flat: Flat) -> tuple[int, int, int]:
    """Count the bits of input, output and inout ports."""
    ways = [port.way for port in flat.ports]
    return ways.count(Way.INPUT), ways.count(Way.OUTPUT), ways.count(Way.INOUT)


def clock_records(flat: Flat, names: Names) -> tuple[int, tuple[ClockRecord, ...]]:
    """Count the registers, and record the nets on their clock pins, by falling number of registers."""
    registers = 0
    nets: list[NDArray[np.int32]] = []
    for number, kind in enumerate(flat.kinds):
        if not kind.register:
            continue
        instances = np.flatnonzero(flat.inst_kind == number)
        registers += len(instances)
        nets += [flat.pin_net[flat.pin_start[instances] + pin] for pin in _clock_pins(kind)]
    found, counts = np.unique(np.concatenate(nets) if nets else np.empty(0, np.int32), return_counts=True)
    order = np.argsort(-counts, kind="stable")
    return registers, tuple(
        ClockRecord(names.net(int(found[i])), int(counts[i])) for i in order if found[i] >= CONSTANTS
    )


def _clock_pins(kind: Kind) -> list[int]:
    pins: list[int] = distinct(kind.hop_from[kind.launches]).tolist()
    return pins


def hierarchy_records(flat: Flat) -> tuple[ScopeRecord, ...]:
    """Record the hierarchy down to `DEEPEST` levels, like siblings as one, in order of first appearance."""
    own, below = _totals(flat)
    children: list[list[int]] = [[] for _ in flat.scope_name]
    for scope, parent in enumerate(flat.scope_parent.tolist()):
        if parent >= 0:
            children[parent].append(scope)
    records = []
    waiting: list[tuple[list[int], tuple[bool, ...]]] = [([0], ())]
    while waiting:
        alike, lasts = waiting.pop()
        scope = alike[0]
        groups = list(_grouped(flat, children[scope]).values())
        name = flat.scope_name[scope] if lasts else ""
        if len(alike) > 1:
            name = f"{name} … {flat.scope_name[alike[-1]]}"
        module = flat.templates[flat.scope_template[scope]].module
        records.append(ScopeRecord(name, module, len(alike), own[scope], below[scope], len(groups), lasts))
        if len(lasts) < DEEPEST:
            last = len(groups) - 1
            waiting += [(group, (*lasts, i == last)) for i, group in reversed(list(enumerate(groups)))]
    return tuple(records)


def _grouped(flat: Flat, scopes: list[int]) -> dict[int, list[int]]:
    groups: dict[int, list[int]] = {}
    for scope in scopes:
        groups.setdefault(int(flat.scope_template[scope]), []).append(scope)
    return groups


def _totals(flat: Flat) -> tuple[list[int], list[int]]:
    """Return for each scope its own part instances, and those of all scopes at or below it."""
    own: list[int] = np.diff(flat.scope_inst).tolist()
    total = list(own)
    parents: list[int] = flat.scope_parent.tolist()
    for scope in range(len(parents) - 1, 0, -1):
        total[parents[scope]] += total[scope]
    return own, total
