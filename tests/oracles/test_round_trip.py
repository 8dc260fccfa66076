"""The law of the flat text: read, written flat and read again, a design gives the same figures.

Over every circuit file of the circuitgraph package (its data alone) and over random designs: each net by its
name settles and stirs at the same times, the same trails come out, the same is told of the structure, and
writing what was read again gives the same text.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable
from importlib.util import find_spec
from pathlib import Path

import pytest
from hypothesis import given, settings, strategies as st

from tardigate.graph.model import Graph
from tardigate.netlist.flat import CONSTANTS
from tardigate.pipeline import (
    FLAT_ENCODING,
    Loaded,
    Request,
    flat_text_of,
    graph_of,
    load,
    times_of,
    trails_of,
)
from tardigate.source.faults import InputRefusedError
from tardigate.source.files import SourceFile

FAMILY = str(Path(__file__).parents[1] / "data" / "circuits.parts")
TRAILS = 20
BIG = 300_000
"""Bytes of a circuit file beyond which it is not written a second time."""

BY_SIZE = b"""family SIZES {
  operators ns {
    tpd "!"(2) 2.5:3:4; tpd "!"(3) 3:4:5; tpd "=="(2) 1.5:2:3; tpd "!="(2) 1:2:3.5; tpd "==" 2;
    tpd "&&"(3) 5; tpd "&&"(2) 6; tpd "||"(3) 4; tpd "reduce &"(3) 3:5:7; tpd "?:"(3) 2:3:4.5; tpd "copy" 0.5;
  }
  gates ns { tPLH nand(2) 1:2:3; tPHL nand(3) 2:3:5; tpd and(5) 9; }
}
"""
"""Delays that depend on the number of inputs, so that one lost on the way shows in a figure."""


def _point(design: Loaded, graph: Graph, point: int) -> str:
    """Return the name of a net or of a register's clock pin."""
    if point < graph.nets:
        return design.names.net(point)
    instance = int(graph.clock_pin_instance[point - graph.nets])
    kind = design.flat.kinds[design.flat.inst_kind[instance]]
    return f"{design.names.instance(instance)}.{kind.pins[graph.clock_pin_pin[point - graph.nets]]}"


