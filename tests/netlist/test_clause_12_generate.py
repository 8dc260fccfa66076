"""Generate constructs (IEEE 1364-2005 clauses 12.4, 12.4.1 to 12.4.3, A.4.2)."""

# ruff: noqa: E501 - a case of a table stands on one line
from __future__ import annotations

from collections.abc import Callable

import pytest

Lines = Callable[..., list[str]]
Codes = Callable[..., list[str]]


def _board(body: str) -> str:
    return f"module board(input [3:0] a, output [3:0] y);\n{body}\nendmodule\n"


def _gates(instances: Lines, body: str) -> list[str]:
    """Return the names of the gates called g, without it."""
    return sorted(line.split()[1].rstrip(":").removesuffix(".g") for line in instances(_board(body)))


ITEM = "buf g (w, a[0]);"


@pytest.mark.parametrize(
    ("loop", "rounds"),
    [
        ("i = 0; i < 3; i = i + 1", [0, 1, 2]), ("i = 3; i > 0; i = i - 1", [1, 2, 3]), ("i = 1; i <= 8; i = i * 2", [1, 2, 4, 8]),
        ("i = 2; i >= 0; i = i - 1", [0, 1, 2]), ("i = -2; i < 1; i = i + 1", [-1, -2, 0]), ("i = 0; i < 0; i = i + 1", []),
        ("i = 0; i != 6; i = 3 + i", [0, 3]), ("i = P; i < P + 2; i = i + 1", [5, 6]), ("i = 0; i < $clog2(5); i = i + 1", [0, 1, 2]),
        ("i = 8; i; i = i >> 1", [1, 2, 4, 8]), ("i = 0; !(i == 2) && 1; i = i + (i < 9)", [0, 1]), ("i = 1; i < 20; i = i << 1 | 1", [1, 15, 3, 7]),
        ("i = 0; i < 2; i = i ? 5 : 1", [0, 1]),
    ],
)  # fmt: skip
@pytest.mark.parametrize("around", ["{}", "generate\n{}\nendgenerate"])
def test_12_4_1_loops(loop: str, rounds: list[int], around: str, instances: Lines) -> None:
    """The variable counts as an integer does; the block of each round has its value as index."""
    body = around.format(f"for ({loop}) begin : b\n{ITEM}\nend")
    assert _gates(instances, f"localparam P = 5;\ngenvar i;\n{body}") == sorted(f"b[{at}]" for at in rounds)


@pytest.mark.parametrize(
    "loop",
    [
        "j = 0; j < 2; j = j + 1", "i = 0; i < 2; j = j + 1", "i = 0; i < 2; i = i", "i = 0; i >= 0; i = i + 1", "i = 0; i < a; i = i + 1",
        "i = i; i < 2; i = i + 1", "i = a; i < 2; i = i + 1", "i = 0; i < 2; i = i + a", "i = 0; i < 4; i = (i + 1) % 3", "w = 0; w < 2; w = w + 1",
        "i = 0; i < 2; i = i + 1'bx", "i = 1'bx; i < 2; i = i + 1", "i = 0; i < 2 / 0; i = i + 1", "i = 0; i < 1.5; i = 1.5",
    ],
)  # fmt: skip
def test_12_4_1_loops_that_are_refused(loop: str, told: Codes) -> None:
    found = told(_board(f"wire w;\ngenvar i;\nfor ({loop}) begin : b\nend\nbuf g [3:0] (y, a);"))
    assert found
    assert found[0][0] == "N"


@pytest.mark.parametrize(
    "form",
    [
        "for (i = 0; i < 2; i = i + 1) ;", "for (i = 0; i < 2) begin end", "for (i = 0; i < 2; i++) begin end", "for (; i < 2; i = i + 1) begin end",
        "for (i = 0; i < 2; i += 1) begin end", "for i = 0; i < 2; i = i + 1 begin end", "for (i = 0; i < 2; i = i + 1) begin : b",
        "for (genvar k = 0; k < 2; k = k + 1) begin end", "for (i = 0, j = 0; i < 2; i = i + 1) begin end", "if begin end", "if () begin end",
        "if (1) begin end else endgenerate", "else begin end", "case (1) endcase", "case () 1: ; endcase", "case (1) 1 ; endcase", "case (1) : ; endcase",
        "begin : b end", "begin end", "if (1) begin : b end : b", "generate generate endgenerate endgenerate", "if (1) generate endgenerate",
        "generate if (1) begin end", "endgenerate", "if (1) begin parameter P = 1; end", "if (1) begin input q; end", "if (1) begin specify endspecify end",
        "if (1) begin module m; endmodule end", "casez (1) 1: ; endcase", "for (i = 0; i < 2; i = i + 1) begin : 3 end", "genvar;", "genvar [3:0] v;", "genvar v = 1;",
    ],
)  # fmt: skip
def test_a_4_2_forms_that_the_syntax_has_not(form: str, told: Codes) -> None:
    found = told(_board(f"genvar i, j;\n{form}\nbuf g [3:0] (y, a);"))
    assert any(code[0] == "V" for code in found), found


