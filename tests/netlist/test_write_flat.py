"""The flat design written as Verilog: construct by construct, and that it reads again as the same design."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest

from tardigate.netlist.flat import Flat
from tardigate.netlist.modules import Modules, collect
from tardigate.netlist.names import Names
from tardigate.netlist.write_cells import CellText, cell_texts
from tardigate.netlist.write_flat import write_flat
from tardigate.netlist.write_words import delay_words, spelled, unlike
from tardigate.parts.kind import Kind
from tardigate.parts.source_delay import SourceDelay
from tardigate.source.collector import Collector
from tardigate.source.files import SourceFile
from tardigate.syntax.preprocess import PreprocessOptions, preprocess
from tardigate.syntax.verilog_reader import read_unit

PARTS = """
family DEMO {
  part REG "register" {
    inputs CK, D[3:0]; outputs Q[3:0], N;
    register posedge CK { Q = D; N = D[0]; }
    times ns { tpd CK *> Q 1:2:3; tpd CK => N 2; }
  }
  part LUT "table" {
    parameter INIT[3:0]; parameter WIDE[39:0] = 0;
    inputs A, B; output Y = INIT[{A, B}];
    times ns { tpd A, B => Y 1:2:3; }
  }
  operators ns { tpd "!"(2) 1; tpd "!"(3) 2; tpd "=="(2) 3; tpd "=="(4) 4; tpd "&&"(3) 5; tpd "&&"(2) 6; }
  default ns { tpd 7; }
}
"""
FEED = "module feed(.a(n), .b(n)); inout n; endmodule\n"

Elaborate = Callable[..., Flat]
Again = Callable[..., str]


def _told(flat: Flat) -> list[object]:
    """Return all that a flat design says, registers last, each part instance with all that its kind says."""
    names = Names(flat)
    instances = []
    for inst, kind in enumerate(flat.kinds[number] for number in flat.inst_kind.tolist()):
        name = names.instance(inst)
        nets = flat.pin_net[flat.pin_start[inst] : flat.pin_start[inst + 1]].tolist()
        held = [column.tolist() if isinstance(column, np.ndarray) else column for column in kind]
        instances.append(("" if ":" in name or kind.name == "register" else name, nets, repr(held)))
    instances.sort(key=lambda instance: "'register', 'operator'" in instance[2])
    nets = [names.net(net) for net in range(flat.nets)]
    return [nets, flat.ports, instances, {word: nets.tolist() for word, nets in flat.typed.items()}]


@pytest.fixture
def again(elaborate: Elaborate) -> Again:
    """`again(text, parts="", top="m")`: the flat text, which reads as the same and is written the same."""

    def written(text: str, parts: str = "", top: str = "m") -> str:
        first = elaborate(text, parts, top)
        flat = write_flat(first, top)
        second = elaborate(flat, parts, top)
        assert _told(second) == _told(first)
        assert write_flat(second, top) == flat
        return flat

    return written


def _statements(text: str) -> list[str]:
    """Return the lines behind the declarations, in the module."""
    lines = [line.strip() for line in text.split("\nendmodule")[0].splitlines()]
    declared = ("`", "module", "input", "output", "inout", "wire", "wand", "tri0")
    return [line for line in lines if not line.startswith(declared)]


def test_a_hierarchy_becomes_one_module(again: Again) -> None:
    text = """
        module low(input p, output q); wire n; not #2 g (n, p); not (q, n); endmodule
        module m(input a, output y); low u (.p(a), .q(y)); endmodule"""
    assert again(text) == (
        "`resetall\n`timescale 1fs/1fs\n"
        "module m (a, y);\n  input a;\n  output y;\n  wire \\u.n ;\n"
        "  not #2000000 \\u.g (\\u.n , a);\n  not (y, \\u.n );\nendmodule\n"
    )


def test_a_vector_port_stays_one_and_other_vectors_become_bits(again: Again) -> None:
    written = again("""
        module m(input [3:0] a, output [0:1] y);
          wire [1:0] n; buf b[1:0] (n, a[3:2]); buf c[1:0] (y, n);
        endmodule""")
    assert "input [3:0] a;" in written
    assert "output [0:1] y;" in written
    assert r"wire \n[1] ;" in written
    assert _statements(written)[:2] == [r"buf \b[1] (\n[1] , a[3]);", r"buf \b[0] (\n[0] , a[2]);"]


@pytest.mark.parametrize(
    ("header", "declared", "read", "written"),
    [
        (".p(a)", "a", "a", ".p(a)"),
        (".p({a, b})", "a, b", "a, b", r".\p[1] (a), .\p[0] (b)"),
        ("{a, b}", "a, b", "a, b", r".\port0[1] (a), .\port0[0] (b)"),
        (".p(v)", "[4:5] v", "v[4], v[5]", r".\p[4] (\v[4] ), .\p[5] (\v[5] )"),
        ("v[5]", "[4:5] v", "v[5]", r".port0(\v[5] )"),
        (r".a(\a[1] )", r"\a[1] ", r"\a[1] ", r".a(\a[1] )"),
        ("a, .b(a)", "a", "a", "a, .b(a)"),
    ],
)
def test_a_port_that_is_no_plain_net_keeps_the_names_of_its_bits(
    again: Again, header: str, declared: str, read: str, written: str
) -> None:
    way = "inout" if ".b" in header else "input"
    text = f"module m({header}, y); {way} {declared}; output y; and (y, {read}); endmodule"
    assert f"module m ({written}, y);" in again(text)


def test_ports_on_one_net_stay_on_one_net(again: Again) -> None:
    written = again(f"{FEED} module m(input a, output y, z); feed f(a, y); feed g(z, y); endmodule")
    assert "same_net same (y, a);" in written
    assert written.count("same_net \\same~2  (z, a);") == 1
    assert "module same_net (.a(net), .b(net));\n  inout net;\nendmodule\n" in written


def test_a_port_on_a_constant_stays_on_it(again: Again) -> None:
    feed = FEED.replace("inout", "input")
    text = f"{feed} module m(input a, output y, z); feed f(1'b1, y); buf (z, y); endmodule"
    assert _statements(again(text)) == ["buf (z, 1'b1);", "same_constant same (y, 1'b1);"]


def test_names_that_meet_are_told_apart(elaborate: Elaborate) -> None:
    text = r"""
        module low(input p, output q); wire n; not (n, p); not (q, n); endmodule
        module m(input [1:0] a, input \a[0] , output y, z);
          wire [1:0] v; wire \v[1] ;
          and (v[1], a[0], \a[0] ); not (\v[1] , v[1]); not (\u.n , \v[1] ); low u(\u.n , y); not (z, a[1]);
        endmodule"""
    first = elaborate(text, "", "m")
    written = write_flat(first, "m")
    for line in ("input [1:0] a;", r"input \a[0] ;", r"wire \v[1] ;", r"wire \v[1]~2 ;", r"wire \u.n~2 ;"):
        assert f"  {line}\n" in written
    second = elaborate(written, "", "m")
    assert second.pin_net.tolist() == first.pin_net.tolist()
    assert write_flat(second, "m") == written


def test_reserved_words_and_odd_signs_are_escaped(again: Again) -> None:
    text = r"module \m%+ (input \and , \x\y , \%s , output y); and \or (y, \and , \x\y , \%s ); endmodule"
    written = again(text, top="m%+")
    assert r"and \or (y, \and , \x\y , \%s );" in written
    assert written.splitlines()[2].startswith(r"module \m%+  (\and , \x\y , \%s , y);")


def test_types_of_nets_that_bear_several_drivers_or_none_are_kept(again: Again) -> None:
    again("module m(input a, b, output y, z); wand y; tri0 n; buf (y, a); buf (y, b); not (z, n); endmodule")
    vector = "wor [1:0] y; buf x[1:0] (y, a); buf z[1:0] (y, b);"
    again(f"module m(input a, b, output [1:0] y); {vector} endmodule")
    low = "module low(n, y); input n; tri0 n; output y; not (y, n); endmodule"
    again(f"{low} module m(input a, output y); wand n; low u(n, y); endmodule")


OPERATORS = (
    "~a", "a & b", "a | b", "a ^ b", "a ~^ b", "&{a, b, c}", "|{a, b}", "^{a, b, c}", "~&{a, b}", "~|{a, c}",
    "~^{a, b}", "&{a}", "!a", "!{a, b}", "a && b", "{a, b} || c", "a == b", "{a, b} != {b, c}", "a ? b : c",
    "{a, b} ? c : 1'bz", "a", "1'bx", "~{1'b1}", "{1'b0} & {1'b1}", "!{1'b0}", "{a, b} && 1'b0",
    "{1'b0} || {1'b1}", "{1'b1} ? {1'b0} : {1'bx}", "a == a", "a == 1'b0", "{1'b1, a} == {1'b1, b}",
    "{1'b0} == {1'b0}", "a & ~b | (c ^ a)", "!(a && ~b) ? {a, b} == {b, c} : ^{a, b, c}",
)  # fmt: skip


@pytest.mark.parametrize("operator", OPERATORS)
@pytest.mark.parametrize("delay", ["", "#2 ", "#(1:2:3, 4)"])
def test_every_operator_makes_the_same_kind_again(again: Again, operator: str, delay: str) -> None:
    again(f"module m(input a, b, c, output y); assign {delay} y = {operator}; endmodule")


INSIDE = (
    "!p", "p && q", "p || q[0]", "p == q", "p != q", "&p", "p[0] & q[0]", "~p[0]", "p ? q[0] : p[1]",
    "p[0] == q[0]",
)  # fmt: skip
TIED = (
    "2'b00, 2'b00", "2'b11, 2'b11", "{a, 1'b0}, {1'b0, b}", "{a, a}, {b, b}", "{a, b}, {a, b}",
    "{1'b0, a}, 2'b10",
)  # fmt: skip


@pytest.mark.parametrize("operator", INSIDE)
@pytest.mark.parametrize("tied", TIED)
def test_an_operator_whose_inputs_are_one_net_or_constant_through_ports_keeps_all_of_them(
    again: Again, operator: str, tied: str
) -> None:
    low = f"module low(input [1:0] p, q, output y); assign y = {operator}; endmodule"
    again(f"{low} module m(input a, b, output y); low u ({tied}, y); endmodule", PARTS)


def test_gates_of_every_kind_with_their_delays(again: Again) -> None:
    written = again("""
        module m(input a, b, c, output [1:0] y, inout z);
          nand #3 g1 (n1, a, b, c); xor #(1, 2) (n2, a, 1'b1); or (n3, a);
          bufif0 #(1:2:3, 4:5:6, 7) g3 (z, a, b);
          not #4.5 (y[0], y[1], n1);
        endmodule""")
    assert _statements(written) == [
        "nand #3000000 g1 (n1, a, b, c);", "xor #(1000000, 2000000) (n2, a, 1'b1);", "or (n3, a);",
        "bufif0 #(1000000:2000000:3000000, 4000000:5000000:6000000, 7000000) g3 (z, a, b);",
        "not #4500000 (y[0], y[1], n1);",
    ]  # fmt: skip


def test_parts_with_parameters_open_pins_and_constants(again: Again) -> None:
    written = again(
        r"""module m(input a, b, ck, output y, output [1:0] q);
          LUT #(.INIT(4'b0110), .WIDE(40'hff00000000)) u1 (.A(a), .B(1'b1), .Y(y));
          REG \r.1 (.CK(ck), .D({a, b, 1'bx, y}), .N());
          REG r2 (ck, {a, b, a, b}, {n5, n6, q}, n7);
        endmodule""",
        PARTS,
    )
    assert _statements(written) == [
        "LUT #(.INIT(6), .WIDE(40'hff00000000)) u1 (.A(a), .B(1'b1), .Y(y));",
        r"REG \r.1 (.CK(ck), .D({a, b, 1'bx, y}), .Q(), .N());",
        "REG r2 (.CK(ck), .D({a, b, a, b}), .Q({n5, n6, q[1], q[0]}), .N(n7));",
    ]


def test_an_output_that_is_wider_than_what_it_drives_stays_so(again: Again) -> None:
    written = again(
        "module m(input ck, input [3:0] d, output [1:0] q); REG r (.CK(ck), .D(d), .Q(q)); endmodule", PARTS
    )
    assert ".Q({q[1], q[0]}), .N()" in written


def test_a_delay_that_is_no_whole_femtosecond_keeps_its_figure(again: Again) -> None:
    written = again("module m(input a, output y); not #0.0000015 g1 (n, a); not #3 g2 (y, n); endmodule")
    assert "timescale" not in written
    assert _statements(written) == ["not #0.0000015 g1 (n, a);", "not #3 g2 (y, n);"]


BITS = "input clk, r, s, e, d, output reg q"


@pytest.mark.parametrize(
    ("always", "written"),
    [
        ("always @(posedge clk) q <= d;", "q <= d1;"),
        ("always @(negedge clk) if (e) q <= #2 d;", "if (d2) q <= #2000000 d1;"),
        ("always @(posedge clk) if (r) q <= 0; else if (s) q <= 1; else if (e) q <= d;",
         "if (d4) if (d3) if (d2) q <= d1;"),
        ("always @(posedge clk) q <= 1'b1;", "q <= 1'b0;"),
        ("always @(posedge clk or negedge r) if (!r) q <= #(1:2:3) 0; else q <= #4 d;",
         "if (!clear) q <= #(1000000:2000000:3000000) 1'b0;\n    else q <= #4000000 d1;"),
        ("always @(posedge clk or posedge r or negedge s) if (r) q <= 0; else if (!s) q <= 1; else q <= d;",
         "if (clear) q <= 1'b0;\n    else if (!set) q <= 1'b1;\n    else q <= d1;"),
        ("always @(posedge clk or posedge r) if (r) q <= 1;", "if (set) q <= 1'b1;\n    else q <= 1'b0;"),
    ],
)  # fmt: skip
def test_a_register_is_an_instance_of_a_module_of_its_kind(again: Again, always: str, written: str) -> None:
    found = again(f"module m({BITS}); {always} endmodule")
    assert f"    {written}\nendmodule\n" in found
    assert _statements(found)[0].startswith(r"register \q~register  (q, clk")


def test_registers_whose_pins_are_one_net_or_constant_through_ports_keep_all_of_them(again: Again) -> None:
    always = "always @(posedge clk or negedge r) if (!r) q <= 0; else if (e) q <= d;"
    written = again(f"""
        module dff({BITS}); {always} endmodule
        module m(input c, r, a, output [2:0] y, output z);
          dff u0(c, r, s, 1'b1, a, y[0]); dff u1(c, 1'b1, s, y[1], y[1], y[1]); dff u2(c, c, s, c, r, y[2]);
          reg w; always @(negedge c) w <= a;
          not (z, w);
        endmodule""")
    assert written.count("module register") == 2
    assert _statements(written)[-1] == r"register2 \y[2]~register  (y[2], c, c, c, r);"


def _modules(text: str) -> Modules:
    collector = Collector()
    unit = read_unit(
        preprocess(SourceFile("cells.v", text.encode()), PreprocessOptions(), collector, None), collector
    )
    return collect([unit], {"KNOWN"}.__contains__, collector, bulk=True)


def test_definitions_come_with_what_they_use_and_the_directives_in_force() -> None:
    modules = _modules("""
        module early(input a); endmodule
        `timescale 10 ns / 100 ps
        primitive TWO(y, a); output y; input a; table 0 : 1; 1 : 0; endtable endprimitive
        module OUTER(input a, output y);  // in two steps

          INNER u(a, y); KNOWN v(a); endmodule
        `default_nettype none
        module INNER(input a, output y); TWO (y, a); endmodule
        module KNOWN(input a); endmodule
        module unused; endmodule""")
    found = cell_texts(modules, ["OUTER", "KNOWN", "nowhere", "early"])
    assert [(cell.name, cell.primitive) for cell in found] == [
        ("INNER", False), ("OUTER", False), ("TWO", True), ("early", False),
    ]  # fmt: skip
    scale = "`resetall\n`timescale 10ns/100ps\n"
    assert found[0].text.startswith(f"{scale}`default_nettype none\nmodule INNER(")
    assert found[1].text == (
        f"{scale}module OUTER(input a, output y);\n          INNER u(a, y); KNOWN v(a); endmodule\n"
    )
    assert found[3].text == "`resetall\nmodule early(input a); endmodule\n"


def test_a_primitive_is_connected_by_order_and_a_cell_by_name(
    make_kind: Callable[..., Kind], make_flat: Callable[..., Flat]
) -> None:
    delay = SourceDelay(((1.0, 2.0, 3.0), (4.0, 4.0, 4.0)))
    two, cell = (
        make_kind(name, "a > y", ("a", "-", "y", (1, 2, 3)))._replace(group="part", source=source)
        for name, source in (("TWO", delay), ("CELL", None))
    )
    flat = make_flat("p > q", ("", two, "p n"), ("u1", cell, "n q"))
    texts = [CellText("CELL", False, "`resetall\nmodule CELL;\n"), CellText("TWO", True, "primitive TWO;\n")]
    written = write_flat(flat, "top", texts)
    assert _statements(written) == ["TWO #(1:2:3, 4) (p, n);", "CELL u1 (.a(n), .y(q));"]
    assert written.endswith("endmodule\n\n`resetall\nmodule CELL;\n\nprimitive TWO;\n")


def test_the_delay_of_a_net_is_written_as_that_of_an_assignment(
    make_kind: Callable[..., Kind], make_flat: Callable[..., Flat]
) -> None:
    wire = make_kind("assign wire", "a > y", ("a", "+", "y", (3, 3, 3)))
    wire = wire._replace(group="operator", source=SourceDelay(((3.0, 3.0, 3.0),)))
    flat = make_flat("p > q", ("", wire._replace(pins=("y", "a"), ways=wire.ways[::-1]), "q p"))
    assert _statements(write_flat(flat, "top")) == ["assign #3 q = p;"]


def test_words() -> None:
    assert [spelled(name) for name in ("a$1", "wire", "1a", "a.b")] == ["a$1", "\\wire ", "\\1a ", "\\a.b "]
    assert unlike(["a", "b", "a", "a~2"], {"b"}) == ["a", "b~2", "a~3", "a~2"]
    long = SourceDelay(((float(1 << 31),) * 3, (1.0, 2.0, 2.0)))
    assert delay_words(long, whole=True) == "#(2147483648.0, 1:2:2) "
    assert delay_words(SourceDelay(((1.5, 1.5, 1.5),)), whole=False) == "#0.0000015 "
    assert delay_words(None, whole=True) == ""
