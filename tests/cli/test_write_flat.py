"""The option `--write-flat` of `survey`: what it writes, and what it refuses."""

from __future__ import annotations

import json
from collections.abc import Callable
from pathlib import Path
from typing import Any

Tardigate = Callable[..., Any]


def test_the_flat_design_reads_again_and_gives_the_same_figures(tardigate: Tardigate, tmp_path: Path) -> None:
    status, out, err = tardigate("survey", "board.v", "--write-flat", "flat.v")
    assert (status, err) == (0, "tardigate: wrote flat.v\n")
    assert out == tardigate("survey", "board.v")[1]
    assert (tmp_path / "flat.v").read_text().startswith("`resetall\n`timescale 1fs/1fs\nmodule board (")
    paces = [json.loads(tardigate("pace", file, "--json")[1]) for file in ("board.v", "flat.v")]
    for pace in paces:
        for name in ("files", "limiting_trail"):
            del pace[name]
    assert paces[0] == paces[1]


def test_a_file_that_is_there_is_left_alone(tardigate: Tardigate, tmp_path: Path) -> None:
    before = (tmp_path / "board.v").read_text()
    status, out, err = tardigate("survey", "board.v", "--write-flat", "board.v")
    assert (status, out) == (2, "")
    assert err.startswith("error U108: `board.v` is there already")
    assert (tmp_path / "board.v").read_text() == before


def test_a_design_with_what_nobody_describes_is_not_written(tardigate: Tardigate, tmp_path: Path) -> None:
    (tmp_path / "open.v").write_text("module open(input a, output y); NA u (.A(a), .Y(y)); endmodule\n")
    assert tardigate("survey", "open.v").status == 0
    status, _, err = tardigate("survey", "open.v", "--write-flat", "flat.v")
    assert (status, "error N301: nobody describes `NA`" in err) == (2, True)
    assert not (tmp_path / "flat.v").exists()