@pytest.mark.parametrize("around", ["{}", "generate\n{}\nendgenerate", "if (1) begin : o\n{}\nend"])
@pytest.mark.parametrize(
    "item",
    [
        "wire w;", "tri1 [3:0] #2 w;", "wire w = a[0];", "supply0 v;", "trireg (small) t;", "localparam L = 1;", "localparam signed [3:0] L = 1, M = L;",
        "genvar k;", "assign y = a;", "assign #2 y = a;", "buf g (y[0], a[0]);", "and (strong0, weak1) #(1, 2) (y[0], a[0], a[1]);", "pullup (y[0]);",
        "sub u (a, y);", "sub #(1) u [0:0] (a, y);", "sub u (a, y);\ndefparam u.P = 2;", "if (1) ;", "if (0) buf (y[0], a[0]); else ;",
        "for (i = 0; i < 4; i = i + 1) buf (y[i], a[i]);", "case (1) 0: ; default ; endcase", "(* x *) wire w;", "(* x *) sub u (a, y);", "(* x *) if (1) ;",
    ],
)  # fmt: skip
def test_a_1_4_and_a_4_2_every_item_may_stand_in_a_generate_block(
    item: str, around: str, told: Codes
) -> None:
    text = f"genvar i;\n{around.format(item)}"
    sub = "module sub(input [3:0] d, output [3:0] q);\nparameter P = 1;\nbuf g [3:0] (q, d);\nendmodule\n"
    assert [code for code in told(_board(text) + sub, top="board") if code not in ("N202", "N203")] == []


@pytest.mark.parametrize(
    ("choice", "taken"),
    [
        ("if (1) begin : t G end else begin : f G end", ["t"]), ("if (0) begin : t G end else begin : f G end", ["f"]),
        ("if (0) begin : t G end", []), ("if (2'b0x) begin : t G end else begin : f G end", ["f"]), ("if (P > 2) begin : t G end", ["t"]),
        ('if (S == "fast") begin : t G end', ["t"]), ('if (S != "slow" && S) begin : t G end', ["t"]), ("if (R > 1.2) begin : t G end", ["t"]),
        ("if (-1) begin : t G end", ["t"]), ("if (0) ; else if (1) begin : t G end else begin : f G end", ["t"]),
        ("if (0) begin : b G end else if (0) begin : b G end else begin : b G end", ["b"]), ("if (1) if (0) begin : t G end else begin : f G end", ["f"]),
        ("case (P) 1, 3 : begin : t G end default : begin : f G end endcase", ["t"]), ("case (P) 1 : begin : t G end default begin : f G end endcase", ["f"]),
        ("case (P) default : begin : f G end 3 : begin : t G end endcase", ["t"]), ("case (P) 1 : begin : t G end endcase", []),
        ("case (P) 3 : begin : t G end P : begin : f G end endcase", ["t"]), ('case (S) "slow" : begin : t G end "fast" : begin : f G end endcase', ["f"]),
        ("case (1) P > 2 : begin : t G end P > 1 : begin : f G end endcase", ["t"]), ("case (P) 2 + 1 : ; default : begin : f G end endcase", []),
        ("case (1'bx) 1'b0 : begin : z G end 1'bx : begin : t G end endcase", ["t"]), ("case (4'd3) 3 : begin : t G end endcase", ["t"]),
        ("case (-1) 4'hf : begin : f G end 32'hffffffff : begin : t G end endcase", ["t"]),
    ],
)  # fmt: skip
def test_12_4_2_choices(choice: str, taken: list[str], instances: Lines) -> None:
    body = 'localparam P = 3, S = "fast";\nlocalparam real R = 1.5;\n' + choice.replace("G", ITEM)
    assert _gates(instances, body) == taken


@pytest.mark.parametrize(
    "choice",
    [
        "if (w) begin end",
        "if (a[0]) begin end",
        "case (w) 1: ; endcase",
        "case (1) w: ; endcase",
        "if (Q) begin end",
        "case (1) default: ; default: ; endcase",
        "if (g) begin end",
    ],
)
def test_12_4_2_choices_that_are_refused(choice: str, told: Codes) -> None:
    found = told(_board(f"wire w;\n{choice}\nbuf g [3:0] (y, a);"))
    assert found
    assert found[0][0] in "NV"


