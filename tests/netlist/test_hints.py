"""What diagnostics of the netlist and of delays say beside the fault: a name that is near, a place."""

from __future__ import annotations

import pytest

import tardigate
from tardigate.pipeline import Request, graph_of, load
from tardigate.source.diagnostic import Diagnostic
from tardigate.source.faults import InputRefusedError
from tardigate.source.files import SourceFile


def warnings(body: str) -> list[Diagnostic]:
    text = f"module board(input a, b, output y);\n{body}\nendmodule\n"
    return list(load(Request((SourceFile("board.v", text.encode()),))).warnings)


def test_a_misspelt_net_is_told_the_driven_one_that_is_near() -> None:
    (told,) = warnings("wire carry;\nnand #1 (carry, a, b);\nnand #1 (y, cary, a);")
    assert (told.code, told.hint) == ("N202", "Did you mean `carry`?")


@pytest.mark.parametrize("cary", ["wire cary;", "wire x, cary;"])
def test_a_declared_net_is_not_taken_for_another(cary: str) -> None:
    (told,) = warnings(f"{cary}\nwire carry;\nnand #1 (carry, a, b);\nnand #1 (y, cary, a);")
    assert (told.code, "Did you mean" in told.hint) == ("N202", False)


def test_a_missing_number_is_told_at_the_first_instance_that_needs_it() -> None:
    board = SourceFile(
        "board.v", b"module board(input a, output y, z);\nnot u1 (y, a);\nnot u2 (z, a);\nendmodule\n"
    )
    parts = SourceFile("f.parts", b"family F { gates ns { tpd not 1:2:-; } }")
    loaded = load(Request((board,), (parts,)))
    with pytest.raises(InputRefusedError) as refusal:
        graph_of(loaded)
    place = refusal.value.diagnostics[0].span
    assert place is not None
    assert (str(place), place.length) == ("board.v:2:5", 2)


LANES = """
module top(input a, output y);
  genvar i;
  for (i = 0; i < 4; i = i + 1) begin : lane
    wire good;
    buf b (good, a);
  end
  sub s1 (a, y);
  wire w = {};
endmodule
module sub(input a, output y);
  wire mid;
  buf g (mid, a), h (y, mid);
endmodule
"""


@pytest.mark.parametrize(
    ("path", "hint"),
    [
        ("lane[7].good", "`lane` is there from `lane[0]` to `lane[3]`."),
        ("lane.good", "`lane` is there from `lane[0]` to `lane[3]`."),
        ("lane[2].goot", "There is no net `goot` in `lane[2]`. Did you mean `good`?"),
        ("s1.mit", "There is no net `mit` in `s1`. Did you mean `mid`?"),
        ("s1.q.mid", "No block or instance `q` in `s1`."),
        ("lame[1].good", "No block or instance `lame[1]` in module `top`. Did you mean `lane`?"),
        ("s1[0].mid", "`s1` is there, with another index or none."),
    ],
)
def test_a_path_that_leads_nowhere_says_which_step(path: str, hint: str) -> None:
    with pytest.raises(tardigate.InputRefusedError) as refused:
        tardigate.read_text(LANES.format(path))
    found = [(told.code, told.hint) for told in refused.value.diagnostics]
    assert found == [("N137", hint)]


def test_modules_below_one_that_does_not_parse_are_read_all_the_same() -> None:
    upper = "module top(input a, output y);\n  sub u (a, y)\nendmodule\n"
    with pytest.raises(tardigate.InputRefusedError) as refused:
        tardigate.read_text(upper + "module sub(input a, output y);\n  buf g (y a);\nendmodule\n")
    found = [(told.code, told.span.line) for told in refused.value.diagnostics if told.span]
    assert found == [("V151", 2), ("V151", 5)]
