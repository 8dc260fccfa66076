"""The tables of IEEE 1364-2005 clause 8, each recognised as what its clause calls it.

All are from memory; comments and blanks are not the standard's.
"""

from __future__ import annotations

import pytest

from tardigate.parts.function import NEGATIVE, POSITIVE
from tardigate.parts.kind import Edge
from tardigate.parts.model import Part, Place, Register
from tardigate.parts.udp import udp_part
from tardigate.source.files import SourceFile
from tardigate.source.placed import PlacedText
from tardigate.syntax.udp_reader import read_primitive

BOTH = POSITIVE | NEGATIVE


def part(text: str) -> Part:
    file = SourceFile("a.v", text.strip().encode())
    primitive = read_primitive(PlacedText.whole(file), 0, len(file.data))
    made, reason = udp_part(primitive, Place(file, 0, 9))
    assert not reason
    return made


def register(text: str) -> tuple[Part, Register]:
    made = part(text)
    assert not made.functions
    (only,) = made.registers
    return made, only


def reads(made: Part, node: int) -> dict[str, int]:
    """Return the polarity of each port that a node reads."""
    found = made.network.polarities(node, {})
    return {made.bit_names[bit]: polarity for bit, polarity in found.items() if bit >= 0}


SELECTOR = {"control": BOTH, "dataA": POSITIVE, "dataB": POSITIVE}


def test_the_multiplexer() -> None:
    """8.2: 0 selects dataA. Rows with x make no difference between 0 and 1."""
    made = part("""
primitive multiplexer (mux, control, dataA, dataB);
output mux;
input control, dataA, dataB;
table
  0 1 0 : 1; 0 1 1 : 1; 0 1 x : 1; 0 0 0 : 0; 0 0 1 : 0; 0 0 x : 0;
  1 0 1 : 1; 1 1 1 : 1; 1 x 1 : 1; 1 0 0 : 0; 1 1 0 : 0; 1 x 0 : 0;
  x 0 0 : 0; x 1 1 : 1;
endtable
endprimitive""")
    assert reads(made, made.functions[0]) == SELECTOR
    short = part("""
primitive multiplexer (mux, control, dataA, dataB);
output mux;
input control, dataA, dataB;
table
  0 1 ? : 1; 0 0 ? : 0; 1 ? 1 : 1; 1 ? 0 : 0; x 0 0 : 0; x 1 1 : 1;
endtable
endprimitive""")
    assert short.network.nodes[short.functions[0]] == made.network.nodes[made.functions[0]]


def test_the_latch() -> None:
    """8.3: transparent while the clock is 0."""
    made, latch = register("""
primitive latch (q, clock, data);
output q; reg q;
input clock, data;
table
  0 1 : ? : 1;
  0 0 : ? : 0;
  1 ? : ? : -;
endtable
endprimitive""")
    assert (latch.latch, latch.edge, made.bit_names[latch.clock]) == (True, Edge.FALL, "clock")
    assert reads(made, latch.stores[0]) == {"data": POSITIVE}
    assert (latch.set, latch.clear) == (-1, -1)


@pytest.mark.parametrize(
    "text",
    [
        """
primitive d_edge_ff (q, clock, data);
output q; reg q;
input clock, data;
table
  (01) 0 : ? : 0;
  (01) 1 : ? : 1;
  (0?) 1 : 1 : 1;
  (0?) 0 : 0 : 0;
  (?0) ? : ? : -;
  ? (??) : ? : -;
endtable
endprimitive""",
        """
primitive dff1 (q, clock, data);
input clock, data;
output q; reg q;
initial q = 1'b0;
table
  r 0 : ? : 0;
  r 1 : ? : 1;
  f ? : ? : -;
  ? * : ? : -;
endtable
endprimitive""",
    ],
    ids=["8.4", "8.5"],
)
def test_the_d_flip_flops(text: str) -> None:
    """8.4 and the initialized one of 8.5: the rising clock stores the data."""
    made, flop = register(text)
    assert (flop.latch, flop.edge, made.bit_names[flop.clock]) == (False, Edge.RISE, "clock")
    assert reads(made, flop.stores[0]) == {"data": POSITIVE}
    assert (flop.set, flop.clear) == (-1, -1)


def test_the_sr_flip_flop() -> None:
    """8.5: no clock; s sets, r clears and wins."""
    made = part("""
primitive srff (q, s, r);
output q; reg q;
input s, r;
initial q = 1'b1;
table
  1 0 : ? : 1;
  f 0 : 1 : -;
  0 r : ? : 0;
  0 f : 0 : -;
  1 1 : ? : 0;
endtable
endprimitive""")
    assert not made.registers
    assert reads(made, made.functions[0]) == {"s": POSITIVE, "r": NEGATIVE}


def test_the_jk_flip_flop() -> None:
    """8.7: level-sensitive preset and clear, both active at 0, beside an edge-sensitive clock."""
    made, flop = register("""
primitive jk_edge_ff (q, clock, j, k, preset, clear);
output q; reg q;
input clock, j, k, preset, clear;
table
  ? ?? 01 : ? : 1;
  ? ?? *1 : 1 : 1;
  ? ?? 10 : ? : 0;
  ? ?? 1* : 0 : 0;
  r 00 00 : 0 : 1;
  r 00 11 : ? : -;
  r 01 11 : ? : 0;
  r 10 11 : ? : 1;
  r 11 11 : 0 : 1;
  r 11 11 : 1 : 0;
  f ?? ?? : ? : -;
  b *? ?? : ? : -;
  b ?* ?? : ? : -;
endtable
endprimitive""")
    assert (flop.latch, flop.edge, made.bit_names[flop.clock]) == (False, Edge.RISE, "clock")
    assert reads(made, flop.set) == {"preset": NEGATIVE, "clear": POSITIVE}
    assert reads(made, flop.clear) == {"clear": NEGATIVE, "preset": POSITIVE}
    running = {made.bit_names.index("preset"): 1, made.bit_names.index("clear"): 1}
    found = made.network.polarities(flop.stores[0], running)
    assert {made.bit_names[bit]: polarity for bit, polarity in found.items() if bit >= 0} == {
        "j": POSITIVE, "k": NEGATIVE, "q": BOTH,
    }  # fmt: skip
