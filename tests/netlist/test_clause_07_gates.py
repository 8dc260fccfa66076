"""Gates, arrays, three-state, delays (IEEE 1364-2005 clauses 7.1 to 7.4, 7.14, 6.1, 19.8)."""

from __future__ import annotations

from collections.abc import Callable

import pytest

Lines = Callable[..., list[str]]
Codes = Callable[..., list[str]]
Delays = Callable[[str], dict[str, list[float]]]

NS = 1e6


def test_7_2_many_inputs(instances: Lines) -> None:
    text = "module board(input a, b, c, d, output y, z);\nnor g1 (y, a, b, c, d);\nxor (z, a);\nendmodule\n"
    assert instances(text) == ["nor g1: out=y, in1=a, in2=b, in3=c, in4=d", "xor xor:3: out=z, in1=a"]


def test_7_3_many_outputs(instances: Lines) -> None:
    text = "module board(input a, output y, z, w);\nnot g1 (y, z, w, a);\nendmodule\n"
    assert instances(text) == ["not g1: out1=y, out2=z, out3=w, in=a"]


@pytest.mark.parametrize("gate", ["bufif0", "bufif1", "notif0", "notif1"])
def test_7_4_three_state(gate: str, instances: Lines) -> None:
    text = (
        f"module board(input a, b, e, f, output y);\n{gate} g1 (y, a, e);\n{gate} g2 (y, b, f);\nendmodule\n"
    )
    assert instances(text) == [f"{gate} g1: out=y, in=a, control=e", f"{gate} g2: out=y, in=b, control=f"]


@pytest.mark.parametrize(
    "gate", ["and g (y);", "and (y);", "bufif0 g (y, a);", "notif1 g (y, a, b, c);", "buf (a);"]
)
def test_7_1_terminals_that_cannot_be(gate: str, told: Codes) -> None:
    assert told(f"module board(input a, b, c, output y);\n{gate}\nendmodule\n") == ["N167"]


def test_7_1_several_gates_in_one_statement_and_strengths(instances: Lines) -> None:
    text = "module board(input a, output y, z);\nbuf (strong0, weak1) #1 g1 (y, a), (z, a);\nendmodule\n"
    assert instances(text) == ["buf buf:2: out=z, in=a", "buf g1: out=y, in=a"]


def test_7_1_6_arrays_deal_out_bits_and_repeat_scalars(instances: Lines) -> None:
    """The right-hand index of the range goes with the least significant bits."""
    text = "module board(input [3:0] a, input e, output [3:0] y);\nbufif0 ar [3:0] (y, a, e);\nendmodule\n"
    assert instances(text) == [f"bufif0 ar[{i}]: out=y[{i}], in=a[{i}], control=e" for i in range(4)]


def test_7_1_6_ascending_ranges_and_concatenations(instances: Lines) -> None:
    text = (
        "module board(input [0:1] a, input b, c, output [1:0] y);\nand ar [4:5] (y, {b, c}, a);\nendmodule\n"
    )
    assert instances(text) == ["and ar[4]: out=y[1], in1=b, in2=a[0]", "and ar[5]: out=y[0], in1=c, in2=a[1]"]


def test_7_1_6_arrays_of_modules(instances: Lines) -> None:
    """The standard's own example of busses that are dealt out to instances."""
    text = """
module driver(input [3:0] in, output [3:0] out, input en);
  bufif0 ar [3:0] (out, in, en);
endmodule
module board(input [7:0] busin, input enh, enl, output [7:0] bushigh);
  driver busar [1:0] (.out(bushigh), .in(busin), .en({enh, enl}));
endmodule
"""
    assert instances(text) == [
        f"bufif0 busar[{i // 4}].ar[{i % 4}]: out=bushigh[{i}], in=busin[{i}], control=en{'lh'[i // 4]}"
        for i in range(8)
    ]


