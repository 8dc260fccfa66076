"""Modules, ports, parameters, instances (IEEE 1364-2005 clauses 12.1 to 12.3, 4.2 to 4.5), names (3.7), 3.8, 19.2."""

# ruff: noqa: E501 - a case of a table stands on one line
from __future__ import annotations

from collections.abc import Callable

import pytest

Lines = Callable[..., list[str]]
Codes = Callable[..., list[str]]
Text = Callable[..., str]

HALF = "module half(input a, input [1:0] b, output y, output [1:0] z);\n  and g (y, a, b[0]);\n  buf h [1:0] (z, b);\nendmodule\n"


def test_12_3_both_port_styles_are_the_same(dumped: Text) -> None:
    old = "module board(a, y, io);\ninput [1:0] a;\noutput y;\ninout io;\nwire y;\nand g (y, a[1], a[0]);\nbufif1 (io, y, a[0]);\nendmodule\n"
    new = "module board(input wire [1:0] a, output y, inout tri io);\nand g (y, a[1], a[0]);\nbufif1 (io, y, a[0]);\nendmodule\n"
    wanted = "input a[1] = a[1]\ninput a[0] = a[0]\noutput y = y\ninout io = io\n"
    assert dumped(old).startswith(wanted)
    assert dumped(old).replace(":7:", ":3:") == dumped(new)


def test_12_3_4_a_direction_carries_on(dumped: Text) -> None:
    text = "module board(input [1:0] a, b, output y, z);\nand (y, a[0], b[1]);\nbuf (z, a[1]);\nendmodule\n"
    assert dumped(text).startswith(
        "input a[1] = a[1]\ninput a[0] = a[0]\ninput b[1] = b[1]\ninput b[0] = b[0]\noutput y"
    )


def test_12_3_3_renamed_ports_and_port_expressions(instances: Lines, dumped: Text) -> None:
    text = """
module board(input [3:0] p, output [1:0] q);
  inner u (.x(p[0]), .pair({p[2], p[3]}), .out(q));
endmodule
module inner(.x(a), .pair({b, c}), .out(r[1:0]), .unused());
  input a, b, c;
  output [2:0] r;
  and g0 (r[0], a, b);
  buf g1 (r[1], c);
endmodule
"""
    assert instances(text) == ["and u.g0: out=q[0], in1=p[0], in2=p[2]", "buf u.g1: out=q[1], in=p[3]"]
    assert dumped(text, top="inner").splitlines()[:5] == [
        "input x = a", "input pair[1] = b", "input pair[0] = c", "output out[1] = r[1]", "output out[0] = r[0]",
    ]  # fmt: skip


def test_12_3_2_port_expressions_without_a_name_connect_by_order(instances: Lines) -> None:
    text = """
module board(input [1:0] p, output q);
  inner u (p, q);
endmodule
module inner({b, c}, y);
  input b, c;
  output y;
  nor (y, b, c);
endmodule
"""
    assert instances(text) == ["nor u.nor:8: out=q, in1=p[1], in2=p[0]"]


def test_12_3_2_one_net_as_two_ports_joins_the_nets_outside(instances: Lines) -> None:
    text = """
module board(input a, output y, z);
  inner u (.i(a), .o(y), .p(z));
endmodule
module inner(.i(i), .o(w), .p(w));
  input i;
  output w;
  not (w, i);
endmodule
"""
    assert instances(text) == ["not u.not:8: out=y, in=a"]


def test_12_3_5_by_order_and_12_3_6_by_name_are_the_same(dumped: Text) -> None:
    head = "module board(input a, input [1:0] b, output y, output [1:0] z);\n{}\nendmodule\n" + HALF
    by_order = dumped(head.format("half u (a, b, y, z);"))
    assert dumped(head.format("half u (.z(z), .y(y), .b(b), .a(a));")) == by_order
    assert dumped(head.format("half u (.z({z[1], z[0]}), .y(y), .b({b[1:0]}), .a(a));")) == by_order
    assert "and u.g: out=y, in1=a, in2=b[0]\n" in by_order


def test_12_3_open_pins(instances: Lines) -> None:
    head = "module board(input [1:0] b, output [1:0] z);\nhalf u ({});\nendmodule\n" + HALF
    wanted = [
        "and u.g: out=u.y, in1=1'b1, in2=b[0]",
        "buf u.h[0]: out=z[0], in=b[0]",
        "buf u.h[1]: out=z[1], in=b[1]",
    ]
    assert instances(head.format("1'b1, b, , z")) == wanted
    assert instances(head.format(".a(1'b1), .b(b), .y(), .z(z)")) == wanted
    assert instances(head.format(".a(1'b1), .b(b), .z(z)")) == wanted


