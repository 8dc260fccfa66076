"""Commands end to end: what goes where, and with which status."""

from __future__ import annotations

import json
from collections.abc import Callable
from importlib import resources
from pathlib import Path

import pytest
from jsonschema import Draft202012Validator

from tardigate import __version__
from tardigate.cli import main
from tardigate.cli.options import COMMANDS, HELP
from tardigate.report.explain_view import sample_words
from tardigate.source.code_table import every_code, look_up
from tardigate.source.faults import InternalFaultError

Tardigate = Callable[..., tuple[int, str, str]]
SCHEMA = json.loads(resources.files("tardigate.report").joinpath("schema.json").read_text("utf-8"))
FULL = Path("/dev/full")
CLOCKED = """\
`timescale 1ns/1ps
module clocked(input d, ck, output q);
  wire a, b;
  FF f1 (.D(d), .CK(ck), .Q(a));
  buf #1 u1 (b, a);
  FF f2 (.D(b), .CK(ck), .Q(q));
endmodule
"""
FLIP_FLOP = """\
family TRIAL "for this test" {
  part FF "register" {
    inputs D, CK; output Q;
    register posedge CK { Q = D; }
    times ns { tpd CK => Q 2:4:6; }
  }
}
"""
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


def test_a_draft_never_overwrites(tardigate: Tardigate, tmp_path: Path) -> None:
    (tmp_path / "bare.v").write_text("module bare(input a, output y); not (y, a); endmodule\n")
    (tmp_path / "family.parts").write_text("filled in by hand\n")
    status, out, err = tardigate("draft", "bare.v", "-o", "family.parts")
    assert (status, out) == (2, "")
    assert err.startswith("error U108: `family.parts` is there already")
    assert (tmp_path / "family.parts").read_text() == "filled in by hand\n"


@pytest.mark.skipif(not FULL.exists(), reason="a device that is always full is found on Linux alone")
def test_a_draft_onto_a_full_device_is_refused_and_the_device_stays(
    tardigate: Tardigate, tmp_path: Path
) -> None:
    (tmp_path / "bare.v").write_text("module bare(input a, output y); not (y, a); endmodule\n")
    status, out, err = tardigate("draft", "bare.v", "-o", str(FULL))
    assert (status, out) == (2, "")
    assert err.startswith("error U106: cannot write `/dev/full`: No space left on device")
    assert FULL.exists()


def test_a_draft_that_broke_off_leaves_no_half_file(
    tardigate: Tardigate, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    (tmp_path / "bare.v").write_text("module bare(input a, output y); not (y, a); endmodule\n")
    monkeypatch.setattr("tardigate.cli.draft.draft_of", lambda _: "a \ud800 that UTF-8 cannot say")
    status, _, err = tardigate("draft", "bare.v", "-o", "family.parts")
    assert (status, err.startswith("error U106")) == (2, True)
    assert not (tmp_path / "family.parts").exists()


def test_a_draft_of_a_complete_design_writes_nothing(tardigate: Tardigate, tmp_path: Path) -> None:
    said = "tardigate: nothing is missing: every kind has a delay\n"
    assert tardigate("draft", "board.v") == (0, "", said)
    assert tardigate("draft", "board.v", "-o", "family.parts") == (0, "", said)
    assert not (tmp_path / "family.parts").exists()
    status, out, err = tardigate("draft", "board.v", "-o", "family.parts", "--json")
    assert (status, err) == (0, "")
    assert (json.loads(out)["file"], json.loads(out)["text"]) == (None, "")


@pytest.mark.parametrize("word", ["u1", "u0", "v1", "V1O1", "p", "x", ""])
def test_a_mistyped_code_is_told_one_of_its_letter(tardigate: Tardigate, word: str) -> None:
    status, _, err = tardigate("explain", word)
    assert (status, err.startswith(f"error U105: there is no diagnostic code `{word}`")) == (2, True)
    near = {"u1": "U101", "v1": "V101", "V1O1": "V1", "u0": "U1"}.get(word, "")
    assert f"Did you mean `{near}" in err if near else "lists the codes" in err


def test_a_code_may_be_typed_in_small_letters(tardigate: Tardigate) -> None:
    assert tardigate("explain", "v101") == tardigate("explain", "V101")
    assert tardigate("explain", "v101")[0] == 0


def test_trails_from_a_clock_port_begin_at_the_clock_pins(tardigate: Tardigate, tmp_path: Path) -> None:
    (tmp_path / "clocked.v").write_text(CLOCKED)
    (tmp_path / "trial.parts").write_text(FLIP_FLOP)
    words = ("trail", "clocked.v", "--parts", "trial.parts", "--from", "ck", "--json")
    found = json.loads(tardigate(*words)[1])
    assert [(t["source"]["name"], t["sink"]["name"], t["total_ns"]) for t in found["trails"][:1]] == [
        ("f1.CK", "f2.D", 7.0)
    ]


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
    assert tardigate("--version") == (0, f"tardigate {__version__}\n", "")
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


@pytest.mark.parametrize("code", USE_CODES)
def test_each_use_code_is_raised_by_its_faulty_sample_and_not_by_its_mended_one(
    tardigate: Tardigate, tmp_path: Path, code: str
) -> None:
    entry = look_up(code)
    for sample, raised in ((entry.faulty, True), (entry.mended, False)):
        if not sample:
            # A file of 1 GiB, no text: shown in tests/source; a full disk: see below.
            assert code in ("U102", "U109", "U110")
            continue
        for name, text in sample.items():
            if name != "arguments":
                (tmp_path / name).write_text(text)
        found = json.loads(tardigate(*sample_words(sample), "--json")[1])
        assert (code in {told["code"] for told in found["diagnostics"]}) == raised
