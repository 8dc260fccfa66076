"""One fault of a parts file is told once, not at everything that uses what is faulty."""

from __future__ import annotations

import pytest

from tardigate.parts.library import Library
from tardigate.source.collector import Collector
from tardigate.source.files import SourceFile

GOOD = "part G { inputs A, B; output Y = A & B; times ns { tpd A, B => Y 1:2:3; } }"


@pytest.mark.parametrize(
    ("body", "codes"),
    [
        ("part P { inputs A[9999:0]; output Y = A[0]; times ns { tpd A => Y 1:2:3; } }", ["P027"]),
        ("part P { inputs A; output Y = A & Q; times ns { tpd A, Q => Y 1; tPLH Q => Y 1; } }", ["P004"]),
        ("part P { inputs A; output Y = A & Q & R; times ns { tpd Q, R => Y 1:2:3; } }", ["P004", "P004"]),
        ("part P { inputs A, A; output Y = A; times ns { tpd A => Y 1; } } equivalent G, P;", ["P008"]),
        ("alias X = NONE; alias W = X; alias V = W; equivalent V, G; equivalent G, X;", ["P016"]),
        ("equivalent NONE, G;", ["P016"]),
        ("part P { inputs C; output Y = C; times ns { tpd C => Y 1:2:3; } } equivalent G, P;", ["P021"]),
    ],
)  # fmt: skip
def test_what_follows_from_a_fault_is_not_told(body: str, codes: list[str]) -> None:
    collector = Collector()
    Library.read([SourceFile("f.parts", f"family F {{\n{GOOD}\n{body}\n}}\n".encode())], None, collector)
    assert [told.code for told in collector.all()] == codes