def test_an_input_that_is_left_open_inside_is_told(told: Codes) -> None:
    text = "module board(input [1:0] b, output y);\nhalf u (.b(b), .y(y));\nendmodule\n" + HALF
    assert told(text) == ["N202"]


def test_12_3_connections_may_be_expressions_and_constants(instances: Lines) -> None:
    text = "module board(input a, c, output y);\nhalf u (.a(a & c), .b(2'b10), .y(y));\nendmodule\n" + HALF
    assert instances(text)[:2] == [
        "and u.g: out=y, in1=assign:2.0, in2=1'b0",
        "assign & assign:&:2: out=assign:2.0, in1=a, in2=c",
    ]


@pytest.mark.parametrize(
    ("instance", "codes"),
    [
        ("half u (a, b, y, z, a);", ["N161"]),
        ("half u (.a(a), .a(a), .b(b));", ["N162"]),
        ("half u (a, .b(b));", ["N163"]),
        ("half u (.q(a));", ["N160"]),
        ("half u (.a(a), .b(b), .y(1'b0));", ["N165"]),
        ("half u (.a(a), .b(b), .y(a & a));", ["N165"]),
        ("half u (.a(b), .b(b), .y(y));", ["N164"]),
        ("half u (.a(a), .b(a), .y(y));", ["N164"]),
        ("half u (.a(a), .b(b), .y(z));", ["N164"]),
        ("half u [1:0] (.a(b), .b(b), .y(z));", []),
        ("half u [2:0] (.a(b), .b(b), .y(z));", ["N166", "N166"]),
        ("half #(3) u (a, b);", ["N168"]),
        ("half (a, b);", ["N108"]),
        ("half u;", ["V001"]),
        ("quarter u (a, b);", []),
    ],
)  # fmt: skip
def test_connections_that_are_wrong(instance: str, codes: list[str], told: Codes) -> None:
    text = f"module board(input a, input [1:0] b, output y, output [1:0] z);\n{instance}\nendmodule\n" + HALF
    found = [code for code in told(text, top="board") if code not in ("N202", "N103")]
    assert found == codes or found == codes[:1]


def test_wide_pins_are_cut_and_filled(instances: Lines) -> None:
    text = "module board(input a, output y);\nhalf u (.a(a), .b(a), .z(y));\nendmodule\n" + HALF
    assert instances(text) == [
        "and u.g: out=u.y, in1=a, in2=a",
        "buf u.h[0]: out=y, in=a",
        "buf u.h[1]: out=u.z[1], in=1'b0",
    ]


# Parameters (clause 12.2, 4.10)

BLOCK = """
module block #(parameter W = 2, parameter [3:0] M = W + 1) (input [W-1:0] a, output [W-1:0] y);
  localparam L = W * 2;
  parameter LAST = 0;
  wire [L-1:0] w = {a, a};
  assign y = w[L-1:W] ^ M;
  buf (tie, M[LAST]);
endmodule
"""


@pytest.mark.parametrize(
    ("overrides", "width", "mask", "last"),
    [
        ("", 2, 3, 0),
        ("#(3)", 3, 4, 0),
        ("#3", 3, 4, 0),
        ("#(3, 5)", 3, 5, 0),
        ("#(.M(6))", 2, 6, 0),
        ("#(.LAST(2), .W(1))", 1, 2, 2),
        ("#(.M(17))", 2, 1, 0),  # cut to the parameter's own range
        ("#(.W())", 2, 3, 0),
        ("#(1, 2, 1)", 1, 2, 1),
        ("#(.W(N + 1))", 3, 4, 0),
    ],
)
def test_12_2_2_overrides(overrides: str, width: int, mask: int, last: int, instances: Lines) -> None:
    text = (
        f"module board(input [{width - 1}:0] a, output [{width - 1}:0] y);\nparameter N = 2;\n"
        f"block {overrides} u (a, y);\nendmodule\n{BLOCK}"
    )
    gates = [line for line in instances(text) if line.startswith("assign ^")]
    masks = [line.rpartition("=")[2] for line in gates]
    assert masks == [f"1'b{mask >> i & 1}" for i in range(width)]
    assert [line for line in instances(text) if line.startswith("buf")] == [
        f"buf u.buf:11: out=u.tie, in=1'b{mask >> last & 1}"
    ]


