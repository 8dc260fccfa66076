"""The law of coarse lexing: plain statements read in bulk and through the grammar are the same design."""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable
from pathlib import Path

import pytest
from hypothesis import given, settings, strategies as st

from tardigate.netlist.dump import dump
from tardigate.pipeline import Request, load
from tardigate.source.diagnostic import Diagnostic
from tardigate.source.faults import InputRefusedError

FAMILY = Path(__file__).parents[1] / "data" / "circuits.parts"
SMALL = 21_000
"""Bytes; the slow way takes about 0.2 ms a token."""
MEDIUM = ("s13207.v", "c2670.v", "c6288.v")


@pytest.fixture(autouse=True)
def even_few_instances_in_bulk(monkeypatch: pytest.MonkeyPatch) -> None:
    """Take the quick way for every part, of which the small designs here have but few instances."""
    monkeypatch.setattr("tardigate.netlist.bulk.FEW", 0)


def _read(path: Path, bulk: bool) -> tuple[str, tuple[Diagnostic, ...]]:
    try:
        loaded = load(Request((str(path),), (str(FAMILY),), bulk=bulk))
    except InputRefusedError as refusal:
        return "refused", refusal.diagnostics
    strangers = "\n".join(
        f"{s.name} {s.count} {s.place} {sorted(s.pins.items())}" for s in loaded.undescribed
    )
    return dump(loaded.flat, places=True) + strangers, loaded.warnings


@pytest.mark.parametrize("part", range(8))
def test_both_ways_give_the_same_design_or_the_same_diagnostics(
    part: int, random_verilog: Callable[..., str], tmp_path: Path
) -> None:
    ends: Counter[str] = Counter()

    @settings(max_examples=40, deadline=None, derandomize=True)
    @given(st.integers(0, 2**32 - 1), st.integers(1, 10))
    def law(seed: int, size: int) -> None:
        path = tmp_path / "board.v"
        path.write_text(random_verilog(8 * seed + part, size, wild=True))
        quick = _read(path, bulk=True)
        assert quick == _read(path, bulk=False), path.read_text()
        ends["refused" if quick[0] == "refused" else "read"] += 1

    law()
    assert ends["read"] > 10, ends


def test_both_ways_are_the_same_on_circuits(circuit_folder: Path) -> None:
    paths = [path for path in sorted(circuit_folder.glob("*.v")) if path.stat().st_size < SMALL]
    paths += [circuit_folder / name for name in MEDIUM]
    assert len(paths) > 20
    for path in paths:
        assert _read(path, bulk=True) == _read(path, bulk=False), path.name


@pytest.mark.parametrize("part", range(2))
def test_both_ways_are_the_same_on_mutated_texts(
    part: int, random_verilog: Callable[..., str], mutated: Callable[..., bytes], tmp_path: Path
) -> None:
    path = tmp_path / "board.v"

    @settings(max_examples=150, deadline=None, derandomize=True)
    @given(st.integers(0, 2**31 - 1), st.integers(0, 2**32 - 1))
    def law(seed: int, change: int) -> None:
        path.write_bytes(mutated(random_verilog(2 * seed + part, 4, wild=True).encode(), change))
        assert _read(path, bulk=True) == _read(path, bulk=False), path.read_bytes()

    law()
