"""Every circuit file of the circuitgraph package (its data alone) against networkx.

The twin reads these files with a few patterns of its own (they hold nothing but gates, register cells and
assignments without hierarchy), has the figures of `circuits.parts` written out, and lets networkx find the
ways: Dijkstra's for stirs, Goldberg and Radzik's with negative lengths for settles. It shares no line with
the program.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from heapq import nlargest
from importlib.util import find_spec
from itertools import pairwise
from math import inf
from pathlib import Path
from typing import Any

import networkx
import pytest

from tardigate.graph.model import Graph
from tardigate.netlist.flat import CONSTANTS
from tardigate.pipeline import Loaded, Request, graph_of, load, times_of, trails_of

Node = str
"""`net rise` or `net fall`: one text each, whose hash is reckoned once."""

Way = tuple[str, str, float, float]

FAMILY = str(Path(__file__).parents[1] / "data" / "circuits.parts")
SMALL = 100_000
"""Bytes of a file up to which the twin lists the ten best trails too."""

TRAILS = 10
OPPOSITE = {"rise": "fall", "fall": "rise"}
STATEMENT = re.compile(r"\s*(\w+)\s*([^;]*);")
WORD = re.compile(r"[\w$\[\]]+")
PIN = re.compile(r"\.(\w+)\s*\(\s*([\w$]+)\s*\)")

# What circuits.parts says: for each kind, whether it inverts (None: both ways), and (latest, earliest) in ns
# to a rising and to a falling output.
GATES: dict[str, tuple[bool | None, tuple[float, float], tuple[float, float]]] = {
    "nand": (True, (3, 1), (2, 1)),
    "nor": (True, (4, 1), (1.5, 0.5)),
    "not": (True, (1.5, 0.5), (1.5, 0.5)),
    "and": (False, (3.5, 1), (3.5, 1)),
    "or": (False, (4, 1), (4, 1)),
    "buf": (False, (4, 1), (4, 1)),
    "xor": (None, (4, 1), (4, 1)),
}
CLOCK_TO_OUTPUT = (6, 2)


def files() -> list[Path]:
    found = find_spec("circuitgraph")
    assert found is not None
    assert found.origin is not None
    return sorted(Path(found.origin).with_name("netlists").glob("*.v"), key=lambda file: file.stat().st_size)


def ways_through(kind: str) -> Iterator[Way]:
    """Yield edge in, edge out, latest and earliest delay of a kind of gate."""
    inverts, rise, fall = GATES[kind]
    for out, (late, early) in (("rise", rise), ("fall", fall)):
        if inverts is not True:
            yield out, out, late, early
        if inverts is not False:
            yield OPPOSITE[out], out, late, early


class Twin:
    """A circuit file as a networkx multigraph of nets by edge; a clock pin is called `register.pin`."""

    def __init__(self, text: str) -> None:
        self.graph: Any = networkx.MultiDiGraph()
        self.nodes: dict[str, dict[str, Node]] = {}
        self.sources: set[Node] = set()
        self.sinks: set[Node] = set()
        self.ways = {kind: tuple(ways_through(kind)) for kind in GATES}
        text = re.sub(r"//[^\n]*", "", text).replace("\\", "")  # escaped names: `\a[0]` and the like
        for keyword, rest in STATEMENT.findall(text[: text.index("endmodule")]):
            self.read(keyword, rest)
        self.graph.add_nodes_from(self.sources | self.sinks)

    def read(self, keyword: str, rest: str) -> None:
        if keyword in GATES:
            _, out, *ins = WORD.findall(rest)
            for net in ins:
                self.join(net, out, self.ways[keyword])
        elif keyword == "assign":
            self.read_assignment(*(side.strip() for side in rest.split("=")))
        elif keyword in {"input", "output"}:
            for net in WORD.findall(rest):
                (self.sources if keyword == "input" else self.sinks).update(self.at(net).values())
        elif keyword in {"ff", "fflopd"}:
            pins = dict(PIN.findall(rest))
            self.read_register(rest.split()[0].split("(")[0], pins)
        else:
            assert keyword in {"module", "wire"}

    def read_register(self, name: str, pins: dict[str, str]) -> None:
        late, early = CLOCK_TO_OUTPUT
        clock = name + (".CK" if "CK" in pins else ".clk")
        self.join(clock, pins["Q"], (("rise", "rise", late, early), ("rise", "fall", late, early)))
        self.sources.add(self.at(clock)["rise"])
        self.sinks.update(self.at(pins["D"]).values())

    def read_assignment(self, left: str, right: str) -> None:
        """An assignment is a constant, a wire, or an `or` of inverted nets: three operators by default."""
        copy = (("rise", "rise", 0, 0), ("fall", "fall", 0, 0))
        if "'" in right:
            return
        if "|" not in right:
            self.join(right, left, copy)
            return
        inverter = (("rise", "fall", 4, 1), ("fall", "rise", 4, 1))
        assert re.fullmatch(r"~\w+ \| ~\w+", right)
        for net in WORD.findall(right):
            self.join(net, f"~{net} {left}", inverter)
            self.join(f"~{net} {left}", left, self.ways["or"])

    def at(self, net: str) -> dict[str, Node]:
        """Return the two nodes of a net."""
        if net not in self.nodes:
            self.nodes[net] = {edge: f"{net} {edge}" for edge in OPPOSITE}
        return self.nodes[net]

    def join(self, tail: str, head: str, ways: tuple[Way, ...]) -> None:
        tails, heads = self.at(tail), self.at(head)
        for edge_in, edge_out, late, early in ways:
            self.graph.add_edge(tails[edge_in], heads[edge_out], late=-late, early=early)

    def extremes(self) -> tuple[dict[Node, float], dict[Node, float]]:
        """Return when each node settles and stirs, in ns."""
        self.graph.add_edges_from(("start", source, {"late": 0, "early": 0}) for source in self.sources)
        _, lengths = networkx.goldberg_radzik(self.graph, "start", "late")
        shortest = networkx.single_source_dijkstra_path_length(self.graph, "start", weight="early")
        self.graph.remove_node("start")
        return {node: -length for node, length in lengths.items()}, shortest

    def best_totals(self, count: int) -> tuple[list[float], list[float]]:
        """Return the totals of the `count` slowest and fastest trails: the best of each node, in order."""
        slow: dict[Node, list[float]] = {}
        fast: dict[Node, list[float]] = {}
        for node in networkx.topological_sort(self.graph):
            slow[node] = [0.0] if node in self.sources else []
            fast[node] = [-0.0] if node in self.sources else []
            for tail, _, figures in self.graph.in_edges(node, data=True):
                slow[node] += [total - figures["late"] for total in slow[tail]]
                fast[node] += [total - figures["early"] for total in fast[tail]]
            slow[node] = nlargest(count, slow[node])
            fast[node] = nlargest(count, fast[node])
        slowest = nlargest(count, [total for node in self.sinks for total in slow[node]])
        return slowest, [-total for total in nlargest(count, [t for n in self.sinks for t in fast[n]])]


def name_of(design: Loaded, graph: Graph, point: int) -> str:
    """Return the twin's name of a point: of a net, or of a register's clock pin."""
    if point < graph.nets:
        return design.names.net(point)
    instance = int(graph.clock_pin_instance[point - graph.nets])
    kind = design.flat.kinds[design.flat.inst_kind[instance]]
    return f"{design.names.instance(instance)}.{kind.pins[graph.clock_pin_pin[point - graph.nets]]}"


def test_all_circuits_are_there() -> None:
    assert len(files()) == 62


@pytest.mark.parametrize("file", files(), ids=lambda file: file.stem)
def test_a_circuit_settles_and_stirs_as_networkx_says(file: Path) -> None:
    design = load(Request((str(file),), (FAMILY,)))
    graph = graph_of(design)
    twin = Twin(file.read_text())
    settles, stirs = twin.extremes()
    times = times_of(graph, "span")
    names = [name_of(design, graph, point) for point in range(CONSTANTS, graph.vertices // 2)]
    assert len(set(names)) == len(names)
    assert {net for net in twin.nodes if not net.startswith("~")} <= set(names)
    for number, name in enumerate(names, CONSTANTS):
        if name.startswith("assign:"):  # between operators: nameless in the source
            continue
        for edge, word in enumerate(OPPOSITE):
            found = times.settles[2 * number + edge] / 1e6, times.stirs[2 * number + edge] / 1e6
            assert found == (settles.get(f"{name} {word}", -inf), stirs.get(f"{name} {word}", inf)), name
    slowest = trails_of(design, graph, "span", TRAILS)  # which audits them
    assert slowest[0].total / 1e6 == max(settles.get(sink, -inf) for sink in twin.sinks)
    assert all(before.total >= after.total for before, after in pairwise(slowest))
    if file.stat().st_size < SMALL:
        fastest = trails_of(design, graph, "span", TRAILS, slow=False)
        totals = [[trail.total / 1e6 for trail in trails] for trails in (slowest, fastest)]
        assert totals == list(twin.best_totals(TRAILS))