@pytest.mark.parametrize("overrides", ["#(.L(4))", "#(.Q(4))", "#(1, 2, 3, 4)"])
def test_12_2_2_parameters_that_are_not_there(overrides: str, told: Codes) -> None:
    text = f"module board(input [1:0] a, output [1:0] y);\nblock {overrides} u (a, y);\nendmodule\n{BLOCK}"
    assert told(text) == ["N168"]


def test_a_module_is_elaborated_once_for_each_set_of_parameters(elaborate: Callable[..., object]) -> None:
    body = "block #(2) u (a[1:0], y[1:0]); block #(.W(2)) v (a[1:0]); block #(1) w (a[2], y[2]); block x (a[1:0]);"
    text = f"module board(input [2:0] a, output [2:0] y);\n{body}\nendmodule\n{BLOCK}"
    assert len(elaborate(text).templates) == 3  # type: ignore[attr-defined]


# Nets (clause 4) and names (3.7)


def test_4_5_implicit_nets(instances: Lines) -> None:
    text = "module board(input a, output y);\nnot (w, a);\nhalf u (w, v);\nassign x = v;\nbuf (y, x);\nendmodule\n"
    text += "module half(input a, output y);\nbuf (y, a);\nendmodule\n"
    assert instances(text) == [
        "assign assign:4: out=x, in1=v", "buf buf:5: out=y, in=x", "buf u.buf:8: out=v, in=w", "not not:2: out=w, in=a",
    ]  # fmt: skip


@pytest.mark.parametrize(
    "line", ["not (w, a);", "half u (a, w);", "half u (.a(a), .y(w));", "assign w = a;", "not #1 (w, a);"]
)
def test_19_2_default_nettype_none(line: str, told: Codes) -> None:
    text = (
        f"`default_nettype none\nmodule board(input wire a, output wire y);\n{line}\nbuf (y, a);\nendmodule\n"
    )
    text += "`default_nettype wire\nmodule half(input a, output y);\nbuf (y, a);\nendmodule\n"
    assert [code for code in told(text, top="board") if code != "N202"] == ["N138"]


def test_an_expression_declares_nothing(told: Codes) -> None:
    assert told("module board(input a, output y);\nassign y = a & w;\nendmodule\n") == ["N130"]


def test_3_7_1_escaped_names(instances: Lines) -> None:
    text = (
        "module board(input \\a[3] , \\module , output \\y+1 );\n"
        "nand \\g(1) (\\y+1 , \\a[3] ,\\module\t);\nendmodule\n"
    )
    assert instances(text) == ["nand g(1): out=y+1, in1=a[3], in2=module"]


def test_3_7_1_an_escaped_plain_name_is_the_plain_name(instances: Lines) -> None:
    text = "module board(input a, output y);\nwire \\w ;\nbuf g (\\w , \\a );\nbuf h (y, w);\nendmodule\n"
    assert instances(text) == ["buf g: out=w, in=a", "buf h: out=y, in=w"]


def test_3_7_1_an_escaped_keyword_may_name_a_module(instances: Lines) -> None:
    text = "module board(input a, output y);\n\\and u (y, a);\nendmodule\nmodule \\and (output y, input a);\nnot g (y, a);\nendmodule\n"
    assert instances(text) == ["not u.g: out=y, in=a"]


def test_3_8_attributes_are_passed_over(instances: Lines) -> None:
    text = """
(* top, note = "a ; module ) *" *) module board((* pad *) input a, (* pad = 1 *) output y);
  (* keep = 1 *) wire w;
  (* full = 1, soft *) not (* x *) g (w, (* y *) a);
  assign y = w & (* slow *) a;
endmodule
"""
    assert instances(text) == ["assign & assign:&:5: out=y, in1=w, in2=a", "not g: out=w, in=a"]


@pytest.mark.parametrize("net", ["wand", "wor", "triand", "trior"])
def test_4_6_wired_nets_may_have_several_drivers(net: str, told: Codes) -> None:
    text = (
        f"module board(input a, b, output y);\n{net} w;\nbuf (w, a);\nbuf (w, b);\nbuf (y, w);\nendmodule\n"
    )
    assert told(text) == []
    assert told(text.replace(net, "wire")) == ["N201"]


@pytest.mark.parametrize("net", ["supply0", "supply1", "tri0", "tri1"])
def test_4_6_nets_that_need_no_driver(net: str, told: Codes) -> None:
    text = f"module board(input a, output y);\n{net} w;\nand (y, a, w);\nendmodule\n"
    assert told(text) == []
    assert told(text.replace(net, "wire")) == ["N202"]


