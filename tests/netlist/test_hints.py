"""What diagnostics of the netlist and of delays say beside the fault: a name that is near, a place."""

from __future__ import annotations

import pytest

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
