"""Every form of the directives, where each may stand, and what it does to a design (IEEE 1364-2005 clause 19)."""

# ruff: noqa: E501 - a case of a table stands on one line
from __future__ import annotations

import pytest

from tardigate.netlist.dump import dump
from tardigate.pipeline import Loaded, Request, load
from tardigate.source.faults import InputRefusedError
from tardigate.source.files import SourceFile

HALF = "module half(input wire a, output wire y);\nbuf g (y, a);\nendmodule\n"
BOARD = "module board(input wire a, output wire y);\nhalf u (a, y);\nendmodule\n"
WANTED = "input a = a\noutput y = y\nbuf u.g: out=y, in=a\n"


def _load(*texts: str) -> Loaded:
    return load(
        Request(tuple(SourceFile(f"f{n}.v", text.encode()) for n, text in enumerate(texts)), top="board")
    )


def _codes(*texts: str) -> list[str]:
    try:
        return [warning.code for warning in _load(*texts).warnings]
    except InputRefusedError as refusal:
        return [diagnostic.code for diagnostic in refusal.diagnostics]


ANYWHERE = (
    "`define M 1", "`define M(x) x", "`undef M", "`ifdef M\n`endif", "`ifndef M\n`else\n`endif", "`ifdef M\n`elsif N\n`else\n`endif",
    '`line 12 "a.v" 0', '`line 12 "a.v" 1', '`line 12 "a.v" 2', "`timescale 1 ns / 100 ps", "`timescale 10us/1us", "`timescale 100 s / 1 fs",
    "`celldefine", "`endcelldefine", "`pragma protect begin", "`pragma x y = 1, z", "`pragma",
)  # fmt: skip
OUTSIDE = (
    "`resetall", "`unconnected_drive pull0", "`unconnected_drive pull1", "`nounconnected_drive", '`begin_keywords "1364-2005"\n`end_keywords',
    '`begin_keywords "1364-2001"\n`end_keywords', *(f"`default_nettype {net}" for net in ("wire", "tri", "tri0", "tri1", "wand", "triand", "wor", "trior", "trireg", "uwire", "none")),
)  # fmt: skip


@pytest.mark.parametrize("form", [*ANYWHERE, *OUTSIDE])
def test_19_every_form_between_modules(form: str) -> None:
    for text in (
        f"{form}\n{HALF}{BOARD}",
        f"{HALF}{form}\n{BOARD}",
        f"{HALF}{BOARD}{form}\n",
        f"  {form}  // text\n{HALF}{BOARD}",
    ):
        assert dump(_load(text).flat) == WANTED


@pytest.mark.parametrize("form", ANYWHERE)
def test_19_forms_within_a_module(form: str) -> None:
    """What clause 19 does not tie to a place outside of a design element may stand between any two words."""
    for at in ("u (a", "half u", "endmodule", ", y);\nhalf"):
        before, found, after = BOARD.partition(at)
        assert dump(_load(f"{before}\n{form}\n{found}{after}{HALF}").flat) == WANTED


@pytest.mark.parametrize(
    ("form", "code"),
    [
        ("`define", "V107"), ("`define 3", "V107"), ("`define M(x", "V107"), ("`define M(3) x", "V107"), ("`define M(x, x) x", "V107"), ("`define define 1", "V108"),
        ("`undef", "V134"), ("`ifdef", "V134"), ("`ifdef M", "V132"), ("`ifndef M\n`else\n`else\n`endif", "V133"), ("`else", "V131"), ("`endif", "V131"),
        ("`elsif M", "V131"), ("`ifdef M\n`else\n`elsif M\n`endif", "V133"), ("`include", "V124"), ("`include half.v", "V124"), ('`include "nobody.v"', "V121"),
        ("`timescale", "V141"), ("`timescale 1 ns", "V141"), ("`timescale 1 / 1", "V141"), ("`timescale 2 ns / 1 ns", "V142"), ("`timescale 1 ns / 1 us", "V142"),
        ("`timescale 1 min / 1 s", "V142"), ("`timescale 1000 ns / 1 ns", "V142"), ("`default_nettype", "V143"), ("`default_nettype reg", "V143"),
        ("`default_nettype supply0", "V143"), ("`unconnected_drive", "V144"), ("`unconnected_drive pull", "V144"), ("`unconnected_drive 1", "V144"),
        ("`line", "V144"), ("`line 1", "V144"), ('`line 1 "a.v"', "V144"), ('`line 1 "a.v" 3', "V144"), ('`line x "a.v" 0', "V144"), ("`begin_keywords", "V144"),
        ("`begin_keywords 1364", "V144"), ("`nobody", "V101"), ("` define M", "V106"), ("`", "V106"),
    ],
)  # fmt: skip
def test_19_forms_that_are_refused(form: str, code: str) -> None:
    assert code in _codes(f"{form}\n{HALF}{BOARD}")


