"""The textbook register as a kind: its hops, its sinks, and which delay each transition takes."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from tardigate.parts.draft import draft_text
from tardigate.parts.dump import dump_kind
from tardigate.parts.kind import Edge, Origin, Way
from tardigate.parts.library import Library
from tardigate.parts.register_kind import Control
from tardigate.parts.source_delay import SourceDelay

Read = Callable[..., Library]
EMPTY = Library([], [])
TABLE = 'family F { operators ns { tPLH "register" 2:3:4; tPHL "register" 5:6:7; } }'


def lines(library: Library, *words: object, **more: object) -> list[str]:
    return dump_kind(library.register_kind(*words, **more)).splitlines()  # type: ignore[arg-type]


def test_the_clock_launches_both_edges_and_trails_end_at_the_data(library: Read) -> None:
    assert lines(library(TABLE), Edge.RISE, (), 2) == [
        "operator register PARTS register",
        "  clock rise -> q rise 2:3:4 launches",
        "  clock rise -> q fall 5:6:7 launches",
        "  sinks d1 d2",
    ]


def test_a_falling_edge_launches_too(library: Read) -> None:
    assert lines(library(TABLE), Edge.FALL, (), 0)[1:] == [
        "  clock fall -> q rise 2:3:4 launches",
        "  clock fall -> q fall 5:6:7 launches",
    ]


@pytest.mark.parametrize(("level", "edge"), [(1, "rise"), (0, "fall")])
@pytest.mark.parametrize(("sets", "hop"), [(True, "q rise 2:3:4"), (False, "q fall 5:6:7")])
def test_a_control_moves_q_when_it_becomes_active(
    library: Read, level: int, edge: str, sets: bool, hop: str
) -> None:
    name = "set" if sets else "clear"
    found = lines(library(TABLE), Edge.RISE, [Control(level, sets)], 1)
    assert found[3:] == [f"  {name} {edge} -> {hop}", f"  sinks {name} d1"]


def test_pins_stand_in_the_order_in_which_they_are_connected() -> None:
    kind = EMPTY.register_kind(Edge.RISE, [Control(0, False), Control(1, True)], 2)
    assert kind.pins == ("q", "clock", "clear", "set", "d1", "d2")
    assert kind.ways.tolist() == [Way.OUTPUT] + [Way.INPUT] * 5
    assert EMPTY.register_kind(Edge.RISE, [Control(0, True), Control(1, True)], 0).pins[2:] == (
        "set1",
        "set2",
    )


def test_a_delay_in_the_source_wins_where_it_stands(library: Read) -> None:
    clock, control = SourceDelay(((1e6, 1e6, 1e6),), "#"), SourceDelay(((8e6, 9e6, 10e6),), "#")
    found = lines(library(TABLE), Edge.RISE, [Control(1, False, control), Control(1, True)], 0, clock)
    assert found[1:5] == [
        "  clock rise -> q rise 1:1:1 launches",
        "  clock rise -> q fall 1:1:1 launches",
        "  clear rise -> q fall 8:9:10",
        "  set rise -> q rise 2:3:4",
    ]
    assert library(TABLE).register_kind(Edge.RISE, (), 1, clock).source == clock


def test_without_an_entry_the_default_serves(library: Read) -> None:
    kind = library("family F { default ns { tpd 9; } }").register_kind(Edge.RISE, (), 1)
    assert kind.origin == Origin.DEFAULT
    assert set(kind.delays.ravel().tolist()) == {9e6}


def test_without_a_number_anywhere_it_is_missing_and_draft_asks_for_it(library: Read) -> None:
    kinds = [EMPTY.register_kind(Edge.RISE, controls, 3) for controls in ([], [Control(1, False)])]
    assert {kind.origin for kind in kinds} == {Origin.MISSING}
    text = draft_text(kinds, [])
    assert [line.split()[:2] for line in text.splitlines() if "register" in line] == [
        ["tPLH", '"register"'], ["tPHL", '"register"'],
    ]  # fmt: skip
    filled = library(text.replace("-:-:-", "1:2:3"))
    assert filled.register_kind(Edge.RISE, [Control(1, True)], 3).origin == Origin.PARTS


def test_the_entry_takes_no_number(told: Callable[..., list[str]]) -> None:
    assert told('family F { operators ns { tpd "register"(2) 1; } }') == ["P023 0:1"]
    assert told('family F { operators ns { tPZH "register" 1; } }') == ["P024 0:1"]
    assert told("family F { gates ns { tpd register 1; } }")[0].startswith("P0")


def test_equal_questions_get_the_same_kind() -> None:
    delay = SourceDelay(((1.0, 2.0, 3.0),), "#")
    again = SourceDelay(((1.0, 2.0, 3.0),), "#")
    one = EMPTY.register_kind(Edge.RISE, [Control(1, True, delay)], 1, delay)
    assert EMPTY.register_kind(Edge.RISE, (Control(1, True, again),), 1, again) is one
    assert EMPTY.register_kind(Edge.RISE, [Control(1, True)], 1, delay) is not one
    assert EMPTY.register_kind(Edge.FALL, [Control(1, True, delay)], 1, delay) is not one
