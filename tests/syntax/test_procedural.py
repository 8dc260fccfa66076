"""Stretches of procedural code: random statements whose ends are known, and what may confuse a scanner."""

from __future__ import annotations

import pytest
from hypothesis import given, strategies as st

from tardigate.source.collector import Collector
from tardigate.source.files import SourceFile
from tardigate.source.placed import PlacedText
from tardigate.syntax.outline import outline
from tardigate.syntax.plain import classify_names, refine
from tardigate.syntax.procedural import stretches
from tardigate.syntax.scan import scan


def found(text: str) -> list[tuple[str, str]]:
    """Return word and text of the stretches of the only module."""
    data = text.encode()
    marked = scan(data)
    marks = refine(marked, classify_names(marked))
    modules = outline(marked, marks, PlacedText.whole(SourceFile("board.v", data)), Collector())
    assert len(modules) == 1
    places = stretches(marked, marks, modules[0])
    return [(word, data[start:end].decode()) for word, start, end in places]


NAMES = st.sampled_from(["q", "n1", "\\end ", "\\a;b ", "\\always ", "\\begin(: ", "end_", "xbegin", "$end"])
SIMPLE_VALUES = st.sampled_from(
    ["a", "1'b0", "4'b1?z0", "{a, b}", "c ? d : e", '"end; begin"', '"a\\";"', "f(a, b)", "m[3:0]", "8 'h ?F"]
)
VALUES = st.builds("{} {} {}".format, SIMPLE_VALUES, st.sampled_from("+&|<"), SIMPLE_VALUES) | SIMPLE_VALUES
DELAYS = st.sampled_from(
    ["#1", "# 1.5", "#1e-3", "#2.5E+3 ", "#d", "#(1:2:3)", "#(a + (b))", "#10ns", "#\\end "]
)
EVENTS = st.sampled_from(
    ["@e", "@*", "@(*)", "@ ( * )", "@(posedge c or negedge \\r; )", "@t.u.e", "@g[2].e", "@(a, (b))"]
)
ATTRIBUTES = st.sampled_from(["(* full_case *)", '(* a = "*)end", b=(1*(2)) *)'])
SIMPLE = st.one_of(
    st.just(";"),
    st.builds("{} <= {};".format, NAMES, VALUES),
    st.builds("{} = {} {};".format, NAMES, st.one_of(DELAYS, EVENTS, st.just("repeat (3) @(e)")), VALUES),
    st.sampled_from(
        ["$display(\"begin: ;\", a);", "-> e;", "disable b;", "run(a, b);", "$finish;", "{a, b} = c;",
         "assign a = b;", "deassign a;", "force a.b = c;", "release a;", "\\end <= \\begin ;"]
    ),
)  # fmt: skip
PREFIXES = st.one_of(
    DELAYS, EVENTS, ATTRIBUTES,
    st.sampled_from(
        ["while (a < (b))", "repeat (3)", "forever", "for (i = 0; i < 8; i = i + 1)", "wait (a && (b))"]
    ),
)  # fmt: skip
LABELS = st.one_of(
    VALUES, st.builds("{}, {}".format, VALUES, VALUES),
    st.sampled_from(
    ["4'b1?0?", "{a, b ? c : d}", "m[1:0]", "a ? b : c ? d : e", '"a:b"', "2'd1?a:b", "'b?",
     "4'sb ?1"]
    ),
)  # fmt: skip


def _compound(inner: st.SearchStrategy[str]) -> st.SearchStrategy[str]:
    arms = st.lists(st.builds("{} : {}".format, LABELS, inner), max_size=3).map(" ".join)
    default = st.sampled_from(["default: ", "default "]).flatmap(lambda word: inner.map(word.__add__))
    blocks = st.lists(inner, max_size=3).map(" ".join)
    label = st.sampled_from(["", ": b reg x; ", ": \\end integer i, j;"])
    return st.one_of(
        st.builds("{} {}".format, PREFIXES, inner),
        st.builds("begin{} {} end".format, label, blocks),
        st.builds("fork{} {} join".format, label, blocks),
        st.builds("if ({}) begin {} end".format, VALUES, blocks),
        st.builds("if ({}) begin {} end else {}".format, VALUES, blocks, inner),
        st.builds("if ({}) if ({}) ; else {} else {}".format, VALUES, VALUES, SIMPLE, inner),
        st.builds(
            "case{} ({}) {} {} endcase".format, st.sampled_from(["", "x", "z"]), VALUES, arms,
            default | st.just(""),
        ),
    )  # fmt: skip


STATEMENTS = st.recursive(SIMPLE, _compound, max_leaves=12)
PROCEDURAL = st.one_of(
    st.builds("{} {}".format, st.sampled_from(["always", "initial"]), STATEMENTS),
    st.builds("task automatic t; input a; {} endtask".format, STATEMENTS),
    st.builds("function [3:0] f(input a); {} endfunction".format, STATEMENTS),
)
OTHERS = st.sampled_from(
    ["wire w;", "nand g1 (y, a, b);", "part \\always (a);", 'p #(.S("initial ;")) u (a);', "assign a = b;",
     ";", "specify (a => b) = 1; if (a) (b => c) = 2; endspecify"]
)  # fmt: skip


@given(st.lists(st.tuples(st.just(True), PROCEDURAL) | st.tuples(st.just(False), OTHERS), max_size=5))
def test_each_statement_is_found_up_to_its_end(items: list[tuple[bool, str]]) -> None:
    text = "module m; " + "\n".join(item for _, item in items) + "\nendmodule"
    wanted = [item for procedural, item in items if procedural]
    assert [stretch for _, stretch in found(text)] == [item.rstrip() for item in wanted]
    assert [word for word, _ in found(text)] == [item.split()[0] for item in wanted]


@pytest.mark.parametrize(
    "body",
    [
        "always", "always @(posedge c) begin q <= d;", "initial if (a", "function f; f = 1;", "always @",
        "initial #", "always case (a) b: begin", "initial (* x", "initial fork end", "task t; endfunction",
        "always @(a) if (b)",
    ],
)  # fmt: skip
def test_what_is_not_closed_goes_to_the_end_of_the_module(body: str) -> None:
    text = f"module m; wire w; {body} endmodule"
    assert [stretch.rstrip() for _, stretch in found(text)] == [body]


@pytest.mark.parametrize(
    "stretch", ["initial begin a = b end", "always case (a) 1: b = c endcase", "always fork a = b join"]
)
def test_a_closing_word_ends_a_statement_whose_semicolon_is_missing(stretch: str) -> None:
    assert found(f"module m; {stretch} wire v; endmodule") == [(stretch.split()[0], stretch)]


def test_a_module_without_procedural_code_has_none() -> None:
    assert found("module m; wire \\initial ; nand \\always (y, a); endmodule") == []


def test_no_depth_is_too_deep() -> None:
    deep = "always " + "begin " * 20000 + "a = b; " + "end " * 20000
    many = "initial " + "if (a) " * 20000 + ";" + " else ;" * 20000
    assert [stretch for _, stretch in found(f"module m; {deep}\n{many}\nendmodule")] == [deep.rstrip(), many]


def test_stretches_follow_one_another() -> None:
    task, always, function = (
        "task t; a = b; endtask",
        "always @(c) t;",
        "function f; input a; f = a; endfunction",
    )
    assert found(f"module m; {task} {always}{function} endmodule") == [
        ("task", task), ("always", always), ("function", function),
    ]  # fmt: skip
