"""What the published checks share: a design's figures in the unit of the publication, hops, and part texts.

Each check names its source beside it; `from memory` marks figures that were not read again, `recomputed`
those that were reckoned again by other means before they were written down here.
"""

from __future__ import annotations

from collections.abc import Callable

import pytest

import tardigate
from tardigate.analysis.model import Grade
from tardigate.design import Settled

PER_NS = {"ns": 1.0, "ps": 1000.0}

Hops = dict[tuple[str, str, str, str], tuple[float | None, float | None, float | None]]


class Figures:
    """When nets settle and stir after the sources, in the unit asked for."""

    def __init__(self, settled: Settled, unit: str) -> None:
        self.settled, self.unit = settled, unit

    def _scaled(self, ns: float | None) -> float:
        assert ns is not None, "the net never changes"
        return round(ns * PER_NS[self.unit], 9)

    def settles(self, net: str) -> float:
        return self._scaled(self.settled.net(net).settles_ns)

    def stirs(self, net: str) -> float:
        return self._scaled(self.settled.net(net).stirs_ns)

    def both(self, net: str) -> tuple[float, float]:
        """Return (stirs, settles), the order of min and max."""
        return self.stirs(net), self.settles(net)

    def rise_and_fall(self, net: str) -> tuple[float, float]:
        """Return when the net has settled after rising, and after falling."""
        times = self.settled.net(net)
        return self._scaled(times.settles_rise_ns), self._scaled(times.settles_fall_ns)

    def earliest_rise_and_fall(self, net: str) -> tuple[float, float]:
        times = self.settled.net(net)
        return self._scaled(times.stirs_rise_ns), self._scaled(times.stirs_fall_ns)


def _figures(
    verilog: str,
    parts: str = "",
    unit: str = "ns",
    sources: tuple[str, ...] = (),
    grade: Grade = "span",
    condition: str | None = None,
) -> Figures:
    family = parts and f"family PUBLISHED {{ {parts} }}"
    design = tardigate.read_text(verilog, parts=family, grade=grade, condition=condition)
    return Figures(design.settle(grade, sources=sources), unit)


def _hops(verilog: str, parts: str = "", condition: str | None = None) -> Hops:
    family = parts and f"family PUBLISHED {{ {parts} }}"
    graph = tardigate.read_text(verilog, parts=family, condition=condition).networkx()
    found: Hops = {}
    for (_, edge_in), (_, edge_out), hop in graph.edges(data=True):
        key = (hop["from_pin"], edge_in, hop["to_pin"], edge_out)
        assert key not in found, "one instance, one hop a pair of edges"
        found[key] = (hop["delay_min_ns"], hop["delay_typ_ns"], hop["delay_max_ns"])
    return found


@pytest.fixture(scope="session")
def figures() -> Callable[..., Figures]:
    """`figures(verilog, parts, unit, sources, grade, condition)`; `parts` is the inside of a family."""
    return _figures


@pytest.fixture(scope="session")
def hops() -> Callable[..., Hops]:
    """`hops(verilog, parts, condition)`: (pin, edge, pin, edge) → (min, typ, max), ns, of one part."""
    return _hops


@pytest.fixture(scope="session")
def flip_flop() -> Callable[..., str]:
    """`flip_flop("30:-:50", "ps")`: the entry of a D flip-flop `FF` with that clock-to-output delay."""
    return lambda cell, unit="ns": (
        "part FF { inputs D, CK; outputs Q; register posedge CK { Q = D; } "
        f"times {unit} {{ tpd CK => Q {cell}; }} }}"
    )


@pytest.fixture(scope="session")
def block() -> Callable[..., str]:
    """`block("ALU", "A, B", "Y", 200, "ps")`: a part whose every output follows every input after a delay."""
    return lambda name, inputs, outputs, delay, unit="ns": (
        f"part {name} {{ inputs {inputs}; outputs {outputs}; "
        f"times {unit} {{ tpd {inputs} *> {outputs} {delay}; }} }}"
    )
