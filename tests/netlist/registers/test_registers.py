"""The textbook register (IEEE 1364-2005 clause 9): which `always` is one, and what it then depends on."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import pytest

from tardigate.netlist import moves
from tardigate.source.faults import InputRefusedError

HEAD = """module m #(parameter P = 1, W = 4, Z = 1'b0) (input ck, r, s, e, f, input [3:0] d);
reg [3:0] q;
reg p;
"""

Read = Callable[[str], list[Any]]
Lines = Callable[[str], list[str]]
Refusal = Callable[..., list[tuple[str, str]]]


def module(body: str, head: str = HEAD) -> str:
    return f"{head}{body}\nendmodule\n"


@pytest.fixture(scope="session")
def lines(registers: Read) -> Callable[[str], list[str]]:
    """Each register as `p+ck clear-r e f`: reg, clock's edge, controls with their levels, data."""

    def told(body: str) -> list[str]:
        found = []
        for each in registers(module(body)):
            words = [("clear", "set")[sets] + "-+"[level] + net for net, level, sets in each.controls]
            found.append(" ".join([f"{each.q}{'+-'[each.edge]}{each.clock}", *words, *each.data]))
        return found

    return told


@pytest.mark.parametrize(
    ("body", "wanted"),
    [
        ("always @(posedge ck) p <= e;", "p+ck e"),
        ("always @(negedge ck) p <= e;", "p-ck e"),
        ("always @(posedge d[2]) p <= e;", "p+d[2] e"),
        ("always @(posedge ck) p = e;", "p+ck e"),
        ("always @(posedge ck) begin begin p <= e; end end", "p+ck e"),
        ("always @(posedge ck) begin : name p <= e; end", "p+ck e"),
        ("always @(posedge ck) if (e) p <= f;", "p+ck e f"),
        ("always @(posedge ck) if (e) p <= f; else p <= p;", "p+ck e f"),
        ("always @(posedge ck) if (r) p <= 1'b0; else if (e) p <= f;", "p+ck r e f"),
        ("always @(posedge ck) begin p <= f; if (r) p <= 0; end", "p+ck r f"),
        ("always @(posedge ck) begin p <= e; p <= f; end", "p+ck f"),
        ("always @(posedge ck) if (e) p <= f; else p <= f;", "p+ck f"),
        ("always @(posedge ck) if (e) p <= 1'bx; else p <= f;", "p+ck e f"),
        ("always @(posedge ck) if (ck) p <= e; else p <= f;", "p+ck e"),
        ("always @(posedge ck) if (p) p <= 0; else p <= e;", "p+ck e p"),
        ("always @(posedge ck) p <= 1;", "p+ck"),
        ("always @(posedge ck) p <= W - 3;", "p+ck"),
        ("always @(posedge ck) if (P) p <= e; else p <= f & e;", "p+ck e"),
        ("always @(posedge ck) if (Z) p <= ~e; else p <= f;", "p+ck f"),
        ("always @(posedge ck) p <= d;", "p+ck d[0]"),
        ("always @(posedge ck or posedge r) if (r) p <= 0; else p <= e;", "p+ck clear+r e"),
        ("always @(posedge r or negedge ck) if (r == 1'b1) p <= 1; else p <= e;", "p-ck set+r e"),
        ("always @(posedge ck, negedge r) if (!r) p <= 0; else p <= e;", "p+ck clear-r e"),
        (
            "always @(posedge ck, negedge r) if (~r) begin p <= 0; end else begin p <= e; end",
            "p+ck clear-r e",
        ),
        ("always @(posedge ck, negedge r) if (r == 1'b0) p <= 0; else p <= e;", "p+ck clear-r e"),
        ("always @(posedge ck, negedge r) if (1 != r) p <= 0; else p <= e;", "p+ck clear-r e"),
        ("always @(posedge ck, negedge r) if (!(r === 1)) p <= 0; else p <= e;", "p+ck clear-r e"),
        ("always @(posedge ck, negedge r) if ((!r) == 1) p <= 0; else p <= e;", "p+ck clear-r e"),
        ("always @(posedge ck, posedge r) if (!!r) p <= 0; else p <= e;", "p+ck clear+r e"),
        ("always @(posedge ck, posedge r) if (r) p <= 0;", "p+ck clear+r"),
        ("always @(posedge ck, posedge r) if (r) ; else p <= e;", "p+ck e r"),
        ("always @(posedge ck, posedge r) if (P) begin if (r) p <= 0; else p <= e; end", "p+ck clear+r e"),
        ("always @(posedge ck, posedge r) if (r) p <= 0; else if (r) p <= f; else p <= e;", "p+ck clear+r e"),
        (
            "always @(posedge ck, posedge r, negedge s) if (r) p <= 0; else if (!s) p <= 1; else p <= e;",
            "p+ck clear+r set-s e",
        ),
        (
            "always @(posedge ck, posedge r, negedge s) if (!s) p <= 0; else if (r) p <= 0; else p <= e;",
            "p+ck clear-s clear+r e",
        ),
    ],
)
def test_one_bit(lines: Lines, body: str, wanted: str) -> None:
    head, *others = wanted.split()
    [found] = lines(body)
    assert found.split()[0] == head
    controls = [word for word in others if "+" in word or "-" in word]
    assert found.split()[1 : 1 + len(controls)] == controls  # the one that wins first stands first
    assert sorted(found.split()[1:]) == sorted(others)


