"""Times and trails as canonical text, the language of tests.

Takes numbers, gives lines; times in fs, `-` for never. Not for users.
"""

from __future__ import annotations

import numpy as np

from tardigate.analysis.model import Times, Trail
from tardigate.graph.dump import vertex_text
from tardigate.graph.model import Graph


def dump_times(graph: Graph, times: Times) -> str:
    """Return a line for each vertex that changes: `4r stirs 10 settles 30`."""
    lines = []
    for vertex in np.flatnonzero(times.settles > -np.inf).tolist():
        stirs, settles = times.stirs[vertex], times.settles[vertex]
        lines.append(f"{vertex_text(graph, vertex)} stirs {stirs:.0f} settles {settles:.0f}")
    return "\n".join(lines)


def dump_trail(graph: Graph, trail: Trail) -> str:
    """Return a trail in one line: `4r -0:10-> 5f -1:20-> 6r = 30`, hops as instance and delay."""
    words = [vertex_text(graph, trail.source)]
    for hop, delay in zip(trail.hops.tolist(), trail.delays.tolist(), strict=True):
        words.append(f"-{graph.instance[hop]}:{delay:.0f}-> {vertex_text(graph, int(graph.head[hop]))}")
    return f"{' '.join(words)} = {trail.total:.0f}"
