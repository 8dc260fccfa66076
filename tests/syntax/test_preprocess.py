"""Directives and macros, clause by clause of IEEE 1364-2005."""

from __future__ import annotations

from collections.abc import Mapping
from contextlib import suppress
from pathlib import Path

import pytest

from tardigate.source.collector import Collector
from tardigate.source.faults import InputRefusedError
from tardigate.source.files import SourceFile, read_file
from tardigate.syntax.placing import in_force
from tardigate.syntax.preprocess import Preprocessed, PreprocessOptions, preprocess


def run(
    text: str | bytes, after: Preprocessed | None = None, defines: Mapping[str, str] | None = None
) -> Preprocessed:
    """Preprocess a text that must have no fault."""
    collector = Collector()
    data = text.encode() if isinstance(text, str) else text
    done = preprocess(SourceFile("board.v", data), PreprocessOptions(defines=defines or {}), collector, after)
    assert [str(fault) for fault in collector.all()] == []
    return done


def words(text: str, defines: Mapping[str, str] | None = None) -> str:
    """Return the expanded text with single spaces."""
    return " ".join(run(text, None, defines).text.data.decode().split())


def faults(text: str | bytes, path: str = "board.v") -> list[tuple[str, int, int]]:
    """Return code, line and column of each fault."""
    collector = Collector()
    data = text.encode() if isinstance(text, str) else text
    with suppress(InputRefusedError):
        preprocess(SourceFile(path, data), PreprocessOptions(), collector)
    return [(fault.code, fault.span.line, fault.span.column) for fault in collector.all() if fault.span]


COMMENTS = [
    ("a // b\nc", "a     \nc"),
    ("a /* b\n * c */ d", "a     \n        d"),
    ("a /**/ b", "a      b"),
    ("a //* b\nc /*/ d */ e", "a      \nc          e"),
    ("a / b", "a / b"),
    ('"// no" /* yes */', '"// no"          '),
    ('"a\\"// no" // yes', '"a\\"// no"       '),
    ("\\a//b // c", "\\a//b     "),
    ("\\a/*b c", "\\a/*b c"),
    ('\\a"b "// in" \\c"`d // e', '\\a"b "// in" \\c"`d     '),
    ('"`no" \\`no ', '"`no" \\`no '),
    ("\ufeffmodule", "   module"),
]


@pytest.mark.parametrize(("text", "blanked"), COMMENTS)
def test_comments_are_blanked_and_strings_and_escaped_names_protected_3_3_3_6_3_7_1(
    text: str, blanked: str
) -> None:
    assert run(text).text.data.decode() == blanked


MACROS = [
    # 19.3.1, from memory: the standard's own examples
    ("`define wordsize 8\nreg [1:`wordsize] data;", "reg [1:8] data;"),
    ("`define var_nand(dly) nand #dly\n`var_nand(2) g121 (q21, n10, n11);", "nand #2 g121 (q21, n10, n11);"),
    (
        "`define max(a,b)((a) > (b) ? (a) : (b))\nn = `max(p+q, r+s) ;",
        "n = ((p+q) > (r+s) ? (p+q) : (r+s)) ;",
    ),
    # lines joined, comments left out
    ("`define A b \\\n c\n`A d", "b c d"),
    ("`define A b // c\n`A d", "b d"),
    ("`define A b // c \\\n d\n`A e", "b d e"),
    ("`define A b /* c \n */ d\n`A e", "b d e"),
    ("`define A \\b\\\r\n c\r\n`A d", "\\b c d"),
    ("`define A\n<`A>", "<>"),
    # protected text
    ('`define A(x) "x" x \\x x\n`A(1)', '"x" 1 \\x 1'),
    ("`define A(h) 8'hh h $h 4h\n`A(1)", "8'hh 1 $h 4h"),
    # arguments
    ("`define A(x) <x>\n`A((a, b)) `A({c, d}) `A(e[1, 2])", "<(a, b)> <{c, d}> <e[1, 2]>"),
    ('`define A(x) <x>\n`A(",") `A(")") `A(\\a,) )', '<","> <")"> <\\a,) >'),
    ("`define A(x, y) <x|y>\n`A(, b) `A (1,\n 2) `A(/* , */ 1, 2 // )\n)", "<|b> <1|2> <1|2>"),
    ("`define A(x) <x>\n`A() `A( `A( `A(1) ) )", "<> <<<1>>>"),
    ("`define A() b\n`A() c", "b c"),
    ("`define A (x)\n`A (y)", "(x) (y)"),
    # nesting: an argument is never split again
    ("`define P 1, 2\n`define F(x) <x>\n`define G(x) `F(x)\n`G(`P)", "<1, 2>"),
    ("`define A `B\n`define B 1\n`A", "1"),
    ("`define A 1\n`define USE(m) `m\n`USE(A)", "1"),
    # in a text of a macro a directive is a directive
    ("`define A \\\n`ifdef B \\\n 1 \\\n`else \\\n 2 \\\n`endif\n`A\n`define B\n`A", "2 1"),
    ("`define A `define B 1\n`A\n`B", "1"),
    # redefinition, 19.3.2
    ("`define A 1\n`A\n`define A 2\n`A\n`undef A\n`ifdef A 3 `endif", "1 2"),
    ("`define \\A+ 1\n`\\A+ ;", "1 ;"),
    ("`define A \\b // c\n(`A)", "(\\b )"),
]


