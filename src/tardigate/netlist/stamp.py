"""Stamps templates into the flat design.

Takes templates, the top's number and the kinds, gives `Flat`. Each module was elaborated once; here are only
offsets. Nets that are joined through ports become one. Iterative.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.flat import CONSTANTS, OPEN, Flat, Port
from tardigate.netlist.template import Template
from tardigate.parts.kind import Kind
from tardigate.source.arrays import distinct

MOST_SCOPES = 1 << 22
MOST_NETS = 1 << 25
"""Nets, and pins, of the flat design before joining; some 30 bytes each."""


class TooLargeError(Exception):
    """The flat design would pass what its columns can count."""


@dataclass(slots=True)
class _Scopes:
    """The scopes in stamp order."""

    template: list[int] = field(default_factory=list)
    parent: list[int] = field(default_factory=list)
    child: list[int] = field(default_factory=list)
    name: list[str] = field(default_factory=list)


def stamp(templates: Sequence[Template], top: int, kinds: Sequence[Kind]) -> Flat:
    """Make the flat design. Raises TooLargeError."""
    _check_size(templates, top)
    scopes = _scopes(templates, top)
    of_scope = np.array(scopes.template, np.int32)
    sizes = np.array([t.nets for t in templates], np.int64)[of_scope]
    counts = np.array([len(t.kind) for t in templates], np.int64)[of_scope]
    pins = np.array([len(t.pin_net) for t in templates], np.int64)[of_scope]
    net_base, inst_base, pin_base = (np.concatenate(([0], np.cumsum(c))) for c in (sizes, counts, pins))
    number, net_raw = _joined_nets(templates, scopes, net_base)
    inst_kind = np.empty(inst_base[-1], np.int32)
    pin_start = np.empty(inst_base[-1] + 1, np.int64)
    pin_start[-1] = pin_base[-1]
    pin_net = np.empty(pin_base[-1], np.int32)
    for at in distinct(of_scope).tolist():
        template = templates[at]
        those = np.flatnonzero(of_scope == at)
        if not len(template.kind):
            continue
        if len(those) == 1:  # no copying through tables of places
            scope = int(those[0])
            own_rows = slice(int(inst_base[scope]), int(inst_base[scope + 1]))
            inst_kind[own_rows] = template.kind
            pin_start[own_rows] = pin_base[scope] + template.pin_start[:-1]
            own = number[net_base[scope] : net_base[scope + 1]]
            pin_net[int(pin_base[scope]) : int(pin_base[scope + 1])] = np.where(
                template.pin_net == OPEN, OPEN, own[np.maximum(template.pin_net, 0)]
            )
            continue
        rows = inst_base[those][:, None] + np.arange(len(template.kind))
        inst_kind[rows] = template.kind
        pin_start[rows] = pin_base[those][:, None] + template.pin_start[:-1]
        cells = pin_base[those][:, None] + np.arange(len(template.pin_net))
        raw = net_base[those][:, None] + np.maximum(template.pin_net, 0)
        pin_net[cells] = np.where(template.pin_net == OPEN, OPEN, number[raw])
    typed = _typed(templates, of_scope, net_base, number)
    return Flat(
        tuple(kinds), inst_kind, pin_start, pin_net, len(net_raw), _ports(templates[top], number),
        tuple(templates), of_scope, np.array(scopes.parent, np.int32), tuple(scopes.name), inst_base,
        net_base,
        net_raw, typed,
    )  # fmt: skip


def _check_size(templates: Sequence[Template], top: int) -> None:
    """Count the flat design's scopes, nets and pins, each template once. Raises TooLargeError."""
    total: dict[int, tuple[int, ...]] = {}
    stack = [(top, False)]
    while stack:
        at, ready = stack.pop()
        template = templates[at]
        below = Counter(child.template for child in template.children)
        if ready:
            rows: list[tuple[int, ...]] = [(1, template.nets, len(template.pin_net))]
            rows += [tuple(number * times for number in total[child]) for child, times in below.items()]
            sums = tuple(map(sum, zip(*rows, strict=True)))
            if sums[0] > MOST_SCOPES or max(sums[1:]) > MOST_NETS:
                raise TooLargeError
            total[at] = sums
        elif at not in total:
            stack.append((at, True))
            stack += [(child, False) for child in below if child not in total]


