"""Hand-written extremes: a diagnostic or a result, in a process of at most 2 GB, within seconds.

Each case is run as a user would run it, so that no limit of the test's own process helps.
"""

# ruff: noqa: E501 - a case of a table stands on one line
from __future__ import annotations

import resource
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import pytest

MEMORY = 2 << 30
SECONDS = 10
"""Processor time of a run."""

BODY = "module board(input a, output y);\n{}\nbuf #1 (y, a);\nendmodule\n"
FAMILY = "family F {{\n{}\n}}\n"
PART = "family F {{ part P {{ inputs A; output Y = {}; times ns {{ tpd A => Y 1; }} }} }}"
DEEP = 100_000
MANY = 10_000
LONG = 10_000_000


def _doubling(levels: int) -> str:
    """Return modules that each hold two of the next."""
    lines = [f"module m{i}(input a);\nm{i + 1} u (a); m{i + 1} v (a);\nendmodule" for i in range(levels)]
    return "\n".join([*lines, f"module m{levels}(input a);\nendmodule\n"])


def _growing(wide: int) -> str:
    """Return a module for each set of parameters: each level asks for two new ones."""
    return f"""
module board(input a, output y);
grow #(0, 1) u (a);
buf #1 (y, a);
endmodule
module grow #(parameter P = 0, D = 0)(input a);
grow #(P * {wide} + D, D + 1) u (a);
endmodule
"""


