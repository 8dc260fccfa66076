"""What `draft` writes is read again, asks for every delay, and describes every pin."""

from collections.abc import Callable

import pytest
from hypothesis import given, strategies as st

import tardigate
from tardigate.parts.draft import UndescribedModule, draft_text
from tardigate.parts.dump import dump_kind
from tardigate.parts.gates import BUFFERS, GATES, OPERATORS, THREE_STATE
from tardigate.parts.kind import Kind, Origin, Way
from tardigate.parts.library import Library
from tardigate.source.collector import Collector
from tardigate.source.files import SourceFile

EMPTY = Library([], [])


def read(text: str) -> Library:
    collector = Collector()
    library = Library.read([SourceFile("draft.parts", text.encode())], None, collector)
    collector.refuse()
    return library


def gate(name: str, inputs: int) -> Kind:
    return EMPTY.gate_kind(name, 1 if name in BUFFERS else 2 if name in THREE_STATE else inputs)


def operator(name: str, inputs: int) -> Kind:
    return EMPTY.operator_kind(name, 1 if name in ("~", "copy") else inputs)


GATE_KINDS = st.builds(gate, st.sampled_from(sorted(GATES)), st.integers(1, 12))
OPERATOR_KINDS = st.builds(operator, st.sampled_from(sorted(OPERATORS)), st.integers(1, 40))
NAMES = st.text(
    st.characters(codec="ascii", min_codepoint=33, max_codepoint=126), min_size=1, max_size=8
).filter(lambda name: name not in ("D", "d"))  # no register is guessed without
PINS = st.lists(st.tuples(NAMES, st.sampled_from([*Way, None])), unique_by=lambda pin: pin[0], max_size=6)
MODULES = st.lists(
    st.builds(lambda name, pins: UndescribedModule(name, tuple(pins)), NAMES, PINS),
    unique_by=lambda module: module.name,
    max_size=4,
)


@given(st.lists(GATE_KINDS | OPERATOR_KINDS, max_size=6), MODULES)
def test_what_draft_writes_is_read_again(kinds: list[Kind], modules: list[UndescribedModule]) -> None:
    library = read(draft_text(kinds, modules))
    assert library.part_names() == sorted(module.name for module in modules)
    for module in modules:
        ways = {pin.name: pin.way for pin in library.pins(module.name)}
        assert ways == {name: Way.INPUT if way is None else way for name, way in module.pins}
    for kind in kinds:
        inputs = sum(1 for way in kind.ways if way == Way.INPUT)
        of_gate = kind.group == "gate"
        name = kind.name if of_gate else kind.name.removeprefix("assign").strip() or "copy"
        again = library.gate_kind(name, inputs) if of_gate else library.operator_kind(name, inputs)
        assert again.origin == (Origin.WIRE if name == "copy" else Origin.MISSING)


def test_filled_in_the_draft_gives_delays() -> None:
    kinds = [gate("nand", 2), gate("bufif0", 2), EMPTY.operator_kind("?:", 3)]
    library = read(draft_text(kinds, []).replace("-:-:-", "1:2:3"))
    assert library.gate_kind("nand", 2).origin == Origin.PARTS
    assert library.gate_kind("bufif0", 2).origin == Origin.PARTS
    assert library.operator_kind("?:", 3).origin == Origin.PARTS
    assert library.gate_kind("nand", 3).origin == Origin.MISSING


def test_vectors_and_pins_by_order_are_declared() -> None:
    module = UndescribedModule(
        "BOX", (("", Way.INPUT), ("D", Way.INPUT), ("Q", Way.OUTPUT)), {"D": 8, "Q": 4}
    )
    library = read(draft_text([], [module]))
    assert [(pin.name, pin.width) for pin in library.pins("BOX")] == [("pin1", 1), ("D", 8), ("Q", 4)]
    assert library.part_kind("BOX").origin == Origin.MISSING


def test_equal_kinds_are_written_once(library: Callable[..., Library]) -> None:
    text = draft_text([gate("nand", 2), library("family F { }").gate_kind("nand", 2)], [])
    assert text.count("tPLH  nand(2)") == 1


def test_a_register_is_guessed_from_the_names_of_pins() -> None:
    pins = (("clr_n", Way.INPUT), ("d", None), ("clk", None), ("q", None), ("q_n", None))
    text = draft_text([], [UndescribedModule("DFF", pins, {"d": 4, "q": 4, "q_n": 4})])
    kind = read(text.replace("-:-:-", "1:2:3")).part_kind("DFF")
    assert dump_kind(kind).splitlines()[-1] == "  sinks d[3] d[2] d[1] d[0]"
    assert kind.origin == Origin.PARTS
    assert {kind.pins[tail] for tail in kind.hop_from} == {"clk"}
    assert kind.launches.all()
    assert kind.hops == 16


@pytest.mark.parametrize(
    ("pins", "widths"),
    [
        ((("CK", Way.OUTPUT), ("D", None), ("Q", None)), {}),
        ((("CK", None), ("D", None), ("Q", Way.INPUT)), {}),
        ((("CK", None), ("CLK", None), ("D", None), ("Q", None)), {}),
        ((("CK", None), ("D", None), ("Q", None), ("TC", Way.OUTPUT)), {}),
        ((("CK", None), ("D", None), ("Q", None)), {"D": 2}),
        ((("CK", None), ("D", None), ("Q", None)), {"CK": 2}),
        ((("EN", None), ("D", None), ("Q", None)), {}),
    ],
)
def test_no_register_is_guessed_where_a_pin_speaks_against_it(
    pins: tuple[tuple[str, Way | None], ...], widths: dict[str, int]
) -> None:
    assert not read(draft_text([], [UndescribedModule("X", pins, widths)])).part_kind("X").register


def test_comments_are_at_most_100_columns_wide() -> None:
    register = UndescribedModule("DFF", (("D", None), ("CK", None), ("Q", None), ("EN", None)))
    box = UndescribedModule("BOX", (("A", None), ("Y", Way.OUTPUT)))
    comments = [line for line in draft_text([], [register, box]).splitlines() if "//" in line]
    assert len(comments) > 8
    assert max(map(len, comments)) <= 100


UNTIMED = """
module top(input [1:0] a, output y, z);
  pick u1 (y, a[0], a[1]);
  half u2 (z, a);
endmodule
primitive pick (y, a, b);
  output y; input a, b;
  table 0 ? : 0; 1 0 : 0; 1 1 : 1; endtable
endprimitive
module half(output y, input [1:0] a);
  and (y, a[0], a[1]);
  specify (a[0] => y) = 3; endspecify
endmodule
"""


def test_a_default_is_drafted_for_primitives_and_cells_without_all_times() -> None:
    design = tardigate.read_text(UNTIMED)
    draft = design.draft()
    assert "`half`, `pick`" in draft
    filled = tardigate.read_text(UNTIMED, parts=draft.replace("-:-:-", "2"))
    assert {sink.name: sink.settles_ns for sink in filled.settle().outputs()} == {"y": 2.0, "z": 3.0}
