"""Prints the table of speeds, each as a ratio of two things measured in turn in one run.

    python tests/benchmarks/run.py [--runs N] [--json FILE] [NAME ...]

Ratios of medians; whole processes are timed by the wall, with Python's compiled files in place. Nothing here
is a test: machines differ and are noisy.
"""

from __future__ import annotations

import argparse
import json
import os
import statistics
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from dataclasses import asdict, dataclass
from importlib.util import find_spec
from pathlib import Path
from random import Random

ROOT = Path(__file__).parents[2]
PYTHON = sys.executable
IMPORTS = [PYTHON, "-c", "import numpy, lark, rich.console"]
CIRCUIT_PARTS = ROOT / "tests" / "data" / "circuits.parts"


_BODIES = ("nand (y, a, b);", "xor (y, a, b);", "udp_pick (y, a, b, a);", "and (n, a, b);\n  or (y, n, b);")
_CELL = """module C{number} (output y, input a, b);
  wire n;
  {body}
  specify
    specparam t = {time}.35, u = 0.8:1.0:1.3;
    (a => y) = (t, u);
    if (a) (b => y) = (1.1:1.2:1.4, t);
    ifnone (b => y) = (u, u);
    $width(posedge a, 0.5);
  endspecify
endmodule
"""
_PRIMITIVE = """primitive udp_pick (y, a, b, s);
  output y;
  input a, b, s;
  table
    0 ? 0 : 0;
    1 ? 0 : 1;
    ? 0 1 : 0;
    ? 1 1 : 1;
  endtable
endprimitive
"""


@dataclass(frozen=True)
class Row:
    """One line of the table: seconds (medians) of the work and of what it is held against."""

    name: str
    work: str
    against: str
    seconds: float
    other_seconds: float
    goal: str

    @property
    def ratio(self) -> float:
        """Work over other."""
        return self.seconds / self.other_seconds


def circuit(name: str) -> Path:
    """Return a circuit file of the `circuitgraph` package (its data only; the package is not imported)."""
    found = find_spec("circuitgraph")
    assert found is not None
    assert found.submodule_search_locations
    return Path(found.submodule_search_locations[0]) / "netlists" / f"{name}.v"


def process(command: list[str]) -> Callable[[], None]:
    """Return what runs a command as a new process."""
    environment = {k: v for k, v in os.environ.items() if k != "PYTHONDONTWRITEBYTECODE"}

    def run() -> None:
        subprocess.run(command, check=True, stdout=subprocess.DEVNULL, cwd=ROOT, env=environment)

    return run


def in_turn(work: Callable[[], None], other: Callable[[], None], runs: int) -> tuple[float, float]:
    """Return the median seconds of each, run in turn after one run that is not counted."""
    times: tuple[list[float], list[float]] = ([], [])
    for turn in range(runs + 1):
        for function, kept in zip((work, other), times, strict=True):
            start = time.perf_counter()
            function()
            if turn:
                kept.append(time.perf_counter() - start)
    return statistics.median(times[0]), statistics.median(times[1])


def tardigate(*words: str | Path) -> list[str]:
    """Return the command line of tardigate."""
    return [PYTHON, "-m", "tardigate", *(str(word) for word in words)]


def large_netlist(runs: int) -> Row:
    """`pace` on the largest circuit against pyslang's parse and elaboration of the same file."""
    file = circuit("b19_Cg")
    pace = process(tardigate("pace", file, "--parts", CIRCUIT_PARTS))
    slang = process([PYTHON, str(Path(__file__).parent / "elaborate_with_pyslang.py"), str(file)])
    times = in_turn(pace, slang, runs)
    return Row(
        "large-netlist",
        "pace b19_Cg.v (8.7 MB), process",
        "pyslang parse + elaborate, process",
        *times,
        "< 1",
    )


def board(runs: int) -> Row:
    """`pace` on the example board against the imports that it cannot do without."""
    files = sorted((ROOT / "examples" / "board").glob("*.v"))
    parts = sorted((ROOT / "examples" / "board").glob("*.parts"))
    pace = process(tardigate("pace", *files, "--parts", *parts))
    times = in_turn(pace, process(IMPORTS), runs)
    return Row(
        "board", "pace examples/board, process", "import numpy, lark, rich.console, process", *times, "<= 2"
    )


