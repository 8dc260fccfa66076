"""Hierarchical names, scopes and defparam (IEEE 1364-2005 clauses 12.2.1, 12.5 to 12.8)."""

# ruff: noqa: E501 - a case of a table stands on one line
from __future__ import annotations

from collections.abc import Callable

import pytest

from tardigate.netlist.flat import Flat

Lines = Callable[..., list[str]]
Codes = Callable[..., list[str]]

SUB = """
module sub(input a, output y);
  parameter P = 1;
  localparam L = P + 1;
  wire [P:0] w;
  wire h;
  buf g (y, a);
  genvar i;
  for (i = 0; i < 2; i = i + 1) begin : b
    wire n;
    less #(i) u (a, n);
  end
endmodule
module less(input a, output y);
  parameter Q = 0, S = "s";
  wire k;
  if (Q > 1) begin : big
    buf g2 (k, a);
  end
  not g (y, a);
endmodule
"""


def _board(body: str) -> str:
    return f"module board(input a, output y);\n{body}\nendmodule\n{SUB}"


@pytest.mark.parametrize(
    ("name", "net"),
    [
        ("u.y", "w"), ("u.h", "u.h"), ("u.w[1]", "u.w[1]"), ("u.b[1].n", "u.b[1].n"), ("u.b[0].u.k", "u.b[0].u.k"), ("u.b[2-1].u.k", "u.b[1].u.k"),
("v[3].h", "v[3].h"), ("v[P].b[P-3].n", "v[3].b[0].n"), ("board.u.h", "u.h"), ("\\u .h", "u.h"), ("u . h", "u.h"),
        ("u.b [1] . n", "u.b[1].n"), ("blk.n", "blk.n"), ("blk.x.h", "blk.x.h"), ("u.a", "a"), ("board.a", "a"),
    ],
)  # fmt: skip
def test_12_5_names_downwards(name: str, net: str, instances: Lines) -> None:
    """Instances, array elements, blocks and loop rounds by index, from the top too; ports are nets of their own."""
    body = (
        "localparam P = 3;\nwire w;\nsub u (a, w);\nsub v [4:3] (a);\nif (1) begin : blk\nwire n;\nsub x (a, );\nend\nbuf last (y, "
        + name
        + ");"
    )
    assert f"buf last: out=y, in={net}" in instances(_board(body), top="board")


def test_12_5_names_may_drive(instances: Lines) -> None:
    """A net inside another module is driven from outside as from inside."""
    body = "sub u (a, y);\nnot d (u.h, a);\nnot e (u.b[1].u.k, u.h);"
    found = instances(_board(body), top="board")
    assert "not d: out=u.h, in=a" in found
    assert "not e: out=u.b[1].u.k, in=u.h" in found


def test_12_5_a_net_that_two_drive_by_different_names(told: Codes) -> None:
    text = _board("sub u (a, y);\nnot d (u.h, a);\n{}")
    assert "N201" not in told(text.format(""), top="board")
    assert "N201" in told(text.format("buf e (board.u.h, a);"), top="board")


@pytest.mark.parametrize(
    "name",
    [
        "u.nobody",
        "nobody.h",
        "u.b.n",
        "u.b[2].n",
        "u.b[a].n",
        "u[0].h",
        "v.h",
        "v[5].h",
        "u.b[0].nobody",
        "u.h.h",
        "u.w[9]",
        "u",
        "u.b[0]",
        "u.P",
        "u.g",
        "gone.n",
        "u.less.k",
        "sub.nobody",
    ],
)
def test_12_5_names_that_lead_nowhere(name: str, told: Codes) -> None:
    body = "sub u (a, );\nsub v [4:3] (a);\nif (0) begin : gone\nwire n;\nend\nbuf last (y, " + name + ");"
    found = [code for code in told(_board(body), top="board") if code not in ("N202", "N203")]
    assert found
    assert found[0][0] == "N"


@pytest.mark.parametrize(
    ("body", "value"),
    [
        ("defparam u.P = 2;", 2), ("defparam u.P = 1 + 2;", 3), ("localparam V = 3;\ndefparam u.P = V;", 3), ("defparam u.P = 4'd3;", 3),
        ("defparam board.u.P = 3;", 3), ("defparam v[3].P = 2, u.P = 3;", 3), ("defparam v[3].P = 2;\ndefparam u.P = 3;", 3), ("(* x *) defparam u.P = 3;", 3),
        ("defparam u.P = 2, u.P = 3;", 3), ("", 1),
    ],
)  # fmt: skip
def test_12_2_1_defparam(body: str, value: int, instances: Lines) -> None:
    """The last of several in one source holds; it may stand before the instance or behind."""
    for text in (f"{body}\nsub u (a, );\nsub v [4:3] (a);", f"sub u (a, );\nsub v [4:3] (a);\n{body}"):
        found = instances(_board(f"{text}\nbuf last (y, u.w[{value}]);"), top="board")
        assert f"buf last: out=y, in=u.w[{value}]" in found


def test_12_2_1_defparam_goes_before_an_override(instances: Lines) -> None:
    found = instances(_board("sub #(.P(5)) u (a, );\ndefparam u.P = 2;\nbuf last (y, u.w[2]);"), top="board")
    assert "buf last: out=y, in=u.w[2]" in found