@pytest.mark.parametrize(
    ("body", "names"),
    [
        # the standard's own example of names counts every construct of the scope, named or not
        ("for (i = 0; i < 1; i = i + 1) begin : s1 G end if (1) begin G end", ["genblk2", "s1[0]"]),
        ("if (0) begin G end if (1) G", ["genblk2"]), ("if (1) G case (1) 1 : G endcase for (i = 0; i < 2; i = i + 1) G", ["genblk1", "genblk2", "genblk3[0]", "genblk3[1]"]),
        ("wire genblk1; if (1) G", ["genblk01"]), ("wire genblk1, genblk01; if (1) G", ["genblk001"]), ("wire genblk2; if (1) G if (1) G", ["genblk02", "genblk1"]),
        ("if (1) G wire genblk1;", ["genblk01"]), ("localparam genblk1 = 1; if (1) G", ["genblk01"]), ("genvar genblk1; if (1) G", ["genblk01"]),
        ("if (1) begin : genblk2 G end if (1) G", ["genblk02", "genblk2"]), ("if (1) begin : b if (1) G if (1) G end if (1) G", ["b.genblk1", "b.genblk2", "genblk2"]),
        ("for (i = 0; i < 2; i = i + 1) begin if (i) G if (1) G end", ["genblk1[0].genblk2", "genblk1[1].genblk1", "genblk1[1].genblk2"]),
        ("if (0) G else if (1) G else G if (1) G", ["genblk1", "genblk2"]), ("if (1) if (1) G if (1) G", ["genblk1", "genblk2"]),
        ("if (1) begin if (1) G end", ["genblk1.genblk1"]), ("if (1) case (1) 1 : G endcase", ["genblk1"]), ("case (1) 1 : if (1) G endcase", ["genblk1"]),
        ("if (1) for (i = 0; i < 1; i = i + 1) G", ["genblk1.genblk1[0]"]), ("for (i = 0; i < 1; i = i + 1) if (1) G", ["genblk1[0].genblk1"]),
        ("generate if (1) G endgenerate generate if (1) G endgenerate", ["genblk1", "genblk2"]), ("buf genblk1 (v, a[1]); if (1) G", ["genblk01", "genblk1"]),
        ("if (0) begin : genblk1 end if (1) G if (0) if (1) begin : genblk4 end if (1) G", ["genblk2", "genblk04"]),
    ],
)  # fmt: skip
def test_12_4_3_names_of_blocks(body: str, names: list[str], instances: Lines) -> None:
    """`genblk` and the number of the construct in its scope; zeros before it where the name is taken."""
    assert _gates(instances, "genvar i;\n" + body.replace("G", ITEM)) == sorted(names)


def test_12_4_3_a_directly_nested_condition_is_no_scope_of_its_own(instances: Lines) -> None:
    """The clause's own form: the outer `if` has no begin, so the inner blocks belong to the module."""
    body = "localparam P = 2;\nif (P == 1) if (P) begin : u1 G end else begin : u2 G end\nelse if (P == 2) begin : u1 G end"
    assert _gates(instances, body.replace("G", ITEM)) == ["u1"]


@pytest.mark.parametrize(
    "body",
    [
        "if (1) begin : b end wire b;", "wire b; if (1) begin : b end", "if (1) begin : b end if (1) begin : b end", "if (0) begin : b end wire b;",
        "for (i = 0; i < 1; i = i + 1) begin : b end for (i = 0; i < 1; i = i + 1) begin : b end", "for (i = 0; i < 0; i = i + 1) begin : b end wire b;",
        "buf b (v, a[0]); if (1) begin : b end", "localparam b = 1; if (1) begin : b end", "genvar b; if (1) begin : b end", "if (1) begin : i end",
        "genvar i;", "wire i;", "if (1) begin : b wire w; wire w; end", "if (1) begin : b buf g (v, a[0]); buf g (v, a[0]); end",
        "for (i = 0; i < 1; i = i + 1) begin : b for (i = 0; i < 1; i = i + 1) begin : c end end", "if (0) begin : b end if (0) begin : b end",
        "if (1) begin : b end else begin : c end wire c;",
    ],
)  # fmt: skip
def test_12_7_names_that_are_there_twice(body: str, told: Codes) -> None:
    """The name of a block is taken in its scope, whether the block is made or not."""
    found = told(_board(f"genvar i;\n{body}\nbuf g0 [3:0] (y, a);"))
    assert found
    assert found[0][0] == "N"


