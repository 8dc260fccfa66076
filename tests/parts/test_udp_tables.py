"""Primitives as parts: tables that are easily misread, those that are not understood, hops and delays."""

from __future__ import annotations

from itertools import product

import pytest

from tardigate.parts.by_kind import ByKind, Choice
from tardigate.parts.function import NEGATIVE, POSITIVE, Network
from tardigate.parts.kind import Edge, Kind, Origin, Way
from tardigate.parts.model import Part, Place
from tardigate.parts.part_kind import part_kind
from tardigate.parts.source_delay import SourceDelay
from tardigate.parts.udp import UNKNOWN, function_node, udp_part
from tardigate.source.files import SourceFile
from tardigate.source.placed import PlacedText
from tardigate.syntax.tree import Primitive
from tardigate.syntax.udp_reader import read_primitive

FILE = SourceFile("a.v", b"primitive")
PLACE = Place(FILE, 0, 9)


def read(names: str, rows: list[str], sequential: bool) -> Primitive:
    """Read a primitive with output `q` and inputs of one letter."""
    head = f"output {'reg ' if sequential else ''}q, input {', '.join(names)}"
    text = f"primitive u({head}); table\n{chr(10).join(rows)}\nendtable endprimitive"
    return read_primitive(PlacedText.whole(SourceFile("a.v", text.encode())), 0, len(text))


# Tables with one thing each that is easily missed


def shown(part: Part, node: int) -> str:
    if node < 0:
        return "-"
    form, *operands = part.network.nodes[node]
    if form == "const":
        return str(operands[0])
    if form == "bit":
        return part.bit_names[operands[0]] if operands[0] >= 0 else "X"
    return f"{form}({','.join(shown(part, operand) for operand in operands if operand >= 0)})"


@pytest.mark.parametrize(
    ("names", "rows", "clock", "data", "clear", "set_"),
    [
        pytest.param(  # what cannot be, q = 0 after a set, is no edge that stores
            "dcs", ["0r0:?:0;", "1r0:?:1;", "??1:?:1;", "??f:?:1;", "?f?:?:-;", "*??:?:-;"],
            "c", "d", "-", "s", id="set that ends with its value",
        ),
        pytest.param(
            "dce", ["0r0:?:0;", "1r0:?:1;", "?r1:?:-;", "??r:?:0;", "*??:?:-;", "?f?:?:-;", "??f:?:-;"],
            "c", "d", "e", "-", id="clear by an edge",
        ),
        pytest.param(
            "dc", ["0r:?:0;", "1r:?:1;", "?f:?:-;", "*0:?:-;"], "c", "d", "-", "-",
            id="register that says nothing of data at a high clock",
        ),
        pytest.param(
            "cde", ["r00:?:0;", "r11:?:1;", "f??:?:-;", "?*?:?:-;", "??*:?:-;"],
            "c", "mux(e,or(d,X),and(d,X))", "-", "-", id="each of two decides beside x, so both are read",
        ),
        pytest.param(
            "dcsr", ["??10:?:1;", "??01:?:0;", "0r00:?:0;", "1r00:?:1;", "?f00:?:-;", "*?00:?:-;",
                     "??f0:?:-;", "??0f:?:-;"],
            "c", "d", "r", "s", id="set and clear at once are x",
        ),
        pytest.param(
            "dsg", ["011:?:0;", "111:?:1;", "*?0:?:-;", "??f:?:-;"], "g", "d", "-", "-",
            id="latch whose other input, when it is 0, gives x",
        ),
        pytest.param(
            "dge", ["011:?:0;", "111:?:1;", "?0?:?:-;", "??0:?:-;"],
            "g", "mux(q,or(d,not(e)),and(d,e))", "-", "-",
            id="latch with an enable",
        ),
        pytest.param(
            "dge", ["011:?:0;", "111:?:1;", "*10:?:-;", "?1f:?:-;", "?0?:?:-;"],
            "g", "mux(q,or(d,not(e)),and(d,e))", "-", "-",
            id="latch with an enable whose opening without it gives x",
        ),
        pytest.param(
            "des", ["01?:?:0;", "11?:?:1;", "?01:?:1;", "?00:?:-;"],
            "", "mux(s,or(d,not(e)),mux(e,d,X))", "-", "-",
            id="what sets only at one level of the other is no set",
        ),
    ],
)  # fmt: skip
def test_what_is_easily_missed(
    names: str, rows: list[str], clock: str, data: str, clear: str, set_: str
) -> None:
    part, reason = udp_part(read(names, rows, True), PLACE)
    assert not reason
    if clock:
        (register,) = part.registers
        assert part.bit_names[register.clock] == clock
        found = [shown(part, node) for node in (register.stores[0], register.clear, register.set)]
        assert found == [data, clear, set_]
    else:
        assert shown(part, part.functions[0]) == data


# What is not understood


