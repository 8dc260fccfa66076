"""The repository keeps its own promises: order of the houses, sizes, imports, package data."""

from __future__ import annotations

import ast
import subprocess
import sys
from collections.abc import Iterator
from importlib import resources
from pathlib import Path

import pytest

import tardigate

ROOT = Path(__file__).parents[2]
PACKAGE = ROOT / "src" / "tardigate"
ORDER = (
    "source", "syntax", "parts", "netlist", "graph", "analysis", "report", "pipeline", "design", "cli",
    "__main__",
)  # fmt: skip
FILES = sorted(PACKAGE.rglob("*.py"))
MAY_IMPORT = {
    "rich": {"report", "cli"},
    "lark": {"syntax"},
    "networkx": {"graph", "design"},
    "tomllib": {"source"},
    "argparse": {"cli"},
}
"""Which houses may import what, lazy and typing imports counted."""


def house(file: Path) -> str:
    return file.relative_to(PACKAGE).parts[0].removesuffix(".py")


def imports(file: Path) -> Iterator[str]:
    for node in ast.walk(ast.parse(file.read_text("utf-8"))):
        if isinstance(node, ast.Import):
            yield from (name.name for name in node.names)
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{file}: relative import"
            yield node.module or ""


@pytest.mark.parametrize("file", FILES, ids=lambda file: str(file.relative_to(PACKAGE)))
def test_a_house_imports_only_houses_before_it(file: Path) -> None:
    own = house(file)
    for name in imports(file):
        head, *rest = name.split(".")
        if own == "__init__":
            continue  # the public names
        if head == "tardigate" and rest:
            assert ORDER.index(rest[0]) <= ORDER.index(own), f"{file.name} imports {name}"
        assert own in MAY_IMPORT.get(head, {own}), f"{file.name} imports {name}"


@pytest.mark.parametrize("file", FILES, ids=lambda file: str(file.relative_to(PACKAGE)))
def test_files_are_small_and_say_what_they_hold(file: Path) -> None:
    text = file.read_text("utf-8")
    assert len(text.splitlines()) <= 400
    assert ast.get_docstring(ast.parse(text))


def test_only_the_frame_lies_at_the_top() -> None:
    listed = subprocess.run(["git", "ls-files"], cwd=ROOT, capture_output=True, text=True, check=False)
    if listed.returncode:  # an export without its history
        names = {path.name for path in ROOT.iterdir()} - {"build", "tardigate.egg-info"}
    else:
        names = {line.partition("/")[0] for line in listed.stdout.splitlines()}
    shown = {name for name in names if not name.startswith(".")}
    frame = {
        "README.md",
        "DEVELOPERS.md",
        "LICENSE",
        "pyproject.toml",
        "src",
        "grammars",
        "tests",
        "examples",
    }
    assert shown == frame


def test_the_public_names_are_there() -> None:
    for name in tardigate.__all__:
        assert getattr(tardigate, name) is not None
    with pytest.raises(AttributeError):
        tardigate.__getattr__("nothing_of_that_name")


@pytest.mark.parametrize(
    ("package", "name"),
    [
        ("tardigate.grammars", "verilog.lark"),
        ("tardigate.grammars", "parts.lark"),
        ("tardigate.grammars", "udp.lark"),
        ("tardigate.grammars", "parts.md"),
        ("tardigate.report", "schema.json"),
        ("tardigate", "py.typed"),
        *(
            ("tardigate.source.codes", f"{name}.toml")
            for name in ("use", "verilog", "parts", "netlist", "graph")
        ),
    ],
)
def test_package_data_is_found_from_the_installed_package(package: str, name: str) -> None:
    assert resources.files(package).joinpath(name).is_file()


def loaded_modules(code: str) -> set[str]:
    done = subprocess.run(
        [sys.executable, "-c", f"{code}\nimport sys; print(*sys.modules)"],
        capture_output=True, text=True, check=True, cwd=ROOT,
    )  # fmt: skip
    return set(done.stdout.splitlines()[-1].split())


def test_importing_the_package_costs_next_to_nothing() -> None:
    assert not {"numpy", "lark", "rich", "networkx"} & loaded_modules("import tardigate")


def test_a_run_imports_only_what_it_uses() -> None:
    words = ["pace", "examples/first/picker.v", "--parts", "examples/first/picker.parts"]
    code = f"from tardigate.cli.main import run\nassert run({words!r}) == 0"
    loaded_modules(code)  # makes the grammars' tables where there are none yet
    found = loaded_modules(code)
    assert "numpy" in found
    assert (
        not {"lark", "networkx", "tomllib", "difflib", "numpy.ma", "rich.markdown", "rich.traceback"} & found
    )
