"""Commands end to end: what goes where, and with which status."""

from __future__ import annotations

import json
import os
import subprocess
import sys
from collections.abc import Callable
from importlib import resources
from pathlib import Path

import pytest
from jsonschema import Draft202012Validator

from tardigate.cli import main
from tardigate.cli.options import COMMANDS, HELP, VERSION
from tardigate.report.explain_view import sample_words
from tardigate.source.code_table import every_code, look_up
from tardigate.source.faults import InternalFaultError

Tardigate = Callable[..., tuple[int, str, str]]
SCHEMA = json.loads(resources.files("tardigate.report").joinpath("schema.json").read_text("utf-8"))
USE_CODES = [code for code in every_code() if code.startswith("U")]


def _break(monkeypatch: pytest.MonkeyPatch, fault: BaseException) -> None:
    def command(*_: object) -> None:
        raise fault

    monkeypatch.setattr(main, "_command", lambda _: command)


def test_pace_answers_on_standard_output_alone(tardigate: Tardigate) -> None:
    status, out, err = tardigate("pace", "board.v", "--width", "80")
    assert (status, err) == (0, "")
    sentence = (
        "`board` settles in 19 ns: the last to settle is `co` (rise), through 5 hops from `a[0]` (rise)."
    )
    assert " ".join(out.split()).startswith(sentence)
    assert max(map(len, out.splitlines())) <= 80


def test_trail_tells_as_many_as_asked_between_the_names_asked(tardigate: Tardigate) -> None:
    status, out, _ = tardigate(
        "trail", "board.v", "--count", "2", "--from", "a", "--to", "high.s", "--fastest"
    )
    assert status == 0
    assert out.startswith("The 2 fastest trails from `a` to `high.s` take 6 ns")
    assert "high.u2" in out


def test_survey_counts(tardigate: Tardigate) -> None:
    status, out, _ = tardigate("survey", "board.v")
    assert status == 0
    assert "`board` holds 10 part instances on 15 nets, in 3 instances of 2 modules" in out
    assert "low … high" in out


def test_a_draft_goes_to_standard_output_or_to_a_file(tardigate: Tardigate, tmp_path: Path) -> None:
    (tmp_path / "bare.v").write_text("module bare(input a, output y); not (y, a); endmodule\n")
    status, out, _ = tardigate("draft", "bare.v")
    assert status == 0
    assert "not" in out
    assert tardigate("draft", "bare.v", "-o", "family.parts")[:2] == (0, "wrote family.parts\n")
    assert (tmp_path / "family.parts").read_text() == out


def test_a_refusal_goes_to_standard_error(tardigate: Tardigate) -> None:
    status, out, err = tardigate("pace", "missing.v")
    assert (status, out) == (2, "")
    assert err.startswith("error U101: cannot read `missing.v`")


@pytest.mark.parametrize(
    "words",
    [
        "survey board.v",
        "pace board.v",
        "trail board.v --count 2",
        "draft board.v",
        "explain",
        "explain U103",
        "pace missing.v",
        "pace board.v --grade fast",
        "trail board.v --from nothing",
        "pacer",
    ],
)
def test_json_is_one_object_that_holds_to_the_schema_and_nothing_else(
    tardigate: Tardigate, words: str
) -> None:
    status, out, err = tardigate(*words.split(), "--json")
    assert err == ""
    found = json.loads(out)
    Draft202012Validator(SCHEMA).validate(found)
    refused = any(told["severity"] == "error" for told in found["diagnostics"])
    assert status == (2 if refused else 0)


def test_json_tells_the_same_times_as_the_view(tardigate: Tardigate) -> None:
    found = json.loads(tardigate("pace", "board.v", "--json")[1])
    assert (found["settles_ns"], found["limiting_trail"]["hop_count"]) == (19.0, 5)
    assert sum(hop["delay_ns"] for hop in found["limiting_trail"]["hops"]) == found["settles_ns"]
    assert found["outputs"][0]["name"] == "co"


def test_words_before_any_command(tardigate: Tardigate) -> None:
    assert tardigate("--version") == (0, f"tardigate {VERSION}\n", "")
    assert tardigate("--help")[:2] == (0, HELP)
    status, out, err = tardigate()
    assert (status, out) == (2, "")
    assert "usage: tardigate COMMAND" in err


@pytest.mark.parametrize("command", sorted(COMMANDS))
def test_each_command_has_help(tardigate: Tardigate, command: str) -> None:
    status, out, err = tardigate(command, "--help")
    assert (status, err) == (0, "")
    assert out.startswith(f"usage: tardigate {command}")
    assert "--json" in out


@pytest.mark.parametrize(
    "fault", [InternalFaultError("sums differ"), ZeroDivisionError("odd"), RecursionError()]
)
def test_a_fault_of_its_own_is_called_so(
    tardigate: Tardigate, monkeypatch: pytest.MonkeyPatch, fault: Exception
) -> None:
    _break(monkeypatch, fault)
    status, out, err = tardigate("pace", "board.v")
    assert (status, out) == (3, "")
    assert err.startswith(f"tardigate: a fault of tardigate itself, not of the input: {type(fault).__name__}")
    assert "Traceback" not in err
    status, out, err = tardigate("pace", "board.v", "--json")
    assert (status, err) == (3, "")
    Draft202012Validator(SCHEMA).validate(json.loads(out))


def test_a_fault_is_traced_when_asked(tardigate: Tardigate, monkeypatch: pytest.MonkeyPatch) -> None:
    _break(monkeypatch, ZeroDivisionError("odd"))
    monkeypatch.setenv("TARDIGATE_DEBUG", "1")
    with pytest.raises(ZeroDivisionError):
        tardigate("pace", "board.v")


def test_an_interrupt_ends_in_one_line(tardigate: Tardigate, monkeypatch: pytest.MonkeyPatch) -> None:
    _break(monkeypatch, KeyboardInterrupt())
    assert tardigate("pace", "board.v") == (130, "", "tardigate: interrupted\n")


def test_a_reader_that_goes_away_is_no_fault(tmp_path: Path) -> None:
    command = [sys.executable, "-m", "tardigate", "explain"]
    with subprocess.Popen(command, stdout=subprocess.PIPE, stderr=subprocess.PIPE, cwd=tmp_path) as process:
        assert process.stdout is not None
        assert process.stderr is not None
        process.stdout.close()
        assert (process.wait(60), process.stderr.read()) == (0, b"")


@pytest.mark.parametrize("code", USE_CODES)
def test_each_use_code_is_raised_by_its_faulty_sample_and_not_by_its_mended_one(
    tardigate: Tardigate, tmp_path: Path, code: str
) -> None:
    entry = look_up(code)
    for sample, raised in ((entry.faulty, True), (entry.mended, False)):
        if raised and code == "U102":
            continue  # a file of 1 GiB: shown in tests/source
        for name, text in sample.items():
            if name != "arguments":
                (tmp_path / name).write_text(text)
        found = json.loads(tardigate(*sample_words(sample), "--json")[1])
        assert (code in {told["code"] for told in found["diagnostics"]}) == raised


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


def test_a_piped_report_follows_columns_and_the_option(
    tardigate: Tardigate, monkeypatch: pytest.MonkeyPatch
) -> None:
    def widest(*words: str) -> int:
        return max(map(len, tardigate("trail", "board.v", *words)[1].splitlines()))

    assert widest() == 100
    monkeypatch.setenv("COLUMNS", "70")
    assert widest() <= 70
    assert 70 < widest("--width", "90") <= 90


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