@pytest.mark.parametrize(("text", "expanded"), MACROS)
def test_macros_19_3_1(text: str, expanded: str) -> None:
    assert words(text) == " ".join(expanded.split())


CONDITIONS = [
    ("`ifdef A 1 `else 2 `endif", "2"),
    ("`ifndef A 1 `else 2 `endif", "1"),
    ("`define A\n`ifdef A 1 `elsif A 2 `else 3 `endif", "1"),
    ("`define B\n`ifdef A 1 `elsif B 2 `elsif B 3 `else 4 `endif", "2"),
    ("`ifdef A `ifdef B 1 `else 2 `endif `else `ifdef B 3 `else 4 `endif `endif", "4"),
    ('`ifdef A `unknown(\n// `endif\n/* `endif */ "`endif" \\`endif `endif 1', "1"),
    ("`ifdef A it's \"so\n`endif 1", "1"),
]


@pytest.mark.parametrize(("text", "expanded"), CONDITIONS)
def test_conditions_19_4(text: str, expanded: str) -> None:
    assert words(text) == expanded


def test_an_undefined_macro_in_text_left_out_and_a_definition_there_do_nothing_19_4() -> None:
    assert words("`ifdef A\n`define B 1\n`endif\n`ifdef B 1 `else 2 `endif") == "2"


def test_states_19_1_19_2_19_6_19_8_19_9() -> None:
    text = (
        "a `celldefine b `endcelldefine c\n`default_nettype none\nd `timescale 10 ns / 100ps\ne"
        "\n`unconnected_drive pull1\nf `nounconnected_drive\n`resetall g"
    )
    done = run(text)
    at = {word: done.text.data.index(word.encode()) for word in "abcdefg"}
    assert len(done.text.data) == len(text)
    assert [in_force(done.cells, at[word]) for word in "abc"] == [False, True, False]
    assert [in_force(done.default_nettypes, at[word]) for word in "cdg"] == ["wire", "none", "wire"]
    assert [in_force(done.timescales, at[word]) for word in "deg"] == [(None, None), (1e7, 1e5), (None, None)]
    assert [in_force(done.drives, at[word]) for word in "efg"] == ["none", "pull1", "none"]


def test_other_directives_are_accepted_19_7_19_10_19_11() -> None:
    text = '`line 10 "a.v" 0\n`pragma x y=1\n`begin_keywords "1364-2005"\nmodule\n`end_keywords\n'
    assert words(text) == "module"
    assert run(text).text.span(text.index("module")).line == 4


def test_macros_and_states_hold_in_the_next_file_of_a_run() -> None:
    first = run("`define A 1\n`timescale 1us/1ns\n`default_nettype none\n`celldefine")
    second = run("`A", after=first)
    assert second.text.data.strip() == b"1"
    assert second.timescales == ((0, (1e9, 1e6)),)
    assert (second.default_nettypes, second.cells) == (((0, "none"),), ((0, True),))
    assert b"B" not in first.macros
    assert set(run("`define B", after=first).macros) == {b"A", b"B"}


def test_macros_given_beforehand() -> None:
    assert words("`A `B", {"A": "1\n+ 2", "B": ""}) == "1 + 2"


def test_a_use_with_macros_behind_a_directive_19_8() -> None:
    assert run("`define U 1ns\n`timescale `U/`U\n").timescales[-1][1] == (1e6, 1e6)


