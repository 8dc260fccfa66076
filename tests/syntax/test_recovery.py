"""Several faults of one module in one run: each is told at its place, and none that follows from another."""

from __future__ import annotations

import re
from collections.abc import Callable
from random import Random

import pytest
from hypothesis import given, settings, strategies as st

from tardigate.source.collector import Collector
from tardigate.source.diagnostic import Diagnostic
from tardigate.source.faults import InputRefusedError
from tardigate.source.files import SourceFile
from tardigate.syntax.grammar import Reader
from tardigate.syntax.preprocess import PreprocessOptions, preprocess
from tardigate.syntax.recovery import troubles
from tardigate.syntax.verilog_advice import LANGUAGE, SLIPS
from tardigate.syntax.verilog_parser import MOST
from tardigate.syntax.verilog_reader import parse_module, read_unit

HEADER = "module board(input a, b, output y, z);\n"
COMMENT = re.compile(r"/\*.*?\*/|//[^\n]*")
TOKEN = re.compile(r"\\\S+|\w[\w$]*|[^\s\w]")


def faults(text: str, bulk: bool = True) -> list[Diagnostic]:
    """Return what parsing every module of a text tells, in order of place."""
    collector = Collector()
    unit = read_unit(
        preprocess(SourceFile("board.v", text.encode()), PreprocessOptions(), collector), collector
    )
    for module in unit.modules:
        try:
            parse_module(unit, module, bulk=bulk)
        except InputRefusedError as refusal:
            for diagnostic in refusal.diagnostics:
                collector.add(diagnostic)
    return list(collector.all())


def told(body: str) -> list[tuple[str, str, str]]:
    """Return code, marked text and message of each fault of a module's body."""
    text = f"{HEADER}{body}\nendmodule\n"
    found = [(d.code, d.span, d.message) for d in faults(text)]
    return [
        (code, text[s.start : s.start + s.length], message) for code, s, message in found if s is not None
    ]


def _statements(text: str) -> list[tuple[int, int]]:
    """Return where the statements of the modules' bodies begin and end."""
    found = []
    for body in re.finditer(r"module\s(?:\\\S+|[^;])*?;(.*?)endmodule", text, re.DOTALL):
        start = body.start(1)
        for stop in re.finditer(r"(?:\\\S+|[^;])*?;", body[1]):
            begin = start + stop.start() + len(stop[0]) - len(stop[0].lstrip())
            found.append((begin, start + stop.end()))
    return found


def _spoilt(statement: str, random: Random) -> str:
    """Return a statement with one token taken out, put in or changed."""
    tokens = list(TOKEN.finditer(statement))
    signs = [t for t in tokens if t[0] in "(),;[]{}"]
    sign = random.choice(signs)
    at = random.choice(tokens).start()
    match random.randrange(4):
        case 0:
            return statement[: sign.start()] + " " + statement[sign.end() :]
        case 1:
            return f"{statement[:at]} {random.choice('@=:?')} {statement[at:]}"
        case 2:
            return statement[: sign.start()] + random.choice("@:?") + statement[sign.end() :]
        case _:
            return f"{statement[: sign.start()]} {random.choice(')]}')} {statement[sign.start() :]}"


@settings(max_examples=30, deadline=None, derandomize=True)
@given(st.integers(0, 2**32 - 1))
def test_each_of_several_faults_is_told_and_no_other(random_verilog: Callable[..., str], seed: int) -> None:
    random = Random(seed)
    text = COMMENT.sub(" ", random_verilog(seed, 14))
    places = _statements(text)
    chosen = list(range(random.randrange(3), len(places) - 1, random.randrange(3, 6)))[:MOST]
    pieces, stretches, at, length = [], [], 0, 0
    for number in chosen:
        start, stop = places[number]
        spoilt = _spoilt(text[start:stop], random)
        alone = text[:start] + spoilt + text[stop:]
        if not faults(alone):
            continue
        pieces += [text[at:start], spoilt]
        length += start - at
        behind = re.compile(r"\s*(\\\S+|\w[\w$]*|\S)").match(text, stop)
        stretches.append((length, length + len(spoilt) + (behind.end() - stop if behind else 0)))
        length += len(spoilt)
        at = stop
    whole = "".join([*pieces, text[at:]])
    found = faults(whole)
    starts = [d.span.start for d in found if d.span is not None]
    assert all(any(first <= start < last for first, last in stretches) for start in starts), found
    assert all(any(first <= start < last for start in starts) for first, last in stretches), found
    assert [(d.code, d.span) for d in faults(whole, bulk=False)] == [(d.code, d.span) for d in found]


