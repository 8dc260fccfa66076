"""Nets: types, strengths, ranges, delays, arrays, what may drive them (IEEE 1364-2005 clauses 4.1 to 4.9)."""

# ruff: noqa: E501 - a case of a table stands on one line
from __future__ import annotations

from collections.abc import Callable

import pytest

Lines = Callable[..., list[str]]
Codes = Callable[..., list[str]]
Delays = Callable[[str], dict[str, list[float]]]

NET_TYPES = (
    "wire",
    "tri",
    "wand",
    "triand",
    "wor",
    "trior",
    "tri0",
    "tri1",
    "trireg",
    "uwire",
    "supply0",
    "supply1",
)
NS = 1e6


def _board(body: str, ports: str = "input a, b, output y") -> str:
    return f"module board({ports});\n{body}\nendmodule\n"


@pytest.mark.parametrize("net", NET_TYPES)
def test_table_4_1_types_of_nets(net: str, instances: Lines) -> None:
    """Every type of net names a net that can be read; scalar and vector, signed and not."""
    text = _board(f"{net} w;\n{net} [1:0] v;\n{net} signed [0:1] s;\nand g (y, w, v[1], s[0]);")
    ends = {"supply0": "1'b0", "supply1": "1'b1"}
    (line,) = [line for line in instances(text) if line.startswith("and g")]
    assert line.startswith("and g: out=y, in1=")
    found = [pin.split("=")[1] for pin in line.partition(": ")[2].split(", ")[1:]]
    assert found in ([ends.get(net)] * 3, ["w", "v[1]", "s[0]"])


SEVERAL = {
    "wire": 0,
    "tri": 0,
    "wand": 1,
    "triand": 1,
    "wor": 1,
    "trior": 1,
    "tri0": 0,
    "tri1": 0,
    "uwire": 0,
}


@pytest.mark.parametrize("net", SEVERAL)
def test_tables_4_2_to_4_4_who_may_have_several_drivers(net: str, told: Codes) -> None:
    """Only the wired types say what two strong drivers come to (4.6.2): no other may have them."""
    text = _board(f"{net} w;\nbuf g (w, a);\nbuf h (w, b);\nbuf i (y, w);")
    assert told(text) == ([] if SEVERAL[net] else ["N201"])


@pytest.mark.parametrize("net", ["wire", "tri", "tri0", "tri1", "wand", "wor", "trireg"])
def test_tables_4_2_to_4_4_three_state_outputs_share_a_net(net: str, told: Codes) -> None:
    text = _board(f"{net} w;\nbufif1 g (w, a, b);\nbufif0 h (w, b, a);\nbuf i (y, w);")
    assert told(text) == []


def test_4_6_6_an_unresolved_net_has_one_driver(told: Codes) -> None:
    text = _board("uwire w;\nbufif1 g (w, a, b);\n{}\nbuf i (y, w);")
    assert told(text.format("")) == []
    assert told(text.format("bufif0 h (w, b, a);")) == ["N201"]


@pytest.mark.parametrize(("net", "codes"), [("wire", ["N202"]), ("tri", ["N202"]), ("wand", ["N202"]), ("wor", ["N202"]), ("tri0", []), ("tri1", []), ("supply0", []), ("supply1", [])])  # fmt: skip
def test_4_6_4_and_4_6_5_nets_that_hold_a_value_without_driver(
    net: str, codes: list[str], told: Codes
) -> None:
    assert told(_board(f"{net} w;\nand g (y, a, w);")) == codes


@pytest.mark.parametrize("charge", ["", "(small)", "(medium)", "(large)"])
@pytest.mark.parametrize(
    "shape", ["", "[3:0]", "signed [0:3]", "vectored [3:0]", "scalared [3:0]", "vectored signed [3:0]"]
)
@pytest.mark.parametrize("delay", ["", "#3", "#(1, 2)", "#(0, 0, 50)", "#(1:2:3, 4)"])
def test_4_4_1_charge_strength(charge: str, shape: str, delay: str, told: Codes) -> None:
    assert told(_board(f"trireg {charge} {shape} {delay} w;\nbuf g (y, a);")) == []


STRENGTHS = [
    f"({one}, {other})"
    for low in ("supply0", "strong0", "pull0", "weak0", "highz0")
    for high in ("supply1", "strong1", "pull1", "weak1", "highz1")
    for one, other in ((low, high), (high, low))
    if not (low.startswith("highz") and high.startswith("highz"))
]