def test_12_4_1_gray_to_binary(instances: Lines) -> None:
    """The standard's own example: nested use of the genvar in a part-select."""
    text = """
module gray2bin(bin, gray);
  parameter SIZE = 4;
  output [SIZE-1:0] bin;
  input [SIZE-1:0] gray;
  genvar i;
  generate
    for (i = 0; i < SIZE; i = i + 1) begin : bit_
      assign bin[i] = ^gray[SIZE-1:i];
    end
  endgenerate
endmodule
"""
    inputs = [line.count("in") - line.count("bin") for line in instances(text)]
    assert sorted(inputs) == sorted(line.count(", in") for line in instances(text))
    assert sorted(line.count(", in") for line in instances(text)) in ([1, 2, 3, 4], [2, 2, 3, 4])


def test_12_4_1_a_ripple_adder_with_its_nets_in_the_loop(instances: Lines) -> None:
    """The standard's own example, with two-dimensional nets outside of the loop and with nets inside."""
    text = """
module addergen(co, sum, a, b, ci);
  parameter SIZE = 2;
  output [SIZE-1:0] sum;
  output co;
  input [SIZE-1:0] a, b;
  input ci;
  wire [SIZE:0] c;
  genvar i;
  assign c[0] = ci;
  for (i = 0; i < SIZE; i = i + 1) begin : bit_
    wire t1, t2, t3;
    xor g1 (t1, a[i], b[i]);
    xor g2 (sum[i], t1, c[i]);
    and g3 (t2, a[i], b[i]);
    and g4 (t3, t1, c[i]);
    or g5 (c[i+1], t2, t3);
  end
  assign co = c[SIZE];
endmodule
"""
    found = [line for line in instances(text) if "bit_[1]" in line]
    assert found == [
        "and bit_[1].g3: out=bit_[1].t2, in1=a[1], in2=b[1]", "and bit_[1].g4: out=bit_[1].t3, in1=bit_[1].t1, in2=c[1]",
        "or bit_[1].g5: out=c[2], in1=bit_[1].t2, in2=bit_[1].t3", "xor bit_[1].g1: out=bit_[1].t1, in1=a[1], in2=b[1]",
        "xor bit_[1].g2: out=sum[1], in1=bit_[1].t1, in2=c[1]",
    ]  # fmt: skip


def test_12_4_a_multiplier_chosen_by_its_widths(instances: Lines) -> None:
    """The standard's own example of a choice by parameters, and of a module that contains itself."""
    text = """
module board(input [6:0] a, output y);
  tree #(7) t (a, y);
endmodule
module tree #(parameter N = 1) (input [N-1:0] a, output y);
  generate
    if (N == 1) begin : leaf
      buf g (y, a);
    end else if (N == 2) begin : leaf
      and g (y, a[0], a[1]);
    end else begin : fork_
      wire p, q;
      tree #(N / 2) low (a[N/2-1:0], p);
      tree #(.N(N - N / 2)) high (a[N-1:N/2], q);
      and g (y, p, q);
    end
  endgenerate
endmodule
"""
    leaves = [line for line in instances(text) if "leaf" in line]
    assert [line.split(": ")[0] for line in leaves] == [
        "and t.fork_.high.fork_.high.leaf.g", "and t.fork_.high.fork_.low.leaf.g", "and t.fork_.low.fork_.high.leaf.g", "buf t.fork_.low.fork_.low.leaf.g",
    ]  # fmt: skip
    assert [line.partition("in")[2].partition("=")[2] for line in leaves if line.startswith("buf")] == [
        "a[0]"
    ]


@pytest.mark.parametrize("wanted", ["wire [3:0] w;", "localparam L = 3;"])
def test_12_4_a_block_sees_what_is_around_it_and_hides_it(wanted: str, instances: Lines) -> None:
    """Clause 12.7: a name is looked for in the block, then in what is around it."""
    body = "wire n;\nbuf g1 (n, a[0]);\nif (1) begin : b\nbuf g2 (y[0], n);\nif (1) begin : c\nwire n;\nbuf g3 (n, a[1]);\nbuf g4 (y[1], n);\nend\nend\nbuf g5 (y[2], b.c.n);"
    found = {line.split()[1]: line.partition("in=")[2] for line in instances(_board(f"{wanted}\n{body}"))}
    assert found["b.g2:"] == "n"
    assert found["b.c.g4:"] == "b.c.n"
    assert found["g5:"] == "b.c.n"
