"""What parts files are refused for, beyond the samples of the codes."""

from collections.abc import Callable

import pytest

Told = Callable[..., list[str]]


def part(body: str, name: str = "P") -> str:
    return f"family F {{\npart {name} {{\n{body}\n}}\n}}\n"


def test_several_faults_of_one_file_are_told_together(told: Told) -> None:
    text = part("inputs A;\noutput Y = B;\noutput Z = A;\ntimes nn { tpd A => Z 1; }")
    assert told(text) == ["P004 0:4", "P002 0:6"]


def test_a_faulty_part_does_not_hide_those_of_another(told: Told) -> None:
    text = "family F {\npart P {\ninputs A; output Y = B;\n}\npart Q {\ninputs A; output Y = A;\n}\n}"
    assert told(text) == ["P004 0:3", "P014 0:5"]


def test_a_part_may_stand_in_one_file_alone(told: Told) -> None:
    text = part("inputs A;\noutput Y = A;\ntimes ns { tpd A => Y 1; }")
    assert told(text, text) == ["P008 1:2"]
    assert told(text, "family G {\nalias P = P;\n}") == ["P008 1:2"]


def test_a_syntax_fault_does_not_call_for_names_of_its_file(told: Told) -> None:
    assert told("family F { part P { }", "family G { alias Q = P; }") == ["P001 0:1"]


@pytest.mark.parametrize(
    ("rows", "code"),
    [
        ("tpd A => Y 1; tpd A, B => Y 2;", "P008"),
        ("tpd A, B => Y 1; tpd posedge A => Y 2;", "P008"),
        ("tpd A => Y when B 1; tpd A => Y when (B) 2; tpd B => Y 1;", "P008"),
        ("tpd A, B => Y 1; tPZH A => Y 1;", "P013"),
        ("tpd A, B => Y 1; tpd A => Y when ~B 1;", "P013"),
        ("tpd A, B -=> Y 1;", "P012"),
        ("tpd A => Y 1; tPLH B => Y 1;", "P014"),
        ("tPLH A, B => Y 1;", "P014"),
        ("tpd A, B => Y when C 1;", "P004"),
    ],
)
def test_rows_of_an_and_gate(told: Told, rows: str, code: str) -> None:
    found = told(part(f"inputs A, B;\noutput Y = A & B;\ntimes ns {{ {rows} }}"))
    assert {line.split()[0] for line in found} == {code}


@pytest.mark.parametrize(
    ("body", "code"),
    [
        ("inputs CK; output Q; register posedge CK { Q = D; }", "P004"),
        ("inputs D, CK[1:0]; output Q; register posedge CK { Q = D; }", "P006"),
        ("inputs D; output Q, CK; register posedge CK { Q = D; }", "P006"),
        ("inputs D, CK; output Q; register posedge CK { D = D; }", "P006"),
        ("inputs D[1:0], CK; output Q; register posedge CK { Q = D; }", "P007"),
        ("inputs D, CK; output Q; register posedge CK { Q = D; Q = ~D; }", "P008"),
        ("inputs D, CK; output Q; register posedge CK { Q = D; } register negedge CK { Q = D; }", "P008"),
        ("inputs D, CK; output Q = D; register posedge CK { Q = D; }", "P008"),
        ("inputs D, CK; output Q; register posedge CK { Q = D; clear D; clear D; }", "P008"),
        ("inputs D, CK; output Q; register posedge CK { Q = D; }", "P014"),
        ("inputs D, EN; output Q; latch high EN { Q = D; } times ns { tpd EN => Q 1; }", "P014"),
        ("inputs A; outputs X = A, Y = X;", "P006"),
        ("inputs A, A; outputs Y = A;", "P008"),
        ("inputs A; outputs Y = A[0];", "P005"),
        ("inputs A[0:3]; outputs Y = A[3:1];", "P005"),
        ("inputs A[1:0]; outputs Y = A ? 0 : 1;", "P007"),
        ("inputs A[1:0]; outputs Y[1:0] = A when A;", "P007"),
        ("inputs A; outputs Y = 4'b1;", "P007"),
        ("inputs A; outputs Y = 'b1;", "P025"),
        ("inputs A; outputs Y = 2'b111;", "P025"),
        ("inputs A[20:0]; outputs Y = A[A];", "P027"),
        ("inputs A[4095:0]; outputs Y[4095:0]; times ns { tpd A *> Y 1; }", "P027"),
        ("inputs A[3:0]; outputs Y; times ns { tpd A => Y 1; }", "P007"),
        ("inputs A[99999999999999999999:0]; outputs Y = A[0];", "P027"),
        ("package 0; inputs A;", "P003"),
        ("inputs A 3 V; outputs Y = 0;", "P002"),
        ("inputs A; outputs Y = 0; checks ns { tsu A before A 1; tsu A before A 2; }", "P008"),
        ("inputs A, B[1:0]; outputs Y = 0; checks ns { tsu A before B 1; }", "P006"),
        ("inputs A; outputs Y = 0; checks ns { tw A high -1; }", "P011"),
    ],
)
def test_bodies_of_parts(told: Told, body: str, code: str) -> None:
    assert code in {line.split()[0] for line in told(part(body))}


