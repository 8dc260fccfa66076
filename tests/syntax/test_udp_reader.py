"""User-defined primitives to trees: both headers, symbols of rows, and what clause 8 forbids."""

from collections.abc import Iterator
from itertools import product

import pytest
from hypothesis import assume, given, strategies as st

from tardigate.source.code_table import look_up
from tardigate.source.collector import Collector
from tardigate.source.diagnostic import Diagnostic
from tardigate.source.faults import InputRefusedError
from tardigate.source.files import SourceFile
from tardigate.source.placed import PlacedText
from tardigate.syntax.preprocess import PreprocessOptions, preprocess
from tardigate.syntax.tree import Primitive, Row
from tardigate.syntax.udp_reader import parse_primitive, read_primitive
from tardigate.syntax.verilog_reader import read_unit

CLOSING = "endprimitive"
CODES = [f"V{n}" for n in (130, 135, 136, 137, 138, 139, 140, 145, 146, 147, 148, 149)]


def read(text: str) -> Primitive:
    placed = PlacedText.whole(SourceFile("a.v", text.encode()))
    return read_primitive(placed, text.index("primitive"), text.index(CLOSING) + len(CLOSING))


def faults(text: str) -> list[Diagnostic]:
    try:
        read(text)
    except InputRefusedError as refusal:
        return list(refusal.diagnostics)
    return []


def told(text: str) -> set[str]:
    return {fault.code for fault in faults(text)}


def rows(head: str, table: str) -> tuple[tuple[tuple[str, ...], str, str], ...]:
    return tuple(
        (row.inputs, row.state, row.output)
        for row in read(f"primitive p({head} table {table} endtable {CLOSING}").rows
    )


COMBINATIONAL = "q, a, b); output q; input a, b;"
SEQUENTIAL = "q, a, b); output q; reg q; input a, b;"


@pytest.mark.parametrize(
    "head",
    [
        "q, a, b); output q; reg q; input a, b; initial q = 1'b0;",
        "q, a, b); reg q; input b; output q; input a; initial q = 1'B0;",
        "q, a, b); output reg q; input a, b; initial q = 0;",
        "q, a, b); output reg q = 1'b0; input a, b;",
        "output reg q = 1'b0, input a, input b);",
        "output reg q, input a, b); initial q = 1'b0;",
        '(* x = 1 *) output reg q = 1\'b0, (* y *) input a, (* table_form = "table" *) input b);',
    ],
)
def test_all_headers_say_the_same(head: str) -> None:
    """A.5.1 to A.5.3."""
    primitive = read(f"primitive p({head}\n table\n r ? : ? : 1;\n endtable {CLOSING}")
    assert primitive[:4] == ("p", ("q", "a", "b"), True, "0")
    assert primitive.rows[0][:3] == (("r", "?"), "?", "1")


def test_a_combinational_one_has_no_state() -> None:
    primitive = read(f"primitive p({COMBINATIONAL} table 0?:1; endtable {CLOSING}")
    assert (primitive.sequential, primitive.initial) == (False, "")
    assert primitive.rows[0][:3] == (("0", "?"), "", "1")


def test_symbols_need_no_blanks() -> None:
    assert rows(SEQUENTIAL, "01:?:-; (01)?:?:1;?(1x):b:0;\t*\n0:x\n:1;") == (
        (("0", "1"), "?", "-"), (("01", "?"), "?", "1"), (("?", "1x"), "b", "0"), (("*", "0"), "x", "1"),
    )  # fmt: skip


@pytest.mark.parametrize("symbol", "01xX?bB*rRfFpPnN")
def test_every_symbol_of_an_input(symbol: str) -> None:
    """Table 8-1; capitals count alike."""
    assert rows(SEQUENTIAL, f"{symbol} 0 : ? : 1;") == (((symbol.lower(), "0"), "?", "1"),)


EDGES = ["".join(pair) for pair in product("01x?b", repeat=2) if pair[0] != pair[1] or pair[0] in "?b"]


@pytest.mark.parametrize("edge", EDGES)
def test_every_edge_in_brackets(edge: str) -> None:
    assert rows(SEQUENTIAL, f"({edge[0]} {edge[1].upper()})0:1:-;") == (((edge, "0"), "1", "-"),)


@pytest.mark.parametrize(("state", "output"), [*product("01x?bB", "01xX-")])
def test_every_symbol_of_state_and_output(state: str, output: str) -> None:
    assert rows(SEQUENTIAL, f"0 0 : {state} : {output};") == ((("0", "0"), state.lower(), output.lower()),)


def test_ports_may_be_called_like_symbols() -> None:
    text = f"primitive r(b, x, \\table , table0); output b; input x, \\table , table0;\ntable ?1(: {CLOSING}"
    text = text.replace("?1(:", "??0:1; endtable")
    assert read(text)[:2] == ("r", ("b", "x", "table", "table0"))