@pytest.mark.parametrize(
    ("body", "wanted"),
    [
        ("buf g (y, a)", [("V151", ")", "`;` is missing after `)`")]),
        ("wire w\nwire x;\nwire v",
         [("V151", "w", "`;` is missing after `w`"), ("V151", "v", "`;` is missing after `v`")]),
        ("wire v w;", [("V151", "v", "`,` is missing after `v`")]),
        ("nand g (y, a, b;", [("V151", "b", "`)` is missing after `b`")]),
        ("wire [3:0 w;", [("V151", "0", "`]` is missing after `0`")]),
        ("assign y a;", [("V151", "y", "`=` is missing after `y`")]),
        ("nand g y, a, b);", [("V151", "g", "`(` is missing after `g`")]),
        ("wire w =\nassign y = a;", [("V151", "=", "an expression is missing after `=`")]),
        ("nand g (y, a\nnand h (z, a);", [("V155", "(", "this `(` has no `)`")]),
        ("generate if (1) begin buf g (y, a); endgenerate", [("V155", "begin", "this `begin` has no `end`")]),
        ("nand g (y, a,);", [("V152", ",", "this `,` is one too many")]),
        ("nand g (y, a));", [("V152", ")", "this `)` is one too many")]),
        ("end", [("V152", "end", "this `end` is one too many")]),
        ("nand nor (y, a, b);", [("V154", "nor", "`nor` is a reserved word and cannot be a name")]),
        ("logic w;", [("V153", "logic", "`logic` is a word of a later language than IEEE 1364-2005")]),
        ("always_ff @(posedge a) y <= b;",
         [("V153", "always_ff", "`always_ff` is a word of a later language than IEEE 1364-2005")]),
        ("nand g = y, a);", [("V001", "=", "`=` stands where `(` was expected")]),
        ("assign y <= a;", [("V001", "<=", "`<=` stands where `=` was expected")]),
        ("assign y = a & ;", [("V001", ";", "`;` stands where an expression was expected")]),
        ("assign y = a b;", [("V001", "b", "`b` stands where `;` or `,` was expected")]),
        ("half u (.a a, .b(b));", [("V001", "a", "`a` stands where `(` was expected")]),
        ("assign y = a b c;\nbuf (y, a;", [("V001", "b", "`b` stands where `;` or `,` was expected")]),
    ],
)  # fmt: skip
def test_slips_have_words_of_their_own(body: str, wanted: list[tuple[str, str, str]]) -> None:
    assert told(body) == wanted


def test_a_fault_after_a_doubtful_stretch_waits_for_the_next_run() -> None:
    body = "always_comb begin\n  y = a;\n  if (b) z = a;\nend\nbuf g (y, a);\nbuf h (z a);"
    assert [code for code, _, _ in told(body)] == ["V153", "V151"]


@pytest.mark.parametrize(
    ("header", "code", "marked"),
    [
        ("(input a output y)", "V151", "a"),
        ("(input logic a, output y)", "V153", "logic"),
        ("(input a, output y,)", "V152", ","),
        ("(input a, output y", "V151", "y"),
        ("(input a [1:0], output y)", "V001", "["),
        ("(input wire, output y)", "V001", ","),
        ("(a, y)) extra words", "V001", ")"),
    ],
)
def test_a_fault_in_the_header_does_not_hide_those_of_the_body(header: str, code: str, marked: str) -> None:
    text = f"module board{header};\nwire w;\nnand g (y, a;\nendmodule\n"
    found = [(d.code, text[d.span.start : d.span.start + d.span.length]) for d in faults(text) if d.span]
    assert found == [(code, marked), ("V151", "a")]


def test_the_usual_slips_fail_at_their_last_token() -> None:
    scout = Reader("verilog", object()).scout
    for samples in SLIPS.values():
        for sample in samples:
            (fault,), _ = troubles(scout, f"module m{sample}", LANGUAGE, 1)
            assert fault.found == list(scout.tokens(f"module m{sample}"))[-2], sample


def test_faults_beyond_the_first_are_counted() -> None:
    found = faults(HEADER + "wire w;\nnand g (y a);\n" * 1000 + "endmodule\n")
    assert len(found) == MOST
    assert sum(d.count for d in found) == 1000
    assert [d.span.line for d in found if d.span] == [3 + 2 * at for at in range(MOST)]


@pytest.mark.parametrize(
    "piece", ["begin ", "(", "if (1) begin ", "case (1) 0: ", "; ) ", "@ ", "a b c ", "else "]
)
def test_text_that_is_far_from_verilog_ends(piece: str) -> None:
    found = faults(HEADER + piece * 6_000 + "endmodule\n")
    assert 1 <= len(found) <= MOST


def test_bad_numbers_are_told_beside_other_faults() -> None:
    codes = [code for code, _, _ in told("assign y = 2'b12;\nwire w\nwire v;\nassign z = 2'o9 & 4'bz;")]
    assert codes == ["V009", "V151", "V009"]
