"""Parts to kinds: hops from functions, registers and rows."""

import re
from collections.abc import Callable
from importlib import resources

import pytest

from tardigate.parts.dump import dump_kind
from tardigate.parts.kind import Origin, Way
from tardigate.parts.library import Library

Read = Callable[..., Library]
REFERENCE = resources.files("tardigate.grammars").joinpath("parts.md").read_text("utf-8")


def lines(read: Library, module: str, **parameters: int) -> list[str]:
    return [line.strip() for line in dump_kind(read.part_kind(module, parameters)).splitlines()]


def family(part: str, rest: str = "") -> str:
    return f"family F {{ part P {{ {part} }} {rest} }}"


def test_polarity_comes_from_the_function(library: Read) -> None:
    read = library(family("inputs A, B, C; output Y = ~(A & B) | C; times ns { tpd A, B, C => Y 1:2:3; }"))
    assert lines(read, "P")[1:] == [
        "A fall -> Y rise 1:2:3",
        "A rise -> Y fall 1:2:3",
        "B fall -> Y rise 1:2:3",
        "B rise -> Y fall 1:2:3",
        "C rise -> Y rise 1:2:3",
        "C fall -> Y fall 1:2:3",
    ]


def test_each_edge_has_its_own_row(library: Read) -> None:
    read = library(family("inputs A; output Y = ~A; times ns { tPLH A => Y 1; tPHL A => Y 2; }"))
    assert lines(read, "P")[1:] == ["A fall -> Y rise 1:1:1", "A rise -> Y fall 2:2:2"]


def test_rows_with_conditions_time_the_ways_of_an_exclusive_or(library: Read) -> None:
    rows = "tpd A => Y when ~B 1; tpd A => Y when B 2; tpd B => Y 3;"
    read = library(family(f"inputs A, B; output Y = A ^ B; times ns {{ {rows} }}"))
    assert lines(read, "P")[1:5] == [
        "A rise -> Y rise 1:1:1",
        "A fall -> Y rise 2:2:2",
        "A fall -> Y fall 1:1:1",
        "A rise -> Y fall 2:2:2",
    ]


def test_several_conditions_make_parallel_hops(library: Read) -> None:
    rows = "tpd A => Y when B 1; tpd A => Y when C 2; tpd B, C => Y 3;"
    read = library(family(f"inputs A, B, C; output Y = A & (B | C); times ns {{ {rows} }}"))
    assert [line for line in lines(read, "P") if line.startswith("A rise")] == [
        "A rise -> Y rise 1:1:1",
        "A rise -> Y rise 2:2:2",
    ]


def test_a_register_launches_at_its_edge_and_ends_at_its_data(library: Read) -> None:
    part = """inputs D, CK, CLR, PRE; outputs Q, QN = ~Q;
      register negedge CK { Q = D; clear CLR; set ~PRE; }
      times ns { tPLH CK => Q, QN 1; tPHL CK => Q, QN 2; tpd CLR, PRE => Q, QN 3; }"""
    assert lines(library(family(part)), "P") == [
        "part P PARTS register",
        "CK fall -> Q rise 1:1:1 launches",
        "CK fall -> Q fall 2:2:2 launches",
        "CLR rise -> Q fall 3:3:3",
        "PRE fall -> Q rise 3:3:3",
        "CK fall -> QN rise 1:1:1 launches",
        "CK fall -> QN fall 2:2:2 launches",
        "CLR rise -> QN rise 3:3:3",
        "PRE fall -> QN fall 3:3:3",
        "sinks D CLR PRE",
    ]


def test_a_latch_passes_its_data_on(library: Read) -> None:
    part = """inputs D, EN, CLR; outputs Q;
      latch low EN { Q = ~D; clear CLR; } times ns { tpd EN => Q 1; tpd D => Q 2; tpd CLR => Q 3; }"""
    assert sorted(lines(library(family(part)), "P")[1:]) == sorted([
        "EN fall -> Q rise 1:1:1 launches",
        "EN fall -> Q fall 1:1:1 launches",
        "D fall -> Q rise 2:2:2",
        "D rise -> Q fall 2:2:2",
        "CLR rise -> Q fall 3:3:3",
        "CLR fall -> Q rise 3:3:3",
        "sinks D CLR",
    ])  # fmt: skip


