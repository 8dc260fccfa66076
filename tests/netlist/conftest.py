"""Elaboration for tests: text in, the flat design's canonical text or the codes out, both ways at once."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence

import pytest

from tardigate.netlist.build import build
from tardigate.netlist.check import check_structure
from tardigate.netlist.constants import Value
from tardigate.netlist.declare import Declarer
from tardigate.netlist.dump import dump
from tardigate.netlist.flat import Flat
from tardigate.netlist.lookup import Lookup
from tardigate.netlist.modules import collect
from tardigate.netlist.names import Names
from tardigate.parts.kind import Edge
from tardigate.parts.library import Library
from tardigate.source.collector import Collector
from tardigate.source.diagnostic import Diagnostic
from tardigate.source.faults import InputRefusedError
from tardigate.source.files import SourceFile
from tardigate.syntax import tree
from tardigate.syntax.preprocess import PreprocessOptions, preprocess
from tardigate.syntax.verilog_reader import Unit, read_unit

Result = tuple[Flat | None, tuple[Diagnostic, ...]]


def _elaborate(text: str, parts: str, top: str | None, bulk: bool) -> Result:
    collector = Collector()
    try:
        files = [SourceFile("family.parts", parts.encode())] if parts else []
        library = Library.read(files, None, collector)
        source = SourceFile("board.v", text.encode())
        unit = read_unit(preprocess(source, PreprocessOptions(), collector, None), collector)
        collector.refuse()
        built = build([unit], library, top, collector, bulk=bulk)
        check_structure(built.flat, Names(built.flat), collector, complete=not built.undescribed)
        collector.refuse()
    except InputRefusedError as refusal:
        return None, refusal.diagnostics
    return built.flat, collector.all()


def _both(text: str, parts: str = "", top: str | None = None) -> Result:
    quick, slow = (_elaborate(text, parts, top, bulk) for bulk in (True, False))
    assert quick[1] == slow[1]
    if quick[0] is not None and slow[0] is not None:
        assert dump(quick[0], places=True) == dump(slow[0], places=True)
    return quick


def _flat(text: str, parts: str = "", top: str | None = None) -> Flat:
    flat, told = _both(text, parts, top)
    assert flat is not None, told
    return flat


def _delays(text: str) -> dict[str, list[float]]:
    flat = _flat(text)
    names, found = Names(flat), {}
    for inst in range(flat.instances):
        kind = flat.kinds[flat.inst_kind[inst]]
        for row in range(len(kind.hop_from)):
            tail, head = kind.pins[kind.hop_from[row]], kind.pins[kind.hop_to[row]]
            edges = "".join(Edge(edge[row]).name[0].lower() for edge in (kind.from_edge, kind.to_edge))
            found[f"{names.instance(inst)} {tail}>{head} {edges}"] = kind.delays[row].tolist()
    return found


def _module(text: str, name: str) -> tuple[tree.Module, Unit, Collector]:
    collector = Collector()
    source = SourceFile("board.v", text.encode())
    unit = read_unit(preprocess(source, PreprocessOptions(), collector, None), collector)
    return collect([unit], lambda _: False, collector, True).tree(name), unit, collector


def _declared(
    text: str, overrides: Mapping[str, Value], codes: Sequence[str] | None = ()
) -> dict[str, Value]:
    module, unit, collector = _module(text, "m")
    values = Declarer(unit, Lookup(unit.scan.names), collector).parameters(module, overrides)
    assert codes is None or [told.code for told in collector.all()] == list(codes)
    return values


def _trees(texts: Sequence[str]) -> list[tree.Expression]:
    lines = "".join(f"localparam P{i} = {text};\n" for i, text in enumerate(texts))
    module = _module(f"module m;\n{lines}endmodule\n", "m")[0]
    parameters = [item for item in module.items if isinstance(item, tree.Parameter)]
    return [named.value for item in parameters for named in item.names if named.value is not None]


@pytest.fixture(scope="session")
def trees() -> Callable[[Sequence[str]], list[tree.Expression]]:
    """`trees(texts)`: constant expressions as trees."""
    return _trees


@pytest.fixture(scope="session")
def declared() -> Callable[..., dict[str, Value]]:
    """`declared(text, overrides, codes=())`: the values of the parameters of `m`; any codes if None."""
    return _declared


@pytest.fixture(scope="session")
def elaborate() -> Callable[..., Flat]:
    """`elaborate(text, parts="", top=None)`: the flat design, the same by both ways of reading."""
    return _flat


@pytest.fixture(scope="session")
def dumped() -> Callable[..., str]:
    """`dumped(text, parts="", top=None)`: the flat design as canonical text."""
    return lambda *words, **more: dump(_flat(*words, **more))


@pytest.fixture(scope="session")
def instances() -> Callable[..., list[str]]:
    """`instances(text, …)`: the lines of the part instances only."""

    def lines(*words: str, **more: str) -> list[str]:
        ways = ("input", "output", "inout")
        text = dump(_flat(*words, **more))
        return [line for line in text.splitlines() if line and line.split()[0] not in ways]

    return lines


@pytest.fixture(scope="session")
def told() -> Callable[..., list[str]]:
    """`told(text, …)`: the codes of all diagnostics, the same by both ways of reading."""
    return lambda *words, **more: [diagnostic.code for diagnostic in _both(*words, **more)[1]]


@pytest.fixture(scope="session")
def delays() -> Callable[[str], dict[str, list[float]]]:
    """`delays(text)["g1 in>out rf"]`: min, typ and max in fs of a hop of a part instance."""
    return _delays


CELL_WAYS = ("input", "output", "inout", "reg")


def _cell_board(ports: str, body: str, block: str) -> str:
    """Return a design that holds one instance of a cell, pin by pin on ports of the same names."""
    names = [word for word in ports.replace(",", " ").split() if word not in CELL_WAYS and word[0] != "["]
    pins = ", ".join(f".{name}({name})" for name in names)
    return (
        f"`timescale 1 ns / 1 ps\nmodule board({ports});\ncell_ u ({pins});\nendmodule\n"
        f"module cell_({ports});\n{body}\nspecify\n{block}\nendspecify\nendmodule\n"
    )


@pytest.fixture(scope="session")
def cell_board() -> Callable[..., str]:
    """`cell_board(ports, body, block)`: a design that holds one instance of such a cell."""
    return _cell_board


@pytest.fixture
def cell(delays: Callable[[str], dict[str, list[float]]]) -> Callable[..., dict[str, tuple[float, ...]]]:
    """`cell("input a, output y", body, block)["a>y rf"]`: min, typ and max in ns of the cell's hops."""

    def act(ports: str, body: str, block: str) -> dict[str, tuple[float, ...]]:
        found = delays(_cell_board(ports, body, block))
        return {key.removeprefix("u "): tuple(t / 10**6 for t in each) for key, each in found.items()}

    return act