def _scopes(templates: Sequence[Template], top: int) -> _Scopes:
    """Return the scopes, parents before children, a scope's descendants right after it."""
    scopes = _Scopes()
    stack = [(top, -1, -1, "")]
    while stack:
        template, parent, child, name = stack.pop()
        number = len(scopes.template)
        scopes.template.append(template)
        scopes.parent.append(parent)
        scopes.child.append(child)
        scopes.name.append(name)
        below = templates[template].children
        stack += [
            (c.template, number, i, c.name)
            for i, c in zip(range(len(below) - 1, -1, -1), below[::-1], strict=True)
        ]
    return scopes


def _joined_nets(
    templates: Sequence[Template], scopes: _Scopes, net_base: NDArray[np.int64]
) -> tuple[NDArray[np.int32], NDArray[np.int64]]:
    """Return the net of each raw net, and of each net the raw one that names it.

    A child's port bit is the parent's net it is joined to: from the top down one assignment a scope. Where
    one net of a child is two ports, the parent's two nets are one: those pairs are put together at the end.
    """
    owner = np.arange(net_base[-1])
    constants = np.arange(CONSTANTS)
    pairs: list[tuple[int, int]] = []
    port_nets = [np.array([n for port in t.ports for n in port.nets], np.int64) for t in templates]
    doubled = [len(distinct(nets)) < len(nets) for nets in port_nets]
    for scope, (template, parent) in enumerate(zip(scopes.template, scopes.parent, strict=True)):
        base = net_base[scope]
        owner[base : base + CONSTANTS] = constants
        if parent < 0:
            continue
        joins = templates[scopes.template[parent]].children[scopes.child[scope]].joins
        joined = joins != OPEN
        inside = base + port_nets[template][joined]
        outside = owner[net_base[parent] + joins[joined]]
        owner[inside] = outside
        if doubled[template]:
            lost = owner[inside] != outside
            pairs += zip(owner[inside[lost]].tolist(), outside[lost].tolist(), strict=True)
    linked = _linked(templates, scopes, net_base, owner)
    if pairs or linked:
        owner = _united(owner, [*pairs, *linked], {mine for mine, _ in linked})
    own = owner == np.arange(len(owner))
    number = (np.cumsum(own) - 1).astype(np.int32)
    return number[owner], np.flatnonzero(own)


def _linked(
    templates: Sequence[Template], scopes: _Scopes, net_base: NDArray[np.int64], owner: NDArray[np.int64]
) -> list[tuple[int, int]]:
    """Return the pairs of nets that hierarchical names join across modules."""
    linking = [scope for scope, template in enumerate(scopes.template) if templates[template].links]
    if not linking:
        return []
    scope_of = {
        (parent, scopes.name[scope]): scope for scope, parent in enumerate(scopes.parent) if parent >= 0
    }
    pairs = []
    for scope in linking:
        for link in templates[scopes.template[scope]].links:
            inside = scope
            for name in link.path:
                inside = scope_of[inside, name]
            pairs.append((int(owner[net_base[scope] + link.net]), int(owner[net_base[inside] + link.inside])))
    return pairs


def _united(owner: NDArray[np.int64], pairs: list[tuple[int, int]], aliases: set[int]) -> NDArray[np.int64]:
    """Put nets together pair by pair, the lowest number that is no alias naming each set."""
    leader: dict[int, int] = {}

    def find(net: int) -> int:
        while (above := leader.get(net, net)) != net:
            leader[net] = leader.get(above, above)
            net = above
        return net

    for one, other in pairs:
        low, high = sorted((find(one), find(other)), key=lambda net: (net in aliases, net))
        leader[high] = low
    moved = np.array(sorted(leader), np.int64)
    table = np.arange(len(owner))
    table[moved] = [find(int(net)) for net in moved]
    return table[owner]


def _typed(
    templates: Sequence[Template], of_scope: NDArray[np.int32], net_base: NDArray[np.int64],
    number: NDArray[np.int32],
) -> dict[str, NDArray[np.int32]]:  # fmt: skip
    """Return the flat nets of the local nets that templates list by type."""
    found: dict[str, list[NDArray[np.int32]]] = {}
    for at, template in enumerate(templates):
        if template.typed:
            bases = net_base[:-1][of_scope == at][:, None]
            for word, nets in template.typed.items():
                found.setdefault(word, []).append(number[(bases + nets).reshape(-1)])
    return {word: distinct(np.concatenate(nets)).astype(np.int32) for word, nets in found.items()}


def _ports(top: Template, number: NDArray[np.int32]) -> tuple[Port, ...]:
    """Return the top's port bits, most significant first."""
    names = [name for port in top.ports for name in port.bits]
    ways = [port.way for port in top.ports for _ in port.bits]
    nets = number[[net for port in top.ports for net in port.nets]].tolist() if names else []
    return tuple(map(Port, names, ways, nets))