def test_each_bit_of_a_vector_is_a_register_of_its_own(lines: Lines) -> None:
    body = "always @(posedge ck or negedge r) if (!r) {p, q} <= 5'b10100; else {q, p} <= {d[1:0], q[3:1]};"
    assert sorted(lines(body)) == [
        "p+ck set-r q[1]", "q[0]+ck clear-r q[2]", "q[1]+ck clear-r q[3]", "q[2]+ck set-r d[0]",
        "q[3]+ck clear-r d[1]",
    ]  # fmt: skip


def test_clause_05_4_a_narrow_value_is_filled_up_and_a_wide_one_cut(lines: Lines) -> None:
    assert lines("always @(posedge ck) q <= {e, f};") == ["q[0]+ck f", "q[1]+ck e", "q[2]+ck", "q[3]+ck"]
    assert lines("always @(posedge ck) q[2:1] <= d;") == ["q[1]+ck d[0]", "q[2]+ck d[1]"]


def test_a_reg_that_a_reset_leaves_alone_has_it_as_an_enable(lines: Lines) -> None:
    body = "always @(posedge ck or posedge r) if (r) p <= 0; else begin p <= e; q[0] <= f; end"
    assert lines(body) == ["p+ck clear+r e", "q[0]+ck r f"]


def test_a_reg_that_only_keeps_what_it_has_is_no_register(lines: Lines) -> None:
    assert lines("always @(posedge ck) if (e) p <= p;") == []
    assert lines("always @(posedge ck) ;") == []


def test_each_always_may_move_regs_of_its_own(lines: Lines) -> None:
    assert lines("always @(posedge ck) p = e;\nalways @(negedge ck) q[0] <= p;") == ["p+ck e", "q[0]-ck p"]


def test_a_delay_belongs_to_what_it_stands_at(registers: Read) -> None:
    body = "always @(posedge ck or posedge r or posedge s)"
    body += " if (r) p <= #(1:2:3) 0; else if (s) p <= 1; else p <= #5 e;"
    [found] = registers(module(body, HEAD.replace("module", "`timescale 1ns/1ns\nmodule", 1)))
    assert found.kind.delays[:3].tolist() == [[5e6] * 3, [5e6] * 3, [1e6, 2e6, 3e6]]
    assert (found.kind.delays[3] != found.kind.delays[3]).all()  # NaN: left to the parts files


