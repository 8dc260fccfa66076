"""Net delays (IEEE 1364-2005 clauses 6.1.3, 7.14): where they stand, and what figures they make."""

from __future__ import annotations

from collections.abc import Callable

import pytest

import tardigate

Lines = Callable[..., list[str]]
Codes = Callable[..., list[str]]
Delays = Callable[[str], dict[str, list[float]]]
NS = 1e6


def _settles(text: str) -> dict[str, float | None]:
    settled = tardigate.read_text(text).settle()
    return {output.name: output.settles_ns for output in settled.outputs()}


def test_drivers_are_before_the_delay_and_readers_behind(instances: Lines) -> None:
    text = (
        "module board(input a, b, output y, z);\nwire #3 w;\nnand #1 g (w, a, b);\nbuf #1 h (y, w);\n"
        "assign z = w;\nendmodule\n"
    )
    assert instances(text) == [
        "assign assign:5: out=z, in1=w", "buf h: out=y, in=w",
        "nand g: out=w:in, in1=a, in2=b", "wire wire:2: out=w, in=w:in",
    ]  # fmt: skip


def test_a_delay_for_each_bit_and_each_name(instances: Lines) -> None:
    text = (
        "module board(input [1:0] a, input b, output [1:0] y, output z);\n"
        "wire [1:0] #(2,3,4) v, w;\n"
        "buf #1 g [1:0] (v, a);\nbuf #1 h (w[0], b);\nassign y = v;\nassign z = w[0], w[1] = b;\nendmodule\n"
    )
    wires = [line for line in instances(text) if line.startswith("wire ")]
    assert wires == [
        "wire wire:2: out=v[0], in=v[0]:in", "wire wire:2: out=v[1], in=v[1]:in",
        "wire wire:2: out=w[0], in=w[0]:in", "wire wire:2: out=w[1], in=w[1]:in",
    ]  # fmt: skip


def test_hops_take_the_delay_of_their_edge(delays: Delays) -> None:
    text = (
        "module board(input a, output y);\nwire #(1:2:3, 4:5:6) w;\nbuf #1 g (w, a);\nbuf #1 h (y, w);\n"
        "endmodule\n"
    )
    found = {hop: times for hop, times in delays(text).items() if hop.startswith("wire")}
    assert found == {"wire:2 in>out rr": [NS, 2 * NS, 3 * NS], "wire:2 in>out ff": [4 * NS, 5 * NS, 6 * NS]}


@pytest.mark.parametrize(
    ("delay", "driver", "settles", "stirs"),
    [
        ("#5", "bufif1 #(10,11,12) g (w, a, e)", 12 + 5, 10 + 5),
        ("#(2,3)", "bufif1 #(10,11,12) g (w, a, e)", 12 + 3, 10 + 2),
        ("#(3,2)", "bufif1 #(11,10,10) g (w, a, e)", 11 + 3, 10 + 2),
        ("#(2,3,4)", "bufif1 #(10,11,12) g (w, a, e)", 12 + 4, 10 + 2),
        ("#(4,3,1)", "bufif1 #(10,11,12) g (w, a, e)", 12 + 4, 10 + 1),
        ("#(2,3,4)", "assign #10 w = e ? a : 1'bz", 10 + 4, 10 + 2),
        ("#(2,3)", "buf #(10,10) g (w, a)", 10 + 3, 10 + 2),
        ("#(3,2,9)", "buf #(10,10) g (w, a)", 10 + 3, 10 + 2),
    ],
)
def test_7_14_a_bus_that_is_let_go_takes_the_turn_off_delay(
    delay: str, driver: str, settles: float, stirs: float
) -> None:
    """A change to z is one of the bus as well; with two delays it takes the smaller (table 7-9)."""
    text = f"module board(input a, e, output y);\ntri {delay} w;\n{driver};\nbuf #100 h (y, w);\nendmodule\n"
    settled = tardigate.read_text(text).settle().outputs()[0]
    assert (settled.settles_ns, settled.stirs_ns) == (100 + settles, 100 + stirs)


@pytest.mark.parametrize(
    ("assignment", "settles", "stirs"),
    [
        ("#(2,3,9) y = e ? a : 1'bz", 9, 2),
        ("#(2,3) y = e ? a : 1'bz", 3, 2),
        ("#(4,5,1) y = a", 5, 1),
        ("#(2,3,9) y = a & e", 3, 2),
    ],
)
def test_6_1_3_the_third_delay_of_an_assignment_that_may_be_z(
    assignment: str, settles: float, stirs: float
) -> None:
    text = f"module board(input a, e, output y);\nassign {assignment};\nendmodule\n"
    settled = tardigate.read_text(text).settle().outputs()[0]
    assert (settled.settles_ns, settled.stirs_ns) == (settles, stirs)


def test_7_14_2_the_third_delay_of_a_trireg_is_its_decay() -> None:
    text = (
        "module board(input a, e, output y);\ntrireg #(1,2,50) t;\nbufif1 #10 g (t, a, e);\n"
        "buf #5 h (y, t);\nendmodule\n"
    )
    assert _settles(text) == {"y": 17}