class Figures:
    """What a design is compared by."""

    def __init__(self, design: Loaded) -> None:
        graph = graph_of(design)
        times = times_of(graph, "span")
        self.names = [_point(design, graph, point) for point in range(graph.vertices // 2)]
        rows = zip(times.settles.reshape(-1, 2).tolist(), times.stirs.reshape(-1, 2).tolist(), strict=True)
        self.times = dict(zip(self.names, rows, strict=True))
        self.trails = [self._trails(design, graph, slow) for slow in (True, False)]
        self.told = Counter(warning.code for warning in design.warnings if warning.code.startswith("N2"))
        self.ports = [(port.name, port.way) for port in design.flat.ports]
        self.nets = design.flat.nets - CONSTANTS

    def _trails(self, design: Loaded, graph: Graph, slow: bool) -> tuple[list[float], Counter[object]]:
        """Return the totals, and the trails but for those as long as the last, which may be others."""
        found = trails_of(design, graph, "span", TRAILS, slow)
        shown: Counter[object] = Counter()
        for trail in found:
            if trail.total != found[-1].total:
                points = [trail.source, *graph.head[trail.hops].tolist(), trail.sink]
                names = tuple(f"{self.names[point >> 1]} {point & 1}" for point in points)
                shown[(names, tuple(trail.delays.tolist()))] += 1
        return [trail.total for trail in found], shown


def _again(text: str, parts: tuple[str | SourceFile, ...]) -> Loaded:
    return load(Request((SourceFile("flat.v", text.encode(FLAT_ENCODING)),), parts))


def _check(design: Loaded, parts: tuple[str | SourceFile, ...], twice: bool = True) -> None:
    text = flat_text_of(design)
    again = _again(text, parts)
    assert _connections(again) == _connections(design), text[:4000]
    if _is_timed(design):
        assert vars(Figures(again)) == vars(Figures(design)), text[:4000]
    if twice:
        assert flat_text_of(again) == text


def _connections(design: Loaded) -> Counter[object]:
    """Return the kind and nets of each part instance: what figures come of, where loops keep them from it.

    The delay of a net is written as that of an assignment, with the same hops.
    """
    flat, names = design.flat, design.names
    nets = [names.net(net) for net in range(flat.nets)]
    pins, start = flat.pin_net.tolist(), flat.pin_start.tolist()
    hops = [repr(kind.delays.tolist()) for kind in flat.kinds]
    return Counter(
        (
            flat.kinds[kind].name.replace("wire", "assign"),
            hops[kind],
            *(nets[pin] if pin >= 0 else "" for pin in pins[first:last]),
        )
        for kind, first, last in zip(flat.inst_kind.tolist(), start, start[1:], strict=False)
    )


def _is_timed(design: Loaded) -> bool:
    """Tell whether there are figures: no combinational loop, no module that nobody describes."""
    try:
        graph_of(design)
    except InputRefusedError:
        return False
    return True


def _circuits() -> list[Path]:
    found = find_spec("circuitgraph")
    assert found is not None
    assert found.origin is not None
    return sorted(Path(found.origin).with_name("netlists").glob("*.v"), key=lambda file: file.stat().st_size)


@pytest.mark.parametrize("file", _circuits(), ids=lambda file: file.stem)
def test_a_circuit_written_flat_gives_the_same_figures(file: Path) -> None:
    _check(load(Request((str(file),), (FAMILY,))), (FAMILY,), file.stat().st_size < BIG)


CELLS = """
`timescale 1ns/10ps
primitive FLIP(y, a); output y; input a; table 0 : 1; 1 : 0; endtable endprimitive
primitive KEEP(q, c, d); output q; reg q; input c, d;
  table (01) 0 : ? : 0; (01) 1 : ? : 1; (0x) ? : ? : -; (?0) ? : ? : -; ? (??) : ? : -; endtable
endprimitive
module DFF(input clk, r, d, output reg q);
  always @(posedge clk or negedge r) if (!r) q <= #1.25 1'b0; else q <= #(1:2:3) d;
endmodule
`timescale 1ps/1ps
module NA2(input A, B, output Y);
  nand (Y, A, B);
  specify (A => Y) = (150, 250); (B => Y) = 300; endspecify
endmodule
`timescale 1ns/10ps
module top(input clk, r, a, b, output x, y, z);
  wire n, m;
  FLIP #(1.5, 2) (n, a);
  FLIP #(2:3:4) u1 (m, n);
  NA2 u2 (.A(m), .B(b), .Y(p));
  DFF d1 (clk, r, p, y);
  DFF d2 (.clk(clk), .r(1'b1), .d(y), .q(z));
  KEEP #4 k (x, clk, b);
endmodule
"""


def test_cells_primitives_and_registers_written_flat_give_the_same_figures() -> None:
    design = load(Request((SourceFile("cells.v", CELLS.encode()),), (FAMILY,)))
    text = flat_text_of(design)
    again = _again(text, (FAMILY,))
    assert _connections(again) == _connections(design)
    assert text == flat_text_of(again)
    before, after = Figures(design), Figures(again)
    assert [before.times[net] for net in "xyznmp"] == [after.times[net] for net in "xyznmp"]
    assert [total for total, _ in before.trails] == [total for total, _ in after.trails]
    assert before.times["m"][0][0] == 6e6


def _law(text: str, ends: Counter[str]) -> None:
    """Check a design, unless it is refused."""
    parts = (FAMILY, SourceFile("sizes.parts", BY_SIZE))
    try:
        design = load(Request((SourceFile("board.v", text.encode()),), parts, "top"))
    except InputRefusedError:
        ends["refused"] += 1
        return
    if not design.undescribed:
        _check(design, parts)
        ends["timed" if _is_timed(design) else "looped"] += 1


@pytest.mark.parametrize("part", range(4))
def test_a_random_design_written_flat_gives_the_same_figures(
    part: int, random_verilog: Callable[..., str]
) -> None:
    ends: Counter[str] = Counter()

    @settings(max_examples=60, deadline=None, derandomize=True)
    @given(st.integers(0, 2**32 - 1), st.integers(1, 12), st.booleans())
    def law(seed: int, size: int, wild: bool) -> None:
        _law(random_verilog(4 * seed + part, size, wild), ends)

    law()
    assert ends["timed"] > 30, ends


@pytest.mark.parametrize("part", range(2))
def test_a_design_of_the_whole_structural_language_written_flat_gives_the_same_figures(
    part: int, random_structure: Callable[..., str]
) -> None:
    ends: Counter[str] = Counter()

    @settings(max_examples=60, deadline=None, derandomize=True)
    @given(st.integers(0, 2**32 - 1), st.integers(1, 6))
    def law(seed: int, size: int) -> None:
        _law(random_structure(2 * seed + part, size), ends)

    law()
    assert ends["timed"] + ends["looped"] > 20, ends


CELLS_WITH_PARAMETERS = """
`timescale 1ns/1ps
module top(input a, b, output y, z);
  dl #(.T(1.25), .MODE("FAST")) u1 (y, a);
  dl #(.T(2)) u2 (z, b);
  defparam u2.K = 3;
endmodule
module dl #(parameter T = 1, MODE = "SLOW", parameter [3:0] K = 0) (output y, input a);
  buf (y, a);
  specify
    specparam s = T + K;
    (a => y) = (s, MODE == "FAST" ? 7 : 9);
  endspecify
endmodule
"""


def test_parameters_of_cells_are_written_with_their_instances() -> None:
    design = load(Request((SourceFile("board.v", CELLS_WITH_PARAMETERS.encode()),)))
    assert Figures(design).times["y"] != Figures(design).times["z"]
    _check(design, ())