def test_12_2_1_defparam_of_one_element_and_through_blocks(instances: Lines) -> None:
    """Only the instance that is named changes; the others keep theirs, and generate follows the new value."""
    body = "sub u (a, y);\nsub v [1:0] (a);\ndefparam u.b[1].u.Q = 2, v[0].b[0].u.Q = 3;"
    found = [line.split()[1] for line in instances(_board(body), top="board") if ".g2:" in line]
    assert found == ["u.b[1].u.big.g2:", "v[0].b[0].u.big.g2:"]


def test_12_2_1_defparam_in_a_loop(instances: Lines) -> None:
    text = "genvar i;\nfor (i = 0; i < 3; i = i + 1) begin : c\nless u (a, );\ndefparam u.Q = i;\nend\nbuf g (y, a);"
    assert [line.split()[1] for line in instances(_board(text), top="board") if ".g2:" in line] == [
        "c[2].u.big.g2:"
    ]


@pytest.mark.parametrize(
    "line",
    [
        "defparam u.L = 1;", "defparam u.nobody = 1;", "defparam nobody.P = 1;", "defparam u.w = 1;", "defparam u.P = a;", "defparam u.b[2].u.Q = 1;",
        "defparam v.P = 1;", "defparam v[2].P = 1;", "defparam u.g = 1;", "if (1) begin : c\ndefparam u.P = 2;\nend", "defparam u.P = board.u.P;",
        "genvar k;\nfor (k = 0; k < 2; k = k + 1) begin : c\nless x (a, );\ndefparam c[1 - k].x.Q = 2;\nend",
    ],
)  # fmt: skip
def test_12_2_1_defparams_that_are_refused(line: str, told: Codes) -> None:
    """Among them 12.2.1's own: out of a generate block, or into another element of its array."""
    found = [
        code
        for code in told(_board(f"sub u (a, y);\nsub v [1:0] (a);\n{line}"), top="board")
        if code not in ("N202", "N203")
    ]
    assert found
    assert found[0][0] in "NV"


@pytest.mark.parametrize(
    "line",
    [
        "defparam u.P;",
        "defparam u.P = ;",
        "defparam = 1;",
        "defparam u.P = 1, ;",
        "defparam [1:0] u.P = 1;",
        "defparam u.P <= 1;",
        "defparam u.P == 1;",
    ],
)
def test_a_2_1_1_forms_of_defparam_that_the_syntax_has_not(line: str, told: Codes) -> None:
    assert any(code[0] == "V" for code in told(_board(f"sub u (a, y);\n{line}"), top="board"))


def test_12_7_each_scope_has_names_of_its_own(told: Codes) -> None:
    """The same name in different scopes is no fault; instances, nets and blocks share one space of names."""
    text = "wire n;\nif (1) begin : b\nwire n;\nbuf g (n, a);\nend\nif (1) begin : c\nwire n;\nbuf g (n, a);\nend\nbuf g (y, a);"
    assert [code for code in told(_board(text), top="board") if code != "N202"] == []


@pytest.mark.parametrize(
    "first",
    ["wire x;", "buf x (v, a);", "sub x (a, );", "if (1) begin : x end", "localparam x = 1;", "genvar x;"],
)
@pytest.mark.parametrize(
    "second",
    ["wire x;", "buf x (y, a);", "sub x (a, y);", "if (1) begin : x end", "localparam x = 2;", "genvar x;"],
)
def test_12_7_nets_instances_blocks_and_constants_share_their_names(
    first: str, second: str, told: Codes
) -> None:
    assert {"N110", "N115"} & set(told(_board(f"{first}\n{second}"), top="board"))


def test_12_5_a_port_by_the_name_inside_is_the_net_outside(instances: Lines) -> None:
    found = instances(_board("sub u (a, );\nbuf last (y, u.b[0].u.y);"), top="board")
    (net,) = (line.rpartition("=")[2] for line in found if line.startswith("buf last"))
    assert f"not u.b[0].u.g: out={net}, in=a" in found


def test_12_6_names_upwards(instances: Lines, told: Codes) -> None:
    """A name that begins with a module or instance above: read, or refused with a code of its own; never wrong."""
    text = "module board(input a, output y);\nwire n;\nbuf g (n, a);\nsub u (y);\nendmodule\nmodule sub(output y);\nbuf g (y, board.n);\nendmodule\n"
    codes = told(text)
    assert codes == ["N137"] or "buf u.g: out=y, in=n" in instances(text)


LUT = """family F {
  part LUT "table" {
    parameter INIT[1:0] = 1;
    inputs A; output Y = INIT[{A}];
    times ns { tpd A => Y 1; }
  }
}
"""


def test_12_2_1_defparam_of_one_member_of_an_array_of_parts(elaborate: Callable[..., Flat]) -> None:
    text = "module board(input [1:0] a, output [1:0] y);\nLUT u [1:0] (.A(a), .Y(y));\nLUT v [1:0] ();\n"
    flat = elaborate(text + "defparam u[1].INIT = 2;\nendmodule\n", LUT)
    values = [flat.kinds[kind].parameters for kind in flat.inst_kind.tolist()]
    assert values == [(("INIT", 2),), (("INIT", 1),), (("INIT", 1),), (("INIT", 1),)]


def test_12_5_a_net_reached_by_name_keeps_the_name_that_it_is_declared_with(instances: Lines) -> None:
    """A port of an instance is called as the net that it is on, whoever else names it."""
    text = "module board(input a, output y); sub u (a, ); buf g (y, u.k.q); endmodule\n"
    text += "module sub(input a, output z); wire n; leaf k (a, n); endmodule\n"
    text += "module leaf(input a, output q); not h (q, a); endmodule\n"
    assert "buf g: out=y, in=u.n" in instances(text, top="board")
