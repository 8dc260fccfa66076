"""Places in macros and includes: the use is shown, or the argument, and where it was written."""

from __future__ import annotations

from pathlib import Path

import pytest

from tardigate.pipeline import Request, load
from tardigate.report.diagnostic_view import diagnostic_lines
from tardigate.report.looks import Look
from tardigate.source.diagnostic import Diagnostic
from tardigate.source.faults import InputRefusedError

HEAD = "module board(input a, output y, z);\n"


def refused(
    folder: Path, board: str, defines: tuple[tuple[str, str], ...] = (), **files: str
) -> list[Diagnostic]:
    for name, text in {"board": board, **files}.items():
        (folder / f"{name}.v").write_text(text, encoding="utf-8")
    with pytest.raises(InputRefusedError) as refusal:
        load(Request((str(folder / "board.v"),), defines=defines))
    return list(refusal.value.diagnostics)


def shown(told: Diagnostic) -> list[tuple[str, int, str, str]]:
    """Return file, line, marked text and label of each place of a diagnostic."""
    places = [(told.span, ""), *told.related]
    found = []
    for span, label in places:
        assert span is not None
        first = span.column - span.snippet_column
        found.append((Path(span.path).stem, span.line, span.snippet[first : first + span.length], label))
    return found


STEP = "written here, in the definition of `STEP`"


@pytest.mark.parametrize(
    ("define", "line", "wanted"),
    [
        ("`define STEP 3'b9", "assign y = `STEP;", [(3, "`STEP", ""), (1, "3'b9", STEP)]),
        ("`define STEP (3'b9)", "assign y = `STEP;", [(3, "`STEP", ""), (1, "3'b9", STEP)]),
        ("`define STEP 1 + 2 + 3'b9 // 3'b9", "\tassign y = `STEP;", [(3, "`STEP", ""), (1, "3'b9", STEP)]),
        ("`define STEP(p) p & 3'b9", "assign y = `STEP(a);", [(3, "`STEP(a)", ""), (1, "3'b9", STEP)]),
        ("`define STEP(p) p & p", "assign y = `STEP(3'b9);",
         [(3, "3'b9", ""), (1, "STEP", "`STEP` is defined here")]),
        ("`define STEP(p) {p}", "assign y = `STEP( 3'b9 );",
         [(3, "3'b9", ""), (1, "STEP", "`STEP` is defined here")]),
        ("`define STEP(p) (p) & 3'b9", "assign y = `STEP(a);", [(3, "`STEP(a)", ""), (1, "3'b9", STEP)]),
        ("`define OTHER `STEP\n`define STEP 3'b9", "assign y = `OTHER;",
         [(4, "`OTHER", ""), (2, "3'b9", STEP)]),
        ("`define STEP a\\\n & 3'b9", "assign y = `STEP;", [(4, "`STEP", ""), (2, "3'b9", STEP)]),
        ("`define \\STEP 3'b9", "assign y = `STEP;", [(3, "`STEP", ""), (1, "3'b9", STEP)]),
        ("// 漢\n`define STEP 3'b9", "/* 漢字 e\u0301 */ assign y = `STEP;",
         [(4, "`STEP", ""), (2, "3'b9", STEP)]),
    ],
)  # fmt: skip
def test_what_a_macro_gives_is_shown_at_its_use_and_where_it_is_written(
    tmp_path: Path, define: str, line: str, wanted: list[tuple[int, str, str]]
) -> None:
    (told,) = refused(tmp_path, f"{define}\n{HEAD}{line}\nendmodule\n")
    assert told.code == "V009"
    assert shown(told) == [("board", *place) for place in wanted]


def test_the_definition_in_force_is_shown(tmp_path: Path) -> None:
    again = "`undef STEP\n`define STEP 3'b8\nassign z = `STEP;\n`define STEP 3'b7\n"
    found = refused(tmp_path, f"`define STEP 3'b9\n{HEAD}assign y = `STEP;\n{again}endmodule\n")
    assert [shown(told)[1][1:3] for told in found] == [(1, "3'b9"), (5, "3'b8")]


def test_a_macro_of_the_command_line_is_shown(tmp_path: Path) -> None:
    (told,) = refused(tmp_path, f"{HEAD}assign y = `STEP;\nendmodule\n", (("STEP", "3'b9"),))
    assert shown(told) == [("board", 2, "`STEP", ""), ("defines given", 1, "3'b9", STEP)]


def test_a_macro_of_an_earlier_file_is_shown(tmp_path: Path) -> None:
    (tmp_path / "first.v").write_text("`define STEP 3'b9\n")
    (tmp_path / "board.v").write_text(f"{HEAD}assign y = `STEP;\nendmodule\n")
    with pytest.raises(InputRefusedError) as refusal:
        load(Request((str(tmp_path / "first.v"), str(tmp_path / "board.v"))))
    assert shown(refusal.value.diagnostics[0])[1] == ("first", 1, "3'b9", STEP)


def test_an_included_file_is_shown_with_the_way_to_it(tmp_path: Path) -> None:
    board = f'{HEAD}`include "outer.v"\nendmodule\n'
    found = refused(tmp_path, board, outer='wire w;\n`include "inner.v"\n', inner="assign y = 3'b9;\n`NONE\n")
    here = "included from here"
    ways = [("outer", 2, '`include "inner.v"', here)]
    assert shown(found[0]) == [("inner", 2, "`NONE", ""), *ways]
    found = refused(tmp_path, board, outer='wire w;\n`include "inner.v"\n', inner="assign y = 3'b9;\n")
    assert shown(found[0]) == [("inner", 1, "3'b9", ""), *ways, ("board", 2, '`include "outer.v"', here)]


@pytest.mark.parametrize("width", [80, 120])
def test_all_places_are_printed_with_carets_below_them(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, width: int
) -> None:
    monkeypatch.chdir(tmp_path)
    found = refused(Path(), f"`define STEP 3'b9\n{HEAD}\tassign y = `STEP;\nendmodule\n")
    lines = [line.plain for line in diagnostic_lines(found, Look(width))]
    assert lines[1:6] == [
        "     3 │     assign y = `STEP;",
        "       │                ^^^^^",
        f"    board.v:1:14, {STEP}",
        "     1 │ `define STEP 3'b9",
        "       │              ^^^^",
    ]