def test_the_old_value_may_stand_in_what_is_stored(library: Read) -> None:
    part = (
        "inputs J, K, CK; output Q; register posedge CK { Q = J & ~Q | ~K & Q; } times ns { tpd CK => Q 1; }"
    )
    assert lines(library(family(part)), "P")[-1] == "sinks J K"


def test_a_three_state_output_lets_go(library: Read) -> None:
    part = """inputs A, G; output Y = ~A when ~G; times ns {
      tpd A => Y 1; tPZH G => Y 2; tPZL G => Y 3; tPHZ G => Y 4; tPLZ G => Y 5; }"""
    assert lines(library(family(part)), "P") == [
        "part P PARTS three-state",
        "A fall -> Y rise 1:1:1",
        "A rise -> Y fall 1:1:1",
        "G fall -> Y rise 2:2:2",
        "G fall -> Y fall 3:3:3",
        "G rise -> Y fall 4:4:4",
        "G rise -> Y rise 5:5:5",
    ]


def test_a_stored_enable_launches(library: Read) -> None:
    part = """inputs A, E, CK; state S; output Y = A when S; register posedge CK { S = E; }
      times ns { tpd A => Y 1; ten CK => Y 2; tdis CK => Y 3; }"""
    assert [line for line in lines(library(family(part)), "P") if "CK" in line] == [
        "CK rise -> Y rise 2:2:2 launches",
        "CK rise -> Y fall 2:2:2 launches",
        "CK rise -> Y fall 3:3:3 launches",
        "CK rise -> Y rise 3:3:3 launches",
    ]


def test_arrows_join_bit_to_bit_or_every_to_every(library: Read) -> None:
    part = """inputs A[1:0], S; output Y[0:1] = S ? A : {A[0], A[1]};
      times ns { tpd A *> Y 1; tpd S *> Y 2; }"""
    read = library(family(part))
    assert read.part_kind("P").pins == ("A[1]", "A[0]", "S", "Y[0]", "Y[1]")
    joined = {line.rpartition(" ")[0] for line in lines(read, "P") if "A[" in line and "rise -> " in line}
    assert len(joined) == 4
    straight = family("inputs A[1:0]; output Y[0:1] = A; times ns { tpd A => Y 1; }")
    assert {line.split(" rise")[0] + line[-13:-11] for line in lines(library(straight), "P")[1::2]} == {
        "A[1]0]", "A[0]1]",
    }  # fmt: skip


def test_a_table_follows_its_parameter(library: Read) -> None:
    part = """parameter INIT[3:0] = 4'b1000; inputs A, B; output Y = INIT[{B, A}];
      times ns { tpd A, B => Y 1; }"""
    read = library(family(part))
    assert lines(read, "P")[1:3] == ["A rise -> Y rise 1:1:1", "A fall -> Y fall 1:1:1"]
    assert len(lines(read, "P", INIT=0b0110)) == 9  # exclusive or: both ways
    assert len(lines(read, "P", INIT=0)) == 1  # constant
    assert lines(read, "P", INIT=0b0101)[1:] == ["A fall -> Y rise 1:1:1", "A rise -> Y fall 1:1:1"]
    assert read.parameters("P") == {"INIT": 8}
    assert read.part_kind("P") is read.part_kind("P", {"INIT": 8})


def test_a_parameter_that_nobody_gave_may_be_anything(library: Read) -> None:
    part = "parameter INIT[1:0]; inputs A; output Y = INIT[A]; times ns { tpd A => Y 1; }"
    assert len(lines(library(family(part)), "P")) == 5


