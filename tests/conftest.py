"""Builders that several houses' tests share: a kind and a flat design, written in a line each.

Tests take them as fixtures, for test modules do not import one another.
"""

from __future__ import annotations

import importlib.util
import sys
from collections.abc import Callable, Sequence
from functools import cache
from pathlib import Path
from types import ModuleType

import numpy as np
import pytest

from tardigate.netlist.flat import CONSTANT_NAMES, CONSTANTS, OPEN, Flat, Port
from tardigate.netlist.template import Template
from tardigate.parts.kind import Kind, Origin, Way
from tardigate.source.files import SourceFile
from tardigate.source.placed import PlacedText

Hop = tuple[str, str, str, tuple[float, float, float]]
SENSES = {"+": ("rr", "ff"), "-": ("rf", "fr"), "x": ("rr", "rf", "fr", "ff")}
NUMBERS = {"0": 0, "1": 1, "x": 2, "z": 3, ".": OPEN}


def _kind(
    name: str,
    pins: str,
    *hops: Hop,
    launches: str = "",
    sinks: str = "",
    origin: Origin = Origin.PARTS,
    three_state: bool = False,
) -> Kind:
    before, _, after = pins.partition(">")
    names = (*before.split(), *after.split())
    ways = [Way.INPUT] * len(before.split()) + [Way.OUTPUT] * len(after.split())
    rows = [
        (names.index(tail), names.index(head), "rf".index(edges[0]), "rf".index(edges[1]), delay)
        for tail, sense, head, delay in hops
        for edges in SENSES.get(sense, (sense,))
    ]
    return Kind(
        name=name,
        group="part" if launches else "gate",
        pins=names,
        ways=np.array(ways, np.uint8),
        hop_from=np.array([row[0] for row in rows], np.int32),
        hop_to=np.array([row[1] for row in rows], np.int32),
        from_edge=np.array([row[2] for row in rows], np.uint8),
        to_edge=np.array([row[3] for row in rows], np.uint8),
        delays=np.array([row[4] for row in rows], np.float64).reshape(-1, 3),
        launches=np.array([names[row[0]] in launches.split() for row in rows], np.bool_),
        sinks=np.array([names.index(pin) for pin in sinks.split()], np.int32),
        origin=origin,
        register=bool(launches),
        three_state=three_state,
    )


def _flat(ports: str, *parts: tuple[str, Kind, str]) -> Flat:
    lines = [f"{name} {kind.name} {nets}\n" for name, kind, nets in parts]
    kinds = tuple({id(kind): kind for _, kind, _ in parts}.values())
    number_of = {id(kind): number for number, kind in enumerate(kinds)}
    nets = dict(NUMBERS)
    words = [word for _, _, nets_of in parts for word in nets_of.split()]
    names = [name for name in ports.replace(">", " ").split() if name != "<"] + words
    for name in names:
        nets.setdefault(name, len(nets) - 1)
    net_names = [*CONSTANT_NAMES, *(name for name in nets if name not in NUMBERS)]
    inst_kind = np.array([number_of[id(kind)] for _, kind, _ in parts], np.int32)
    pin_net = np.array([nets[word] for word in words], np.int32)
    pin_start = np.cumsum([0, *(len(kind.pins) for _, kind, _ in parts)]).astype(np.int64)
    assert len(pin_net) == pin_start[-1], "as many nets as pins"
    text = PlacedText.whole(SourceFile("board.v", "".join(lines).encode()))
    places = np.cumsum([0, *(len(line.encode()) for line in lines)]).astype(np.int64)[:-1]
    template = Template(
        module="board",
        parameters="",
        text=text,
        place=0,
        ports=(),
        net_names=net_names,
        net_place=np.zeros(len(net_names), np.int64),
        kind=inst_kind,
        pin_start=pin_start,
        pin_net=pin_net,
        inst_names=[name for name, _, _ in parts],
        inst_place=places,
        children=(),
    )
    zero = np.zeros(1, np.int32)
    return Flat(
        kinds, inst_kind, pin_start, pin_net, len(net_names), tuple(_ports(ports, nets)), (template,), zero,
        zero - 1, ("",), np.array([0, len(parts)]), np.array([0, len(net_names)]), np.arange(len(net_names)),
    )  # fmt: skip


def _ports(ports: str, nets: dict[str, int]) -> Sequence[Port]:
    before, _, after = ports.partition(">")
    after, _, both = after.partition("<")
    sides = ((Way.INPUT, before), (Way.OUTPUT, after), (Way.INOUT, both))
    return [Port(name, way, nets[name]) for way, side in sides for name in side.split()]


@pytest.fixture(scope="session")
def make_kind() -> Callable[..., Kind]:
    """`make_kind("nand", "A B > Y", ("A", "-", "Y", (1, 2, 3)), …)`.

    A hop is input pin, sense, output pin and triple in fs; the sense is `+`, `-`, `x` (both ways) or one pair
    of edges (`rf`). `launches` names clock pins, `sinks` the pins where trails end.
    """
    return _kind


@pytest.fixture(scope="session")
def make_flat() -> Callable[..., Flat]:
    """`make_flat("a b > y", ("u1", nand, "a b y"), …)`: ports, then each part's name, kind and nets.

    Ports are inputs, `>`, outputs, and after a `<` inouts. Nets are named in the order of the kind's pins;
    `0 1 x z` are the constants, `.` is an open pin. Nets are numbered from 4 as they appear.
    """
    assert CONSTANTS == 4
    return _flat


@cache
def _random_text(name: str = "random_verilog") -> ModuleType:
    path = Path(__file__).with_name(f"{name}.py")
    spec = importlib.util.spec_from_file_location(name, path)
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    sys.modules[spec.name] = module  # dataclasses look their module up
    spec.loader.exec_module(module)
    return module


_random_text("random_pieces")  # random_structure imports it


@pytest.fixture(scope="session")
def random_verilog() -> Callable[..., str]:
    """`random_verilog(seed, size=8, wild=False)`: the text of a random design whose top is `top`."""
    return _random_text().design  # type: ignore[no-any-return]


@pytest.fixture(scope="session")
def random_structure() -> Callable[..., str]:
    """`random_structure(seed, size=5, fault="", modules="")`: the text of a random design."""
    return _random_text("random_structure").structure  # type: ignore[no-any-return]


@pytest.fixture(scope="session")
def mutated() -> Callable[..., bytes]:
    """`mutated(text, seed, parts=False)`: a text with one to four changes."""
    return _random_text().mutated  # type: ignore[no-any-return]


@pytest.fixture(scope="session")
def circuit_folder() -> Path:
    """The folder of circuit files that the package circuitgraph carries; its code is never imported."""
    spec = importlib.util.find_spec("circuitgraph")
    assert spec is not None
    assert spec.submodule_search_locations
    return Path(spec.submodule_search_locations[0]) / "netlists"
