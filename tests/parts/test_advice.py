"""What a refused parts file is told: what could stand there, and what to write instead."""

import re

import pytest

from tardigate.parts.library import Library
from tardigate.source.collector import Collector
from tardigate.source.diagnostic import Diagnostic
from tardigate.source.files import SourceFile
from tardigate.syntax import parts_advice, verilog_advice
from tardigate.syntax.grammar import Reader
from tardigate.syntax.parts_reader import MOST


def faults(text: str) -> list[tuple[int, str]]:
    """Return the line and the message of each fault."""
    collector = Collector()
    Library.read([SourceFile("a.parts", text.encode())], None, collector)
    return [(told.span.line if told.span else 0, told.message) for told in collector.all()]


def fault(text: str) -> Diagnostic:
    collector = Collector()
    Library.read([SourceFile("a.parts", text.encode())], None, collector)
    (diagnostic,) = collector.all()
    assert diagnostic.code == "P001"
    return diagnostic


def family(body: str) -> str:
    return f"family F {{\n{body}\n}}\n"


def part(body: str) -> str:
    return family(f"part P {{\n{body}\n}}")


@pytest.mark.parametrize(
    ("name", "friendly"), [("parts", parts_advice.FRIENDLY), ("verilog", verilog_advice.FRIENDLY)]
)
def test_every_terminal_has_a_name_for_readers(name: str, friendly: dict[str, str]) -> None:
    lark = Reader(name, object()).lark
    raw = {t.name for t in lark.terminals if t.pattern.type != "str"} - set(lark.ignore_tokens)
    assert raw <= set(friendly)
    assert "$END" in friendly


@pytest.mark.parametrize(
    ("text", "unit"),
    [
        (part("times { }"), "ns"),
        (part("checks { }"), "ns"),
        (family("gates { }"), "ns"),
        (family("operators { }"), "ns"),
        (family("default { }"), "ns"),
        (family("wires { }"), "ns"),
        (part("load 50;"), "pF"),
        (part("load 50 pF, more 0.05;"), "ns"),
        (part("load 50 pF, more 0.05 ns/;"), "pF"),
        (part("inputs A 3;"), "pF"),
        (part("inputs A each 3;"), "pF"),
        (part("outputs Y = {A, B} when C; inputs A each 3;"), "pF"),
        (family("wires ns { load 3 each fanout; }"), "pF"),
        (family('wires ns { net "a" 3 cm at 1; }'), "ns"),
        (family('wires ns { net "a" 3 cm at 1 ns/; }'), "cm"),
        (family("conditions { v5 4.5..5.5; }"), "V"),
    ],
)
def test_a_unit_is_asked_for(text: str, unit: str) -> None:
    assert f"a unit such as `{unit}`" in fault(text).message


@pytest.mark.parametrize(
    ("text", "block"),
    [
        ('family F {\n part QT04 "t" {\n inputs A;\n part R { } }', "`part QT04` (line 2)"),
        ("family F {\n part R {\n output Y = {A, A};\n alias B = R; }", "`part R` (line 2)"),
        ("family F { part R {\n times ns {\n tpd A => Y 1;\n checks ns { } } }", "`times ns` (line 2)"),
        ("family F { gates ns {\n tpd nand 1;\n part R { } }", "`gates ns` (line 1)"),
        ("family F { part R {\n inputs A;", "`part R` (line 1)"),
        ("family F {\nfamily G { }", "`family F` (line 1)"),
        (
            "family F { part R {\n register posedge A { latch = {{B, C}, D};\n times ns { } } }",
            "`register posedge A` (line 2)",
        ),
    ],
)
def test_a_block_that_is_not_closed_is_named(text: str, block: str) -> None:
    diagnostic = fault(text)
    assert diagnostic.message.endswith(f"cannot stand here: `}}` that closes {block} could")
    assert "`}` is missing" in diagnostic.hint