def test_7_1_6_arrays_of_parts(instances: Lines) -> None:
    parts = "family F { part P { inputs A; outputs Y = A; times ns { tpd A => Y 1; } } }"
    text = "module board(input [1:0] a, output [1:0] y);\nP u [1:0] (a, y);\nendmodule\n"
    assert instances(text, parts=parts) == ["P u[0]: A=a[0], Y=y[0]", "P u[1]: A=a[1], Y=y[1]"]


@pytest.mark.parametrize(
    ("line", "code"),
    [
        ("buf ar [3:0] (y, b);", "N166"),
        ("buf g (y, a);", "N166"),
        ("buf g (y[0], a & a);", "N166"),
        ("buf ar [2000000000:0] (y, a);", "N121"),
        ("buf ar [70000:0] (y, a);", "N123"),
        ("buf ar [c:0] (y, a);", "N120"),
        ("buf g (1'b0, c);", "N165"),
        ("buf g (c & c, c);", "N165"),
        ("buf g (.y(c), .a(c));", "V001"),
        ("tran g (y[0], c);", "V005"),
    ],
)
def test_terminals_and_arrays_that_are_refused(line: str, code: str, told: Codes) -> None:
    text = f"module board(input [3:0] a, input [2:0] b, input c, output [3:0] y);\n{line}\nendmodule\n"
    assert code in told(text)


# Delays


def _gate(delay: str, gate: str = "nand", before: str = "`timescale 1 ns / 1 ps\n") -> str:
    return f"{before}module board(input a, b, output y);\n{gate} {delay} g1 (y, a, b);\nendmodule\n"


def test_7_14_one_delay_is_for_all(delays: Delays) -> None:
    found = delays(_gate("#3"))
    assert set(found) == {f"g1 in{i}>out {edges}" for i in (1, 2) for edges in ("rf", "fr")}
    assert set(map(tuple, found.values())) == {(3 * NS, 3 * NS, 3 * NS)}


def test_7_14_two_delays_are_rise_and_fall_of_the_output(delays: Delays) -> None:
    found = delays(_gate("#(3, 5)"))
    assert found["g1 in1>out fr"] == [3 * NS] * 3
    assert found["g1 in1>out rf"] == [5 * NS] * 3


def test_7_14_three_delays_of_a_three_state_gate(delays: Delays) -> None:
    """Rise, fall, turn-off; the output leaves a level for z with the turn-off delay."""
    found = delays(_gate("#(10, 12, 11)", "bufif1"))
    assert found["g1 in>out rr"] == [10 * NS] * 3
    assert found["g1 in>out ff"] == [12 * NS] * 3
    turn_off = {edges: found[f"g1 control>out {edges}"][0] / NS for edges in ("rr", "rf", "ff", "fr")}
    assert turn_off == {"rr": 10, "rf": 12, "ff": 11, "fr": 11}


def test_7_14_turn_off_is_the_smaller_of_two(delays: Delays) -> None:
    found = delays(_gate("#(10, 12)", "bufif0"))
    assert {found["g1 control>out rr"][0], found["g1 control>out rf"][0]} == {10 * NS}


def test_7_14_1_min_typ_max(delays: Delays) -> None:
    found = delays(_gate("#(6:8:10, 5:7:9)"))
    assert found["g1 in1>out fr"] == [6 * NS, 8 * NS, 10 * NS]
    assert found["g1 in2>out rf"] == [5 * NS, 7 * NS, 9 * NS]


@pytest.mark.parametrize(
    ("delay", "code"),
    [
        ("#(1, 2, 3)", "N150"), ("#(-1)", "N151"), ("#(3:2:1)", "N152"),
        ("#10_000_000_000", "N153"), ("#1e99", "N153"), ("#1e999999999", "N153"), ("#a", "N120"),
        ("#(1, 2, 3, 4)", "N150"), ("#()", "V001"), ("#(1'bx)", "N120"),
    ],
)  # fmt: skip
def test_delays_that_are_refused(delay: str, code: str, told: Codes) -> None:
    assert told(_gate(delay)) == [code]


