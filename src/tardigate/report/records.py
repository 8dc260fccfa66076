"""The one place where names are joined to numbers.

Takes the flat design, its graph and what the analysis found, gives records that can be shown. Builds names
only for what is asked for. Does not compute any time but the running sum along a trail.
"""

from __future__ import annotations

import math
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from tardigate.analysis.model import Times, Trail
from tardigate.graph.model import Graph
from tardigate.netlist.flat import CONSTANTS, Flat
from tardigate.netlist.names import Names
from tardigate.parts.kind import Edge, Way
from tardigate.report.fold import fold
from tardigate.report.model import EndRecord, FoldRecord, HopRecord, SinkRecord, SinksRecord, TrailRecord
from tardigate.source.span import Span


class Records:
    """Makes records of one design."""

    def __init__(self, flat: Flat, names: Names, graph: Graph) -> None:
        self._flat, self._names, self._graph = flat, names, graph
        self._instances: dict[int, str] = {}
        self._places: dict[int, Span] = {}

    def outputs(self, times: Times, most: int | None) -> SinksRecord:
        """Record when the output ports settle, the slowest `most` of them (all for None)."""
        ports = [port for port in self._flat.ports if port.way != Way.INPUT]
        nets = np.array([port.net for port in ports], np.int64)
        order, count, rest = _slowest(times, nets, most)
        shown = tuple(_sink(ports[i].name, "output port", times, ports[i].net) for i in order)
        return SinksRecord(shown, count, rest)

    def register_pins(self, times: Times, most: int | None) -> SinksRecord:
        """Record when data and control pins of registers settle, the slowest `most` (all for None)."""
        instances, pins, nets = self._register_sinks
        order, count, rest = _slowest(times, nets, most)
        shown = tuple(
            _sink(self._pin(int(instances[i]), int(pins[i])), "register pin", times, int(nets[i]))
            for i in order
        )
        return SinksRecord(shown, count, rest)

    def net(self, name: str, times: Times, net: int) -> SinkRecord:
        """Record when a net settles, under a name."""
        return _sink(name, "net", times, net)

    def register_nets(self) -> NDArray[np.int64]:
        """Return the nets on data and control pins of registers, each once."""
        on_pin = np.zeros(self._flat.nets, np.bool_)
        on_pin[self._register_sinks[2]] = True
        return np.flatnonzero(on_pin)

    def trail(self, trail: Trail, most: int | None, places: bool) -> TrailRecord:
        """Record a trail with at most `most` of its hops told one by one (all for None)."""
        over = np.cumsum(trail.delays)
        told: list[HopRecord | FoldRecord] = []
        for first, stop, folded in fold(trail.delays, most):
            begins = float(over[first - 1]) if first else 0.0
            ends = float(over[stop - 1])
            if folded:
                told.append(FoldRecord(stop - first, ends - begins, begins, ends))
            else:
                told.append(
                    self._hop(int(trail.hops[first]), float(trail.delays[first]), begins, ends, places)
                )
        return TrailRecord(
            self._source(trail.source), self._sink(trail.sink), trail.total, len(trail.hops), tuple(told)
        )

    def _hop(self, hop: int, delay: float, begins: float, over: float, places: bool) -> HopRecord:
        graph = self._graph
        instance = int(graph.instance[hop])
        row = int(graph.delay_row[hop])
        kind = self._flat.kinds[int(graph.row_kind[row])]
        crossed = int(graph.row_hop[row])
        return HopRecord(
            self._instance(instance),
            kind.name,
            kind.pins[kind.hop_from[crossed]],
            Edge(int(kind.from_edge[crossed])),
            kind.pins[kind.hop_to[crossed]],
            Edge(int(kind.to_edge[crossed])),
            self._names.net(int(graph.head[hop]) // 2),
            delay,
            begins,
            over,
            self._place(instance) if places else None,
        )

    def _instance(self, instance: int) -> str:
        if instance not in self._instances:
            self._instances[instance] = self._names.instance(instance)
        return self._instances[instance]

    def _place(self, instance: int) -> Span:
        if instance not in self._places:
            self._places[instance] = self._names.place(instance)
        return self._places[instance]

    def _pin(self, instance: int, pin: int) -> str:
        return f"{self._instance(instance)}.{self._flat.kinds[self._flat.inst_kind[instance]].pins[pin]}"

    def _source(self, vertex: int) -> EndRecord:
        point, edge = vertex // 2, Edge(vertex % 2)
        beyond = point - self._graph.nets
        if beyond >= 0:
            instance = int(self._graph.clock_pin_instance[beyond])
            return EndRecord(self._pin(instance, int(self._graph.clock_pin_pin[beyond])), edge, "clock pin")
        port = self._port(point, Way.INPUT)
        if port is not None:
            return EndRecord(port, edge, "input port")
        return EndRecord(self._names.net(point), edge, "net")

    def _sink(self, vertex: int) -> EndRecord:
        net, edge = vertex // 2, Edge(vertex % 2)
        port = self._port(net, Way.OUTPUT)
        if port is not None:
            return EndRecord(port, edge, "output port")
        instances, pins, nets = self._register_sinks
        found = np.flatnonzero(nets == net)
        if len(found):
            return EndRecord(self._pin(int(instances[found[0]]), int(pins[found[0]])), edge, "register pin")
        return EndRecord(self._names.net(net), edge, "net")

    def _port(self, net: int, way: Way) -> str | None:
        """Return the first port bit of a way that is on a net."""
        ways = (way, Way.INOUT)
        return next((port.name for port in self._flat.ports if port.net == net and port.way in ways), None)

    @cached_property
    def _register_sinks(self) -> tuple[NDArray[np.int64], NDArray[np.int64], NDArray[np.int64]]:
        """Instances, pins and nets of the registers' data and control pins, in order of instance."""
        flat = self._flat
        found = []
        for number, kind in enumerate(flat.kinds):
            if not len(kind.sinks):
                continue
            instances = np.flatnonzero(flat.inst_kind == number)
            pins = np.tile(kind.sinks.astype(np.int64), len(instances))
            found.append((np.repeat(instances, len(kind.sinks)), pins))
        instances = np.concatenate([pair[0] for pair in found] or [np.empty(0, np.int64)])
        pins = np.concatenate([pair[1] for pair in found] or [np.empty(0, np.int64)])
        nets = flat.pin_net[flat.pin_start[instances] + pins].astype(np.int64)
        order = np.argsort(instances, kind="stable")
        order = order[nets[order] >= CONSTANTS]
        return instances[order], pins[order], nets[order]


def _slowest(times: Times, nets: NDArray[np.int64], most: int | None) -> tuple[list[int], int, float | None]:
    """Return the numbers of the slowest nets in order, how many nets there are, when the rest has settled."""
    settles = np.maximum(times.settles[2 * nets], times.settles[2 * nets + 1])
    order = np.argsort(-settles, kind="stable")
    kept = order if most is None else order[:most]
    rest = settles[order[len(kept) :]]
    return kept.tolist(), len(nets), _finite(float(rest[0])) if len(rest) else None


def _sink(name: str, what: str, times: Times, net: int) -> SinkRecord:
    rise, fall = 2 * net, 2 * net + 1
    return SinkRecord(
        name,
        what,
        (_finite(float(times.settles[rise])), _finite(float(times.settles[fall]))),
        (_finite(float(times.stirs[rise])), _finite(float(times.stirs[fall]))),
    )


def _finite(time: float) -> float | None:
    return time if math.isfinite(time) else None
