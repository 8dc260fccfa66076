"""What connections tell of modules that nobody describes, and the skeleton that `draft` makes of it."""

from __future__ import annotations

import pytest

import tardigate
from tardigate.parts.kind import Way


def ways(verilog: str) -> dict[str, dict[str, Way]]:
    loaded = tardigate.read_text(verilog).loaded
    return {module.name: dict(module.ways) for module in loaded.undescribed}


def test_what_something_known_drives_is_an_input_and_the_one_pin_left_the_output() -> None:
    found = ways("module m(input a, ck, output q); FF f (.D(a), .CK(ck), .Q(q)); endmodule")
    assert found == {"FF": {"D": Way.INPUT, "CK": Way.INPUT, "Q": Way.OUTPUT}}


def test_the_output_of_one_stranger_is_the_input_of_another() -> None:
    found = ways("module m(input a, output q); wire w; FRONT f (.I(a), .O(w)); BACK b (w, q); endmodule")
    assert found["FRONT"] == {"I": Way.INPUT, "O": Way.OUTPUT}
    assert found["BACK"] == {"P1": Way.INPUT, "P2": Way.OUTPUT}


def test_two_pins_that_could_both_be_the_output_are_left_open() -> None:
    found = ways("module m(input a, output p, q); PAIR x (.I(a), .U(p), .V(p)); endmodule")
    assert found == {"PAIR": {"I": Way.INPUT}}


def test_instances_of_an_array_are_counted_and_their_widths_dealt_out() -> None:
    (module,) = tardigate.read_text(
        "module m(input [3:0] a, output [3:0] y); FOUR d [3:0] (.I(a), .O(y)); endmodule"
    ).loaded.undescribed
    assert (module.count, module.pins) == (4, {"I": 1, "O": 1})


def test_what_a_module_below_drives_is_known() -> None:
    found = ways(
        "module m(input a, output q); wire w; low l (a, w); END e (.I(w), .O(q)); endmodule "
        "module low(input i, output o); buf #1 (o, i); endmodule"
    )
    assert found == {"END": {"I": Way.INPUT, "O": Way.OUTPUT}}


@pytest.mark.parametrize("part", ["FF", "FRONT"])
def test_the_skeleton_describes_what_it_is_drafted_for(part: str) -> None:
    instance = f"{part} f (.D(a), .CK(ck), .Q(n));"
    verilog = f"module m(input a, ck, output q); {instance} nand (q, n, a); endmodule"
    skeleton = tardigate.read_text(verilog).draft()
    design = tardigate.read_text(verilog, parts=skeleton)
    assert design.loaded.undescribed == ()
    filled = skeleton.replace("-:-:-", "1:2:3")
    assert tardigate.read_text(verilog, parts=filled).settle().outputs()[0].settles_ns == 6.0


BEHAVIOUR = """
module board(input ck, d, output q); ff u (.C(ck), .D(d), .Q(q)); endmodule
{}
module ff(input C, D, output reg Q); initial Q = 0; always @(posedge C) Q <= D; endmodule
"""


def test_a_cell_of_procedural_code_is_undescribed_and_its_reason_told_when_figures_are_asked_for() -> None:
    design = tardigate.read_text(BEHAVIOUR.format("`celldefine"))
    assert [module.name for module in design.loaded.undescribed] == ["ff"]
    assert "part ff" in design.draft()
    with pytest.raises(tardigate.InputRefusedError) as refused:
        design.settle()
    assert [told.code for told in refused.value.diagnostics] == ["V004"]


@pytest.mark.parametrize("events", ["@*", "@(*)", "@(C or D)", "@(posedge C or D)"])
def test_a_cell_with_an_always_without_edges_is_undescribed(events: str) -> None:
    text = BEHAVIOUR.format("`celldefine").replace("initial Q = 0; always @(posedge C)", f"always {events}")
    design = tardigate.read_text(text)
    assert [module.name for module in design.loaded.undescribed] == ["ff"]
    with pytest.raises(tardigate.InputRefusedError) as refused:
        design.settle()
    assert [told.code for told in refused.value.diagnostics] == ["V010"]


def test_any_other_module_of_procedural_code_is_refused_at_once() -> None:
    with pytest.raises(tardigate.InputRefusedError) as refused:
        tardigate.read_text(BEHAVIOUR.format(""))
    assert [told.code for told in refused.value.diagnostics] == ["V004"]
