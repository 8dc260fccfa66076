"""Surveys every Verilog file below a folder and tells what loads and what is refused, by code.

    python tests/benchmarks/survey_folder.py FOLDER [--seconds N] [--tops N] [--list STYLE] [--json FILE]

Each file is read in a process of its own, alone but for what it includes; a file with several modules that
could be the top is read once for each. The style of a file is told by its words only, not by a parser.
"""

from __future__ import annotations

import argparse
import contextlib
import io
import json
import multiprocessing
import re
import resource
from collections import Counter, defaultdict
from collections.abc import Iterator
from dataclasses import asdict, dataclass
from multiprocessing.connection import Connection
from pathlib import Path
from typing import Any

import tardigate.cli.survey  # noqa: F401  (imported once, before the processes part)
from tardigate.cli.main import run as run_tool

SUFFIXES = frozenset((".v", ".sv", ".vh", ".svh"))
MOST_MEMORY = 6 << 30
NO_TEXT = re.compile(r'//[^\n]*|/\*.*?\*/|"(?:\\.|[^"\\\n])*"|\\\S+', re.DOTALL)
WORD = re.compile(r"(?<![`$\w])[A-Za-z_][\w$]*")
ALWAYS = re.compile(r"\balways\b(?!\s*@\s*\(\s*(?:posedge|negedge)\b)")
LATER = frozenset((
    "logic", "always_ff", "always_comb", "always_latch", "endinterface", "endpackage", "typedef", "endclass",
    "endprogram",
))  # fmt: skip
PROCEDURAL = frozenset(("initial", "task", "function"))
FORK = multiprocessing.get_context("fork")


@dataclass(frozen=True, slots=True)
class Read:
    """What became of one file: `outcome` is "loads", "in part", a code, or how the tool fell.

    "in part": `loaded` of the `tops` tried load, the others do not. `told`: the first error of each, once.
    """

    folder: str
    path: str
    style: str
    outcome: str
    tops: int
    loaded: int
    told: tuple[str, ...]


def style_of(text: str) -> str:
    """Return what the words of a file say of it; what conditional compilation would leave out counts too."""
    text = NO_TEXT.sub(" ", text)
    words = frozenset(WORD.findall(text))
    if words.isdisjoint(("module", "macromodule")):
        return "no module"
    if words & LATER:
        return "later language"
    if words & PROCEDURAL or ALWAYS.search(text):
        return "procedural"
    return "registers" if "always" in words else "structural"


def _child(arguments: list[str], pipe: Connection) -> None:
    resource.setrlimit(resource.RLIMIT_AS, (MOST_MEMORY, MOST_MEMORY))
    told = io.StringIO()
    with contextlib.redirect_stdout(told), contextlib.redirect_stderr(told):
        status = run_tool(arguments)
    pipe.send((int(status), told.getvalue()))


def survey(arguments: list[str], seconds: float) -> tuple[str, list[dict[str, Any]]]:
    """Run `tardigate survey`; return "loads", a code, "exit N" or "too long", and the diagnostics."""
    ours, theirs = FORK.Pipe(duplex=False)
    process = FORK.Process(target=_child, args=(["survey", "--json", *arguments], theirs))
    process.start()
    theirs.close()
    try:
        if not ours.poll(seconds):
            return "too long", []
        status, told = ours.recv()
    except EOFError:
        process.join()
        return f"exit {process.exitcode}", []
    finally:
        process.kill()
        process.join()
    if status not in (0, 2):
        return f"exit {status}", []
    found = json.loads(told)["diagnostics"]
    errors = [one for one in found if one["severity"] == "error"]
    return (errors[0]["code"] if errors else "loads" if status == 0 else f"exit {status}"), errors


def read_file(file: Path, root: Path, includes: list[str], options: argparse.Namespace) -> Read:
    """Survey one file; where several modules could be the top, once for each of them."""
    folder = file.relative_to(root).parts[0] if file.parent != root else "."
    style = style_of(file.read_text("latin-1"))
    outcome, errors = survey([*includes, str(file)], options.seconds)
    tops, loaded, faults = 1, int(outcome == "loads"), errors[:1]
    if outcome == "N103":
        names = [one["label"].strip("`") for one in errors[0]["related"]][: options.tops]
        tries = [survey([*includes, "--top", name, str(file)], options.seconds) for name in names]
        tops, loaded = len(tries), sum(tried == "loads" for tried, _ in tries)
        faults = [fault for _, errors in tries for fault in errors[:1]]
        outcome = "in part" if 0 < loaded < tops else tries[0][0]
    told = tuple(sorted({_line(fault) for fault in faults}))
    return Read(folder, str(file.relative_to(root)), style, outcome, tops, loaded, told)


def _line(fault: dict[str, Any]) -> str:
    place = fault["place"] or {"line": 0, "column": 0}
    return f"{place['line']}:{place['column']} {fault['code']}: {fault['message']}"


def read_folder(root: Path, options: argparse.Namespace) -> Iterator[Read]:
    """Survey every Verilog file below `root`, one at a time, in the order of their paths."""
    files = sorted(file for file in root.rglob("*") if file.suffix.lower() in SUFFIXES and file.is_file())
    folders: defaultdict[str, set[str]] = defaultdict(set)
    for file in files:
        folders[file.relative_to(root).parts[0]].add(str(file.parent))
    for file in files:
        near = [str(file.parent), *sorted(folders[file.relative_to(root).parts[0]], key=len)]
        includes = [word for name in near[: options.folders] for word in ("-I", name)]
        yield read_file(file, root, includes, options)


def print_table(reads: list[Read]) -> None:
    """Print one row for each first folder and style: files, those that load, the others by outcome."""
    print(f"{'folder':28} {'style':15} {'files':>6} {'load':>6}  others")
    groups: defaultdict[tuple[str, str], Counter[str]] = defaultdict(Counter)
    for one in reads:
        groups[one.folder, one.style][one.outcome] += 1
        groups["all", one.style][one.outcome] += 1
    for (folder, style), outcomes in sorted(groups.items(), key=lambda item: (item[0][0] == "all", item[0])):
        others = ", ".join(f"{code} {n}" for code, n in outcomes.most_common() if code != "loads")
        print(f"{folder:28} {style:15} {outcomes.total():6} {outcomes['loads']:6}  {others}")


def main() -> None:
    """Read the command line, survey, print the table and the files asked for."""
    parser = argparse.ArgumentParser(
        description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter
    )
    parser.add_argument("folder", type=Path)
    parser.add_argument("--seconds", type=float, default=10.0, help="for one reading")
    parser.add_argument("--tops", type=int, default=20, help="most tops that are tried in a file")
    parser.add_argument("--folders", type=int, default=20, help="most folders looked in for included files")
    parser.add_argument("--list", action="append", default=[], metavar="STYLE", help="list what is refused")
    parser.add_argument("--json", type=Path, help="keep all outcomes there")
    options = parser.parse_args()
    reads = list(read_folder(options.folder, options))
    print_table(reads)
    for one in reads:
        if one.style in options.list and one.outcome != "loads":
            print(f"{one.path}: {one.outcome}", *one.told, sep="\n    ")
    if options.json:
        options.json.write_text(json.dumps([asdict(one) for one in reads], indent=1))


if __name__ == "__main__":
    main()
