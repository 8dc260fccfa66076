"""Which statements are plain enough to be read in bulk, and what their columns say."""

from __future__ import annotations

import pytest

from tardigate.source.collector import Collector
from tardigate.source.files import SourceFile
from tardigate.syntax.preprocess import PreprocessOptions, preprocess
from tardigate.syntax.verilog_reader import Unit, read_unit


def _unit(body: str) -> Unit:
    source = SourceFile("board.v", f"module board(a, b, y);\n{body}\nendmodule\n".encode())
    collector = Collector()
    unit = read_unit(preprocess(source, PreprocessOptions(), collector, None), collector)
    collector.refuse()
    return unit


def _statements(body: str) -> list[str]:
    """Write the plain statements again from their columns."""
    unit = _unit(body)
    plain, text = unit.plain, unit.scan.names.text
    found = []
    for at in range(len(plain.first)):
        terms = []
        for row in range(int(plain.start[at]), int(plain.start[at + 1])):
            net, bit, pin = int(plain.net[row]), int(plain.bit[row]), int(plain.pin[row])
            word = {-1: "", -2: "0", -3: "1", -4: "x", -5: "z"}.get(net) if net < 0 else text(net)
            word = f"{word}[{bit}]" if bit >= 0 else word
            terms.append(f".{text(pin)}({word})" if pin >= 0 else str(word))
        name = text(int(plain.name[at])) if plain.name[at] >= 0 else "-"
        kind = "declare " if plain.is_declaration[at] else ""
        found.append(f"{kind}{text(int(plain.head[at]))} {name} {' '.join(terms)}")
    return found


PLAIN = {
    "nand g1 (y, a, b);": "nand g1 y a b",
    "nand (y, a, b);": "nand - y a b",
    "NA2 u1 (.A(a), .B(b), .Y(y));": "NA2 u1 .A(a) .B(b) .Y(y)",
    "NA2 u1 (.A(), .Y(y[3]));": "NA2 u1 .A() .Y(y[3])",
    "NA2 u1 (a, y[10], 1'b0, 1'b1, 1'bx, 1'bz);": "NA2 u1 a y[10] 0 1 x z",
    "input a, b;": "declare input - a b",
    "wire \\a+b , c;": "declare wire - a+b c",
    "\\and u1 (y, a);": "and u1 y a",
    "nand\n g1\n(\ny,a // note\n, b) ;": "nand g1 y a b",
}
NOT_PLAIN = [
    "nand #1 g1 (y, a, b);",
    "nand g1 (y, a, b), g2 (a, y, b);",
    "nand g1 [3:0] (y, a, b);",
    "nand g1 (y, ~a, b);",
    "nand g1 (y, {a, b});",
    "nand g1 (y, a[1:0]);",
    "nand g1 (y, a[N]);",
    "nand g1 (y, , b);",
    "NA2 (y, a, b);",
    "NA2 u1 ();",
    "NA2 u1 (.A(a), b);",
    "NA2 u1 (a, .B(b));",
    "NA2 u1 (.A(a b));",
    "NA2 u1 (.A(1));",
    "NA2 u1 (1);",
    "NA2 #(3) u1 (a);",
    "NA2 u1 (a.b);",
    "nand g1 (.y(y), .a(a));",
    "(* keep *) nand g1 (y, a, b);",
    "input [3:0] a;",
    "wire a = b;",
    "wire signed a;",
    "assign y = a;",
    "input wire a;",
    "nand g1 (y, a, b",
    "nand g1 y, a, b);",
    "nand g1 ((y), a);",
    "nand g1 (y, a[1][2]);",
    "nand g1 (y, 2'b0);",
    ";",
]


@pytest.mark.parametrize("text", PLAIN)
def test_plain_statements(text: str) -> None:
    assert _statements(text) == [PLAIN[text]]


@pytest.mark.parametrize("text", NOT_PLAIN)
def test_what_is_left_to_the_grammar(text: str) -> None:
    assert _statements(text + "\nwire last;") in (["declare wire - last"], [])


def test_uses_are_the_modules_that_a_module_names() -> None:
    unit = _unit("NA2 u1 (a);\nhalf #(3) h (b);\nbuf #delay g (y, a);\nwire w;\nnot (y, a);")
    known = ["NA2", "half", "u2", "board", "nobody"]
    assert sorted(unit.uses(known)["board"]) == ["NA2", "half"]


def test_a_module_with_parameters_does_not_use_itself() -> None:
    collector = Collector()
    source = SourceFile("m.v", b"module m #(parameter N = 1) (input a);\nendmodule\n")
    unit = read_unit(preprocess(source, PreprocessOptions(), collector, None), collector)
    assert unit.uses(["m"]) == {}


def test_a_quote_in_a_string_makes_no_number_of_the_word_behind_it() -> None:
    body = '(* test = "don\'t" *)\nleaf u1 (a, b);\nleaf #(.N("it\'s")) u2 (a, y);\nnand leaf (y, a, b);'
    assert _statements(body)[-1] == "nand leaf y a b"
    unit = _unit(body)
    assert unit.uses(["leaf"]) == {"board": ["leaf"]}