def test_places_lead_through_macros_and_includes(tmp_path: Path) -> None:
    (tmp_path / "parts").mkdir()
    (tmp_path / "parts" / "inner.vh").write_text("wire deep;\n")
    (tmp_path / "outer.vh").write_text('// first\n`include "inner.vh"\nwire `LONG ;\n')
    board = tmp_path / "board.v"
    board.write_text('`define LONG a_long_name\n`include "outer.vh"\nwire /* c */ last;\n')
    collector = Collector()
    done = preprocess(read_file(board), PreprocessOptions((str(tmp_path / "parts"),)), collector)
    assert collector.all() == ()
    places = {}
    for word in ("deep", "a_long_name", "last"):
        span = done.text.span(done.text.data.index(word.encode()))
        places[word] = (Path(span.path).name, span.line, span.column)
    assert places == {
        "deep": ("inner.vh", 1, 6),
        "a_long_name": ("outer.vh", 3, 6),
        "last": ("board.v", 3, 14),
    }


def test_an_include_searches_its_own_folder_first_19_5(tmp_path: Path) -> None:
    for folder, text in (("own", "own"), ("other", "other")):
        (tmp_path / folder).mkdir()
        (tmp_path / folder / "a.vh").write_text(text)
    (tmp_path / "own" / "b.vh").write_text('`include "a.vh"')
    board = SourceFile(str(tmp_path / "board.v"), b'`include "own/b.vh" // c\n`include "a.vh"\n')
    done = preprocess(board, PreprocessOptions((str(tmp_path / "other"),)), Collector())
    assert done.text.data.split() == [b"own", b"other"]


FAULTS = [
    ("a `b", [("V101", 1, 3)]),
    ("`a\n`b", [("V101", 1, 1), ("V101", 2, 1)]),
    ("`define A(x) x\n`A(1, 2) `A", [("V102", 2, 1), ("V103", 2, 10)]),
    ("`define A(x) x\n`A((1, 2) `A(", [("V103", 2, 1)]),
    ('`define A(x) x\n`A(") )', [("V103", 2, 1)]),
    ("`define A `A\n `A", [("V104", 2, 2)]),
    ("`define A(x) `B(x)\n`define B(x) `A(x)\n`A(1)", [("V104", 3, 1)]),
    ("a `` b ` c", [("V106", 1, 3), ("V106", 1, 4), ("V106", 1, 8)]),
    (
        "`define\n`define 1\n`define A(1) 2\n`define A(x, x) x\n`define A(x=1) x",
        [("V107", n, 1) for n in range(1, 6)],
    ),
    ("`define include 1", [("V108", 1, 9)]),
    ("a /* b", [("V111", 1, 3)]),
    ("a /*/", [("V111", 1, 3)]),
    ("`ifdef A /* b", [("V111", 1, 10), ("V132", 1, 1)]),
    ('a "b\n c "d" "e\\"', [("V112", 1, 3), ("V112", 2, 8)]),
    # 19.3.1, from memory: a string may not be divided between a macro and the text around it
    (
        '`define first_half "start of string\n$display(`first_half end of string");',
        [("V112", 1, 20), ("V112", 2, 35)],
    ),
    ('a\0b\n"c\x01" \\d\x7f', [("V113", 1, 2), ("V113", 2, 3), ("V113", 2, 8)]),
    ('é \\é ; // é\n"é"', [("V114", 1, 1), ("V114", 1, 4)]),
    (
        '`include "none.vh"\n`include none\n`include "a.vh" b',
        [("V121", 1, 1), ("V124", 2, 1), ("V124", 3, 1)],
    ),
    ("`else\n`elsif A\n`endif", [("V131", 1, 1), ("V131", 2, 1), ("V131", 3, 1)]),
    ("`ifdef A\n`ifndef B", [("V132", 1, 1)]),
    ("`ifndef A\n`ifndef B", [("V132", 1, 1), ("V132", 2, 1)]),
    ("`ifdef A\n`else\n`else\n`endif\n", [("V133", 3, 1)]),
    ("`ifdef\n`endif\n`undef", [("V134", 1, 1), ("V134", 3, 1)]),
    (
        "`timescale 1ns\n`timescale 1 parsec/1ns\n`timescale 2ns/1ns",
        [("V141", 1, 1), ("V142", 2, 1), ("V142", 3, 1)],
    ),
    ("`timescale 1ps/10ps", [("V142", 1, 1)]),
    ("`default_nettype\n`default_nettype reg", [("V143", 1, 1), ("V143", 2, 1)]),
    ("`line 1\n`unconnected_drive pull2\n`begin_keywords 1", [("V144", n, 1) for n in (1, 2, 3)]),
    ("`define A `b\n\n `A", [("V101", 3, 2)]),
]