def test_a_hold_time_may_be_negative(told: Told) -> None:
    body = "inputs D, CK; output Q; register posedge CK { Q = D; } times ns { tpd CK => Q 1; }"
    assert told(part(body + "checks ns { th D after CK -2:-1:0; tsu D before CK -1; }")) == []


def test_a_constant_output_needs_no_time(told: Told) -> None:
    assert told(part("outputs Y = 1;")) == []


@pytest.mark.parametrize(
    ("text", "code"),
    [
        ("family F { wires ns { fanout(0) 1; } }", "P003"),
        ("family F { wires ns { fanout(1) 1; fanout(1) 2; } }", "P008"),
        ('family F { wires ns { net "a" 1; net "a" 2; } }', "P008"),
        ('family F { wires ns { net "a" 12 kg at 1 ns/cm; } }', "P002"),
        ('family F { wires ns { net "a" 12 cm at 1 ns/kg; } }', "P002"),
        ("family F { wires ns { load 3 cm each fanout; } }", "P002"),
        ("family F { gates ns { tpd not(2) 1; } }", "P023"),
        ("family F { gates ns { tpd nand(0) 1; } }", "P023"),
        ('family F { operators ns { ten "&" 1; } }', "P024"),
        ('family F { operators ns { tpd "+" 1; } }', "P022"),
        ("family F { alias A = B; alias B = C; alias C = A; }", "P017"),
        ("family F { alias A = A; }", "P017"),
        ("family F { equivalent A, B; }", "P016"),
        ("family F { default ns { tpd 1; tPHL 2; } }", "P028"),
    ],
)
def test_families(told: Told, text: str, code: str) -> None:
    assert {line.split()[0] for line in told(text)} == {code}


@pytest.mark.parametrize(
    "body",
    [
        "inputs A; outputs Y = A; times ns { tpd A => Y 1; }",
        "inputs A, G; outputs Y = A when G; times ns { tpd A => Y 1; ten G => Y 1; tdis G => Y 1; }",
        "inputs D, CK, E; outputs Q; register posedge CK { Q = E & D; } times ns { tpd CK => Q 1; }",
        "inputs A, B; outputs Y = A; times ns { tpd A => Y 1; } checks ns { tw B high 1; }",
        "inputs A, B; outputs Y; times ns { tpd A => Y when B 1; }",
        "inputs A[1:0]; outputs Y = A[0]; times ns { tpd A[0] => Y 1; }",
        "inputs A;",
    ],
)
def test_a_pin_that_is_used_is_not_warned_of(told: Told, body: str) -> None:
    assert told(part(body)) == []


@pytest.mark.parametrize(
    "body",
    [
        "inputs A,\nB; outputs Y = A; times ns { tpd A => Y 1; }",
        "inputs A,\nB; outputs Y = A; times ns { tpd A, B => Y 1; }",
        "inputs A,\nB[3:0]; outputs Y; times ns { tpd A => Y 1; }",
    ],
)
def test_a_pin_that_nothing_uses_is_warned_of(told: Told, body: str) -> None:
    assert told(part(body)) == ["P034 0:4"]
