"""Depth has no limit: chains, hierarchies and expressions give figures, not a recursion error."""

# ruff: noqa: E501 - a case of a table stands on one line
from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from tardigate.pipeline import Request, graph_of, load, times_of

NS = 1e6


def _settles(tmp_path: Path, text: str) -> float:
    """Return when the last output settles, in ns, from file to figure."""
    path = tmp_path / "board.v"
    path.write_text(text)
    (tmp_path / "family.parts").write_text("family DEMO { default ns { tpd 1; } }")
    loaded = load(Request((str(path),), (str(tmp_path / "family.parts"),)))
    times = times_of(graph_of(loaded), "span")
    return float(np.nanmax(times.settles[np.isfinite(times.settles)])) / NS


def test_a_chain_of_200_000_inverters_declared_output_first(tmp_path: Path) -> None:
    count = 200_000
    gates = [f"not g{i} (n{i + 1}, n{i});" for i in reversed(range(count))]
    body = "\n".join(["input n0;", "output y;", f"buf last (y, n{count});", *gates])
    text = f"module board(n0, y);\n{body}\nendmodule\n"
    assert _settles(tmp_path, text) == count + 1


def test_a_hierarchy_of_2_000_modules(tmp_path: Path) -> None:
    depth = 2000
    lines = [
        f"module m{i}(input a, output y);\nm{i + 1} u (a, w);\nnot g (y, w);\nendmodule" for i in range(depth)
    ]
    lines.append(f"module m{depth}(input a, output y);\nnot g (y, a);\nendmodule")
    assert _settles(tmp_path, "\n".join(lines)) == depth + 1


MANY = 5000
EXPRESSIONS = {
    "left-nested": ("a" + " ^ a" * MANY, MANY),
    "right-nested": ("a ^ (" * MANY + "a" + ")" * MANY, MANY),
    "left-nested by parentheses": ("(" * MANY + "a" + " ^ a)" * MANY, MANY),
    "conditional to the right": ("a ? a : " * MANY + "a", MANY),
    "conditional inside": ("a ? " * MANY + "a" + " : a" * MANY, MANY),
    "conditional to the left": ("(" * MANY + "a" + " ? a : a)" * MANY, MANY),
    "concatenations": ("~" + "{" * MANY + "a" + "}" * MANY, 1),
    "replications": ("~" + "{1{" * MANY + "a" + "}}" * MANY, 1),
    "operators before": ("~" * MANY + "a", MANY),
    "parentheses": ("~" + "(" * MANY + "a" + ")" * MANY, 1),
    "by strength": ("a" + " | a & a" * MANY, MANY + 1),
}


@pytest.mark.parametrize("shape", EXPRESSIONS)
def test_expressions_of_5_000_operators(shape: str, tmp_path: Path) -> None:
    expression, depth = EXPRESSIONS[shape]
    assert (
        _settles(tmp_path, f"module board(input a, output y);\nassign y = {expression};\nendmodule\n")
        == depth
    )


def test_constant_expressions_of_5_000_operators(tmp_path: Path) -> None:
    text = "1" + " + 1" * MANY
    nested = "(" * MANY + "1" + " + 1)" * MANY
    body = f"parameter P = {text} - ({nested});\nwire [P:P] w;\nassign w[P] = a;\nassign y = ~w[0];"
    assert _settles(tmp_path, f"module board(input a, output y);\n{body}\nendmodule\n") == 1


def test_connections_of_5_000_levels(tmp_path: Path) -> None:
    body = "buf (y, " + "{" * MANY + "~a" + "}" * MANY + ");"
    assert _settles(tmp_path, f"module board(input a, output y);\n{body}\nendmodule\n") == 2


def test_a_chain_through_ports_that_join(tmp_path: Path) -> None:
    """A module whose two ports are one net, 3,000 times in a row: one net from end to end."""
    count = 3000
    wires = "\n".join(f"bond u{i} (n{i}, n{i + 1});" for i in range(count))
    text = f"module bond(.a(w), .b(w));\ninout w;\nendmodule\nmodule board(inout n0, output y);\n{wires}\nnot g (y, n{count});\nendmodule\n"
    assert _settles(tmp_path, text) == 1
