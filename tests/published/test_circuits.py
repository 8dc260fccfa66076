"""Published depths and counts of the circuits that the circuitgraph package carries (its data files alone).

Most of its files were rewritten by a synthesis step: depths and counts are checked for those that still agree
with the publications.
"""

from importlib.util import find_spec
from pathlib import Path

import networkx
import pytest

import tardigate

UNIT = "family UNIT { default ns { tpd 1; } }"


def circuit(name: str, parts: str = UNIT) -> tardigate.Design:
    found = find_spec("circuitgraph")
    assert found is not None
    assert found.origin is not None
    text = Path(found.origin).with_name("netlists").joinpath(f"{name}.v").read_text()
    return tardigate.read_text(text, parts=parts)


def ports(design: tardigate.Design) -> tuple[int, int]:
    ways = [port.way.name for port in design.loaded.flat.ports]
    return ways.count("INPUT"), ways.count("OUTPUT")


@pytest.mark.parametrize(
    ("name", "inputs", "outputs", "depth"), [("c17", 5, 2, 3), ("c499", 41, 32, 11), ("c1355", 41, 32, 24)]
)
def test_depth(name: str, inputs: int, outputs: int, depth: int) -> None:
    """Published ISCAS'85 tables, every gate counting 1. Recomputed."""
    design = circuit(name)
    assert ports(design) == (inputs, outputs)
    assert design.settle().outputs()[0].settles_ns == depth
    trail = design.slowest()[0]
    assert (trail.total_ns, len(trail.hops)) == (depth, depth)


def paths(design: tardigate.Design) -> int:
    """Count the ways from inputs to outputs, gate pin by gate pin, edges not told apart."""
    steps = {
        (tail, head, hop["instance"], hop["from_pin"])
        for (tail, _), (head, _), hop in design.networkx().edges(data=True)
    }
    graph = networkx.MultiDiGraph((tail, head) for tail, head, *_ in steps)
    ways = {port.name: 1 for port in design.loaded.flat.ports if port.way.name == "INPUT"}
    for net in networkx.topological_sort(graph):
        ways.setdefault(net, sum(ways[tail] for tail, _ in graph.in_edges(net)))
    return sum(ways[port.name] for port in design.loaded.flat.ports if port.way.name == "OUTPUT")


@pytest.mark.parametrize(
    ("name", "count"), [("c17", 11), ("c432", 83_926), ("c499", 9_440), ("c880", 8_642), ("c1355", 4_173_216)]
)
def test_paths_from_inputs_to_outputs(name: str, count: int) -> None:
    """Path delay test literature, from memory, e.g. Pomeranz and Reddy, IEEE TCAD 13(2), 1994. Recomputed."""
    assert paths(circuit(name)) == count


def test_a_multiplier_with_too_many_paths_to_list() -> None:
    """Gharaybeh, Bushnell, Agrawal: c6288 has about 10^20 path delay faults, two a path.

    The file is a rewritten c6288 with about as many.
    """
    design = circuit("c6288")
    assert 1e20 < 2 * paths(design) < 4e20
    trails = design.slowest(20)
    assert {trail.total_ns for trail in trails} == {design.settle().outputs()[0].settles_ns}


def test_s27() -> None:
    """ISCAS'89 tables: 4 inputs (and a clock), 1 output, 3 flip-flops."""
    register = (
        "part ff { inputs CK, D; output Q; register posedge CK { Q = D; } times ns { tpd CK => Q 1; } }"
    )
    design = circuit("s27", f"family UNIT {{ {register} default ns {{ tpd 1; }} }}")
    assert ports(design) == (4 + 1, 1)
    assert len(design.settle().register_pins()) == 3
