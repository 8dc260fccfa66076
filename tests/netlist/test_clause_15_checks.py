"""IEEE 1364-2005 clause 15: timing checks of a specify block as checks of its part."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from tardigate.netlist.cell_shop import Cells
from tardigate.netlist.modules import collect
from tardigate.netlist.shop import Shop
from tardigate.parts.dump import dump_part
from tardigate.parts.library import Library
from tardigate.parts.model import Part
from tardigate.source.collector import Collector
from tardigate.source.files import SourceFile
from tardigate.syntax.preprocess import PreprocessOptions, preprocess
from tardigate.syntax.verilog_reader import read_unit


def _part(block: str) -> tuple[Part, list[str]]:
    """Return a flip-flop with that block as a part, and the codes that were told."""
    text = f"""`timescale 1 ns / 1 ps
    module board(input [1:0] d, input ck, rn, output [1:0] q);
    dff u (.d(d), .ck(ck), .rn(rn), .q(q)); endmodule
    module dff(input [1:0] d, input ck, rn, output reg [1:0] q);
    reg ntf; wire ok; and (ok, rn, ck);
    always @(posedge ck or negedge rn) if (!rn) q <= 0; else q <= d;
    specify (ck, rn *> q) = 1; {block} endspecify endmodule"""
    collector = Collector()
    source = preprocess(SourceFile("board.v", text.encode()), PreprocessOptions(), collector, None)
    unit = read_unit(source, collector)
    library = Library.read([], None, collector)
    shop = Shop(collect([unit], library.describes, collector, bulk=True), library, collector)
    part = Cells(shop).part("dff", {})
    assert part is not None
    return part, [diagnostic.code for diagnostic in collector.all()]


def _checks(block: str) -> list[str]:
    """Return the checks as they are dumped, without conditions' numbers."""
    part, codes = _part(block)
    assert codes == []
    symbols = ("tsu", "th", "trec", "trem", "tw", "period")
    lines = [line.strip() for line in dump_part(part).splitlines()]
    return [line for line in lines if line.split()[0] in symbols]


@pytest.mark.parametrize(
    ("check", "lines"),
    [
        ("$setup(d, posedge ck, 3);", ["tsu d[0] d[1] at ck rise 3:3:3"]),
        ("$hold(posedge ck, d, 1:2:3);", ["th d[0] d[1] at ck rise 1:2:3"]),
        (
            "$setuphold(posedge ck, d, 3, 1);",
            ["tsu d[0] d[1] at ck rise 3:3:3", "th d[0] d[1] at ck rise 1:1:1"],
        ),
        (
            "$setuphold(posedge ck, negedge d[1], -10, 20, ntf, , , dck, dd[1]);",
            ["tsu d[1] fall at ck rise -10:-10:-10", "th d[1] fall at ck rise 20:20:20"],
        ),
        ("$removal(posedge rn, posedge ck, 2);", ["trem rn rise at ck rise 2:2:2"]),
        ("$recovery(posedge rn, posedge ck, 2, ntf);", ["trec rn rise at ck rise 2:2:2"]),
        (
            "$recrem(posedge rn, posedge ck, 2, -1);",
            ["trec rn rise at ck rise 2:2:2", "trem rn rise at ck rise -1:-1:-1"],
        ),
        ("$width(posedge ck, 4);", ["tw ck rise high 4:4:4"]),
        ("$width(negedge rn, 4, 1, ntf);", ["tw rn fall low 4:4:4"]),
        ("$period(posedge ck, 25, ntf);", ["period ck rise 25:25:25"]),
        ("$width(edge [01, 10] ck, 4);", ["tw ck rise high 4:4:4", "tw ck fall low 4:4:4"]),
        ("$setup(edge [10, x0] d[0], edge [01] ck, 3);", ["tsu d[0] fall at ck rise 3:3:3"]),
        ("$setup(d[0], ck, 3);", ["tsu d[0] at ck 3:3:3"]),
    ],
)
def test_15_2_and_15_3_arguments(check: str, lines: list[str]) -> None:
    """Clauses 15.2.1 to 15.2.6, 15.3.4, 15.3.5, 15.4 and, of negative limits, 15.5.1."""
    declared = "specparam unused = 0; "
    if "dck" in check:
        check = check.replace("dck", "ok").replace("dd[1]", "ntf")  # nets that there are
    assert _checks(declared + check) == lines


@pytest.mark.parametrize("condition", ["rn", "rn == 1'b1", "~!rn", "ok", "rn !== 1'b0"])
def test_15_6_conditions(condition: str) -> None:
    part, codes = _part(f"$setup(d, posedge ck &&& ({condition}), 3);")
    assert codes == []
    (check,) = part.checks
    rn = part.bit_names.index("rn")
    assert rn in part.network.support(check.when)


def test_15_6_conditions_of_both_events_hold_together() -> None:
    part, _ = _part("$setup(d &&& rn, posedge ck &&& !q[0], 3);")
    support = part.network.support(part.checks[0].when)
    assert part.bit_names.index("rn") in support
    assert part.network.nodes[part.checks[0].when][0] == "and"


def test_checks_without_a_place_in_the_model_are_told() -> None:
    block = """$skew(posedge ck, posedge rn, 3); $timeskew(posedge ck, posedge rn, 3, ntf);
    $fullskew(posedge ck, posedge rn, 3, 4); $nochange(posedge ck, d, 0, 0); $width(posedge ok, 3);"""
    part, codes = _part(block)
    assert part.checks == ()
    assert sorted(codes) == ["N177"] * 4 + ["N184"]


def test_specparams_and_units_reach_the_limits() -> None:
    assert _checks("specparam t = 1.5:2:2.5; $setup(d[0], posedge ck, t * 2);") == [
        "tsu d[0] at ck rise 3:4:5"
    ]


@pytest.mark.parametrize(
    ("check", "code"),
    [
        ("$setup(d, posedge ck, -3);", "N151"),
        ("$setup(d, posedge ck, d);", "N120"),
        ("$hold(posedge ck, d);", "N179"),
        ("$period(ck, 3);", "N182"),
        ("$setup(nobody, posedge ck, 3);", "N130"),
        ("$finish(1);", "N178"),
    ],
)
def test_faults(told: Callable[..., list[str]], check: str, code: str) -> None:
    text = f"""module board(input d, ck, output q); cell_ u (.d(d), .ck(ck), .q(q)); endmodule
    module cell_(input d, ck, output q); and (q, d, ck);
    specify (d, ck *> q) = 1; {check} endspecify endmodule"""
    assert code in told(text)
