"""Names as a user writes them find the vertices that they mean."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
import pytest
from numpy.typing import NDArray

from tardigate.pipeline import Request, graph_of, load
from tardigate.report.pick import Picker
from tardigate.source.faults import InputRefusedError

BOARD = """\
`timescale 1ns/1ps
module pair(input p, q, output [1:0] y);
  wire inner;
  nand #1 u1 (inner, p, q);
  not #1 u2 (y[0], inner), (y[1], q);
endmodule
module passing(input i, output [1:0] o);
  pair deep (i, i, o);
endmodule
module gating(input i, e, output o);
  wire clock;
  and #1 u1 (clock, i, e);
  FF f2 (.D(e), .CK(clock), .Q(o));
endmodule
module board(input a, input [1:0] b, input ck, output [1:0] s, t, output r, g);
  pair left (b[0], a, s);
  passing right (b[1], t);
  gating gated (ck, a, g);
  FF f1 (.D(s[0]), .CK(ck), .Q(r));
endmodule
"""
PARTS = """\
family TRIAL "for this test" {
  part FF "register" {
    inputs D, CK; output Q;
    register posedge CK { Q = D; }
    times ns { tpd CK => Q 2:4:6; }
  }
}
"""


class Found(NamedTuple):
    picker: Picker
    words: dict[int, str]


@pytest.fixture(scope="module")
def found(tmp_path_factory: pytest.TempPathFactory) -> Found:
    folder = tmp_path_factory.mktemp("pick")
    (folder / "board.v").write_text(BOARD)
    (folder / "trial.parts").write_text(PARTS)
    loaded = load(Request((str(folder / "board.v"),), (str(folder / "trial.parts"),)))
    graph = graph_of(loaded)
    words = {net: loaded.names.net(net) for net in range(graph.nets)}
    for at, instance in enumerate(graph.clock_pin_instance.tolist()):
        words[graph.nets + at] = f"clock of {loaded.names.instance(instance)}"
    return Found(Picker(loaded.flat, loaded.names, graph), words)


def _words(found: Found, vertices: NDArray[np.int64] | None) -> set[str]:
    assert vertices is not None
    return {found.words[int(vertex) // 2] for vertex in vertices}


@pytest.mark.parametrize(
    ("name", "nets"),
    [
        ("a", {"a"}),
        ("b", {"b[0]", "b[1]"}),
        ("b[1]", {"b[1]"}),
        ("left.inner", {"left.inner"}),
        ("left.p", {"b[0]"}),
        ("left.y", {"s[0]", "s[1]"}),
        ("right.deep.y[1]", {"t[1]"}),
        ("right.o[0]", {"t[0]"}),
        ("left.u1", {"left.inner"}),
        ("left.u1.in1", {"b[0]"}),
        ("left.u1.out", {"left.inner"}),
        ("left.not:5", {"s[1]"}),
        ("*.inner", {"left.inner", "right.deep.inner"}),
        ("right.*.u1.out", {"right.deep.inner"}),
        ("left.u*.out", {"left.inner", "s[0]"}),
        ("s*", {"s[0]", "s[1]"}),
    ],
)
def test_a_name_means_the_same_net_for_sources_and_sinks(found: Found, name: str, nets: set[str]) -> None:
    assert _words(found, found.picker.sources((name,))) == nets
    assert _words(found, found.picker.sinks((name,))) == nets


def test_a_register_is_left_at_its_clock_pin_and_reached_at_its_data_pin(found: Found) -> None:
    for name in ("f1", "f1.CK"):
        assert _words(found, found.picker.sources((name,))) == {"clock of f1"}
    assert _words(found, found.picker.sinks(("f1",))) == {"s[0]"}
    assert _words(found, found.picker.sinks(("f1.CK",))) == {"ck"}
    assert _words(found, found.picker.sinks(("f1.Q",))) == {"r"}


def test_a_net_as_source_stands_for_the_register_clock_pins_on_it_too(found: Found) -> None:
    for name in ("ck", "c*"):
        assert _words(found, found.picker.sources((name,))) == {"ck", "clock of f1"}
        assert _words(found, found.picker.sinks((name,))) == {"ck"}
    for name in ("gated.clock", "gated.u1.out", "gated.u1"):
        assert _words(found, found.picker.sources((name,))) == {"gated.clock", "clock of gated.f2"}


def test_only_edges_that_launch_begin_a_trail_at_a_clock_pin(found: Found) -> None:
    vertices = found.picker.sources(("f1",))
    assert vertices is not None
    assert (vertices % 2).tolist() == [0]


def test_several_names_add_up_and_none_means_all(found: Found) -> None:
    assert _words(found, found.picker.sources(("a", "b[0]"))) == {"a", "b[0]"}
    assert found.picker.sources(()) is None
    assert found.picker.sinks(()) is None


@pytest.mark.parametrize(
    ("name", "hint"),
    [
        ("left.iner", "Did you mean `left.inner`?"),
        ("left", "`left` is an instance of a module: `left.*` means all that is in it."),
        ("right.deep", "`right.deep` is an instance of a module: `right.deep.*` means all that is in it."),
        ("nowhere.*", "`*` stands for any text: `--from 'alu.*'`."),
        ("", "`*` stands for any text: `--from 'alu.*'`."),
    ],
)
def test_a_name_of_nothing_is_refused_with_a_way_out(found: Found, name: str, hint: str) -> None:
    with pytest.raises(InputRefusedError) as refused:
        found.picker.sources((name,))
    assert [(told.code, told.hint) for told in refused.value.diagnostics] == [("U104", hint)]


def test_all_unknown_names_are_told_at_once(found: Found) -> None:
    with pytest.raises(InputRefusedError) as refused:
        found.picker.sinks(("x1", "a", "x2"))
    assert len(refused.value.diagnostics) == 2
