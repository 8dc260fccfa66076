"""A graph as canonical text, the language of tests.

Takes a graph, gives lines of numbers. Not for users.
"""

from __future__ import annotations

from itertools import pairwise

from tardigate.graph.model import Graph


def vertex_text(graph: Graph, vertex: int) -> str:
    """Return `5r` for the rise of net 5, `@2.1f` for the fall of pin 1 of register 2."""
    point, edge = divmod(vertex, 2)
    pin = point - graph.nets
    if pin < 0:
        return f"{point}{'rf'[edge]}"
    return f"@{graph.clock_pin_instance[pin]}.{graph.clock_pin_pin[pin]}{'rf'[edge]}"


def dump(graph: Graph) -> str:
    """Return sources, then each level's hops as `tail > head instance kind.hop`, then sinks."""
    lines = ["sources " + " ".join(vertex_text(graph, vertex) for vertex in graph.sources.tolist())]
    for level, (first, last) in enumerate(pairwise(graph.level_start.tolist()), 1):
        lines.append(f"level {level}")
        for hop in range(int(graph.head_start[first]), int(graph.head_start[last])):
            ends = (vertex_text(graph, int(end[hop])) for end in (graph.tail, graph.head))
            row = graph.delay_row[hop]
            lines.append(
                f"{' > '.join(ends)} {graph.instance[hop]} {graph.row_kind[row]}.{graph.row_hop[row]}"
            )
    lines.append("sinks " + " ".join(map(str, graph.sinks.tolist())))
    return "\n".join(lines)
