"""Runs the tool in this process, in a folder of its own."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import NamedTuple

import pytest

from tardigate.cli.main import run

BOARD = """\
`timescale 1ns/1ps
module adder(input a, b, c, output s, co);
  wire x, y, z;
  xor #(3:5:7) u1 (x, a, b);
  xor #(3,4.25) u2 (s, x, c);
  and #2 u3 (y, a, b);
  and #2 u4 (z, x, c);
  or #(2:3:4) u5 (co, y, z);
endmodule
module board(input [1:0] a, b, input c, output [1:0] s, output co);
  wire k;
  adder low (a[0], b[0], c, s[0], k);
  adder high (a[1], b[1], k, s[1], co);
endmodule
"""


class Ended(NamedTuple):
    """How a run ended."""

    status: int
    out: str
    err: str


@pytest.fixture
def tardigate(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> Callable[..., Ended]:
    """`tardigate("pace", "board.v")`, in a folder that holds `board.v`."""
    (tmp_path / "board.v").write_text(BOARD)
    monkeypatch.chdir(tmp_path)
    for name in ("COLUMNS", "NO_COLOR", "FORCE_COLOR", "TARDIGATE_DEBUG", "TERM"):
        monkeypatch.delenv(name, raising=False)

    def ended(*words: str) -> Ended:
        capsys.readouterr()
        status = run(words)
        shown = capsys.readouterr()
        return Ended(status, shown.out, shown.err)

    return ended
