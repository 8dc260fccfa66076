"""What the READMEs tell a user to type does what they say."""

from __future__ import annotations

import doctest
import os
import re
import shlex
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]
README = (ROOT / "README.md").read_text("utf-8")
WALK = (ROOT / "examples" / "README.md").read_text("utf-8")
COMMANDS = re.findall(r"```console\n\$ ([^\n]*)\n(.*?)```", WALK, re.DOTALL)
SETUP = re.findall(r"```sh\n(.*?)```", README, re.DOTALL)


def shell(command: str) -> subprocess.CompletedProcess[str]:
    path = f"{Path(sys.executable).parent}{os.pathsep}{os.environ['PATH']}"
    environment = {
        **os.environ,
        "PATH": path,
        "NO_COLOR": "1",
        "COLUMNS": "100",
        "TERM": "xterm",
        "PYTHONIOENCODING": "utf-8",
    }
    return subprocess.run(
        ["bash", "-c", command], cwd=ROOT, env=environment, capture_output=True, text=True, check=False,
        encoding="utf-8",
    )  # fmt: skip


@pytest.mark.parametrize(("command", "output"), COMMANDS, ids=[command[:60] for command, _ in COMMANDS])
def test_the_walk_through_the_examples_shows_what_is_printed(command: str, output: str) -> None:
    done = shell(command)
    assert (done.stdout + done.stderr).rstrip() == output.rstrip()
    assert done.returncode in (0, 2)


def test_the_python_in_the_walk_runs(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(ROOT)
    found = doctest.DocTestParser().get_doctest(WALK, {}, "examples/README.md", None, 0)
    assert found.examples
    result = doctest.DocTestRunner().run(found)
    assert result.failed == 0


def test_two_commands_do_all_the_set_up() -> None:
    assert len(SETUP) == 2
    for command in SETUP:
        assert command.startswith("python3 -m venv .venv && .venv/bin/pip install ")
        assert command.count("\n") == 1
    assert ".venv/bin/pytest" in SETUP[1]


def test_the_first_command_of_the_readme_shows_the_limiting_trail() -> None:
    command = SETUP[0].strip().rpartition("&& ")[2].removeprefix(".venv/bin/")
    assert shlex.split(command)[0] == "tardigate"
    done = shell(command)
    assert (done.returncode, done.stderr) == (0, "")
    assert " hops" in done.stdout


def test_ci_runs_the_readmes_own_test_command() -> None:
    script = (ROOT / ".ci" / "run").read_text("utf-8")
    reader = re.search(r"^command=\$\((.*)\)$", script, re.MULTILINE)
    assert reader
    assert shell(f'printf %s "$({reader[1]})"').stdout == SETUP[1].strip()


@pytest.mark.parametrize("name", ["README.md", "examples/README.md", "grammars/parts.md", "DEVELOPERS.md"])
def test_what_the_pages_link_to_is_there(name: str) -> None:
    page = ROOT / name
    for target in re.findall(r"\]\(([^)#:]+)\)", page.read_text("utf-8")):
        assert (page.parent / target).exists(), target


def test_the_caution_stands_where_figures_are_given() -> None:
    caution = "Computed times are no substitute for measurement and for the applicable safety standards and"
    for page in (README, WALK):
        assert caution in " ".join(page.split())