REFUSED = [
    ("always @* p = e;", "p = e"),
    ("always @(ck) p <= e;", "ck)"),
    ("always @(posedge ck or e) p <= e;", "e)"),
    ("always @(posedge ck or posedge ck) p <= e;", "ck)"),
    ("always @(posedge d) p <= e;", "d)"),
    ("always @(posedge P) p <= e;", "P)"),
    ("always @(posedge (ck & e)) p <= e;", "& e"),
    ("always @(posedge ck or posedge r) p <= e;", "ck or"),
    ("always @(posedge ck or posedge r) if (e) p <= 0; else p <= e;", "e) p"),
    ("always @(posedge ck or posedge r) if (!r) p <= 0; else p <= e;", "!r"),
    ("always @(posedge ck or negedge r) if (r) p <= 0; else p <= e;", "r) p"),
    ("always @(posedge ck or posedge r) if (r) p <= f; else p <= e;", "f; else"),
    ("always @(posedge ck or posedge r) if (r) p <= 1'bx; else p <= e;", "1'bx"),
    ("always @(posedge ck or posedge r) if (r) begin if (e) p <= 0; end else p <= e;", "e) p"),
    ("always @(posedge ck or posedge r) begin if (r) p <= 0; else p <= e; q <= d; end", "ck or"),
    ("always @(posedge ck) p <= ~e;", "~e"),
    ("always @(posedge ck) p <= e & f;", "& f"),
    ("always @(posedge ck) q <= {d[2:0], ^d};", "^d"),
    ("always @(posedge ck) p <= e ? f : r;", "e ?"),
    ("always @(posedge ck) p <= $clog2(d);", "$clog2"),
    ("always @(posedge ck) p <= 1'bz;", "1'bz"),
    ("always @(posedge ck) if (e && f) p <= e;", "&& f"),
    ("always @(posedge ck) if (d) p <= e;", "d) p"),
    ("always @(posedge ck) if (d == 4'd1) p <= e;", "d == 4"),
    ("always @(posedge ck) if (e == f) p <= e;", "== f"),
    ("always @(posedge ck) if (e == 2) p <= e;", "== 2"),
    ("always @(posedge ck) if (~e == 1) p <= f;", "~e =="),
    ("always @(posedge ck) p = #1 e;", "1 e"),
    ("always @(posedge ck) begin if (e) p <= #1 f; else p <= f; end", "p <= f; end"),
    ("always @(posedge ck) begin p = e; q[0] = p; end", "p; end"),
    ("always @(posedge ck) begin p = e; if (p) q[0] <= f; end", "p) q"),
    ("always @(posedge ck) begin p = e; p <= f; end", "p = e"),
]  # fmt: skip


@pytest.fixture(scope="session")
def refusal(registers: Read) -> Callable[..., list[tuple[str, str]]]:
    """The codes, with the text that begins where each points to."""

    def told(body: str, head: str = HEAD) -> list[tuple[str, str]]:
        text = module(body, head)
        with pytest.raises(InputRefusedError) as refused:
            registers(text)
        spans = [(diagnostic.code, diagnostic.span) for diagnostic in refused.value.diagnostics]
        rows = text.splitlines()
        return [(code, rows[span.line - 1][span.column - 1 :]) for code, span in spans if span is not None]

    return told


@pytest.mark.parametrize(("body", "place"), REFUSED)
def test_what_is_more_than_a_register_is_refused_where_it_is_more(
    refusal: Refusal, body: str, place: str
) -> None:
    [(code, text)] = refusal(body)
    assert code == "V010"
    assert text.startswith(place)


def test_a_signed_bit_is_not_compared(refusal: Refusal) -> None:
    declared = HEAD.replace("e, f", "e, input signed f")
    assert refusal("always @(posedge ck) if (f == 1) p <= e;", declared)[0][0] == "V010"


@pytest.mark.parametrize(
    ("body", "code"),
    [
        ("always @(posedge ck) p <= nothing;", "N130"), ("always @(posedge ck) nothing <= e;", "N130"),
        ("always @(posedge nothing) p <= e;", "N130"), ("always @(posedge ck) if (nothing) p <= e;", "N130"),
        ("always @(posedge ck) p <= d[e];", "N133"), ("always @(posedge ck) q <= #(1,2) d;", "N150"),
    ],
)  # fmt: skip
def test_what_is_wrong_without_a_register_is_told_as_elsewhere(
    refusal: Refusal, body: str, code: str
) -> None:
    assert [code for code, _ in refusal(body)] == [code]


def test_there_is_an_end_to_what_one_always_may_move(
    lines: Lines, refusal: Refusal, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(moves, "MOST_MOVES", 8)
    assert len(lines("always @(posedge ck) q <= d;")) == 4
    assert refusal("always @(posedge ck) if (e) q <= d; else q <= 0;")[0][0] == "V010"


def test_no_chain_of_conditions_is_too_long(registers: Read) -> None:
    count = 3000
    chain = "".join(f"if (c[{i}]) p <= v[{i}]; else " for i in range(count))
    declared = f"module m(input ck, e, input [{count - 1}:0] c, v);\nreg p;\n"
    [found] = registers(module(f"always @(posedge ck) {chain} p <= e;", declared))
    assert len(found.data) == 2 * count + 1


def test_two_always_that_move_one_reg_clash(told: Callable[..., list[str]]) -> None:
    head = "module m(input ck, e, f, output reg p);\n"
    twice = "always @(posedge ck) p <= #1 e;\nalways @(negedge ck) p <= #1 f;\nendmodule\n"
    assert told(head + twice) == ["N201"]
    assert told(head + "always @(posedge ck) p <= #1 e;\nassign #1 p = f;\nendmodule\n") == ["N129"]
    assert told(head + "always @(posedge ck) if (f) p <= #1 e;\nendmodule\n") == []