@pytest.mark.parametrize(
    "net", ["wire", "tri", "tri0", "tri1", "wand", "triand", "wor", "trior", "trireg", "uwire"]
)
def test_19_2_the_type_of_implicit_nets(net: str) -> None:
    """The type that `default_nettype` names is that of implicit nets: a wired one takes several drivers."""
    text = f"`default_nettype {net}\nmodule board(input a, b, output wire y);\nbuf g (w, a);\nbuf h (w, b);\nbuf i (y, w);\nendmodule\n"
    assert _codes(text) == ([] if net in ("wand", "triand", "wor", "trior") else ["N201"])


@pytest.mark.parametrize(
    "form",
    [
        "buf g (w, a);",
        "half u (a, w);",
        "half u (.a(a), .y(w));",
        "assign w = a;",
        "wire v = w;",
        "pullup (w);",
        "if (1) begin : b\nbuf g (w, a);\nend",
    ],
)
def test_19_2_none_makes_no_nets(form: str) -> None:
    text = f"`default_nettype none\nmodule board(input wire a, output wire y);\n{form}\nbuf h (y, a);\nendmodule\n{HALF}"
    assert any(code in ("N138", "N130") for code in _codes(text))


@pytest.mark.parametrize(
    ("before", "refused"),
    [
        ("`default_nettype none\n`default_nettype wire\n", False), ("`default_nettype none\n`resetall\n", False), ("`default_nettype none\n", True),
        ("`default_nettype wire\n`default_nettype none\n", True), ("", False),
    ],
)  # fmt: skip
def test_19_2_and_19_6_the_last_one_holds(before: str, refused: bool) -> None:
    text = f"{before}module board(input wire a, output wire y);\nbuf g (w, a);\nbuf h (y, w);\nendmodule\n"
    assert bool(_codes(text)) == refused
    assert bool(_codes(f"{before}{HALF}", text.removeprefix(before))) == refused, (
        "it holds on in the files behind"
    )


@pytest.mark.parametrize(("pull", "value"), [("pull0", "1'b0"), ("pull1", "1'b1")])
@pytest.mark.parametrize("open_", ["half u (.y(y));", "half u (.a(), .y(y));", "half u ( , y);"])
def test_19_9_inputs_that_are_left_open_are_pulled(pull: str, value: str, open_: str) -> None:
    board = f"module board(input wire a, output wire y);\n{open_}\nendmodule\n"
    text = f"`unconnected_drive {pull}\n{HALF}{board}`nounconnected_drive\n"
    assert dump(_load(text).flat).splitlines()[-1] in (
        f"buf u.g: out=y, in={value}",
        "buf u.g: out=y, in=u.a",
    )
    assert _codes(text) == []
    for off in ("`nounconnected_drive", "`resetall"):
        assert _codes(f"`unconnected_drive {pull}\n{off}\n{HALF}{board}") == ["N202"]


def test_19_9_connected_inputs_and_outputs_are_left_alone() -> None:
    text = (
        "`unconnected_drive pull1\n"
        + HALF
        + "module board(input wire a, output wire y);\nhalf u (a, y);\nhalf v (a, );\nendmodule\n"
    )
    assert (
        dump(_load(text).flat) == "input a = a\noutput y = y\nbuf u.g: out=y, in=a\nbuf v.g: out=v.y, in=a\n"
    )


def test_19_7_a_fault_is_told_where_it_is_written() -> None:
    """`line` may claim another place: the place in the file that was given is what one can open."""
    text = f'{HALF}`line 400 "other.v" 0\nmodule board(input wire a, output wire y);\nbuf g (y, nobody[1]);\nendmodule\n'
    with pytest.raises(InputRefusedError) as refusal:
        _load(text)
    spans = [diagnostic.span for diagnostic in refusal.value.diagnostics if diagnostic.span]
    assert [(span.path, span.line) for span in spans] in ([("f0.v", 6)], [("other.v", 401)])


def test_19_1_celldefine_changes_nothing_of_the_netlist() -> None:
    assert dump(_load(f"`celldefine\n{HALF}`endcelldefine\n{BOARD}").flat) == WANTED