def test_places_are_those_of_the_text() -> None:
    text = f"wire w;\nprimitive p({SEQUENTIAL}\ntable\n  0 (01) : ? : 1 ;\n  1 ? : ? : 0; endtable\n{CLOSING}"
    primitive = read(text)
    assert primitive.at == text.index("p(")
    assert [row.at for row in primitive.rows] == [text.index("0 (01)"), text.index("1 ? : ? : 0")]


def test_it_is_read_from_its_stretch_of_a_unit() -> None:
    text = (
        "// primitive gone(\n`define ROW 1 /* ? */ ? : 1;\nmodule m; endmodule\n"
        f"primitive p({COMBINATIONAL} table `ROW endtable {CLOSING}\n"
    )
    collector = Collector()
    source = preprocess(SourceFile("a.v", text.encode()), PreprocessOptions(), collector)
    unit = read_unit(source, collector)
    (block,) = [block for block in unit.modules if block.word == "primitive"]
    assert parse_primitive(unit, block).rows[0][:3] == (("1", "?"), "", "1")
    assert not collector.all()


@pytest.mark.parametrize("code", CODES)
def test_the_samples_of_the_codes(code: str) -> None:
    entry = look_up(code)
    assert told(entry.faulty["board.v"]) == {code}
    assert not told(entry.mended["board.v"])


@pytest.mark.parametrize(
    ("code", "text"),
    [
        ("V130", "q, a, b, c); output q; input a, b; table 00:1;"),
        ("V130", "q, a, b); output q; input a, b, c; table 00:1;"),
        ("V130", "q, a, b, a); output q; input a, b; table 000:1;"),
        ("V130", "q, a, b); output q; input a, b; input a; table 00:1;"),
        ("V130", "output q, input a, b); input a; table 00:1;"),
        ("V130", "q, a, b); output reg q; reg q; input a, b; table 00:?:1;"),
        ("V135", "q, a, b); input q, a, b; table 000:1;"),
        ("V135", "q, a, b); output q, a; input b; table 0:1;"),
        ("V135", "output q, output a, input b); table 0:1;"),
        ("V136", "q, a, b); inout q; input a, b; table 00:1;"),
        ("V136", "output [1:0] q, input a, b); table 00:1;"),
        ("V136", "q, a, b); output q; reg a; input a, b; table 00:1;"),
        ("V136", "q, a, b); output q; input reg a; input b; table 00:1;"),
        ("V137", "q); output q; table 0:1;"),
        ("V138", "q, a, b); output q; input a, b; table"),
        ("V139", "q, a, b); output q; input a, b; table 000:1;"),
        ("V139", "q, a, b); output q; input a, b; table 00:0:1;"),
        ("V139", "q, a, b); output q; input a, b; table 00:01;"),
        ("V139", "q, a, b); output reg q; input a, b; table 00:1;"),
        ("V139", "q, a, b); output reg q; input a, b; table 00:01:1;"),
        ("V140", "q, a, b); output reg q; input a, b; table r(0?):?:1;"),
        ("V145", "q, a, b); output q; input a, b; table (01)0:1;"),
        ("V147", "q, a, b); output q; input a, b; table z0:1;"),
        ("V147", "q, a, b); output q; input a, b; table -0:1;"),
        ("V147", "q, a, b); output q; input a, b; table 00:?;"),
        ("V147", "q, a, b); output reg q; input a, b; table 00:r:1;"),
        ("V147", "q, a, b); output reg q; input a, b; table 00:-:1;"),
        ("V147", "q, a, b); output reg q; input a, b; table (0r)0:?:1;"),
        ("V147", "q, a, b); output reg q; input a, b; table 00:?:b;"),
        ("V147", "q, a, b); output reg q; input a, b; table (11)0:?:1;"),
        ("V147", "q, a, b); output reg q; input a, b; table xx:?:-;"),
        ("V148", "output q = 1'b1, input a, b); table 00:1;"),
        ("V148", "q, a, b); output reg q = 1'b1; input a, b; initial q = 0; table 00:?:1;"),
        ("V148", "q, a, b); output reg q; input a, b; initial a = 0; table 00:?:1;"),
        ("V148", "q, a, b); output reg q; input a, b; initial q = 2'b00; table 00:?:1;"),
        ("V149", "q, a, b); output q; input a, b; table 0?:1; ?x:0;"),
        ("V149", "q, a, b); output reg q; input a, b; table 0*:0:-; 0(x1):b:1;"),
        ("V001", "q, a, b); output q; input a, b; table 0 0 1;"),
        ("V001", "q, a, b); output q; input a, b; table 00:1"),
        ("V001", "q, a, b); output q; input a, b; table 0 q:1;"),
        ("V001", "q, a, b); output q; wire q; input a, b; table 00:1;"),
        ("V001", "q, a, b); initial q = 0; output reg q; input a, b; table 00:?:1;"),
        ("V001", "); table 00:1;"),
    ],
)
def test_each_fault_has_its_code(code: str, text: str) -> None:
    assert told(f"primitive p({text} endtable {CLOSING}") == {code}