@pytest.mark.parametrize(
    ("body", "code"),
    [
        ("wire w; wire w;", "N110"),
        ("wire a; wire a;", "N110"),
        ("input a;", "N110"),
        ("wire w; wire [1:0] w;", "N110"),
        ("wire [1:0] a;", "N111"),
        ("output q;", "N113"),
        ("parameter P = 1; parameter P = 2;", "N110"),
        ("parameter P = 1; wire P;", "N110"),
        ("wire [2000000:0] w;", "N121"),
        ("wire [b:0] w;", "N120"),
        ("parameter P = a;", "N120"),
        ("parameter P = Q;", "N120"),
        ("localparam P = P;", "N120"),
        ("always @(a) y = a;", "V010"),
        ("initial y = 0;", "V004"),
        ("tran (a, y);", "V005"),
        ("defparam u.P = 1;", "N127"),
        ("module", "V002"),
        ("\\endmodule", "V001"),
    ],
)
def test_declarations_that_are_wrong(body: str, code: str, told: Codes) -> None:
    text = f"module board(input a, output y);\n{body}\nbuf (y, a);\nendmodule\n"
    assert told(text)[:1] == [code]


@pytest.mark.parametrize(
    ("text", "code"),
    [
        ("module board(a, y);\ninput a;\nbuf (y, a);\nendmodule\n", "N112"),
        ("module board(a, a, y);\ninput a;\noutput y;\nbuf (y, a);\nendmodule\n", "N114"),
        ("module board(a, .a(b), y);\ninput a, b;\noutput y;\nand (y, a, b);\nendmodule\n", "N114"),
        (
            "module board(a, y);\ninput [1:0] a;\nwire [2:0] a;\noutput y;\nbuf (y, a[0]);\nendmodule\n",
            "N111",
        ),
        ("module board({a, y});\ninput a;\noutput y;\nbuf (y, a);\nendmodule\n", "N112"),
        ("module board(input a, output y);\nboard u (a, y);\nendmodule\n", "N106"),
        ("", "N104"),
        ("module (input a);\nendmodule\n", "V007"),
        ("wire w;\nmodule board(input a);\nendmodule\n", "V003"),
        ("module board(input a);\n", "V002"),
        ("endmodule\n", "V003"),
        ("module a; endmodule module a; endmodule\n", "N101"),
        ("module a; endmodule module b; endmodule\n", "N103"),
        ("config p; endconfig\n", "V006"),
    ],
)
def test_modules_that_are_wrong(text: str, code: str, told: Codes) -> None:
    assert code in told(text)


def test_a_described_module_is_skipped_unread(instances: Lines) -> None:
    parts = "family F { part ff { inputs CK, D; outputs Q; register posedge CK { Q = D; } times ns { tpd CK => Q 1; } } }"
    text = "module board(input c, d, output q);\nff u (.CK(c), .D(d), .Q(q));\nendmodule\n"
    text += "module ff(input CK, D, output reg Q);\nalways @(posedge CK) Q <= D; ??\nendmodule\n"
    assert instances(text, parts=parts) == ["ff u: CK=c, D=d, Q=q"]


def test_parts_with_vectors(instances: Lines) -> None:
    parts = "family F { part P { inputs A[1:0], B; outputs Y[1:0]; times ns { tpd A => Y 1; } } }"
    text = "module board(input [1:0] a, input b, output [1:0] y);\nP u (.A(a), .B(b), .Y(y));\nendmodule\n"
    assert instances(text, parts=parts) == ["P u: A[1]=a[1], A[0]=a[0], B=b, Y[1]=y[1], Y[0]=y[0]"]


def test_structure_checks(told: Codes) -> None:
    head = "module board(input a, b, output y);\n{}\nendmodule\n"
    assert told(head.format("buf (y, a); buf (y, b);")) == ["N201"]
    assert told(head.format("buf (a, b); buf (y, a);")) == ["N201"]
    assert told(head.format("bufif1 (y, a, b); bufif0 (y, b, a);")) == []
    assert told(head.format("bufif1 (y, a, b); buf (y, b);")) == ["N201"]
    assert told(head.format("buf (w, a);")) == ["N202"]


@pytest.mark.parametrize("line", ["nand \\ (y, a, a);", "nand g (y, a, \\ );", "buf g (y, a); \\"])
def test_3_7_1_a_backslash_alone_names_nothing(line: str, told: Codes) -> None:
    assert told(f"module board(input a, output y);\n{line}\nendmodule\n") == ["V001"]
