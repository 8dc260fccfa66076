"""Names to vertices: what a user calls a port, net, part instance or pin, found in the design.

Takes names, in which `*` stands for any text, gives vertices where trails may begin or end. A name of
several bits (`bus`) means all of them. Refuses a name that nothing has (U104).
"""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator, Sequence
from itertools import islice

import numpy as np

from tardigate.analysis.select import Ints, both_edges, clock_vertices, clock_vertices_on, sink_nets
from tardigate.graph.model import Graph
from tardigate.netlist.flat import CONSTANTS, Flat
from tardigate.netlist.names import Names, positions
from tardigate.parts.kind import Way
from tardigate.source.arrays import distinct
from tardigate.source.diagnostic import Diagnostic, did_you_mean
from tardigate.source.faults import InputRefusedError

Fits = Callable[[str], object]

MOST_NEIGHBOURS = 20_000
"""Names among which the nearest to a mistyped one is looked for."""


class Picker:
    """Finds the vertices of names in one design."""

    def __init__(self, flat: Flat, names: Names, graph: Graph) -> None:
        self._flat, self._names, self._graph = flat, names, graph

    def sources(self, names: tuple[str, ...]) -> Ints | None:
        """Return vertices where trails may begin, ascending; None for no names.

        A net stands for itself and for the register clock pins on it, a port or a pin for its net, but a
        register's clock pin for itself; a register for its clock pins, another part instance for what it
        drives. Raises InputRefusedError (U104).
        """
        return self._vertices(names, self._from_instance, self._from_pin, self._from_net)

    def sinks(self, names: tuple[str, ...]) -> Ints | None:
        """Return vertices where trails may end, ascending; None for no names.

        A port or a pin stands for its net, a register for its data and control pins, another part instance
        for what it drives. Raises InputRefusedError (U104).
        """
        return self._vertices(names, self._to_instance, self._net_of_pin, _edges_of)

    def _vertices(
        self,
        names: tuple[str, ...],
        of_instance: Callable[[int], Ints],
        of_pin: Callable[[int, int], Ints],
        of_net: Callable[[int], Ints],
    ) -> Ints | None:
        if not names:
            return None
        found = [both_edges([])]
        faults = []
        for name in names:
            # A name is one thing only (IEEE 1364-2005 clause 4.11); one with `*` means ports and instances,
            # or else pins, or else nets: `alu.*` is what is in there, not what comes in from outside.
            of_name = [of_net(net) for net in self._ports(name)]
            if "*" in name or not of_name:
                pins = list(self._pins(name))
                of_name += [of_instance(instance) for instance, pin in pins if pin is None]
                of_name = of_name or [of_pin(instance, pin) for instance, pin in pins if pin is not None]
            of_name = of_name or [of_net(net) for net in self._nets(name)]
            if not of_name:
                faults.append(self._unknown(name))
            found += of_name
        if faults:
            raise InputRefusedError(tuple(faults))
        vertices = distinct(np.concatenate(found))
        return vertices[vertices >= 2 * CONSTANTS]

    def _ports(self, name: str) -> list[int]:
        fits = _fits(name)
        return [port.net for port in self._flat.ports if fits(port.name)]

    def _scopes(self, name: str) -> Iterator[tuple[int, str]]:
        """Yield the scopes whose path may begin the name, with their path."""
        fixed = name.partition("*")[0]
        for scope in range(len(self._flat.scope_name)):
            path = self._names.scope(scope)
            if fixed.startswith(path) or ("*" in name and path.startswith(fixed)):
                yield scope, path

    def _nets(self, name: str) -> Iterator[int]:
        flat, fits = self._flat, _fits(name)
        for scope, path in self._scopes(name):
            template = flat.templates[flat.scope_template[scope]]
            for local in _those(template.net_names, path, name, fits):
                if local >= CONSTANTS:
                    yield from self._stamped(scope, local)

    def _stamped(self, scope: int, local: int) -> list[int]:
        """Return the flat net that a net of a scope became; none for a net on nothing at all."""
        flat = self._flat
        while True:
            template = flat.templates[flat.scope_template[scope]]
            pin = np.flatnonzero(template.pin_net == local)[:1]
            if len(pin):
                return [int(flat.pin_net[flat.pin_start[flat.scope_inst[scope]] + pin[0]])]
            names: list[int] = np.flatnonzero(flat.net_raw == flat.scope_net[scope] + local).tolist()
            passed_on = [] if names else self._passed_on(scope, local)
            if not passed_on:
                return names
            scope, local = passed_on[0]

    def _passed_on(self, scope: int, local: int) -> list[tuple[int, int]]:
        """Return the scopes right below, with the net there, that a net goes to."""
        flat = self._flat
        below = {flat.scope_name[at]: int(at) for at in np.flatnonzero(flat.scope_parent == scope)}
        found = []
        for child in flat.templates[flat.scope_template[scope]].children:
            nets = [net for port in flat.templates[child.template].ports for net in port.nets]
            found += [(below[child.name], nets[bit]) for bit in np.flatnonzero(child.joins == local).tolist()]
        return found

    def _pins(self, name: str) -> Iterator[tuple[int, int | None]]:
        """Yield instances that have the name, with None, and pins that have it."""
        flat, fits = self._flat, _fits(name)
        whole, _, pin_name = name.rpartition(".")
        owner_fits = _fits(whole)
        for scope, path in self._scopes(name):
            template = flat.templates[flat.scope_template[scope]]
            first = int(flat.scope_inst[scope])
            for local in _those(template.inst_names, path, name, fits):
                yield first + local, None
            if pin_name and (whole.startswith(path) or "*" in name):
                for local in _those(template.inst_names, path, whole, owner_fits):
                    yield from self._pins_of(first + local, pin_name)
            for local in self._unnamed(scope) if ":" in name else ():
                full = self._names.instance(first + local)
                if fits(full):
                    yield first + local, None
                elif pin_name and owner_fits(full):
                    yield from self._pins_of(first + local, pin_name)

    def _unnamed(self, scope: int) -> list[int]:
        names = self._flat.templates[self._flat.scope_template[scope]].inst_names
        return [local for local, name in enumerate(names) if not name]

    def _pins_of(self, instance: int, pin_name: str) -> Iterator[tuple[int, int]]:
        fits = _fits(pin_name)
        for pin, name in enumerate(self._flat.kinds[self._flat.inst_kind[instance]].pins):
            if fits(name):
                yield instance, pin

    def _from_instance(self, instance: int) -> Ints:
        clocked = clock_vertices(self._graph, [instance])
        return clocked if len(clocked) else self._driven(instance, self._from_net)

    def _to_instance(self, instance: int) -> Ints:
        nets = sink_nets(self._flat, [instance])
        return both_edges(nets) if len(nets) else self._driven(instance, _edges_of)

    def _driven(self, instance: int, of_net: Callable[[int], Ints]) -> Ints:
        kind = self._flat.kinds[self._flat.inst_kind[instance]]
        outputs = np.flatnonzero(kind.ways != Way.INPUT).tolist()
        return np.concatenate([both_edges([]), *(of_net(self._pin_net(instance, pin)) for pin in outputs)])

    def _from_pin(self, instance: int, pin: int) -> Ints:
        graph = self._graph
        points = np.flatnonzero((graph.clock_pin_instance == instance) & (graph.clock_pin_pin == pin))
        if len(points):
            return np.intersect1d(both_edges(points + graph.nets), graph.sources)
        return self._from_net(self._pin_net(instance, pin))

    def _from_net(self, net: int) -> Ints:
        return np.concatenate([_edges_of(net), clock_vertices_on(self._flat, self._graph, [net])])

    def _net_of_pin(self, instance: int, pin: int) -> Ints:
        return _edges_of(self._pin_net(instance, pin))

    def _pin_net(self, instance: int, pin: int) -> int:
        return int(self._flat.pin_net[self._flat.pin_start[instance] + pin])

    def _unknown(self, name: str) -> Diagnostic:
        if any(path == f"{name}." for _, path in self._scopes(f"{name}.")):
            hint: str | None = f"`{name}` is an instance of a module: `{name}.*` means all that is in it."
        else:
            hint = did_you_mean(name, list(islice(self._known(name), MOST_NEIGHBOURS)))
        return Diagnostic.of("U104", name=name, hint=hint)

    def _known(self, name: str) -> Iterator[str]:
        yield from (port.name for port in self._flat.ports)
        for scope, path in self._scopes(name):
            template = self._flat.templates[self._flat.scope_template[scope]]
            yield from (path + below for below in template.inst_names if below)
            yield from (path + below for below in template.net_names)


def _edges_of(net: int) -> Ints:
    return both_edges([net] if net >= CONSTANTS else [])


def _those(column: Sequence[str], path: str, name: str, fits: Fits) -> list[int]:
    """Return where a scope's column of names has a name; only one with `*` is tried against each."""
    if "*" not in name:
        return positions(column, name[len(path) :]) if name.startswith(path) else []
    return [at for at, below in enumerate(column) if below and fits(path + below)]


def _fits(name: str) -> Fits:
    """Return what says whether a name of the design is meant: the name itself, or one of its bits."""
    pattern = ".*".join(re.escape(piece) for piece in name.split("*"))
    return re.compile(rf"{pattern}(\[[^\]]*\])?", re.DOTALL).fullmatch
