"""Numbers, units, triples and columns."""

import math
from collections.abc import Callable

import pytest
from hypothesis import given, strategies as st

from tardigate.parts.library import Library
from tardigate.parts.units import FEMTOSECONDS, amount, time_in_fs
from tardigate.source.collector import Collector
from tardigate.source.files import SourceFile

Read = Callable[..., Library]


def nand(cells: str, unit: str = "ns", conditions: str = "") -> str:
    return f"family F {{ {conditions} gates {unit} {{ tpd nand {cells}; }} }}"


@given(st.integers(0, 10**9), st.integers(0, 3))
def test_results_do_not_depend_on_the_unit_written(femtoseconds: int, zeros: int) -> None:
    tail = "0" * zeros
    fs, ps, ns = (
        (f"{femtoseconds}.{tail or 0}", "fs"),
        (f"{femtoseconds // 1000}.{femtoseconds % 1000:03}{tail}", "ps"),
        (f"{femtoseconds // 10**6}.{femtoseconds % 10**6:06}{tail}", "ns"),
    )
    kinds = []
    for number, unit in (fs, ps, ns):
        text = nand(number, unit).encode()
        kinds.append(Library.read([SourceFile("f", text)], None, Collector()).gate_kind("nand", 2))
    assert {kind.delays.max() for kind in kinds} == {float(femtoseconds)}


@given(st.decimals(0, 9, places=15), st.sampled_from(sorted(FEMTOSECONDS)))
def test_a_time_is_the_decimal_number_times_its_unit(number: object, unit: str) -> None:
    whole, _, part = f"{number:f}".partition(".")
    exact = int(whole + part) * FEMTOSECONDS[unit]
    assert time_in_fs(f"{number:f}", unit) == exact / 10 ** len(part)  # Python divides integers exactly


@pytest.mark.parametrize("number", ["1e61", "1e-999999", "9" * 61])
def test_monstrous_numbers_are_refused_quickly(number: str) -> None:
    with pytest.raises(OverflowError):
        amount(number, "ns", FEMTOSECONDS)


def test_one_number_stands_for_all_three(library: Read) -> None:
    assert library(nand("7")).gate_kind("nand", 2).delays[0].tolist() == [7e6, 7e6, 7e6]


def test_missing_numbers_stay_unknown(library: Read) -> None:
    low, mid, high = library(nand("-:4.5:6.5")).gate_kind("nand", 2).delays[0].tolist()
    assert (math.isnan(low), mid, high) == (True, 4.5e6, 6.5e6)


CONDITIONS = "conditions { cold; hot 85 C; }"


def test_the_condition_picks_the_column(library: Read) -> None:
    text = nand("1:2:3 | 4:5:6", conditions=CONDITIONS)
    assert library(text, condition="hot").gate_kind("nand", 2).delays[0].tolist() == [4e6, 5e6, 6e6]
    assert library(text, condition="hot").condition_assumed is None
    assert library(text).condition_assumed == "cold"
    assert library(text).gate_kind("nand", 2).delays[0].tolist() == [1e6, 2e6, 3e6]
    assert library(text).conditions == ("cold", "hot")


def test_a_single_condition_is_not_assumed(library: Read) -> None:
    assert library(nand("1", conditions="conditions { cold; }")).condition_assumed is None


def test_a_family_without_conditions_serves_any(library: Read) -> None:
    read = library(
        nand("1 | 2", conditions=CONDITIONS), "family G { default ns { tpd 9; } }", condition="hot"
    )
    assert read.gate_kind("nand", 2).delays.max() == 2e6
    assert read.gate_kind("or", 2).delays.max() == 9e6


@pytest.mark.parametrize(
    ("text", "code"),
    [
        (nand("1:2:3", "parsec"), "P002"),
        (nand("1:2:3 | 1:2:3"), "P009"),
        (nand("3:2:4"), "P010"),
        (nand("3:-:2"), "P010"),
        (nand("-1"), "P011"),
        (nand("1e20"), "P003"),
        (nand("1", conditions="conditions { a 5..4 V; }"), "P010"),
        (nand("1", conditions="conditions { a 5 pF; }"), "P002"),
        (nand("1 | 2", conditions="conditions { a; a; }"), "P008"),
    ],
)
def test_what_is_wrong_with_numbers_is_told(told: Callable[..., list[str]], text: str, code: str) -> None:
    assert told(text)[0].split()[0] == code
