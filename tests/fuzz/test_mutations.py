"""Mutated real texts and random bytes: a diagnostic or a figure, never another exception.

The texts are circuits, the samples of the table of codes and random hierarchies; the mutations flip bytes,
cut, repeat and swap words, and put words of the language where they do not belong.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings, strategies as st

from tardigate.pipeline import Request, graph_of, load, times_of
from tardigate.source.code_table import every_code, look_up
from tardigate.source.faults import InputRefusedError

FAMILY = (Path(__file__).parents[1] / "data" / "circuits.parts").read_bytes()
Run = Callable[[bytes, bytes], str]
Mutated = Callable[..., bytes]

FEW = settings(max_examples=250, deadline=None, derandomize=True)


def _refused(refusal: InputRefusedError) -> str:
    assert refusal.diagnostics
    assert str(refusal)
    return "refused"


@pytest.fixture
def run(tmp_path: Path) -> Run:
    """Read a board and a parts file and reckon; return how it ended."""
    board, family = tmp_path / "board.v", tmp_path / "family.parts"

    def act(text: bytes, parts: bytes) -> str:
        board.write_bytes(text)
        family.write_bytes(parts)
        try:
            loaded = load(Request((str(board),), (str(family),)))
            times = times_of(graph_of(loaded), "span")
        except InputRefusedError as refusal:
            return _refused(refusal)
        finite = times.settles[np.isfinite(times.settles)]
        assert (finite >= 0).all()
        return "read"

    return act


def _samples(suffix: str) -> list[bytes]:
    found = [
        text
        for code in every_code()
        for sample in (look_up(code).faulty, look_up(code).mended)
        for name, text in sample.items()
        if name.endswith(suffix)
    ]
    return [text.encode() for text in sorted(set(found))]


def test_mutated_circuits(run: Run, mutated: Mutated, circuit_folder: Path) -> None:
    texts = [
        (circuit_folder / name).read_bytes()
        for name in ("c17.v", "s27.v", "c17_assign.v", "mux_4.v", "c432.v")
    ]
    ends: Counter[str] = Counter()

    @FEW
    @given(st.sampled_from(texts), st.integers(0, 2**32 - 1))
    def law(text: bytes, seed: int) -> None:
        ends[run(mutated(text, seed), FAMILY)] += 1

    law()
    assert min(ends["read"], ends["refused"]) > 10, ends


@pytest.mark.parametrize("part", range(2))
def test_mutated_hierarchies(
    part: int, run: Run, mutated: Mutated, random_verilog: Callable[..., str]
) -> None:
    @FEW
    @given(st.integers(0, 2**32 - 1), st.integers(0, 2**32 - 1))
    def law(seed: int, change: int) -> None:
        text = random_verilog(2 * seed + part, 6, wild=True).encode()
        run(mutated(text, change), FAMILY)

    law()


@pytest.mark.parametrize("part", range(2))
def test_mutated_structures(
    part: int, run: Run, mutated: Mutated, random_structure: Callable[..., str]
) -> None:
    @FEW
    @given(st.integers(0, 2**32 - 1), st.integers(0, 2**32 - 1))
    def law(seed: int, change: int) -> None:
        text = random_structure(2 * seed + part, 3).encode()
        run(mutated(text, change), FAMILY)

    law()


@pytest.mark.parametrize("part", range(2))
def test_mutated_samples(part: int, run: Run, mutated: Mutated) -> None:
    texts = _samples(".v")[part::2]

    @FEW
    @given(st.sampled_from(texts), st.integers(0, 2**32 - 1))
    def law(text: bytes, seed: int) -> None:
        run(mutated(text, seed), FAMILY)

    law()


@pytest.mark.parametrize("part", range(2))
def test_mutated_parts_files(part: int, run: Run, mutated: Mutated) -> None:
    texts = [*_samples(".parts"), FAMILY]
    board = (
        b"module board(input a, b, output y);\nDEMO u1 (.A(a), .B(b), .Y(y));\nnand (w, a, b);\nendmodule\n"
    )

    @FEW
    @given(st.sampled_from(texts), st.integers(0, 2**31 - 1))
    def law(text: bytes, seed: int) -> None:
        run(board, mutated(text, 2 * seed + part, parts=True))

    law()


def test_random_bytes(run: Run, mutated: Mutated) -> None:
    word = st.builds(mutated, st.just(b"a"), st.integers(0, 2**32 - 1), st.booleans())
    soup = st.lists(word, max_size=40).map(b" ".join)
    heads = st.sampled_from((b"", b"module board(input a, output y);\n", b"family F {\n"))
    tails = st.sampled_from((b"", b"\nendmodule\n", b"\n}\n"))
    texts = st.tuples(heads, st.one_of(st.binary(max_size=200), soup), tails).map(b"".join)

    @FEW
    @given(texts, texts)
    def law(text: bytes, parts: bytes) -> None:
        run(text, parts)

    law()
