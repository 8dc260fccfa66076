"""The registers of one module, read without asking whether anything else in it is right."""

from __future__ import annotations

from collections.abc import Callable
from typing import NamedTuple

import pytest

from tardigate.netlist.build import build
from tardigate.netlist.names import Names
from tardigate.parts.kind import Edge, Kind
from tardigate.parts.library import Library
from tardigate.source.collector import Collector
from tardigate.source.files import SourceFile
from tardigate.syntax.preprocess import PreprocessOptions, preprocess
from tardigate.syntax.verilog_reader import read_unit


class Register(NamedTuple):
    """A register as recognised: nets by name; of each control net, level and whether it sets."""

    q: str
    clock: str
    edge: Edge
    controls: tuple[tuple[str, int, bool], ...]
    data: tuple[str, ...]
    kind: Kind


def _registers(text: str) -> list[Register]:
    collector = Collector()
    source = SourceFile("board.v", text.encode())
    unit = read_unit(preprocess(source, PreprocessOptions(), collector, None), collector)
    flat = build([unit], Library([], []), None, collector).flat
    names, found = Names(flat), []
    for inst in range(flat.instances):
        kind = flat.kinds[flat.inst_kind[inst]]
        if kind.name == "register":
            nets = [names.net(net) for net in flat.pin_net[flat.pin_start[inst] : flat.pin_start[inst + 1]]]
            controls = tuple(
                (nets[row], 1 - int(kind.from_edge[row]), bool(kind.to_edge[row] == Edge.RISE))
                for row in range(2, kind.hops)
            )
            data = tuple(nets[2 + len(controls) :])
            found.append(Register(nets[0], nets[1], Edge(int(kind.from_edge[0])), controls, data, kind))
    return found


@pytest.fixture(scope="session")
def registers() -> Callable[[str], list[Register]]:
    """`registers(text)`: those of the only module; raises InputRefusedError."""
    return _registers