def test_without_a_function_a_row_is_taken_at_its_word(library: Read) -> None:
    part = """inputs A, B, C; outputs Y; times ns {
      tpd A -=> Y 1; tPLH B => Y 2; tPHL B => Y 3; tpd posedge C => Y 4; }"""
    assert lines(library(family(part)), "P")[1:] == [
        "A rise -> Y fall 1:1:1",
        "A fall -> Y rise 1:1:1",
        "B rise -> Y rise 2:2:2",
        "B fall -> Y rise 2:2:2",
        "B rise -> Y fall 3:3:3",
        "B fall -> Y fall 3:3:3",
        "C rise -> Y rise 4:4:4",
        "C rise -> Y fall 4:4:4",
    ]


def test_what_has_no_row_takes_the_default(library: Read) -> None:
    part = "inputs A, B; output Y = A & B; times ns { tpd A => Y 1; }"
    kind = library(family(part, "default ns { tpd 7; }")).part_kind("P")
    assert kind.origin == Origin.DEFAULT
    assert "B rise -> Y rise 7:7:7" in dump_kind(kind)


def test_a_row_without_numbers_is_missing(library: Read) -> None:
    part = "inputs A, B; output Y = A & B; times ns { tpd A => Y 1; tpd B => Y -; }"
    assert library(family(part)).part_kind("P").origin == Origin.MISSING
    assert library(family(part, "default ns { tpd 7; }")).part_kind("P").origin == Origin.DEFAULT


def test_pins_are_in_declared_order_and_known_by_alias(library: Read) -> None:
    part = """output Y[3:0] = {A, A, A, A}; inputs A; inout IO = A when A;
      times ns { tpd A *> Y, IO 1; ten A => IO 2; tdis A => IO 2; }"""
    read = library(family(part, "alias Q1 = P; alias Q2 = Q1;"))
    assert [(pin.name, pin.way, pin.width, pin.msb, pin.lsb) for pin in read.pins("Q2")] == [
        ("Y", Way.OUTPUT, 4, 3, 0),
        ("A", Way.INPUT, 1, 0, 0),
        ("IO", Way.INOUT, 1, 0, 0),
    ]
    assert read.part_kind("Q2") is read.part_kind("P")
    assert read.part_names() == ["P", "Q1", "Q2"]
    assert (read.describes("Q1"), read.describes("Q3")) == (True, False)
    assert read.part_kind("P").words == "0.parts:1"


@pytest.mark.parametrize("text", re.findall(r"```parts\n(.*?)```", REFERENCE, re.DOTALL))
def test_the_examples_of_the_reference_are_read(library: Read, text: str) -> None:
    read = library(text)
    assert read.part_names()
    assert all(read.part_kind(name).origin == Origin.PARTS for name in read.part_names())


def test_a_deep_expression_needs_no_recursion(library: Read) -> None:
    function = "~(" * 5000 + "A" + ")" * 5000
    read = library(family(f"inputs A; output Y = {function}; times ns {{ tpd A => Y 1; }}"))
    assert lines(read, "P")[1:] == ["A rise -> Y rise 1:1:1", "A fall -> Y fall 1:1:1"]


@pytest.mark.parametrize(
    ("body", "unknown"),
    [
        ("inputs A; output Y; times ns { tpd A => Y 1; }", True),
        ("inputs A; output Y; times ns { tpd posedge A => Y 1; }", True),
        ("inputs A; output Y; times ns { tpd A -=> Y 1; }", False),
        ("inputs A; output Y; times ns { tPLH negedge A -=> Y 1; }", False),
        ("inputs A; output Y = ~A; times ns { tpd A => Y 1; }", False),
        ("inputs A; outputs X = A, Y; times ns { tpd A => X, Y 1; }", True),
        ("inputs D, CK; output Q; register posedge CK { Q = D; } times ns { tpd CK => Q 1; }", False),
        (
            "inputs D, CK; output Y; state S; register posedge CK { S = D; } times ns { tpd CK => Y 1; }",
            False,
        ),
    ],
)
def test_kinds_of_unknown_function_are_marked(library: Read, body: str, unknown: bool) -> None:
    assert library(family(body)).part_kind("P").unknown_function is unknown