@pytest.mark.parametrize("strength", STRENGTHS)
def test_4_4_2_drive_strength_with_a_net_declaration_assignment(strength: str, instances: Lines) -> None:
    text = _board(f"wire {strength} w = a;\nbuf g (y, w);")
    assert "buf g: out=y, in=w" in instances(text)


@pytest.mark.parametrize(
    "line",
    [
        "wire (strong0, strong1) w;",
        "wire (small) w;",
        "trireg (strong0) w;",
        "wire (strong0, weak0) w = a;",
        "wire (highz0, highz1) w = a;",
        "wire (strong0) w = a;",
        "wire (strong2, strong1) w = a;",
        "wire #(1, 2, 3, 4) w;",
        "wire vectored w;",
        "wire scalared w;",
        "wire [3] w;",
        "wire [3:] w;",
        "wire unsigned w;",
        "wire w",
        "trireg (small) w = a;",
    ],
)
def test_a_2_1_3_net_declarations_that_the_syntax_has_not(line: str, told: Codes) -> None:
    found = told(_board(f"{line}\nbuf g (y, a);"))
    assert found
    assert found[0][0] in "VN"


@pytest.mark.parametrize(
    "shape", ["vectored [3:0]", "scalared [3:0]", "[3:0]", "vectored signed [3:0]", "scalared signed [3:0]"]
)
def test_4_3_2_vectored_and_scalared(shape: str, instances: Lines) -> None:
    """A vectored net may refuse selections (`may`, so they are read); both join whole."""
    text = (
        _board(f"wire {shape} w;\nsub u (w);\nbuf g (y, w[2]);")
        + "module sub(output [3:0] q);\nbuf g [3:0] (q, 4'b0101);\nendmodule\n"
    )
    found = instances(text)
    assert "buf g: out=y, in=w[2]" in found
    assert "buf u.g[2]: out=w[2], in=1'b1" in found


@pytest.mark.parametrize(
    ("bounds", "names"),
    [("[3:0]", "3210"), ("[0:3]", "0123"), ("[1:-2]", ("1", "0", "-1", "-2")), ("[5:5]", "5"), ("[1+1:3-2]", "21"), ("[-1:-2]", ("-1", "-2"))],
)  # fmt: skip
def test_4_3_1_bounds_may_be_any_whole_numbers(bounds: str, names: str, dumped: Callable[..., str]) -> None:
    text = f"module board(input {bounds} a, output y);\nbuf g (y, a[{names[0]}]);\nendmodule\n"
    assert dumped(text).splitlines()[: len(names)] == [f"input a[{name}] = a[{name}]" for name in names]


@pytest.mark.parametrize(
    ("line", "code"),
    [
        ("wire [1.5:0] w;", "N120"), ("wire [a:0] w;", "N120"), ("wire [1'bx:0] w;", "N120"), ("wire [P:0] w;", "N120"),
        ("wire [1/0:0] w;", "N120"), ("wire [1 << 40:0] w;", "N121"),
    ],
)  # fmt: skip
def test_4_3_1_bounds_that_are_refused(line: str, code: str, told: Codes) -> None:
    assert code in told(_board(f"{line}\nbuf g (y, a);"))


def test_4_9_arrays_of_nets(instances: Lines) -> None:
    """Words and bits of words of an array connect like nets; each word is a net of its own."""
    text = (
        _board(
            "wire [1:0] m [0:2];\nwire s [3:1];\nbuf g [1:0] (m[0], {b, a});\nbuf h (s[2], m[0][1]);\nsub u (m[2][1:0], m[0]);\nbuf i (y, s[2]);"
        )
        + "module sub(output [1:0] q, input [1:0] d);\nbuf g [1:0] (q, d);\nendmodule\n"
    )
    assert instances(text) == [
        "buf g[0]: out=m[0][0], in=a", "buf g[1]: out=m[0][1], in=b", "buf h: out=s[2], in=m[0][1]", "buf i: out=y, in=s[2]",
        "buf u.g[0]: out=m[2][0], in=m[0][0]", "buf u.g[1]: out=m[2][1], in=m[0][1]",
    ]  # fmt: skip


