"""The graph for users, as a networkx multigraph with names and delays.

Takes the flat design, its graph and its names. Constants are left out, other nets are not, whether they
change or not.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from tardigate.graph.model import Graph
from tardigate.netlist.flat import CONSTANTS, Flat
from tardigate.netlist.names import Names
from tardigate.parts.units import FEMTOSECONDS
from tardigate.source.arrays import distinct

if TYPE_CHECKING:
    import networkx

EDGES = ("rise", "fall")


def to_networkx(flat: Flat, graph: Graph, names: Names) -> networkx.MultiDiGraph[Any]:
    """Return the graph as networkx.MultiDiGraph, one edge a hop.

    Nodes are `(net name, "rise" | "fall")`, with the attribute `net` (its number); a register clock pin is
    `(instance.pin, edge)` with `net` None. Edges have `delay_min_ns`, `delay_typ_ns`, `delay_max_ns` (None
    where nobody gave a number), `instance`, `kind`, `from_pin`, `to_pin`.
    """
    import networkx

    node = _nodes(flat, graph, names)
    result = networkx.MultiDiGraph()
    result.add_nodes_from((name, {"net": net}) for name, net in node.values())
    instance_names = {number: names.instance(number) for number in distinct(graph.instance).tolist()}
    edge_words = [_row_words(flat, graph, row) for row in range(len(graph.delays))]
    columns = graph.tail, graph.head, graph.delay_row, graph.instance
    for tail, head, row, instance in zip(*(column.tolist() for column in columns), strict=True):
        words = {"instance": instance_names[instance], **edge_words[row]}
        result.add_edge(node[tail][0], node[head][0], **words)
    return result


def _nodes(flat: Flat, graph: Graph, names: Names) -> dict[int, tuple[tuple[str, str], int | None]]:
    """Return vertex → node and net number."""
    found: dict[int, tuple[tuple[str, str], int | None]] = {}
    for net in range(CONSTANTS, flat.nets):
        name = names.net(net)
        found.update({2 * net + edge: ((name, word), net) for edge, word in enumerate(EDGES)})
    pins = zip(graph.clock_pin_instance.tolist(), graph.clock_pin_pin.tolist(), strict=True)
    for point, (instance, pin) in enumerate(pins, flat.nets):
        name = f"{names.instance(instance)}.{flat.kinds[flat.inst_kind[instance]].pins[pin]}"
        found.update({2 * point + edge: ((name, word), None) for edge, word in enumerate(EDGES)})
    return found


def _row_words(flat: Flat, graph: Graph, row: int) -> dict[str, object]:
    """Return the attributes that all hops of one row of delays share."""
    kind, hop = flat.kinds[graph.row_kind[row]], int(graph.row_hop[row])
    in_ns = [None if fs != fs else fs / FEMTOSECONDS["ns"] for fs in graph.delays[row].tolist()]
    return {
        **dict(zip(("delay_min_ns", "delay_typ_ns", "delay_max_ns"), in_ns, strict=True)),
        "kind": kind.name,
        "from_pin": kind.pins[kind.hop_from[hop]],
        "to_pin": kind.pins[kind.hop_to[hop]],
    }