def bulk_reading(runs: int) -> Row:
    """Reading plain statements in bulk against sending each through the grammar."""
    from tardigate.pipeline import Request, load

    file, parts = str(circuit("c7552")), str(CIRCUIT_PARTS)

    def read(bulk: bool) -> Callable[[], None]:
        return lambda: void(load(Request((file,), (parts,), bulk=bulk)))

    times = in_turn(read(True), read(False), runs)
    return Row(
        "bulk-reading", "load c7552.v (117 KB) in bulk", "the same all through the grammar", *times, "< 0.2"
    )


def sweeps(runs: int) -> Row:
    """Both sweeps against one gather, add, maximum over as many hops (what memory alone costs)."""
    import numpy as np

    from tardigate.pipeline import Request, graph_of, load, times_of

    graph = graph_of(load(Request((str(circuit("b19_Cg")),), (str(CIRCUIT_PARTS),))))
    time_of = np.zeros(graph.vertices)
    delays = graph.delays[:, 2]

    def floor() -> None:
        for _ in range(2):
            taken = time_of[graph.tail] + delays[graph.delay_row]
            np.maximum.reduceat(taken, graph.head_start[:-1])

    times = in_turn(lambda: void(times_of(graph, "span")), floor, max(runs, 9))
    return Row(
        "sweeps", "both sweeps, both edges, b19_Cg", "numpy gather-add-maximum, as many hops", *times, "<= 4"
    )


def many_trails(runs: int) -> Row:
    """A thousand trails in exact order against one late and early sweep."""
    from tardigate.analysis.trails import slowest
    from tardigate.pipeline import Request, graph_of, load, times_of

    graph = graph_of(load(Request((str(circuit("b19_Cg")),), (str(CIRCUIT_PARTS),))))
    swept = times_of(graph, "span")
    times = in_turn(
        lambda: void(slowest(graph, "span", 1000, times=swept)), lambda: void(times_of(graph, "span")), runs
    )
    return Row("many-trails", "1,000 slowest trails, b19_Cg", "both sweeps", *times, "told only")


def deep_chain(runs: int) -> Row:
    """`pace` on a chain of 200,000 inverters against the same number side by side."""
    with tempfile.TemporaryDirectory() as folder:
        deep, wide = Path(folder, "deep.v"), Path(folder, "wide.v")
        count = 200_000
        lines = [f"  not g{i} (n{i + 1}, n{i});" for i in range(count)]
        deep.write_text(
            f"module deep(n0, n{count});\n  input n0;\n  output n{count};\n"
            + "\n".join(reversed(lines))
            + "\nendmodule\n"
        )
        lines = [f"  not g{i} (y{i}, a{i});" for i in range(count)]
        ports = ", ".join(f"a{i}, y{i}" for i in range(count))
        ins, outs = ", ".join(f"a{i}" for i in range(count)), ", ".join(f"y{i}" for i in range(count))
        wide.write_text(
            f"module wide({ports});\n  input {ins};\n  output {outs};\n" + "\n".join(lines) + "\nendmodule\n"
        )
        words = ("--parts", CIRCUIT_PARTS)
        times = in_turn(
            process(tardigate("pace", deep, *words)), process(tardigate("pace", wide, *words)), runs
        )
    return Row(
        "deep-chain",
        "pace, 200,000 inverters in a chain",
        "pace, 200,000 inverters side by side",
        *times,
        "<= 6",
    )


def write_collection(path: Path, cells: int, used: int, instances: int, others: bool = True) -> None:
    """Write one file: a netlist of `instances` over `used` of the `cells`, which stand behind it.

    Without `others` only the cells that are used are written.
    """
    random = Random(7)
    chosen = sorted(random.sample(range(cells), used))
    lines = ["`timescale 1 ns / 1 ps", "module board (a, b, y);", "input a, b;", "output y;"]
    nets = ["a", "b"]
    for number in range(instances):
        net = f"n{number}" if number < instances - 1 else "y"
        one, other = random.choice(nets), random.choice(nets)
        lines.append(f"C{random.choice(chosen)} u{number} (.y({net}), .a({one}), .b({other}));")
        nets.append(net)
    lines += ["endmodule", "`celldefine"]
    kept = range(cells) if others else chosen
    lines += [_CELL.format(number=n, body=_BODIES[n % len(_BODIES)], time=n % 3) for n in kept]
    path.write_text("\n".join([*lines, "`endcelldefine", _PRIMITIVE]))


