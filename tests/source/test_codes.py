"""The table of codes: each faulty sample raises its code, each mended one is quiet about it and passes."""

from __future__ import annotations

import shlex
from collections.abc import Callable, Mapping
from pathlib import Path

import pytest

from tardigate.cli.main import run
from tardigate.netlist import cell_ways, expression, shop
from tardigate.source import files
from tardigate.source.code_table import FILES, every_code, look_up
from tardigate.source.diagnostic import Diagnostic
from tardigate.source.faults import InputRefusedError
from tardigate.source.files import read_file

COMMANDS = ("survey", "pace", "trail", "draft", "explain")
NO_COMMAND = ("U107",)
"""Codes whose samples say the command, or what stands in for one, themselves."""

BOARD = "module board(input a, output y);\nbuf #1 (y, a);\nendmodule\n"


def _words(sample: Mapping[str, str], code: str) -> list[str]:
    given = shlex.split(sample.get("arguments", ""))
    command = [] if code in NO_COMMAND or (given and given[0] in COMMANDS) else ["pace"]
    named = [word for name in sample if name.endswith(".v") for word in (name,)]
    parts = [word for name in sample if name.endswith(".parts") for word in ("--parts", name)]
    return [*command, *given, *named, *parts]


@pytest.fixture
def told(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> Callable[..., tuple[int, set[str]]]:
    """Run the tool on a sample; return its status and the codes of all it told."""

    def act(sample: Mapping[str, str], code: str) -> tuple[int, set[str]]:
        for name, text in sample.items():
            if name != "arguments":
                (tmp_path / name).write_text(text, encoding="utf-8")
        monkeypatch.chdir(tmp_path)
        made: set[str] = set()
        plain = Diagnostic.of.__func__  # type: ignore[attr-defined]

        def of(cls: type[Diagnostic], /, code: str, *words: object, **more: object) -> Diagnostic:
            made.add(code)
            return plain(cls, code, *words, **more)  # type: ignore[no-any-return]

        monkeypatch.setattr(Diagnostic, "of", classmethod(of))
        status = run(_words(sample, code))
        capsys.readouterr()
        return status, made

    return act


WITH_SAMPLES = [code for code in every_code() if look_up(code).faulty]


@pytest.mark.parametrize("code", WITH_SAMPLES)
def test_the_faulty_sample_raises_its_code(code: str, told: Callable[..., tuple[int, set[str]]]) -> None:
    entry = look_up(code)
    status, made = told(entry.faulty, code)
    assert code in made
    assert status == (0 if entry.severity == "warning" else 2)


@pytest.mark.parametrize("code", WITH_SAMPLES)
def test_the_mended_sample_does_not(code: str, told: Callable[..., tuple[int, set[str]]]) -> None:
    entry = look_up(code)
    status, made = told(entry.mended, code)
    assert code not in made
    assert status == 0, made


def test_at_least_forty_faulty_files_and_no_two_alike() -> None:
    samples = [str(sorted(look_up(code).faulty.items())) for code in WITH_SAMPLES]
    assert len(set(samples)) == len(samples) >= 40


@pytest.mark.parametrize("code", every_code())
def test_each_entry_is_complete(code: str) -> None:
    entry = look_up(code)
    assert entry.code[0] in FILES
    assert entry.severity in ("error", "warning")
    assert len(entry.text.split()) > 10
    assert entry.headline
    assert not entry.headline[0].isupper()
    assert not entry.headline.endswith(".")
    assert entry.hint or code in HINT_IS_MADE
    assert bool(entry.faulty) == bool(entry.mended)
    assert entry.faulty or code in WITHOUT_SAMPLE


HINT_IS_MADE = ("N102", "N160", "P002", "P006", "P018")
"""Their hint names what is near or there, so it is made for each case."""

WITHOUT_SAMPLE = ("N122", "N125", "N185", "U102", "U109", "U110")
"""Too large for a sample, or no text, and raised below; U109 (a full disk) in tests/cli."""


def test_a_code_without_a_sample_is_raised_by_a_test_of_its_own() -> None:
    tests = Path(__file__).parents[1]
    own = (tests / "source" / "test_codes.py").read_text()
    written = " ".join(path.read_text() for path in (tests / "cli").glob("test_*.py"))
    for code in WITHOUT_SAMPLE:
        assert f"def test_{code.lower()}_" in own or f"error {code}" in written, code


def _codes(path: Path) -> list[str]:
    from tardigate.pipeline import Request, load

    with pytest.raises(InputRefusedError) as refusal:
        load(Request((str(path),)))
    return [diagnostic.code for diagnostic in refusal.value.diagnostics]


def test_u102_a_file_that_is_too_large(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path = tmp_path / "board.v"
    path.write_text(BOARD)
    monkeypatch.setattr(files, "LARGEST_FILE", 20)
    with pytest.raises(InputRefusedError) as refusal:
        read_file(path)
    assert [diagnostic.code for diagnostic in refusal.value.diagnostics] == ["U102"]


@pytest.mark.parametrize(
    "data",
    [BOARD.encode("utf-16"), BOARD.encode("utf-16-le"), bytes(range(256)) * 9, bytes(90)],
)
def test_u110_a_file_that_is_no_text_is_told_once(
    tmp_path: Path, capsys: pytest.CaptureFixture[str], data: bytes
) -> None:
    board, other = tmp_path / "board.v", tmp_path / "other"
    board.write_text(BOARD)
    other.write_bytes(data)
    for words in (["pace", str(other)], ["pace", str(board), "--parts", str(other)]):
        assert run(words) == 2
        shown = capsys.readouterr().err
        assert shown.count("error U110") == shown.count("error ") == 1


def test_n122_more_gates_than_may_come_of_operators(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path = tmp_path / "board.v"
    path.write_text("module board(input [9:0] a, output [9:0] y);\nassign y = ~a ^ (a & a);\nendmodule\n")
    monkeypatch.setattr(expression, "MOST_RESULTS", 25)
    assert _codes(path) == ["N122"]


def test_n125_more_sets_of_parameters_than_may_be(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path = tmp_path / "board.v"
    uses = "\n".join(f"half #({i}) u{i} (a);" for i in range(9))
    path.write_text(
        f"module board(input a);\n{uses}\nendmodule\nmodule half(input a);\nparameter P = 1;\nendmodule\n"
    )
    monkeypatch.setattr(shop, "MOST_SETS", 5)
    assert _codes(path) == ["N125"]


def test_n185_more_inside_a_cell_than_may_be(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path = tmp_path / "board.v"
    path.write_text(
        "`timescale 1 ns / 1 ps\nmodule board(input a, output y);\ncell_ u (.a(a), .y(y));\nendmodule\n"
        "module cell_(input a, output y);\nbuf #1 (y, a);\nspecify (a => y) = 1; endspecify\nendmodule\n"
    )
    monkeypatch.setattr(cell_ways, "MOST_STEPS", 3)
    assert _codes(path) == ["N185"]