def test_a_missing_table_and_a_table_without_end() -> None:
    assert told(f"primitive p({COMBINATIONAL} {CLOSING}") == {"V138"}
    assert told(f"primitive p({COMBINATIONAL} table 00:1; {CLOSING}") == {"V001"}


def test_several_faults_are_told_at_once_and_where() -> None:
    text = f"primitive p({SEQUENTIAL}\ntable\n0:?:1;\n(01)*:?:1;\n00:?:(01);\nendtable {CLOSING}"
    assert [(fault.code, str(fault.span), fault.span.length) for fault in faults(text) if fault.span] == [
        ("V139", "a.v:3:1", 5), ("V140", "a.v:4:5", 1), ("V147", "a.v:5:6", 4),
    ]  # fmt: skip


def test_what_the_grammar_refuses_is_shown_as_written() -> None:
    (fault,) = faults(f"primitive p({SEQUENTIAL}\ntable 0 0 : ? : 1; q ; endtable {CLOSING}")
    assert fault.message.startswith("`q` stands where a symbol of the table")
    (fault,) = faults(f"primitive p({SEQUENTIAL}\ntable 0 0 : : 1; endtable {CLOSING}")
    assert fault.message.startswith("`:` stands where")
    assert fault.message.isascii()


def test_a_conflict_names_both_rows() -> None:
    (fault,) = faults(f"primitive p({COMBINATIONAL} table\n0?:1;\n11:0;\n?1:0;\nendtable {CLOSING}")
    assert fault.span is not None
    assert (fault.span.line, [related.span.line for related in fault.related]) == (4, [2])


# The law of contradiction, by trying everything that may happen

EVENTS = ["0", "1", "x", "?", "b", "*", "r", "f", "p", "n", "0x", "?1", "b0", "1?", "xb"]
SPELT = {"*": "??", "r": "01", "f": "10"}
SETS = {"0": "0", "1": "1", "x": "x", "?": "01x", "b": "01"}


def takes(symbol: str, before: str, after: str) -> bool:
    """Say whether a symbol fits an input that goes from one value to another, or stays."""
    if symbol in SETS:
        return after in SETS[symbol]
    if symbol == "p":
        return before + after in ("01", "0x", "x1")
    if symbol == "n":
        return before + after in ("10", "1x", "x0")
    spelt = SPELT.get(symbol, symbol)
    first, second = spelt[0], spelt[1]
    return before != after and before in SETS[first] and after in SETS[second]


def is_edge(row: Row) -> bool:
    return any(symbol not in SETS for symbol in row.inputs)


def happenings() -> Iterator[tuple[tuple[str, str], tuple[str, str]]]:
    """Yield what two inputs may do, one at a time."""
    for after in product("01x", "01x"):
        for place, before in product((0, 1), "01x"):
            if before != after[place]:
                yield ((before, after[1]) if place == 0 else (after[0], before)), after


def contradict(one: Row, other: Row) -> bool:
    if is_edge(one) != is_edge(other):
        return False
    states = set(SETS[one.state]).intersection(SETS[other.state])
    if any(row.output == "-" and row.state in "?b" for row in (one, other)):
        return False
    made = [[state if row.output == "-" else row.output for row in (one, other)] for state in states]
    meet = any(
        all(map(takes, one.inputs, before, after)) and all(map(takes, other.inputs, before, after))
        for before, after in happenings()
    )
    return meet and any(first != second for first, second in made)


@st.composite
def tables(draw: st.DrawFn) -> list[str]:
    """Rows of a sequential primitive with two inputs, one edge a row at most."""
    made = []
    for _ in range(draw(st.integers(1, 5))):
        inputs = [draw(st.sampled_from(EVENTS)), draw(st.sampled_from("01x?b"))]
        if draw(st.booleans()):
            inputs.reverse()
        spelt = "".join(f"({symbol})" if len(symbol) == 2 else symbol for symbol in inputs)
        made.append(f"{spelt}:{draw(st.sampled_from('01x?b'))}:{draw(st.sampled_from('01x-'))};")
    return made


@given(tables())
def test_rows_contradict_when_one_event_gives_two_outputs(table: list[str]) -> None:
    for row in table:
        assume(not faults(f"primitive p({SEQUENTIAL} table {row} endtable {CLOSING}"))
    each = [read(f"primitive p({SEQUENTIAL} table {row} endtable {CLOSING}").rows[0] for row in table]
    expected = [
        number + 1
        for number, row in enumerate(each)
        if any(contradict(earlier, row) for earlier in each[:number])
    ]
    found = faults(f"primitive p({SEQUENTIAL} table {chr(10).join(table)} endtable {CLOSING}")
    assert [fault.span.line for fault in found if fault.span] == expected
    assert {fault.code for fault in found} <= {"V149"}
