"""The long text of a code shows its samples as they are typed; the list is one line a code."""

from __future__ import annotations

import pytest

from tardigate.report.explain_view import codes_view, explain_view, headline, sample_words
from tardigate.report.looks import Look
from tardigate.source.code_table import Entry, every_code, look_up

ENTRY = Entry(
    "V123",
    "error",
    "`{name}` is odd in {place:>4}",
    "Name it otherwise.",
    "First words.\nMore of them.\n\nA second paragraph.",
    {"arguments": "trail --count 2", "board.v": "module\tm;\nendmodule\n", "f.parts": "family F {}"},
    {"board.v": "module n; " + "x" * 200 + "\n"},
)


def test_a_code_is_told_with_its_samples() -> None:
    lines = [line.plain for line in explain_view(ENTRY, Look(60))]
    assert lines[:9] == [
        "V123  error: ‹name› is odd in ‹place›",
        "",
        "First words. More of them.",
        "",
        "A second paragraph.",
        "",
        "hint: Name it otherwise.",
        "",
        "faulty: tardigate trail board.v --count 2 --parts f.parts",
    ]
    assert "  │ module  m;" in lines
    assert lines[-1] == "  │ module n; " + "x" * 44 + "…"
    assert max(len(line) for line in lines) <= 60


def test_plain_terminals_get_ascii() -> None:
    assert all(line.plain.isascii() for line in explain_view(ENTRY, Look(60, plain=True)))


@pytest.mark.parametrize("width", [48, 80, 120])
def test_the_list_has_one_line_a_code(width: int) -> None:
    entries = [ENTRY, look_up("U101"), look_up("U103")]
    lines = [line.plain for line in codes_view(entries, Look(width))]
    assert [line.split()[0] for line in lines[1:]] == ["V123", "U101", "U103"]
    assert max(len(line) for line in lines) <= width


def test_open_places_of_a_headline_are_marked() -> None:
    assert headline("cannot read `{path}`: {reason}", Look()) == "cannot read ‹path›: ‹reason›"


@pytest.mark.parametrize(
    ("sample", "words"),
    [
        ({"board.v": ""}, ["pace", "board.v"]),
        ({"board.v": "", "f.parts": "", "inc.vh": ""}, ["pace", "board.v", "--parts", "f.parts"]),
        ({"arguments": "missing.v"}, ["pace", "missing.v"]),
        ({"arguments": "--top m", "board.v": ""}, ["pace", "board.v", "--top", "m"]),
        ({"arguments": "explain U999"}, ["explain", "U999"]),
    ],
)
def test_samples_become_words_of_the_command_line(sample: dict[str, str], words: list[str]) -> None:
    assert sample_words(sample) == words


@pytest.mark.parametrize("width", [80, 120])
def test_every_code_of_the_table_can_be_told_without_wrapping(width: int) -> None:
    for code in every_code():
        for line in explain_view(look_up(code), Look(width)):
            assert len(line.plain) <= width, code


def test_open_places_of_a_hint_are_marked() -> None:
    entry = ENTRY._replace(hint="Put it behind `{before}`.")
    assert "hint: Put it behind ‹before›." in [line.plain for line in explain_view(entry, Look(60))]