@pytest.mark.parametrize(
    ("timescale", "delay", "fs"),
    [
        ("10 ns / 1 ns", "1.55", 16e6),  # published answer: IEEE 1364-2005 clause 19.8, 15.5 rounds to 16
        ("1 ns / 1 ps", "1.2345", 1.235e6),
        ("1 ns / 1 ps", "1.2344", 1.234e6),
        ("10 us / 100 ns", "0.014", 1e8),
        ("1 ns / 1 ns", "0.5", 1e6),
        ("1 ns / 1 ns", "0.4999", 0.0),
        ("100 ps / 10 ps", "0.25", 3e4),
        ("1 fs / 1 fs", "7", 7.0),
        ("1 s / 1 s", "2", 2e15),
        ("1 ns / 1 fs", "1e-3", 1e3),
        ("1 ns / 1 fs", "1_0.5_0", 10.5e6),
        ("1 ps / 1 ps", "'h10", 16e3),
        ("1 ps / 1 fs", "1e-999", 0.0),
    ],
)
def test_19_8_a_delay_is_scaled_and_rounded_half_away_from_zero(
    timescale: str, delay: str, fs: float, delays: Delays
) -> None:
    found = delays(_gate(f"#{delay}", before=f"`timescale {timescale}\n"))
    assert set(map(tuple, found.values())) == {(fs, fs, fs)}


def test_19_8_without_timescale_a_unit_is_1_ns(delays: Delays) -> None:
    assert delays(_gate("#2.5", before=""))["g1 in1>out fr"] == [2.5 * NS] * 3


def test_19_8_a_timescale_holds_for_the_modules_after_it(delays: Delays) -> None:
    text = """
`timescale 1 ns / 1 ns
module half(input a, output y);
  buf #2 g (y, a);
endmodule
`timescale 1 us / 1 us
module board(input a, output y);
  wire w;
  half h (a, w);
  buf #2 g (y, w);
endmodule
"""
    found = delays(text)
    assert found["h.g in>out rr"][0] == 2e6
    assert found["g in>out rr"][0] == 2e9


def test_delays_may_be_parameters_and_differ_by_instance(delays: Delays) -> None:
    text = """
module half #(parameter D = 1, parameter E = 2 * D)(input a, output y);
  buf #(D, E) g (y, a);
endmodule
module board(input a, output y);
  wire w;
  half #(4) h (a, w);
  half i (w, y);
endmodule
"""
    found = {key: value[0] / NS for key, value in delays(text).items()}
    assert found == {"h.g in>out rr": 4, "h.g in>out ff": 8, "i.g in>out rr": 1, "i.g in>out ff": 2}


def test_6_1_3_the_delay_of_an_assignment_is_that_of_its_last_operator(delays: Delays) -> None:
    text = "module board(input a, b, c, output y);\nassign #(3, 5) y = a & ~(b | c);\nendmodule\n"
    found = delays(text)
    last = {key: value[0] for key, value in found.items() if key.startswith("assign:&")}
    assert set(last.values()) == {3 * NS, 5 * NS}
    assert {value[0] for key, value in found.items() if not key.startswith("assign:&")} == {0.0}


def test_6_1_3_an_assignment_without_operator_has_its_delay_too(delays: Delays) -> None:
    text = "module board(input a, output y);\nassign #(3, 5) y = a;\nendmodule\n"
    found = {key: value[0] / NS for key, value in delays(text).items()}
    assert found == {"assign:2 in1>out rr": 3, "assign:2 in1>out ff": 5}


def test_6_1_several_assignments_share_a_delay(delays: Delays) -> None:
    text = "module board(input a, b, output y, z);\nassign #4 y = ~a,\n  z = a ^ b;\nendmodule\n"
    assert {value[0] for value in delays(text).values()} == {4 * NS}


def test_6_1_1_net_declaration_assignment(instances: Lines) -> None:
    text = "module board(input a, b, output y);\nwire w = a ^ b, v = w;\nbuf g (y, v);\nendmodule\n"
    assert instances(text) == [
        "assign ^ assign:^:2: out=w, in1=a, in2=b", "assign assign:2: out=v, in1=w", "buf g: out=y, in=v",
    ]  # fmt: skip