@pytest.mark.parametrize(("text", "told"), FAULTS)
def test_faults_have_codes_and_places(text: str, told: list[tuple[str, int, int]]) -> None:
    assert faults(text) == sorted(told, key=lambda fault: (fault[1:], fault[0]))


def test_a_byte_that_marks_arguments_never_gets_through_a_definition() -> None:
    assert faults(b"`define A(x) \x010\x01 x") == [("V107", 1, 1)]
    assert faults(b'`define A(x) "\x01"') == [("V107", 1, 1)]
    assert faults(b"`define A(x) x // \x01\n`A(1)") == []
    assert faults(b"`define A(x) `B(x)\n`define B(x) x\n`A(\x010\x01)") == [("V113", 3, 4)]


def test_a_fault_inside_a_macro_names_its_definition() -> None:
    collector = Collector()
    preprocess(SourceFile("board.v", b"`define A `b\n`A"), PreprocessOptions(), collector)
    (fault,) = collector.all()
    assert [(str(one.span), one.label) for one in fault.related] == [("board.v:1:9", "`A` is defined here")]


def test_an_unknown_macro_gets_the_nearest_name() -> None:
    collector = Collector()
    preprocess(SourceFile("board.v", b"`define DELAY 1\n`DELY `timescal"), PreprocessOptions(), collector)
    assert [fault.hint for fault in collector.all()] == ["Did you mean `DELAY`?", "Did you mean `timescale`?"]


def test_a_file_that_includes_itself_and_a_chain_too_deep_19_5(tmp_path: Path) -> None:
    for number in range(102):
        (tmp_path / f"f{number}.vh").write_text(f'`include "f{number + 1}.vh"\n')
    (tmp_path / "f102.vh").write_text('`include "f1.vh"\n')
    assert [code for code, *_ in faults('`include "f3.vh"', str(tmp_path / "board.v"))] == ["V122"]
    (tmp_path / "f102.vh").write_text("")
    assert [code for code, *_ in faults('`include "f0.vh"', str(tmp_path / "board.v"))] == ["V122"]
    assert faults('`include "f5.vh"', str(tmp_path / "board.v")) == []


def test_ten_thousand_faults_are_forty_diagnostics_with_a_count() -> None:
    collector = Collector()
    preprocess(SourceFile("board.v", b"`a\n" * 10_000), PreprocessOptions(), collector)
    assert (len(collector.all()), sum(fault.count for fault in collector.all())) == (40, 10_000)


GROWTHS = {
    "doubling": "`define A0 a\n"
    + "".join(f"`define A{n} `A{n - 1} `A{n - 1}\n" for n in range(1, 60))
    + "`A59",
    "nothing": "`define A0\n" + "".join(f"`define A{n} `A{n - 1} `A{n - 1}\n" for n in range(1, 60)) + "`A59",
    "arguments": "`define D(x) " + "x " * 40 + "\n" + "`D(" * 40 + "a" + ")" * 40,
    "brackets": "`define D(x) x\n" + "`D(" * 50_000 + ")" * 50_000,
}


@pytest.mark.parametrize("text", GROWTHS.values(), ids=GROWTHS)
def test_growth_without_end_is_refused(text: str) -> None:
    assert [code for code, *_ in faults(text)] == ["V105"]


def test_depth_is_no_limit() -> None:
    chain = "`define A0 a\n" + "".join(f"`define A{n} <`A{n - 1}>\n" for n in range(1, 5000)) + "`A4999"
    assert words(chain) == "<" * 4999 + "a" + ">" * 4999
    assert words("`define F(x) <x>\n" + "`F(" * 300 + "a" + ")" * 300) == "<" * 300 + "a" + ">" * 300
    assert words("`ifndef A " * 20_000 + "a" + " `endif" * 20_000) == "a"
    assert words("`ifdef A " * 20_000 + "a" + " `endif" * 20_000 + " b") == "b"


def test_a_text_with_nothing_to_do_is_the_very_same_bytes() -> None:
    file = SourceFile("board.v", b'module m; \\a//b x ("//"); endmodule')
    assert preprocess(file, PreprocessOptions(), Collector()).text.data is file.data
