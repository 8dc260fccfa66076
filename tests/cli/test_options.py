"""Words become options wherever they stand; wrong words are refused with a code."""

from __future__ import annotations

import tomllib
from pathlib import Path

import pytest

from tardigate import __version__
from tardigate.cli.options import COMMANDS, HELP, MOST_TRAILS, Options, read_options
from tardigate.source.faults import InputRefusedError


def _code(*words: str) -> str:
    with pytest.raises(InputRefusedError) as refused:
        read_options(list(words))
    return refused.value.diagnostics[0].code


def test_options_may_stand_before_between_and_after_files() -> None:
    expected = Options("pace", ("a.v", "b.v"), ("x.parts", "y.parts"), top="m")
    words = ["--parts", "x.parts", "a.v", "--top", "m", "b.v", "--parts", "y.parts"]
    assert read_options(["pace", *words]) == expected


def test_every_option_reaches_the_record() -> None:
    words = "trail a.v --condition v5 --grade max -I inc --include more -D N=4 -DWIDE --json --colour never"
    more = "--width 90 --count 7 --fastest --from a --from b.* --to u1.Y"
    assert read_options(f"{words} {more}".split()) == Options(
        "trail",
        ("a.v",),
        condition="v5",
        grade="max",
        include_dirs=("inc", "more"),
        defines=(("N", "4"), ("WIDE", "")),
        json=True,
        colour="never",
        width=90,
        trails=7,
        fastest=True,
        from_names=("a", "b.*"),
        to_names=("u1.Y",),
    )
    assert read_options(["draft", "a.v", "-o", "f.parts"]).output_file == "f.parts"
    assert read_options(["pace", "a.v", "--outputs", "0"]).outputs == 0
    assert read_options(["explain", "V101"]).code == "V101"


@pytest.mark.parametrize(
    "words",
    [
        "pace",
        "pace a.v --grade fast",
        "pace a.v --parts",
        "pace a.v --gade max",
        "pace a.v --count 3",
        "pace a.v --par x.parts",
        "pace a.v -D 4=N",
        "trail a.v --count 0",
        f"trail a.v --count {MOST_TRAILS + 1}",
        f"trail a.v --count {'9' * 5000}",
        "trail a.v --width 3",
        "explain V101 V102",
    ],
)
def test_wrong_words_are_refused(words: str) -> None:
    assert _code(*words.split()) == "U103"


@pytest.mark.parametrize("option", ["--condition", "--top", "--grade"])
def test_an_option_with_one_value_is_not_given_twice(option: str) -> None:
    assert _code("pace", "a.v", option, "min", f"{option}=max") == "U111"


def test_a_mistyped_option_or_command_is_told_its_neighbour() -> None:
    for words, near in ((["pace", "a.v", "--gade=max"], "--grade"), (["pacer"], "pace")):
        with pytest.raises(InputRefusedError) as refused:
            read_options(words)
        assert refused.value.diagnostics[0].hint == f"Did you mean `{near}`?"


def test_no_such_command() -> None:
    assert _code("") == _code("settle") == "U107"


def test_help_names_every_command() -> None:
    assert all(f"\n  {name} " in HELP for name in COMMANDS)


def test_the_version_is_the_project_s() -> None:
    project = tomllib.loads((Path(__file__).parents[2] / "pyproject.toml").read_text())["project"]
    assert project["version"] == __version__
