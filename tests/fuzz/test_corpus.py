"""Every text that ever led astray, or could: a figure or a diagnostic, in bounded time and memory.

A file of `corpus/` says in its first line what it shows. Each runs as a process of its own, its memory
and processor time limited by the system.
"""

from __future__ import annotations

import resource
import subprocess
import sys
from pathlib import Path

import pytest

CORPUS = sorted((Path(__file__).parent / "corpus").glob("*.*"))
MEMORY = 2 << 30
SECONDS = 10
"""Processor time of a run."""


def _limits() -> None:
    resource.setrlimit(resource.RLIMIT_AS, (MEMORY, MEMORY))
    resource.setrlimit(resource.RLIMIT_CPU, (SECONDS, SECONDS))


@pytest.mark.parametrize("path", CORPUS, ids=lambda path: path.name)
def test_a_text_of_the_corpus(path: Path, tmp_path: Path) -> None:
    assert path.read_bytes().startswith(b"// ")
    board, family = tmp_path / "board.v", tmp_path / "family.parts"
    board.write_text("module board(input a, output y);\nbuf g (y, a);\nendmodule\n")
    family.write_text("family F { default ns { tpd 1; } }")
    files = (path, family) if path.suffix == ".v" else (board, path)
    done = subprocess.run(
        [sys.executable, "-m", "tardigate", "pace", str(files[0]), "--parts", str(files[1])],
        cwd=tmp_path, capture_output=True, text=True, preexec_fn=_limits, timeout=120, check=False,
    )  # fmt: skip
    assert done.returncode in (0, 1, 2), done.stderr[-2000:]
    assert "Traceback" not in done.stderr
    assert len(done.stderr) < 100_000