@pytest.mark.parametrize(
    ("rows", "words"),
    [
        (["r?:?:1;", "?r:?:0;", "f?:?:-;", "?f:?:-;"], "changes of `a` and `b` all store"),
        (["*0:?:0;", "*1:?:1;", "?*:?:-;"], "both edges of `a` store"),
        (["r0:?:0;", "r1:?:1;", "01:?:1;", "f0:?:-;"], "an edge of `a` stores, and its level"),
        (["r0:?:1;", "?r:?:0;", "f0:?:-;"], "changes of `a` and `b` all store"),
        (["0r0:?:0;", "1r0:?:1;", "?f?:?:-;", "*0?:?:-;", "*?1:?:-;", "??r:?:0;"], "changes of `b` and `c`"),
        (["??:?:-;"], "no change of an input gives the output both values"),
        (["r?:?:1;", "f?:1:1;"], ""),
    ],
)
def test_why_a_table_is_nothing_of_the_kind(rows: list[str], words: str) -> None:
    names = "abc"[: 3 if len(rows) == 6 else 2]
    part, reason = udp_part(read(names, rows, True), PLACE)
    assert reason.startswith(words)
    assert bool(reason) == bool(words)
    if words:
        assert (part.functions, part.registers, part.rows) == ({}, (), ())
        kind = made(part)
        assert kind.unknown_function
        assert hops(kind) == {(pin, a, b) for pin in names for a, b in product(Edge, Edge)}


# Parts and kinds


def made(part: Part, **more: object) -> Kind:
    choice = Choice(ByKind(), ByKind(), ByKind())
    return part_kind(part, 0, {}, choice, **more)  # type: ignore[arg-type]


def hops(kind: Kind) -> set[tuple[str, int, int]]:
    rows = zip(kind.hop_from, kind.from_edge, kind.to_edge, strict=True)
    return {(kind.pins[tail], int(edge), int(to)) for tail, edge, to in rows}


SELECT = ["0 0 ? : 0;", "0 1 ? : 1;", "1 ? 0 : 0;", "1 ? 1 : 1;"]


def test_pins_and_hops_of_a_function() -> None:
    part, reason = udp_part(read("sab", SELECT, False), PLACE)
    assert (reason, part.name, part.pin_bits) == ("", "u", 4)
    assert [(pin.name, pin.way) for pin in part.pins] == [
        ("q", Way.OUTPUT), ("s", Way.INPUT), ("a", Way.INPUT), ("b", Way.INPUT),
    ]  # fmt: skip
    kind = made(part)
    both = {("s", a, b) for a, b in product(Edge, Edge)}
    assert hops(kind) == both | {(pin, edge, edge) for pin in "ab" for edge in Edge}
    assert not kind.register
    assert not kind.unknown_function


def test_a_part_without_rows_takes_the_delay_of_its_instance() -> None:
    part, _ = udp_part(read("sab", SELECT, False), PLACE)
    delay = SourceDelay(((1.0, 2.0, 3.0), (4.0, 5.0, 6.0)), "#(1:2:3,4:5:6)")
    kind = made(part, delay=delay)
    assert kind.origin == Origin.SOURCE
    assert kind.source == delay
    for edge, triple in zip(kind.to_edge, kind.delays.tolist(), strict=True):
        assert tuple(triple) == delay.values[edge]


def test_no_delay_is_missing_unless_it_is_a_wire() -> None:
    part, _ = udp_part(read("sab", SELECT, False), PLACE)
    assert made(part).origin == Origin.MISSING
    kind = made(part, wired=True)
    assert kind.origin == Origin.WIRE
    assert not kind.delays.any()


def test_a_delay_times_the_launches_of_a_register() -> None:
    rows = ["0 r : ? : 0;", "1 r : ? : 1;", "? f : ? : -;", "* ? : ? : -;"]
    part, _ = udp_part(read("dc", rows, True), PLACE)
    kind = made(part, delay=SourceDelay(((7.0, 7.0, 7.0),), "#7"))
    assert kind.register
    assert hops(kind) == {("c", Edge.RISE, Edge.RISE), ("c", Edge.RISE, Edge.FALL)}
    assert kind.launches.all()
    assert (kind.delays == 7.0).all()
    assert [kind.pins[pin] for pin in kind.sinks] == ["d"]


def test_operands_may_be_any_nodes_and_x_any_bit() -> None:
    network = Network()
    a, b = network.add("bit", 3), network.add("bit", 4)
    inverted = network.add("not", a)
    root = function_node(network, read("ab", ["1?:1;", "00:0;"], False), [inverted, b])
    assert network.polarities(root, {}) == {3: NEGATIVE, 4: POSITIVE, UNKNOWN: POSITIVE}


def test_sixteen_inputs_are_looked_at_one_by_one() -> None:
    rows = ["r" + "0" * 15 + ":?:0;", "r" + "?" * 14 + "1:?:1;", "f" + "?" * 15 + ":?:-;"]
    rows += ["?" * i + "*" + "?" * (15 - i) + ":?:-;" for i in range(1, 16)]
    part, reason = udp_part(read("abcdefghijklmnop", rows, True), PLACE)
    assert not reason
    (register,) = part.registers
    assert register.clock == 1
    assert part.network.support(register.stores[0]) == {16}
