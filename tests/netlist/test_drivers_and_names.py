"""Several drivers on a net, instances with one name, and what is told on the way to a refusal."""

from __future__ import annotations

import pytest

import tardigate
from tardigate.source.diagnostic import Diagnostic

HALF = "module half(input i, output o); buf #1 (o, i); endmodule"


def told(verilog: str, top: str | None = None) -> list[Diagnostic]:
    try:
        design = tardigate.read_text(verilog, top=top)
        assert design.graph is not None
    except tardigate.InputRefusedError as refused:
        return list(refused.diagnostics)
    return list(design.warnings)


@pytest.mark.parametrize("choice", ["en ? a : 1'bz", "~en ? 1'bz : a"])
def test_an_assignment_that_lets_go_may_share_its_net(choice: str) -> None:
    verilog = (
        f"module m(input a, b, en, e2, output io); assign #2 io = {choice}; bufif1 #3 (io, b, e2); endmodule"
    )
    assert told(verilog) == []
    assert tardigate.read_text(verilog).settle().outputs()[0].settles_ns == 3.0


def test_an_assignment_that_never_lets_go_may_not() -> None:
    verilog = (
        "module m(input a, b, en, output io); assign #2 io = en ? a : b; bufif1 #3 (io, b, en); endmodule"
    )
    assert [d.code for d in told(verilog)] == ["N201"]


def test_tri_is_a_wire() -> None:
    verilog = "module m(input a, b, output tri t); nand #1 (t, a, b); nor #1 (t, a, b); endmodule"
    assert [d.code for d in told(verilog)] == ["N201"]


@pytest.mark.parametrize(
    "text",
    [
        "nand #1 g (y, a, b); nor #1 g (z, a, b);",
        "half g (a, y); nor #1 g (z, a, b);",
        "half g (a, y); half g (b, z);",
    ],
)
def test_two_instances_of_one_name_are_refused_with_both_places(text: str) -> None:
    (diagnostic,) = told(f"module m(input a, b, output y, z); {text} endmodule {HALF}", top="m")
    assert diagnostic.code == "N115"
    assert diagnostic.span is not None
    assert diagnostic.related[0].span.column < diagnostic.span.column


def test_every_kind_without_a_delay_is_named_however_many_there_are() -> None:
    gates = "".join(f"nand (w{n}, {', '.join(f'a[{i}]' for i in range(n))});" for n in range(2, 32))
    (diagnostic,) = told(f"module m(input [31:0] a); {gates} endmodule")
    assert diagnostic.code == "N302"
    assert all(f"`nand` ({n} in)" in diagnostic.message for n in range(2, 32))


def test_a_misspelt_gate_is_suggested() -> None:
    (diagnostic,) = told("module m(input a, b, output y); nnad g (y, a, b); endmodule")
    assert (diagnostic.code, diagnostic.hint) == ("N301", "Did you mean `nand`?")


def test_a_parts_file_among_the_sources_is_recognised() -> None:
    assert any(d.code == "V003" and "--parts" in d.hint for d in told("family F { }"))


def test_a_missing_name_is_told_instead_of_the_doubt_that_it_causes() -> None:
    verilog = f"module m(input a, output y); half (a, y); endmodule {HALF}"
    assert "N108" in [d.code for d in told(verilog)]


def test_an_unknown_grade_is_refused() -> None:
    with pytest.raises(ValueError, match="grade 'mx'"):
        tardigate.read_text("module m(input a, output y); buf #1 (y, a); endmodule", grade="mx")  # type: ignore[arg-type]


TYP_MISSING = "family F { gates ns { tpd not 1:-:3; } }"


def test_a_number_that_a_grade_needs_is_never_taken_as_0() -> None:
    design = tardigate.read_text("module m(input a, output y); not (y, a); endmodule", parts=TYP_MISSING)
    assert design.settle("max").outputs()[0].settles_ns == 3.0
    for ask in (lambda: design.settle("typ"), lambda: design.slowest(grade="typ")):
        with pytest.raises(tardigate.InputRefusedError) as refused:
            ask()
        assert [d.code for d in refused.value.diagnostics] == ["G102"]
    with pytest.raises(ValueError, match="grade 'mx'"):
        design.slowest(grade="mx")  # type: ignore[arg-type]


def test_the_times_of_a_vector_are_those_of_all_its_bits() -> None:
    verilog = "module m(input a, output [1:0] y); buf #1 (y[0], a); buf #5 (y[1], a); endmodule"
    found = tardigate.read_text(verilog).settle().net("y")
    assert (found.settles_ns, found.stirs_ns) == (5.0, 1.0)


def test_negative_pieces_of_a_constant_are_cut_to_their_width() -> None:
    """IEEE 1364-2005 clause 5.1.14: `{4'd3, -4'sd1}` is 8'b0011_1111."""
    verilog = (
        "module m(input a, output y); parameter P = {4'd3, -4'sd1}; wire [P:0] w; buf #1 (y, a); endmodule"
    )
    template = tardigate.read_text(verilog).loaded.flat.templates[0]
    assert template.parameters == "P=63"


ARRAY = """
module top(input [1:0] a, output [1:0] y);
  wire [1:0] m [0:1];
  assign #1 m[0] = a, m[1] = ~m[0];
  assign #2 y = m[1];
endmodule
"""


@pytest.mark.parametrize(
    ("name", "nets"),
    [
        ("m", {"m[0][0]", "m[0][1]", "m[1][0]", "m[1][1]"}), ("m[0]", {"m[0][0]", "m[0][1]"}),
        ("m[1][0]", {"m[1][0]"}), ("m[*][1]", {"m[0][1]", "m[1][1]"}),
    ],
)  # fmt: skip
def test_arrays_of_nets_are_found_whole_by_element_and_by_bit(name: str, nets: set[str]) -> None:
    trails = tardigate.read_text(ARRAY).slowest(50, sources=name)
    assert {trail.source for trail in trails} == nets


def test_an_element_that_is_not_there_is_refused() -> None:
    with pytest.raises(tardigate.InputRefusedError):
        tardigate.read_text(ARRAY).slowest(sources="m[2]")
