"""The sweeps and the search against networkx and against plain listing, on a graph made another way.

The twin makes its multigraph part by part and pin by pin from the flat design: it shares nothing with
`tardigate.graph`.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable, Iterator
from typing import Any, NamedTuple

import networkx
import numpy as np
import pytest
from hypothesis import HealthCheck, assume, given, settings, strategies as st

from tardigate.analysis.audit import audit
from tardigate.analysis.model import GRADES, Grade, Trail
from tardigate.analysis.sweep import sweep
from tardigate.analysis.trails import fastest, slowest
from tardigate.graph.build import build
from tardigate.graph.model import Graph
from tardigate.netlist.flat import CONSTANTS, Flat
from tardigate.parts.kind import Kind, Way

RandomCircuit = Callable[[int], st.SearchStrategy[Flat]]
Node = tuple[object, int]
MOST_TRAILS = 3000

calm = settings(
    max_examples=120,
    deadline=None,
    derandomize=True,
    suppress_health_check=[HealthCheck.too_slow, HealthCheck.filter_too_much, HealthCheck.data_too_large],
)


class Listed(NamedTuple):
    """A trail as the twin sees it: hops are (part, row of its kind)."""

    source: Node
    sink: Node
    hops: tuple[tuple[int, int], ...]
    total: float


def _rows(kind: Kind, grade: Grade) -> Iterator[tuple[int, int, int, int, bool, dict[str, float]]]:
    late, early = {"span": (2, 0), "min": (0, 0), "typ": (1, 1), "max": (2, 2)}[grade]
    for hop in range(kind.hops):
        delay = np.nan_to_num(kind.delays[hop]).tolist()
        words = {"late": delay[late], "early": delay[early], "minus_late": -delay[late]}
        ends = (kind.hop_from[hop], kind.from_edge[hop], kind.hop_to[hop], kind.to_edge[hop])
        pin_in, from_edge, pin_out, to_edge = map(int, ends)
        yield pin_in, from_edge, pin_out, to_edge, bool(kind.launches[hop]), words


class Twin:
    """The multigraph of a flat design: nodes (net or clock pin, edge), an edge a hop, keys (part, row)."""

    def __init__(self, flat: Flat, grade: Grade) -> None:
        self.graph: Any = networkx.MultiDiGraph()
        self.sources: set[Node] = set()
        sinks: set[object] = set()
        rows = [list(_rows(kind, grade)) for kind in flat.kinds]
        begin, pin_net = flat.pin_start.tolist(), flat.pin_net.tolist()
        for part, number in enumerate(flat.inst_kind.tolist()):
            nets = pin_net[begin[part] : begin[part + 1]]
            sinks |= {nets[pin] for pin in flat.kinds[number].sinks}
            for row, (pin_in, from_edge, pin_out, to_edge, launches, words) in enumerate(rows[number]):
                if nets[pin_in] < CONSTANTS or nets[pin_out] < CONSTANTS:
                    continue
                tail = (("clock pin", part, pin_in) if launches else nets[pin_in], from_edge)
                self.sources |= {tail} if launches else set()
                self.graph.add_edge(tail, (nets[pin_out], to_edge), (part, row), **words)
        for port in flat.ports:
            if port.way != Way.OUTPUT:
                self.sources |= {(port.net, 0), (port.net, 1)}
            if port.way != Way.INPUT:
                sinks.add(port.net)
        self.sinks: set[Node] = {
            (net, edge) for net in sinks if net not in (-1, 0, 1, 2, 3) for edge in (0, 1)
        }
        self.graph.add_nodes_from(self.sources | self.sinks)

    def extremes(self, sources: set[Node]) -> tuple[dict[Node, float], dict[Node, float]]:
        """Return the longest and the shortest way to each node that is reached, by Bellman and Ford."""
        graph = self.graph.copy()
        for node in sources:
            graph.add_edge("start", node, late=0.0, early=0.0, minus_late=-0.0)
        graph.add_node("start")
        minus = networkx.single_source_bellman_ford_path_length(graph, "start", weight="minus_late")
        shortest = networkx.single_source_dijkstra_path_length(graph, "start", weight="early")
        longest = {node: -length for node, length in minus.items() if node != "start"}
        return longest, {node: length for node, length in shortest.items() if node != "start"}

    def every_trail(self, weight: str, sources: set[Node], sinks: set[Node]) -> Iterator[Listed]:
        """Yield every trail there is."""
        for source in sorted(sources & set(self.graph), key=repr):
            pending: list[tuple[Node, tuple[tuple[int, int], ...], float]] = [(source, (), 0.0)]
            while pending:
                node, hops, total = pending.pop()
                if node in sinks:
                    yield Listed(source, node, hops, total)
                for _, head, key, words in self.graph.out_edges(node, keys=True, data=True):
                    pending.append((head, (*hops, key), total + words[weight]))


def node_of(graph: Graph, vertex: int) -> Node:
    point, edge = divmod(vertex, 2)
    pin = point - graph.nets
    if pin < 0:
        return point, edge
    return ("clock pin", int(graph.clock_pin_instance[pin]), int(graph.clock_pin_pin[pin])), edge


def as_listed(graph: Graph, trail: Trail) -> Listed:
    hops = tuple(
        (int(graph.instance[hop]), int(graph.row_hop[graph.delay_row[hop]])) for hop in trail.hops.tolist()
    )
    return Listed(node_of(graph, trail.source), node_of(graph, trail.sink), hops, trail.total)


@calm
@given(data=st.data())
def test_settles_and_stirs_are_the_longest_and_shortest_ways(
    random_circuit: RandomCircuit, data: Any
) -> None:
    flat, grade = data.draw(random_circuit(6)), data.draw(st.sampled_from(GRADES))
    graph, twin = build(flat), Twin(flat, grade)
    assert {node_of(graph, vertex) for vertex in graph.sources.tolist()} == twin.sources
    assert {(net, edge) for net in graph.sinks.tolist() for edge in (0, 1)} == twin.sinks
    longest, shortest = twin.extremes(twin.sources)
    times = sweep(graph, grade)
    for vertex in range(graph.vertices):
        node = node_of(graph, vertex)
        assert times.settles[vertex] == longest.get(node, -np.inf)
        assert times.stirs[vertex] == shortest.get(node, np.inf)


@calm
@given(data=st.data())
def test_the_search_lists_every_trail_once_in_exact_order(random_circuit: RandomCircuit, data: Any) -> None:
    flat, grade = data.draw(random_circuit(4)), data.draw(st.sampled_from(GRADES))
    graph, twin = build(flat), Twin(flat, grade)
    for weight, search in (("late", slowest), ("early", fastest)):
        every = list(twin.every_trail(weight, twin.sources, twin.sinks))
        assume(len(every) <= MOST_TRAILS)
        found = search(graph, grade, MOST_TRAILS)
        assert Counter(as_listed(graph, trail) for trail in found) == Counter(every)
        totals = sorted((trail.total for trail in every), reverse=weight == "late")
        assert [trail.total for trail in found] == totals
        some = data.draw(st.integers(0, len(every)))
        few = search(graph, grade, some, times=sweep(graph, grade))
        assert [as_listed(graph, trail) for trail in few] == [as_listed(graph, t) for t in found[:some]]
        audit(flat, graph, found, grade, weight == "late", sweep(graph, grade), whole=True)


@calm
@given(data=st.data())
def test_chosen_sources_and_sinks_bound_the_search(random_circuit: RandomCircuit, data: Any) -> None:
    flat = data.draw(random_circuit(4))
    graph, twin = build(flat), Twin(flat, "span")
    vertices = st.lists(st.integers(2 * CONSTANTS, graph.vertices - 1), min_size=1, max_size=6)
    sources, sinks = data.draw(vertices), data.draw(vertices)
    from_nodes = {node_of(graph, vertex) for vertex in sources}
    to_nodes = {node_of(graph, vertex) for vertex in sinks}
    twin.graph.add_nodes_from(from_nodes)
    for weight, search in (("late", slowest), ("early", fastest)):
        every = list(twin.every_trail(weight, from_nodes, to_nodes))
        assume(len(every) <= MOST_TRAILS)
        found = search(graph, "span", MOST_TRAILS, np.array(sources), np.array(sinks))
        assert Counter(as_listed(graph, trail) for trail in found) == Counter(every)
        times = sweep(graph, "span", np.array(sources))
        audit(flat, graph, found, "span", weight == "late", times)


@pytest.mark.parametrize("seed", range(3))
def test_a_wide_and_deep_circuit_agrees_too(
    make_kind: Callable[..., Any], make_flat: Callable[..., Flat], seed: int
) -> None:
    rng = np.random.default_rng(seed)
    senses = "+-x"
    kinds = [
        make_kind(
            "gate", "A B > Y", *((pin, senses[i], "Y", tuple(sorted(rng.integers(1, 99, 3)))) for pin in "AB")
        )
        for i in range(3)
    ]
    names = [f"i{i}" for i in range(40)]
    parts = []
    for number in range(2000):
        window = int(rng.choice([10, 400]))
        taken = [names[-1 - int(back)] for back in rng.integers(0, min(window, len(names)), 2)]
        parts.append((f"u{number}", kinds[rng.integers(3)], f"{taken[0]} {taken[1]} n{number}"))
        names.append(f"n{number}")
    order = rng.permutation(len(parts))
    flat = make_flat(f"{' '.join(names[:40])} > {' '.join(names[-9:])}", *(parts[i] for i in order))
    graph, twin = build(flat), Twin(flat, "span")
    times = sweep(graph)
    longest, shortest = twin.extremes(twin.sources)
    for vertex in range(2 * CONSTANTS, graph.vertices):
        assert times.settles[vertex] == longest.get(node_of(graph, vertex), -np.inf)
        assert times.stirs[vertex] == shortest.get(node_of(graph, vertex), np.inf)
    (first,) = slowest(graph)
    assert first.total == max(longest[node] for node in twin.sinks if node in longest)
    audit(flat, graph, slowest(graph, count=500), "span", late=True, times=times, whole=True)
