"""Configurations are not read, and libraries of many files need none (IEEE 1364-2005 clause 13)."""

from __future__ import annotations

from collections.abc import Callable
from itertools import permutations

import pytest

from tardigate.netlist.dump import dump
from tardigate.pipeline import Request, load
from tardigate.source.files import SourceFile

Codes = Callable[..., list[str]]

BOARD = "module board(input a, output y);\nhalf u (a, y);\nendmodule\n"
HALF = "module half(input a, output y);\nwire w;\nless u (a, w);\nless v (w, y);\nendmodule\n"
LESS = "`celldefine\nmodule less(input a, output y);\nnot g (y, a);\nendmodule\n`endcelldefine\n"
MORE = "module more(input a, output y);\nless u (a, y);\nendmodule\n"


@pytest.mark.parametrize(
    "text",
    [
        "config c;\ndesign board;\nendconfig\n",
        "config c;\ndesign work.board;\ndefault liblist work;\nendconfig\n",
        "config c;\ndesign board;\ninstance board.u liblist work;\ncell half use work.half;\nendconfig\n",
    ],
)
def test_13_3_a_configuration_is_refused_clearly(text: str, told: Codes) -> None:
    """The library is the set of the files that are given: nothing is left for a configuration to choose."""
    assert told(text + BOARD + HALF + LESS, top="board") == ["V006"]
    assert told(BOARD + HALF + LESS + text, top="board") == ["V006"]


@pytest.mark.parametrize("text", ['library work "*.v";\n', 'include "lib.map";\n'])
def test_13_2_a_map_of_libraries_is_no_design(text: str, told: Codes) -> None:
    assert told(text + BOARD + HALF + LESS, top="board")[0][0] == "V"


@pytest.mark.parametrize("order", list(permutations(range(4))))
def test_13_2_files_may_come_in_any_order(order: tuple[int, ...]) -> None:
    """One library of many files; modules that nobody uses do no harm where the top is named."""
    texts = [BOARD, HALF, LESS, MORE]
    files = tuple(SourceFile(f"f{at}.v", texts[at].encode()) for at in order)
    flat = load(Request(files, top="board")).flat
    assert dump(flat) == "input a = a\noutput y = y\nnot u.u.g: out=u.w, in=a\nnot u.v.g: out=y, in=u.w\n"


def test_13_1_a_module_that_two_files_define(told: Codes) -> None:
    assert told(BOARD + HALF + LESS + LESS, top="board") == ["N101"]