@pytest.mark.parametrize(
    ("text", "hint"),
    [
        (part("times ns { tplh A => Y 1; }"), "Did you mean `tPLH`?"),
        (part("times ns { tpd A -> Y 1; }"), "Write `=>`."),
        (part("times ns { tpd A => Y 1,5; }"), "Write 1.5:"),
        (part("inputs A each 3,25 pF;"), "Write 3.25:"),
        (part("times ns { tpd A => Y 6:8; }"), "Write min:typ:max"),
        (part("times ns { tpd A => Y -:8 | 1; }"), "Write min:typ:max"),
        (part("times ns { tpd A => Y 6:- | 1; }"), "Write min:typ:max"),
        (part("output Y = !A;"), "Functions are of bits: write `~`"),
        (part("output Y = A && B;"), "Functions are of bits: write `~`"),
        (part("output Y = A || B;"), "Functions are of bits: write `~`"),
        (part("register posedge CK { Q = D; };"), "No `;` stands"),
        ("// board\nmodule m(input a);", "This looks like Verilog: give it without --parts."),
        ("`timescale 1ns/1ps", "This looks like Verilog: give it without --parts."),
        ("# comment", "Comments begin with `//`."),
        (family("/* comment */"), "Comments begin with `//`."),
        (family('provenance "no end;'), "A text in quotes ends on the line"),
        ("\ufefffamily F {\n  prat P { }\n}", "Did you mean `part`?"),
    ],
)
def test_what_to_write_instead(text: str, hint: str) -> None:
    assert fault(text).hint.startswith(hint)


def test_a_text_out_of_place_is_not_called_unfinished() -> None:
    assert "ends on the line" not in fault(family('part "P" { }')).hint


def test_what_closes_is_listed_first_and_at_most_six_things() -> None:
    for text in (part("inputs A; output Y = A Z;"), part("prat Q {"), family("part P { } what")):
        listed = fault(text).message.partition("cannot stand here: ")[2]
        assert re.match("`[;}]`, ", listed)
        assert len(listed.split(", ")) + listed.count(" or ") <= 6


def test_a_byte_order_mark_is_passed_over() -> None:
    text = "\ufefffamily F { part P { inputs A; output Y = A; times ns { tpd A => Y 1; } } }"
    collector = Collector()
    library = Library.read([SourceFile("a.parts", text.encode())], None, collector)
    assert collector.all() == ()
    (place,) = (pin.place for pin in library.pins("P") if pin.name == "A")
    assert place is not None
    assert text.encode()[place.start : place.stop] == b"A"


SEVERAL = """family F {
  gates ns { tpd nand 1:2; tpd nor 1:2:3; tpd not 1,5; }
  part A {
    inputs A B;
    output Y = A && B;
    times ns { tpd A -> Y 1; tpd B => Y 1:2:3; }
  }
  part "x" { inputs A; output Y = A; tmies ns { tpd A => Y 1; } }
  part C { inputs A; output Y = ~A; tmies ns { tpd A => Y 1; } }
  alias Z C;
}
family G { part D { inputs A; output Y = A; } equivalent D, ; }
"""


def test_a_file_with_several_faults_tells_each_at_its_place() -> None:
    assert [line for line, _ in faults(SEVERAL)] == [2, 2, 4, 5, 6, 8, 8, 9, 12]


def test_names_that_a_faulty_file_may_describe_are_not_missed() -> None:
    text = family("part A { inputs A B; } part B { inputs C; } alias C = A; equivalent A, C;")
    assert len(faults(text)) == 1


@pytest.mark.parametrize("piece", ["part A { inputs A B; } ", "{ ", "} ", "part ", "= { ", "\x00", "; "])
def test_many_faults_are_counted(piece: str) -> None:
    collector = Collector()
    Library.read([SourceFile("a.parts", family(piece * 5000).encode())], None, collector)
    assert 1 <= len(collector.all()) <= MOST


def test_the_last_fault_counts_those_beyond() -> None:
    collector = Collector()
    text = family("part A { inputs A B; inputs C; }\n" * 500)
    Library.read([SourceFile("a.parts", text.encode())], None, collector)
    assert [told.count for told in collector.all()] == [1] * (MOST - 1) + [500 - MOST + 1]


def test_a_brace_too_many_does_not_hide_the_next_fault() -> None:
    text = "family F { part P { inputs A; } } }\nfamily G { alias A B; }\n"
    assert [line for line, _ in faults(text)] == [1, 2]
