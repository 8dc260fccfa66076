"""Published circuits whose longest way no change can run: here, the longest ways.

The true delays (8, 2, 10 and 5) take the values of nets into account and are smaller; the sweep is safe
against them, not equal to them.
"""

from collections.abc import Callable
from typing import Any

Fixture = Callable[..., Any]

SKIP_BLOCK = """
  module skip(input a0, b0, a1, b1, cin, output s0, s1, cout);
    xor #2 g1(p0, a0, b0); and #1 g2(g0, a0, b0); and #1 g3(t0, p0, cin); or #1 g4(c1, g0, t0);
    xor #2 g5(p1, a1, b1); and #1 g6(g1n, a1, b1); and #1 g7(t1, p1, c1); or #1 g8(c2, g1n, t1);
    and #1 g9(sk, p0, p1);
    assign #2 cout = sk ? cin : c2;
    xor #2 g10(s0, p0, cin); xor #2 g11(s1, p1, c1);
  endmodule"""


def test_carry_skip_block_with_a_late_carry(figures: Fixture) -> None:
    """Keutzer, Malik, Saldanha, "Is redundancy necessary to reduce delay?", IEEE TCAD 1991, from memory.

    Topological delay of the carry out 11 with the carry in at 5 (true: 8). Recomputed exhaustively.
    """
    late = """
      module m(input a0, b0, a1, b1, c, output s0, s1, cout);
        buf #5 l(cin, c); skip u(a0, b0, a1, b1, cin, s0, s1, cout);
      endmodule"""
    assert figures(late + SKIP_BLOCK).settles("cout") == 11


def test_carry_skip_block_pin_to_pin(figures: Fixture) -> None:
    """Kukimoto, Brayton, "Hierarchical functional timing analysis", DAC 1998, from memory (cin truly: 2)."""
    published = {("cin",): 6, ("a0",): 8, ("b0",): 8, ("a1",): 6, ("b1",): 6}
    for sources, delay in published.items():
        assert figures(SKIP_BLOCK, sources=sources).settles("cout") == delay


def test_two_carry_skip_blocks(figures: Fixture) -> None:
    """The same paper, from memory: four bits, topological 14 (true: 10). Sums recomputed: s3 12, s2 10."""
    verilog = """
      module m(input [3:0] a, b, input cin, output [3:0] s, output cout);
        skip low(a[0], b[0], a[1], b[1], cin, s[0], s[1], c2);
        skip high(a[2], b[2], a[3], b[3], c2, s[2], s[3], cout);
      endmodule"""
    found = figures(verilog + SKIP_BLOCK)
    assert found.settles("cout") == 14
    assert (found.settles("s[3]"), found.settles("s[2]")) == (12, 10)


def test_two_multiplexers_that_share_a_select(figures: Fixture) -> None:
    """Slides "Static timing analysis for threshold logic circuits", no. 5: longest 6, actual 5. Redone."""
    verilog = """
      module m(input x, s, output y);
        buf #3 a0(pa, x), a1(qa, n);
        buf #2 b0(pb, x), b1(qb, n);
        assign #0 n = s ? pa : pb;
        assign #0 y = s ? qb : qa;
      endmodule"""
    assert figures(verilog).settles("y") == 6