def test_4_9_arrays_of_several_dimensions(instances: Lines) -> None:
    text = _board("wire [1:0] m [0:1][5:4];\nbuf g (m[1][4][0], a);\nbuf h (y, m[1][4][0]);")
    assert instances(text) == ["buf g: out=m[1][4][0], in=a", "buf h: out=y, in=m[1][4][0]"]


@pytest.mark.parametrize(
    "use",
    [
        "buf h (y, m);",
        "buf h (y, m[0]);",
        "buf h (y, m[3][0]);",
        "buf h (y, m[0][2]);",
        "buf h (y, m[0:1]);",
        "sub u (m);",
        "assign m = 1;",
        "buf h (y, m[a][0]);",
    ],
)
def test_4_9_an_array_is_used_word_by_word(use: str, told: Codes) -> None:
    text = _board(f"wire [1:0] m [0:2];\n{use}") + "module sub(input [5:0] d);\nendmodule\n"
    assert [code for code in told(text, top="board") if code != "N202"]


@pytest.mark.parametrize("name", ["m[0]", "m[0][0:1]", "m[1][3]", "s[0]"])
def test_4_9_words_that_are_not_there(name: str, told: Codes) -> None:
    text = _board(f"wire [1:0] m [1:2];\nwire s [1:2];\nbuf h (y, {name});")
    assert [code for code in told(text) if code != "N202"]


@pytest.mark.parametrize(
    ("form", "implicit"),
    [
        ("buf g (w, a);", True), ("sub u (.d(a), .q(w));", True), ("sub u (a, w);", True), ("assign w = a;", True),
        ("pullup p (w);", True), ("sub u [0:0] (a, w);", True), ("wire v = w;", False), ("assign v = w;", False),
        ("buf g (w[0], a);", False), ("assign y = w & a;", False),
    ],
)  # fmt: skip
def test_4_5_where_a_name_makes_a_net(form: str, implicit: bool, told: Codes) -> None:
    """In a port connection, a terminal and on the left of an assignment: there, and nowhere else."""
    text = _board(form) + "module sub(input d, output q);\nbuf g (q, d);\nendmodule\n"
    found = [code for code in told(text, top="board") if code != "N202"]
    assert found in ([[]] if implicit else (["N130"], ["N131"]))


def test_4_5_an_implicit_net_lies_in_its_block(instances: Lines) -> None:
    text = _board(
        "genvar i;\nfor (i = 0; i < 2; i = i + 1) begin : b\nbuf g (w, a);\nbuf h (v, w);\nend\nbuf k (y, b[1].w);"
    )
    found = instances(text)
    assert "buf b[0].g: out=b[0].w, in=a" in found
    assert "buf k: out=y, in=b[1].w" in found


@pytest.mark.parametrize("net", ["wire", "tri", "tri0", "wand", "wor", "trireg (large)"])
@pytest.mark.parametrize(("delay", "rise", "fall"), [("#3", 3, 3), ("#(4, 7)", 4, 7), ("#(4, 7, 2)", 4, 7)])
def test_4_7_a_net_delay_comes_after_its_driver(
    net: str, delay: str, rise: float, fall: float, delays: Delays
) -> None:
    """Clause 7.14: a net delay is the time from any driver's change to that of the net."""
    text = _board(f"{net} {delay} w;\nbuf #10 g (w, a);\nbuf #0 h (y, w);")
    found = delays(text)
    total = {
        edge: sum(values[0] for key, values in found.items() if key.endswith(f" {edge}{edge}"))
        for edge in "rf"
    }
    assert total == {"r": (10 + rise) * NS, "f": (10 + fall) * NS}


def test_7_14_a_driver_from_another_module_is_refused_rather_than_not_delayed(told: Codes) -> None:
    """The delay is the net's, whoever drives it; by a name from another module that is not carried out."""
    text = (
        _board("sub u (y);\nbuf #10 g (u.w, a);")
        + "module sub(output y);\nwire #3 w;\nbuf #0 h (y, w);\nendmodule\n"
    )
    assert told(text) == ["N169"]


@pytest.mark.parametrize("bits", ["8'shff", "'bz", "16'o17", "4'd9", "'h_f", "1'b1"])
def test_3_5_numbers_may_be_connected(bits: str, told: Codes) -> None:
    text = (
        _board(f"sub u ({bits}, y);")
        + "module sub(input [3:0] d, output q);\nand g (q, d[0], d[3]);\nendmodule\n"
    )
    assert [code for code in told(text) if code not in ("N164", "N203")] == []