def cells(runs: int) -> Row:
    """`pace` on a netlist of some cells out of a large collection, against pyslang on the same file."""
    with tempfile.TemporaryDirectory() as folder:
        file = Path(folder, "board.v")
        write_collection(file, cells=2000, used=40, instances=20_000)
        slang = process([PYTHON, str(Path(__file__).parent / "elaborate_with_pyslang.py"), str(file)])
        times = in_turn(process(tardigate("pace", file)), slang, runs)
    return Row(
        "cells", "pace, 20,000 of 40 cells of 2,000", "pyslang parse + elaborate, process", *times, "<= 1.5"
    )


def unused_cells(runs: int) -> Row:
    """What cells cost that nobody uses: the collection of 2,000 against the 40 alone."""
    with tempfile.TemporaryDirectory() as folder:
        whole, alone = Path(folder, "whole.v"), Path(folder, "alone.v")
        write_collection(whole, cells=2000, used=40, instances=20_000)
        write_collection(alone, cells=2000, used=40, instances=20_000, others=False)
        times = in_turn(process(tardigate("pace", whole)), process(tardigate("pace", alone)), runs)
    return Row("unused-cells", "pace with 1,960 unused cells", "pace without them", *times, "<= 1.3")


def generate_rounds(runs: int) -> Row:
    """A generate loop against the same gates written out, by the gate."""
    from tardigate.pipeline import Request, load
    from tardigate.source.files import SourceFile

    count = 2_000
    head = f"module board (input [{count}:0] a, output [{count}:0] y);\n"
    loop = f"genvar i;\nfor (i = 0; i < {count}; i = i + 1) begin : g\n  wire n;\n  not #1 (n, a[i]);\n"
    loop = f"{head}{loop}  nand #1 h (y[i], n, a[i+1]);\nend\nendmodule\n"
    rounds = [
        f"wire n{i};\nnot #1 (n{i}, a[{i}]);\nnand #1 h{i} (y[{i}], n{i}, a[{i + 1}]);" for i in range(count)
    ]
    flat = head + "\n".join(rounds) + "\nendmodule\n"

    def read(text: str) -> Callable[[], None]:
        return lambda: void(load(Request((SourceFile("board.v", text.encode()),))))

    times = in_turn(read(loop), read(flat), runs)
    return Row("generate", "load 2,000 rounds of a generate loop", "the same written out", *times, "<= 2")


def void(_result: object) -> None:
    """Take a result and do nothing with it."""


ROWS: dict[str, Callable[[int], Row]] = {
    "large-netlist": large_netlist,
    "board": board,
    "bulk-reading": bulk_reading,
    "sweeps": sweeps,
    "many-trails": many_trails,
    "deep-chain": deep_chain,
    "cells": cells,
    "unused-cells": unused_cells,
    "generate": generate_rounds,
}


def main() -> None:
    """Measure and print."""
    options = argparse.ArgumentParser(description=__doc__)
    options.add_argument("--runs", type=int, default=5, help="counted runs of each (default: 5)")
    options.add_argument("--json", type=Path, help="write the table there, too")
    options.add_argument("names", nargs="*", metavar="NAME", help=f"of {', '.join(ROWS)} (default: all)")
    given = options.parse_args()
    rows = []
    for name in given.names or ROWS:
        row = ROWS[name](given.runs)
        rows.append(row)
        print(f"{row.work:38} {row.seconds:8.3f} s   {row.against:44} {row.other_seconds:8.3f} s   "
              f"ratio {row.ratio:6.2f}   goal {row.goal}", flush=True)  # fmt: skip
    if given.json:
        given.json.write_text(
            json.dumps([{**asdict(row), "ratio": row.ratio} for row in rows], indent=2) + "\n"
        )


if __name__ == "__main__":
    main()