def test_an_output_that_only_the_default_times_is_of_unknown_function(library: Read) -> None:
    read = library(family("inputs A; output Y;", "default ns { tpd 1; }"))
    assert read.part_kind("P").unknown_function


@pytest.mark.parametrize(
    ("function", "rows", "expected"),
    [
        ("0", "tPZL A => Y 1; tPLZ A => Y 2;", ["A rise -> Y fall 1:1:1", "A fall -> Y rise 2:2:2"]),
        ("1", "tPZH A => Y 1; tPHZ A => Y 2;", ["A rise -> Y rise 1:1:1", "A fall -> Y fall 2:2:2"]),
        ("0", "ten A => Y 1; tdis A => Y 2;", ["A rise -> Y fall 1:1:1", "A fall -> Y rise 2:2:2"]),
    ],
)
def test_an_open_output_moves_between_two_states(
    library: Read, function: str, rows: str, expected: list[str]
) -> None:
    read = library(family(f"inputs A; output Y = {function} when A; times ns {{ {rows} }}"))
    assert lines(read, "P") == ["part P PARTS three-state", *expected]


def test_a_level_that_only_lets_go_is_never_driven(library: Read) -> None:
    rows = "tpd A => Y 1; tPZL A => Y 2; tPLZ A => Y 3;"
    found = lines(library(family(f"inputs A; output Y = A when ~A; times ns {{ {rows} }}")), "P")
    assert found[3:] == ["A fall -> Y fall 2:2:2", "A rise -> Y rise 3:3:3"]


def test_pairs_that_cannot_make_the_change_are_left_out(library: Read) -> None:
    part = """inputs D, CK, PRE; outputs Q, QN = ~Q; register posedge CK { Q = D; set PRE; }
      times ns { tPLH CK, PRE => Q, QN 1; tPHL CK, PRE => Q, QN 2; }"""
    assert [line for line in lines(library(family(part)), "P") if line.startswith("PRE")] == [
        "PRE rise -> Q rise 1:1:1",
        "PRE rise -> QN fall 2:2:2",
    ]


def test_what_has_no_number_is_named(library: Read) -> None:
    text = """family F { conditions { c1; c5; }
      gates ns { tpd nand 1 | -; }
      part P { inputs A, B; output Y = A & B; times ns {
        tpd A => Y 1 | -;
        tpd B => Y 1 | 2; } }
      part Q { inputs A, B; output Y = A & B; times ns {
        tpd A => Y - | 1;
        tPLH B => Y 1 | 1; tPHL B => Y - | 2; } } }"""
    cold, hot = library(text, condition="c1"), library(text, condition="c5")
    assert cold.part_kind("P").words == "0.parts:3"
    assert hot.part_kind("P").words == "tpd A => Y has no number under condition c5, 0.parts:4"
    words = "tpd A => Y has no number under condition c1, 0.parts:7, and 1 more row"
    assert cold.part_kind("Q").words == words
    assert hot.part_kind("Q").words == "0.parts:6"
    assert hot.gate_kind("nand", 2).words == "tpd nand has no number under condition c5, 0.parts:2"
    plain = library(family("inputs A; output Y = A; times ns { tpd A => Y -; }"))
    assert plain.part_kind("P").words == "tpd A => Y has no number, 0.parts:1"


def test_what_has_no_row_is_named(library: Read) -> None:
    rest = "default ns { tPLH 1; }"
    read = library(family("inputs A; output Y = A; times ns { tPLH A => Y 1; }", rest))
    assert read.part_kind("P").words == "no row gives tPHL A => Y, 0.parts:1"


def test_many_aliases_are_known(library: Read) -> None:
    names = ", ".join(f"A{i}" for i in range(3000))
    rest = f"alias {names} = P; equivalent P, {names};"
    read = library(family("inputs A; output Y = A; times ns { tpd A => Y 1; }", rest))
    assert len(read.part_names()) == 3001
    assert read.part_kind("A2999") is read.part_kind("P")
