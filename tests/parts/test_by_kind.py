"""Which entry wins for a gate or operator: just this many inputs, any number, the default."""

from collections.abc import Callable

import pytest

from tardigate.parts.dump import dump_kind
from tardigate.parts.kind import Origin
from tardigate.parts.library import Library
from tardigate.parts.source_delay import SourceDelay

Read = Callable[..., Library]

TABLES = """family F {
  gates ns {
    tpd nand(2) 1; tpd nand(3..5) 2; tpd nand 3;
    tPLH nor(2) 4; tPHL nor 5;
    tpd bufif1 6; ten bufif1 7; tPHZ bufif1 8;
    tPLH xor -; tPHL xor 9;
  }
  operators ns { tpd "&" 10; tpd "reduce |"(8) 11; tpd "copy" 12; }
  default ns { tPLH 20; tPHL 21; }
}"""


@pytest.mark.parametrize(("inputs", "delay"), [(1, 3), (2, 1), (3, 2), (5, 2), (6, 3)])
def test_the_number_of_inputs_is_looked_for_first(library: Read, inputs: int, delay: float) -> None:
    kind = library(TABLES).gate_kind("nand", inputs)
    assert set(kind.delays.ravel().tolist()) == {delay * 1e6}
    assert kind.origin == Origin.PARTS


def test_each_edge_is_looked_for_by_itself(library: Read) -> None:
    text = dump_kind(library(TABLES).gate_kind("nor", 2))
    assert "in1 fall -> out rise 4:4:4" in text
    assert "in1 rise -> out fall 5:5:5" in text


def test_a_row_of_nothing_counts_as_not_there(library: Read) -> None:
    kind = library(TABLES).gate_kind("xor", 2)
    assert kind.origin == Origin.DEFAULT
    assert "in1 rise -> out rise 20:20:20" in dump_kind(kind)
    assert "in1 rise -> out fall 9:9:9" in dump_kind(kind)


def test_tpd_serves_a_three_state_gate_where_nothing_nearer_does(library: Read) -> None:
    lines = dump_kind(library(TABLES).gate_kind("bufif1", 2)).splitlines()
    assert lines[3:] == [
        "  control rise -> out rise 7:7:7",
        "  control rise -> out fall 7:7:7",
        "  control fall -> out fall 8:8:8",
        "  control fall -> out rise 6:6:6",
    ]


def test_tplh_does_not_serve_for_letting_go(library: Read) -> None:
    kind = library("family F { gates ns { tPLH bufif1 1; tPHL bufif1 2; } }").gate_kind("bufif1", 2)
    assert kind.origin == Origin.MISSING


def test_operators_have_a_table_of_their_own(library: Read) -> None:
    read = library(TABLES)
    assert read.operator_kind("&", 2).delays.max() == 10e6
    assert read.operator_kind("reduce |", 8).origin == Origin.PARTS
    assert read.operator_kind("reduce |", 9).origin == Origin.DEFAULT
    assert read.operator_kind("copy", 1).delays.max() == 12e6


def test_the_default_is_not_meant_for_a_wire(library: Read) -> None:
    assert library("family F { default ns { tpd 5; } }").operator_kind("copy", 1).origin == Origin.WIRE


def test_the_source_beats_the_parts_file(library: Read) -> None:
    kind = library(TABLES).gate_kind("nand", 2, 1, SourceDelay(((5.0, 5.0, 5.0),), "#5"))
    assert (kind.origin, kind.words, kind.delays.max()) == (Origin.SOURCE, "#5", 5.0)


def test_words_tell_where_the_delay_stands(library: Read) -> None:
    read = library(TABLES)
    assert read.gate_kind("nand", 2).words == "0.parts:3"
    assert read.gate_kind("xnor", 2).words == "default of 0.parts:9"


@pytest.mark.parametrize(
    ("first", "second"), [("nand(2..4)", "nand(4)"), ("nand", "nand"), ("nand(3)", "nand(2..9)")]
)
def test_entries_may_not_overlap_even_across_families(
    told: Callable[..., list[str]], first: str, second: str
) -> None:
    one, two = (f"family F {{ gates ns {{ tpd {entry} 1; }} }}" for entry in (first, second))
    assert set(told(one, two)) == {"P008 1:1"}
