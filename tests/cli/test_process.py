"""What the process sees of its surroundings: terminals, environment, full disks, interrupts."""

from __future__ import annotations

import os
import struct
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import pytest

from tardigate.cli import entry

Tardigate = Callable[..., tuple[int, str, str]]
FULL = Path("/dev/full")
full = pytest.mark.skipif(not FULL.exists(), reason="a device that is always full is found on Linux alone")


class _Interrupting:
    """Is interrupted when the command line is imported."""

    @staticmethod
    def find_spec(name: str, *_: object) -> None:
        if name == "tardigate.cli.main":
            raise KeyboardInterrupt


def test_an_interrupt_during_the_imports_ends_in_one_line(
    monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    monkeypatch.delitem(sys.modules, "tardigate.cli.main", raising=False)
    monkeypatch.setattr(sys, "meta_path", [_Interrupting(), *sys.meta_path])
    assert entry.run() == 130
    assert capsys.readouterr() == ("", "tardigate: interrupted\n")


def test_the_entry_imports_nothing_of_the_rest() -> None:
    script = (
        "import sys, tardigate.cli.entry; print(sorted(m for m in sys.modules if m.startswith('tardigate')))"
    )
    ended = subprocess.run([sys.executable, "-c", script], capture_output=True, text=True, check=True)
    assert ended.stdout == "['tardigate', 'tardigate.cli', 'tardigate.cli.entry']\n"


def test_a_reader_that_goes_away_is_no_fault(tmp_path: Path) -> None:
    command = [sys.executable, "-m", "tardigate", "explain"]
    with subprocess.Popen(command, stdout=subprocess.PIPE, stderr=subprocess.PIPE, cwd=tmp_path) as process:
        assert process.stdout is not None
        assert process.stderr is not None
        process.stdout.close()
        assert (process.wait(60), process.stderr.read()) == (0, b"")


@full
@pytest.mark.parametrize("words", ["pace board.v", "pace board.v --json", "pace --help", "--help", "explain"])
def test_an_output_that_takes_nothing_is_told_as_that(
    tardigate: Tardigate, tmp_path: Path, words: str
) -> None:
    tardigate("--version")  # makes board.v
    command = [sys.executable, "-m", "tardigate", *words.split()]
    with FULL.open("w") as disk:
        ended = subprocess.run(
            command, stdout=disk, stderr=subprocess.PIPE, text=True, cwd=tmp_path, check=False
        )
    assert ended.stderr.startswith("error U109: cannot write the output: No space left on device\n")
    assert (ended.returncode, "Traceback" in ended.stderr, "Exception" in ended.stderr) == (2, False, False)


@full
def test_a_standard_error_that_takes_nothing_changes_no_status(tardigate: Tardigate, tmp_path: Path) -> None:
    tardigate("--version")  # makes board.v
    for words, status in (("pace missing.v", 2), ("draft board.v", 0)):
        with FULL.open("w") as disk:
            command = [sys.executable, "-m", "tardigate", *words.split()]
            ended = subprocess.run(command, stdout=subprocess.PIPE, stderr=disk, cwd=tmp_path, check=False)
        assert (ended.returncode, ended.stdout) == (status, b"")


@pytest.mark.skipif(os.name != "posix", reason="needs a shell that closes standard output")
def test_a_closed_output_is_told_as_that(tmp_path: Path) -> None:
    command = f"exec '{sys.executable}' -m tardigate explain U103 >&-"
    ended = subprocess.run(
        ["sh", "-c", command], stderr=subprocess.PIPE, text=True, cwd=tmp_path, check=False
    )
    assert ended.returncode == 2
    assert ended.stderr.startswith("error U109: cannot write the output: it is closed\n")


@pytest.mark.parametrize(
    ("words", "environment", "escapes"),
    [
        ("", {}, False),
        ("--colour always", {}, True),
        ("--colour always", {"NO_COLOR": "1"}, False),
        ("--colour never", {"FORCE_COLOR": "1"}, False),
    ],
)
def test_colours_follow_the_option_and_the_environment(
    tardigate: Tardigate,
    monkeypatch: pytest.MonkeyPatch,
    words: str,
    environment: dict[str, str],
    escapes: bool,
) -> None:
    for name, value in environment.items():
        monkeypatch.setenv(name, value)
    out = tardigate("pace", "board.v", *words.split())[1]
    assert ("\x1b[36m" in out) == escapes


def test_a_dumb_terminal_gets_plain_text(tardigate: Tardigate, monkeypatch: pytest.MonkeyPatch) -> None:
    assert not tardigate("trail", "board.v")[1].isascii()
    monkeypatch.setenv("TERM", "dumb")
    monkeypatch.setenv("FORCE_COLOR", "1")
    out = tardigate("trail", "board.v")[1]
    assert out.isascii()
    assert "\x1b" not in out
    assert "in1/ -> out/" in out


def test_a_piped_report_follows_columns_and_the_option(
    tardigate: Tardigate, monkeypatch: pytest.MonkeyPatch
) -> None:
    def widest(*words: str) -> int:
        return max(map(len, tardigate("trail", "board.v", *words)[1].splitlines()))

    assert widest() == 100
    monkeypatch.setenv("COLUMNS", "70")
    assert widest() <= 70
    assert 70 < widest("--width", "90") <= 90


def test_a_piped_report_is_as_wide_as_the_terminal_that_standard_error_is(
    tardigate: Tardigate, tmp_path: Path
) -> None:
    fcntl, termios = pytest.importorskip("fcntl"), pytest.importorskip("termios")
    tardigate("--version")  # makes board.v
    ours, theirs = os.openpty()
    try:
        fcntl.ioctl(theirs, termios.TIOCSWINSZ, struct.pack("HHHH", 24, 77, 0, 0))
        command = [sys.executable, "-m", "tardigate", "trail", "board.v"]
        environment = {**os.environ, "PYTHONIOENCODING": "utf-8"}
        ended = subprocess.run(
            command, stdout=subprocess.PIPE, stderr=theirs, cwd=tmp_path, env=environment, check=True
        )
    finally:
        os.close(theirs)
        os.close(ours)
    assert max(map(len, ended.stdout.decode().splitlines())) == 77


def test_an_output_that_is_not_utf_8_gets_ascii(tardigate: Tardigate, tmp_path: Path) -> None:
    tardigate("--version")  # makes board.v
    environment = {**os.environ, "PYTHONIOENCODING": "ascii"}
    command = [sys.executable, "-m", "tardigate", "trail", "board.v"]
    ended = subprocess.run(command, capture_output=True, cwd=tmp_path, env=environment, check=True)
    assert ended.stdout.isascii()
    assert b"in1/ -> out/" in ended.stdout


def test_explain_starts_without_numpy(tmp_path: Path) -> None:
    script = "import sys, tardigate.cli.main as m; m.run(['explain', 'U103']); print('numpy' in sys.modules)"
    ended = subprocess.run(
        [sys.executable, "-c", script], capture_output=True, text=True, cwd=tmp_path, check=True
    )
    assert ended.stdout.endswith("False\n")
