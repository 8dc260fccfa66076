"""Mutated real texts and random bytes: a diagnostic or a figure, never another exception.

The texts are circuits, the samples of the table of codes and random hierarchies; the mutations flip bytes, cut,
repeat and swap words, and put words of the language where they do not belong.
"""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Callable
from pathlib import Path
from random import Random

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tardigate.pipeline import Request, graph_of, load, times_of
from tardigate.source.code_table import every_code, look_up
from tardigate.source.faults import InputRefusedError

FAMILY = (Path(__file__).parents[1] / "data" / "circuits.parts").read_bytes()
WORDS = re.compile(rb"\w+|\s+|[^\w\s]")
VERILOG = b"""module endmodule input output inout wire reg assign nand bufif1 ff supply0 parameter localparam signed #( ) ( [ ]
{ } , ; . : ? = == & && ~ ^ + - * ** << >>> 1'b0 4'bx 2'sd1 0 1 3 99999999999 1.5 1e9 'h \\x " /* */ // (* *) ` `define `include
`ifdef `endif `timescale always initial generate specify $clog2 @ [3:0] [a] #1 #(1:2:3) \n \x00 \xff""".split(b" ")
PARTS = b"""family part inputs output outputs inout times ns ps checks register latch posedge negedge when tpd tPLH tPZH tsu th
gates operators default alias equivalent conditions provenance package parameter state load wires fanout { } ( ) [ ] , ; : = ~ & | ^
? + - => *> .. 1 2:3:4 - 1e9 99999999999999999999 8'hff "x" " // \\x \n \x00 \xff family{ -1 1.5 pF V""".split(b" ")
FEW = settings(max_examples=400, deadline=None, derandomize=True)


def mutated(text: bytes, seed: int, words: list[bytes]) -> bytes:
    """Return a text with one to four changes."""
    random = Random(seed)
    for _ in range(random.choice((1, 1, 2, 4))):
        pieces = WORDS.findall(text) or [b" "]
        at, other = random.randrange(len(pieces)), random.randrange(len(pieces))
        last = min(len(pieces), at + random.choice((1, 1, 2, 8, 40)))
        match random.randrange(8):
            case 0:
                del pieces[at:last]
            case 1:
                pieces[at:at] = pieces[at:last] * random.choice((1, 1, 3))
            case 2:
                pieces[at], pieces[other] = pieces[other], pieces[at]
            case 3:
                pieces[at] = pieces[other]
            case 4 | 5:
                pieces[at : at + random.randrange(2)] = [random.choice((b" ", b"")), random.choice(words), random.choice((b" ", b""))]
            case 6:
                pieces = pieces[:at]
            case _:
                changed = bytearray(text)
                if changed:
                    changed[random.randrange(len(changed))] ^= 1 << random.randrange(8)
                text = bytes(changed)
                continue
        text = b"".join(pieces)
    return text


@pytest.fixture
def run(tmp_path: Path) -> Callable[[bytes, bytes], str]:
    """Read a board and a parts file and reckon; return how it ended."""
    board, family = tmp_path / "board.v", tmp_path / "family.parts"

    def act(text: bytes, parts: bytes) -> str:
        board.write_bytes(text)
        family.write_bytes(parts)
        try:
            loaded = load(Request((str(board),), (str(family),)))
            times = times_of(graph_of(loaded), "span")
        except InputRefusedError as refusal:
            assert refusal.diagnostics
            assert str(refusal)
            return "refused"
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


def test_mutated_circuits(run: Callable[[bytes, bytes], str], circuit_folder: Path) -> None:
    texts = [(circuit_folder / name).read_bytes() for name in ("c17.v", "s27.v", "c17_assign.v", "mux_4.v", "c432.v")]
    ends: Counter[str] = Counter()

    @FEW
    @given(st.sampled_from(texts), st.integers(0, 2**32 - 1))
    def law(text: bytes, seed: int) -> None:
        ends[run(mutated(text, seed, VERILOG), FAMILY)] += 1

    law()
    assert min(ends["read"], ends["refused"]) > 10, ends


@pytest.mark.parametrize("part", range(2))
def test_mutated_hierarchies(part: int, run: Callable[[bytes, bytes], str], random_verilog: Callable[..., str]) -> None:
    @FEW
    @given(st.integers(0, 2**32 - 1), st.integers(0, 2**32 - 1))
    def law(seed: int, change: int) -> None:
        text = random_verilog(2 * seed + part, 6, wild=True).encode()
        run(mutated(text, change, VERILOG), FAMILY)

    law()


@pytest.mark.parametrize("part", range(2))
def test_mutated_samples(part: int, run: Callable[[bytes, bytes], str]) -> None:
    texts = _samples(".v")[part::2]

    @FEW
    @given(st.sampled_from(texts), st.integers(0, 2**32 - 1))
    def law(text: bytes, seed: int) -> None:
        run(mutated(text, seed, VERILOG), FAMILY)

    law()


@pytest.mark.parametrize("part", range(2))
def test_mutated_parts_files(part: int, run: Callable[[bytes, bytes], str]) -> None:
    texts = [*_samples(".parts"), FAMILY]
    board = b"module board(input a, b, output y);\nDEMO u1 (.A(a), .B(b), .Y(y));\nnand (w, a, b);\nendmodule\n"

    @FEW
    @given(st.sampled_from(texts), st.integers(0, 2**31 - 1))
    def law(text: bytes, seed: int) -> None:
        run(board, mutated(text, 2 * seed + part, PARTS))

    law()


def test_random_bytes(run: Callable[[bytes, bytes], str]) -> None:
    soup = st.lists(st.sampled_from([*VERILOG, *PARTS, b" ", b"\n", b"a", b"y"]), max_size=40).map(b" ".join)
    heads = st.sampled_from((b"", b"module board(input a, output y);\n", b"family F {\n"))
    tails = st.sampled_from((b"", b"\nendmodule\n", b"\n}\n"))
    texts = st.tuples(heads, st.one_of(st.binary(max_size=200), soup), tails).map(b"".join)

    @FEW
    @given(texts, texts)
    def law(text: bytes, parts: bytes) -> None:
        run(text, parts)

    law()
