"""Diagnostics as they are printed, in whole: tabs, wide characters, macros, includes, related places."""

from __future__ import annotations

from pathlib import Path

import pytest

from tardigate.pipeline import Request, load
from tardigate.report.diagnostic_view import diagnostic_lines
from tardigate.report.looks import Look
from tardigate.source.diagnostic import Diagnostic
from tardigate.source.faults import InputRefusedError

EXPECTED = Path(__file__).with_name("expected")

SYNTAX = """`define STEP 3'b9 // 漢字
`define PAIR(p, q) nand #1 (p, q)
module board(input logic a, b, output y, z);
	wire	w
  /* 漢字 e\u0301 */ nand #1 \\g+1  (y, a, b;
  assign w = `STEP;
  wire v;
  `PAIR(z, 2'b3);
  wire u;
`include "more.vh"
endmodule
"""
MORE = "wire t;\n\tbuf #1 g2 (z, a,);\n"
STRUCTURE = """module board(input a, b, output y);
	wire	carry; /* 漢字 */ buf #1 g1 (y, a); buf #1 g2 (y, b);
	nand #1 \\g+3  (carry, a, cary); nand #1 g4 (carry, b, 1'b1);
endmodule
"""


@pytest.fixture
def told(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> list[Diagnostic]:
    monkeypatch.chdir(tmp_path)
    Path("more.vh").write_text(MORE, encoding="utf-8")
    found: list[Diagnostic] = []
    for name, text in (("syntax.v", SYNTAX), ("structure.v", STRUCTURE)):
        Path(name).write_text(text, encoding="utf-8")
        with pytest.raises(InputRefusedError) as refusal:
            load(Request((name,)))
        found += refusal.value.diagnostics
    return found


@pytest.mark.parametrize("width", [80, 120])
def test_diagnostics_look_so(told: list[Diagnostic], width: int) -> None:
    shown = "\n".join(line.plain.rstrip() for line in diagnostic_lines(told, Look(width))) + "\n"
    assert shown == (EXPECTED / f"diagnostics-{width}.txt").read_text(encoding="utf-8")


def test_plain_terminals_are_shown_as_many_carets(told: list[Diagnostic]) -> None:
    fancy, plain = (diagnostic_lines(told, Look(120, plain)) for plain in (False, True))
    carets = [[line.plain.count("^") for line in lines] for lines in (fancy, plain)]
    assert carets[0] == carets[1]
    assert all(line.plain.isascii() for line in plain)