def test_6_1_3_beside_a_value_the_delay_is_that_of_the_assignment(instances: Lines) -> None:
    text = "module board(input a, b, c, output y);\nwire #5 w = a & b;\nbuf #1 (y, w);\nendmodule\n"
    assert [line.split()[0] for line in instances(text.replace(", c", ""))] == ["assign", "buf"]
    assert _settles(text.replace(", c", "")) == {"y": 6}


def test_several_drivers_share_the_net_before_the_delay(told: Codes) -> None:
    text = (
        "module board(input a, b, e, f, output y);\n{} #3 w;\n{} #1 g (w, a{});\n{} #2 h (w, b{});\n"
        "buf #1 (y, w);\nendmodule\n"
    )
    for words in (("wand", "buf", "", "buf", ""), ("tri", "bufif1", ", e", "bufif0", ", f")):
        assert "N201" not in told(text.format(*words))
        assert _settles(text.format(*words)) == {"y": 6}
    assert "N201" in told(text.format("wire", "buf", "", "buf", ""))


def test_ports(instances: Lines) -> None:
    text = (
        "module board(input a, output y);\nwire #3 a, y;\nwire #4 m;\nhalf h1 (.a(a), .y(m));\n"
        "half h2 (.a(m), .y(y));\nendmodule\n"
        "module half(input a, output y);\nwire #7 y;\nnot #1 g (y, a);\nendmodule\n"
    )
    assert _settles(text) == {"y": 3 + 8 + 4 + 8 + 3}
    assert len([line for line in instances(text) if line.startswith("wire ")]) == 5


def test_a_source_at_a_delayed_input_is_called_by_its_port() -> None:
    text = "module board(input a, output y);\nwire #3 a;\nbuf #1 g (y, a);\nendmodule\n"
    trail = tardigate.read_text(text).slowest()[0]
    assert (trail.source, [hop.delay_ns for hop in trail.hops]) == ("a", [3.0, 1.0])


def test_a_net_without_a_driver_is_told_of(told: Codes) -> None:
    text = "module board(input a, output y, z);\n{} #3 w;\nbuf #1 (y, w);\nbuf #1 (z, a);\nendmodule\n"
    assert told(text.format("wire")) == ["N202"]
    assert told(text.format("tri1")) == []


@pytest.mark.parametrize(
    "items",
    [
        "tri #3 c;\nbuf #1 (y, c);",
        "tri #3 w;\nboth u (w);\nbuf #1 (y, w);",
    ],
)
def test_what_drives_from_both_sides_is_refused(items: str, told: Codes) -> None:
    text = (
        f"module board(inout c, input a, output y);\n{items}\nendmodule\n"
        "module both(inout b);\nbufif1 #1 (b, 1'b1, 1'b1);\nendmodule\n"
    )
    assert "N169" in told(text, top="board")
    assert "N169" not in told(text.replace(" #3", ""), top="board")


@pytest.mark.parametrize(
    ("delay", "code"), [("#(1,2,3,4)", "N150"), ("#(-1)", "N151"), ("#(3:2:1)", "N152"), ("#a", "N120")]
)
def test_delays_that_are_refused(delay: str, code: str, told: Codes) -> None:
    assert told(
        f"module board(input a, output y);\nwire {delay} w;\nbuf (w, a);\nbuf (y, w);\nendmodule\n"
    ) == [code]


def test_in_a_generate_block_with_its_parameters() -> None:
    text = (
        "module board(input [1:0] a, output [1:0] y);\ngenvar i;\nfor (i = 0; i < 2; i = i + 1) begin : row\n"
        "  wire #(i + 1) w;\n  buf #10 (w, a[i]);\n  buf #10 (y[i], w);\nend\nendmodule\n"
    )
    assert _settles(text) == {"y[0]": 21, "y[1]": 22}


LATCH = """
module tri_latch(qout, nqout, clock, data, enable);
output qout, nqout;
input clock, data, enable;
wire {}ndata;
wire wa, wb;
wire {}q, nq;
not #5 n1 (ndata, data);
nand #(3,5) n2 (wa, data, clock), n3 (wb, ndata, clock);
nand #(12,15) n4 (q, {}, wa), n5 (nq, q, wb);
bufif1 #(3,7,13) q_drive (qout, q, enable), nq_drive (nqout, nq, enable);
endmodule
"""


def test_7_14_the_latch_of_the_standard_with_delays_on_its_nets() -> None:
    """With its loop opened; the totals are ours."""
    plain = _settles(LATCH.format("", "", "clock"))
    assert plain["nqout"] == max(5 + 3 + 15 + 7, 5 + 12 + 15 + 7)
    # ndata 5 + 1, wb rise 3, nq fall 15 + 4, bufif 7; or wa fall 5, q rise 12 + 2, nq fall 15 + 4, bufif 7.
    delayed = _settles(LATCH.format("#1 ", "#(2,4) ", "clock"))
    assert delayed["nqout"] == max(6 + 3 + 19 + 7, 5 + 14 + 19 + 7)
