"""Carets stand below what is meant, whatever stands before it, and nothing is wider than the terminal."""

from __future__ import annotations

from hypothesis import given, strategies as st
from rich.cells import cell_len

from tardigate.report.diagnostic_view import diagnostic_lines, untabbed
from tardigate.report.looks import Look
from tardigate.source.collector import Collector
from tardigate.source.diagnostic import Diagnostic, Related
from tardigate.source.span import span_in

LOOK = Look(80)
pieces = st.text(st.sampled_from("ab \t漢é;"), max_size=120)


def _plain(diagnostics: list[Diagnostic], look: Look = LOOK, most: int | None = None) -> list[str]:
    return [line.plain for line in diagnostic_lines(diagnostics, look, most)]


@given(pieces, pieces, st.integers(48, 130))
def test_carets_stand_below_what_is_meant(before: str, after: str, width: int) -> None:
    line = f"{before}MEANT{after}".encode()
    start = len(before.encode())
    fault = Diagnostic("V123", "error", "wrong", span_in("b.v", b"x\n" + line + b"\n", start + 2, start + 7))
    lines = _plain([fault], Look(width))
    assert lines[0] == f"b.v:2:{len(before) + 1}  error V123: wrong"
    shown, carets = lines[1], lines[2]
    assert carets.count("^") == 5
    at = shown.index("MEANT")
    assert cell_len(shown[:at]) == carets.index("^")
    assert max(cell_len(row) for row in lines[:3]) <= width


@given(st.text(st.sampled_from("a\t漢"), max_size=20), st.integers(0, 9))
def test_a_tab_ends_on_a_stop(text: str, at: int) -> None:
    text_so_far = untabbed(text + "\t", at)
    assert (at + cell_len(text_so_far)) % 4 == 0
    assert text_so_far.replace(" ", "") == text.replace("\t", "")


def test_a_diagnostic_tells_all_it_knows() -> None:
    data = b"wire n;\n  nand u3 (y, m);\n"
    fault = Diagnostic(
        "V123",
        "error",
        "nothing is called `m`",
        span_in("board.v", data, 22, 23),
        "Did you mean `n`?",
        (Related(span_in("board.v", data, 5, 6), "declared here"),),
        12,
    )
    assert _plain([fault]) == [
        "board.v:2:15  error V123: nothing is called `m`",
        "     2 │   nand u3 (y, m);",
        "       │               ^",
        "    board.v:1:6, declared here",
        "     1 │ wire n;",
        "       │      ^",
        "    and 11 more like it",
        "    hint: Did you mean `n`?",
        "",
        "12 errors; `tardigate explain V123` says more about V123",
    ]


def test_a_place_is_never_cut_so_that_it_can_be_copied() -> None:
    path = "folder/" * 20 + "board.v"
    lines = _plain([Diagnostic("V123", "warning", "odd " * 40, span_in(path, b"x", 0, 1))])
    assert lines[0] == f"{path}:1:1"
    assert max(len(line) for line in lines[1:]) <= 80


def test_only_the_first_are_shown_when_asked_and_all_are_counted() -> None:
    faults = [Diagnostic(f"N10{i}", "warning", "odd", None, "", (), 2) for i in range(5)]
    lines = _plain(faults, most=2)
    assert [line for line in lines if line.startswith("warning")] == [
        "warning N100: odd",
        "warning N101: odd",
    ]
    assert "and 3 more, which `tardigate survey` shows" in lines
    assert lines[-1] == "10 warnings; `tardigate explain N100` says more about N100"


def test_no_control_character_of_the_input_reaches_the_terminal() -> None:
    data = b"nand \x1b[31m u1;\n"
    fault = Diagnostic("V123", "error", "odd \x1b[0m", span_in("b\x1b.v", data, 5, 6), "\x07")
    assert all(line.isprintable() for line in _plain([fault]))


def test_plain_terminals_get_ascii_and_carets_in_the_right_place() -> None:
    data = "漢字 nand u1 (漢);".encode()
    start = data.index(b"u1")
    lines = _plain(
        [Diagnostic("V123", "error", "odd", span_in("b.v", data, start, start + 2))], Look(80, plain=True)
    )
    assert all(line.isascii() for line in lines)
    assert lines[1].index("u1") == lines[2].index("^")


def test_ten_thousand_faults_are_a_bounded_text_and_a_number() -> None:
    collector = Collector()
    for at in range(10_000):
        collector.tell("V101", span_in("b.v", b"x" * 10_000, at, at + 1), name="x", hint="")
    for width in (80, 120):
        lines = _plain(list(collector.all()), Look(width), most=20)
        assert len(lines) < 100
        assert lines[-1].startswith("10000 errors;")
        assert max(map(len, lines)) <= width