VERILOG: dict[str, Callable[[], str]] = {
    "parentheses": lambda: BODY.format("assign w = " + "(" * DEEP + "a" + ")" * DEEP + ";"),
    "parentheses that stay open": lambda: BODY.format("assign w = " + "(" * DEEP),
    "braces": lambda: BODY.format("buf (w, " + "{" * DEEP + "a" + "}" * DEEP + ");"),
    "braces that stay open": lambda: BODY.format("buf (w, " + "{" * DEEP),
    "brackets": lambda: BODY.format("buf (w, " + "a[" * DEEP + "0" + "]" * DEEP + ");"),
    "parameter selects": lambda: BODY.format("parameter P = 0;\nwire [" + "P[" * DEEP + "0" + "]" * DEEP + ":0] w;"),
    "operators before": lambda: BODY.format("assign w = " + "~" * DEEP + "a;"),
    "conditions": lambda: BODY.format("assign w = " + "a ? a : " * MANY + "a;"),
    "a long name": lambda: BODY.format("wire " + "n" * LONG + ";"),
    "a long name twice": lambda: BODY.format("wire " + "n" * LONG + ";\nbuf (" + "n" * LONG + ", a);"),
    "a long escaped name": lambda: BODY.format("wire \\" + "/" * LONG + " ;"),
    "a long instance name": lambda: BODY.format("buf #1 " + "g" * LONG + " (w, a);"),
    "a long module name": lambda: f"module {'m' * LONG}(input a);\nendmodule\n",
    "a long unknown name": lambda: BODY.format("assign y = " + "n" * LONG + ";"),
    "a long number": lambda: BODY.format("wire [" + "9" * LONG + ":0] w;"),
    "a long index": lambda: BODY.format("buf (w, a[" + "9" * LONG + "]);"),
    "a long binary number": lambda: BODY.format("wire w = " + str(LONG) + "'b" + "1" * LONG + ";"),
    "a long unsized number": lambda: BODY.format("wire w = 'h" + "f" * LONG + ";"),
    "a long fraction": lambda: BODY.format("buf #0." + "3" * LONG + " (w, a);"),
    "a long exponent": lambda: BODY.format("buf #1e" + "9" * LONG + " (w, a);"),
    "a large exponent": lambda: BODY.format("buf #1e999999999 (w, a);"),
    "a small exponent": lambda: BODY.format("buf #1e-999999999 (w, a);"),
    "a long string": lambda: BODY.format('(* n = "' + "s" * LONG + '" *) wire w;'),
    "a long comment": lambda: BODY.format("/*" + "*" * LONG + "*/"),
    "a long comment that stays open": lambda: BODY.format("/*" + "*" * LONG),
    "a long line": lambda: BODY.format("wire " + ", ".join(f"w{i}" for i in range(LONG // 50)) + ";"),
    "a long line of nonsense": lambda: "?" * LONG,
    "spaces": lambda: " " * LONG,
    "semicolons": lambda: BODY.format(";" * (LONG // 100)),
    "backslashes": lambda: BODY.format("\\" * LONG),
    "quotes": lambda: BODY.format('"' * (LONG // 5 + 1)),
    "zeros": lambda: "\0" * LONG,
    "open attributes": lambda: BODY.format("(*" * DEEP),
    "a width of a billion": lambda: BODY.format("wire [999999999:0] w;"),
    "a width beyond counting": lambda: BODY.format("wire [1 << 8000:0] w;"),
    "many wide nets": lambda: BODY.format("\n".join(f"wire [1048575:0] w{i};" for i in range(2000))),
    "wide operators": lambda: BODY.format("wire [1048575:0] w;\nassign w = ~~w ^ (w & w) | ~w;"),
    "a wide port": lambda: "module board(input [262143:0] a, output [262143:0] y);\nassign #1 y = a;\nendmodule\n",
    "replications of replications": lambda: BODY.format("wire w = " + "{1000{" * 9 + "a" + "}}" * 9 + ";"),
    "a replication of a billion": lambda: BODY.format("wire w = {1000000000{a}};"),
    "a replication of nothing": lambda: BODY.format("wire w = {0{a}};"),
    "a replication of less": lambda: BODY.format("wire w = {-1{a}};"),
    "a constant replication of a billion": lambda: BODY.format("parameter P = {1000000000{1'b1}};"),
    "powers": lambda: BODY.format("parameter P = 9 ** 9 ** 9 ** 9 ** 9;"),
    "shifts": lambda: BODY.format("parameter P = 1 << 1 << 30 << 30;"),
    "squares of squares": lambda: BODY.format(
        "parameter P0 = 3;\n" + "\n".join(f"parameter P{i + 1} = P{i} * P{i};" for i in range(60))
    ),
    "division by zero": lambda: BODY.format("parameter P = 1 % (1 - 1);"),
    "an array of a billion": lambda: BODY.format("buf g [999999999:0] (w, a);"),
    "an array of many": lambda: BODY.format("wire [65535:0] w;\nbuf #1 g [65535:0] (w, a);"),
    "arrays of arrays": lambda: BODY.format("half h [60000:0] (a);")
    + "module half(input a);\nless h [60000:0] (a);\nendmodule\nmodule less(input a);\nbuf #1 (w, a);\nendmodule\n",
    "doubling": lambda: _doubling(60),
    "ever new parameters": lambda: _growing(2),
    "modules without end": lambda: "module board(input a);\n" * MANY,
    "endmodules": lambda: "endmodule\n" * MANY,
    "a define of itself": lambda: "`define A `A\n" + BODY.format("`A"),
    "defines that double": lambda: "\n".join(f"`define M{i} `M{i + 1} `M{i + 1}" for i in range(64)) + "\n`define M64 wire\n`M0\n",
    "arguments that double": lambda: "`define D(x) x x\n" + "`D(" * 60 + "a" + ")" * 60,
    "arguments that stay open": lambda: "`define D(x) x\n" + "`D(" * DEEP,
    "an include of itself": lambda: '`include "board.v"\n',
    "an include of a folder": lambda: '`include "."\n',
    "conditions that stay open": lambda: "`ifdef A\n" * DEEP,
    "a delay of many": lambda: BODY.format("buf #(" + "1, " * MANY + "1) (w, a);"),
    "many terminals": lambda: BODY.format("and #1 (w" + ", a" * MANY + ");"),
    "many pins": lambda: BODY.format("half h (" + ", ".join(f".p{i}(a)" for i in range(MANY)) + ");"),
    "many drivers": lambda: BODY.format("wire w;\n" + "buf #1 (w, a);\n" * (MANY)),
    "many faults": lambda: BODY.format("assign w = nobody;\n" * 3000),
    "many ports of one net": lambda: f"module board({', '.join(f'.p{i}(a)' for i in range(20000))});\ninput a;\nendmodule\n",
    "one port many times": lambda: f"module board({'a, ' * 20000}a);\ninput a;\nendmodule\n",
    "a loop of many": lambda: BODY.format("\n".join(f"not (n{i}, n{(i + 1) % MANY});" for i in range(MANY))),
    "a ring of modules": lambda: "".join(
        f"module m{i}(input a);\nm{(i + 1) % 3000} u (a);\nendmodule\n" for i in range(3000)
    ),
}  # fmt: skip

PARTS: dict[str, Callable[[], str]] = {
    "parentheses": lambda: PART.format("(" * DEEP + "A" + ")" * DEEP),
    "parentheses that stay open": lambda: PART.format("(" * DEEP),
    "operators before": lambda: PART.format("~" * DEEP + "A"),
    "operators": lambda: PART.format("A" + " ^ A" * MANY),
    "conditions": lambda: PART.format("A ? A : " * MANY + "A"),
    "braces": lambda: PART.format("{" * DEEP + "A" + "}" * DEEP),
    "families that stay open": lambda: "family F {" * DEEP,
    "a long name": lambda: "family " + "F" * LONG + " {}",
    "a long unknown word": lambda: FAMILY.format("x" * LONG),
    "a long number": lambda: FAMILY.format("default ns { tpd " + "9" * LONG + "; }"),
    "a long fraction": lambda: FAMILY.format("default ns { tpd 0." + "3" * LONG + "; }"),
    "a large exponent": lambda: FAMILY.format("default ns { tpd 1e999999999; }"),
    "a small exponent": lambda: FAMILY.format("default ns { tpd 1e-999999999; }"),
    "a long exponent": lambda: FAMILY.format("default ns { tpd 1e" + "9" * LONG + "; }"),
    "many columns": lambda: FAMILY.format("default ns { tpd 1" + " | 1" * MANY + "; }"),
    "many inputs": lambda: FAMILY.format("gates ns { tpd nand(2..999999999999) 1; }"),
    "a wide pin": lambda: "family F { part P { inputs A[999999999:0]; output Y = A[0]; times ns { tpd A => Y 1; } } }",
    "a wide product": lambda: "family F { part P { inputs A[9999:0]; outputs Y[9999:0]; times ns { tpd A *> Y 1; } } }",
    "a wide function": lambda: "family F { part P { inputs A[63:0]; output Y = " + " ^ ".join(f"A[{i}]" for i in range(64)) + "; times ns { tpd A *> Y 1; } } }",
    "a wide number": lambda: PART.format("999999999'b1"),
    "an alias of itself": lambda: FAMILY.format("alias A = B; alias B = A;"),
    "a chain of aliases": lambda: FAMILY.format(" ".join(f"alias A{i} = A{i + 1};" for i in range(1000))),
    "a long string": lambda: FAMILY.format('provenance "' + "s" * LONG + '";'),
    "a string that stays open": lambda: FAMILY.format('provenance "' + "s" * LONG),
    "a long comment": lambda: "//" + "/" * LONG,
    "zeros": lambda: "\0" * LONG,
    "spaces": lambda: " " * LONG,
    "semicolons": lambda: ";" * LONG,
    "no text at all": lambda: "\ufeff\ufeff\u2028",
    "a huge package": lambda: "family F { part P { package 99999999999999999999; inputs A; output Y = A; times ns { tpd A => Y 1; } } }",
}  # fmt: skip


def _limits() -> None:
    resource.setrlimit(resource.RLIMIT_AS, (MEMORY, MEMORY))
    resource.setrlimit(resource.RLIMIT_CPU, (SECONDS, SECONDS))


def _run(folder: Path, *words: str) -> tuple[int, str]:
    done = subprocess.run(
        [sys.executable, "-m", "tardigate", "pace", *words, "--outputs", "3"],
        cwd=folder, capture_output=True, text=True, preexec_fn=_limits, timeout=120, check=False,
    )  # fmt: skip
    return done.returncode, done.stderr


@pytest.mark.parametrize("case", VERILOG)
def test_verilog(case: str, tmp_path: Path) -> None:
    (tmp_path / "board.v").write_text(VERILOG[case](), encoding="utf-8")
    (tmp_path / "family.parts").write_text("family F { default ns { tpd 1; } }")
    status, told = _run(tmp_path, "board.v", "--parts", "family.parts")
    assert status in (0, 2), told[-2000:]
    assert len(told) < 100_000


@pytest.mark.parametrize("case", PARTS)
def test_parts_files(case: str, tmp_path: Path) -> None:
    (tmp_path / "board.v").write_text(BODY.format("P u (.A(a), .Y());"))
    (tmp_path / "family.parts").write_text(PARTS[case](), encoding="utf-8")
    status, told = _run(tmp_path, "board.v", "--parts", "family.parts")
    assert status in (0, 2), told[-2000:]
    assert len(told) < 100_000
