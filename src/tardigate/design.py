"""The Python face of tardigate: read a design, ask when it settles and which trails set the limit.

Takes files or texts, gives objects with names and times in nanoseconds, made when asked for. Raises
InputRefusedError where the command line would exit with 2, InternalFaultError where it would exit with 3.

>>> import tardigate
>>> design = tardigate.read_text(
...     "module latch_enable(input a, b, output y); wire n; nand g1 (n, a, b); not g2 (y, n); endmodule",
...     parts="family DEMO { gates ns { tPLH nand 1:2:3; tPHL nand 1:2:4; tpd not 0.5:1:1.5; } }",
... )
>>> settled = design.settle()
>>> settled.outputs()[0].settles_ns
5.5
>>> trail = design.slowest()[0]
>>> [f"{hop.instance} {hop.delay_ns}" for hop in trail.hops], trail.total_ns
(['g1 4.0', 'g2 1.5'], 5.5)
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from functools import cached_property
from pathlib import Path
from typing import TYPE_CHECKING, Any

from tardigate.analysis.check import refuse_missing
from tardigate.analysis.model import GRADES, Grade, Times
from tardigate.graph.export import to_networkx
from tardigate.graph.model import Graph
from tardigate.netlist.flat import CONSTANTS
from tardigate.parts.kind import Edge
from tardigate.pipeline import Loaded, Request, draft_of, graph_of, load, times_of, trails_of
from tardigate.report.model import HopRecord, SinkRecord, TrailRecord
from tardigate.report.pick import Picker
from tardigate.report.records import Records
from tardigate.source.collector import Collector
from tardigate.source.diagnostic import Diagnostic
from tardigate.source.files import SourceFile

if TYPE_CHECKING:
    import networkx

_NS = 1e6
"""Femtoseconds in a nanosecond."""

Names = str | Iterable[str]


@dataclass(frozen=True, slots=True)
class Hop:
    """One hop of a trail: through `instance` (a `kind`) onto `net`.

    Edges are `rise` or `fall`; `delay_ns` is its delay, `over_ns` when it is over, counted from the source;
    `place` is `file:line:column` of the instance.
    """

    instance: str
    kind: str
    from_pin: str
    from_edge: str
    to_pin: str
    to_edge: str
    net: str
    delay_ns: float
    over_ns: float
    place: str


@dataclass(frozen=True, slots=True)
class Trail:
    """A chain of hops from a source to a sink, each with the edge it has there."""

    source: str
    source_edge: str
    sink: str
    sink_edge: str
    total_ns: float
    hops: tuple[Hop, ...]


@dataclass(frozen=True, slots=True)
class SinkTimes:
    """When an output port or register pin settles and stirs, ns; None for an edge that never comes."""

    name: str
    settles_rise_ns: float | None
    settles_fall_ns: float | None
    stirs_rise_ns: float | None
    stirs_fall_ns: float | None

    @property
    def settles_ns(self) -> float | None:
        """The later edge."""
        return _last((self.settles_rise_ns, self.settles_fall_ns))

    @property
    def stirs_ns(self) -> float | None:
        """The earlier edge."""
        return _first((self.stirs_rise_ns, self.stirs_fall_ns))


class Settled:
    """When everything settles and stirs, in one grade.

    >>> import tardigate
    >>> text = "module m(input a, output y, z); buf #(1:2:3) (y, a); not #1 (z, y); endmodule"
    >>> design = tardigate.read_text(text)
    >>> [(sink.name, sink.settles_ns, sink.stirs_ns) for sink in design.settle().outputs()]
    [('z', 4.0, 2.0), ('y', 3.0, 1.0)]
    >>> design.settle("typ").net("y").settles_ns
    2.0
    """

    def __init__(self, design: Design, grade: Grade, times: Times) -> None:
        self.design, self.grade, self.times = design, grade, times
        """`times` holds the arrays (see `tardigate.analysis.model.Times`), one entry a vertex, fs."""

    def outputs(self) -> tuple[SinkTimes, ...]:
        """Return the times of each output port bit, slowest first."""
        return tuple(_sink(record) for record in self.design._records.outputs(self.times, None).shown)

    def register_pins(self) -> tuple[SinkTimes, ...]:
        """Return the times of each data and control pin of a register, slowest first."""
        return tuple(_sink(record) for record in self.design._records.register_pins(self.times, None).shown)

    def net(self, name: str) -> SinkTimes:
        """Return the times of a net, port or pin; of a vector, those of all its bits together.

        Raises InputRefusedError (U104) for an unknown name.
        """
        vertices = self.design._picker.sinks((name,))
        assert vertices is not None
        if not len(vertices):
            return SinkTimes(name, None, None, None, None)
        records = [
            _sink(self.design._records.net(name, self.times, net))
            for net in sorted({v // 2 for v in vertices.tolist()})
        ]
        return SinkTimes(
            name,
            _last(record.settles_rise_ns for record in records),
            _last(record.settles_fall_ns for record in records),
            _first(record.stirs_rise_ns for record in records),
            _first(record.stirs_fall_ns for record in records),
        )


class Design:
    """A design that was read; made by `read` and `read_text`.

    >>> import tardigate
    >>> design = tardigate.read_text("module m(input a, output y); buf #1 g1 (y, a); endmodule")
    >>> design.top, design.instances, design.nets
    ('m', 1, 2)
    """

    def __init__(self, loaded: Loaded) -> None:
        self.loaded = loaded

    @property
    def top(self) -> str:
        """The name of the top module."""
        return self.loaded.top

    @property
    def instances(self) -> int:
        """Number of part instances, gates and operators included."""
        return self.loaded.flat.instances

    @property
    def nets(self) -> int:
        """Number of nets, without the constants."""
        return self.loaded.flat.nets - CONSTANTS

    @property
    def warnings(self) -> tuple[Diagnostic, ...]:
        """What was told while reading."""
        return self.loaded.warnings

    @cached_property
    def graph(self) -> Graph:
        """The graph in columns. Raises InputRefusedError for missing delays and combinational loops."""
        return graph_of(self.loaded)

    def settle(self, grade: Grade = "span", *, sources: Names = ()) -> Settled:
        """Return when every net settles and stirs after the sources (default: all) change at 0."""
        self._check(grade)
        return Settled(self, grade, times_of(self.graph, grade, self._picker.sources(_names(sources))))

    def slowest(
        self, count: int = 1, *, grade: Grade = "span", sources: Names = (), sinks: Names = ()
    ) -> tuple[Trail, ...]:
        """Return the `count` slowest trails, slowest first, from and to given names (default: all)."""
        return self._trails(count, True, grade, sources, sinks)

    def fastest(
        self, count: int = 1, *, grade: Grade = "span", sources: Names = (), sinks: Names = ()
    ) -> tuple[Trail, ...]:
        """Return the `count` fastest trails, fastest first.

        >>> import tardigate
        >>> text = "module m(input a, b, output y); not #(1:2:3) (n, b); and #(1:2:3) (y, a, n); endmodule"
        >>> [(trail.source, trail.total_ns) for trail in tardigate.read_text(text).fastest(2)]
        [('a', 1.0), ('a', 1.0)]
        """
        return self._trails(count, False, grade, sources, sinks)

    def _trails(
        self, count: int, slow: bool, grade: Grade, sources: Names, sinks: Names
    ) -> tuple[Trail, ...]:
        self._check(grade)
        begin, end = self._picker.sources(_names(sources)), self._picker.sinks(_names(sinks))
        found = trails_of(self.loaded, self.graph, grade, count, slow, begin, end)
        return tuple(_trail(self._records.trail(trail, None, True)) for trail in found)

    def _check(self, grade: Grade) -> None:
        """Raise ValueError for an unknown grade, InputRefusedError (G102) for one that lacks numbers."""
        _check_grade(grade)
        refuse_missing(self.loaded.flat, self.graph, grade, Collector())

    def networkx(self) -> networkx.MultiDiGraph[Any]:
        """Return the flat graph: nodes are (net, edge), edges are hops with names and delays in ns.

        >>> import tardigate
        >>> graph = tardigate.read_text("module m(input a, output y); not #1 g1 (y, a); endmodule").networkx()
        >>> [(tail, head, hop["instance"], hop["delay_max_ns"]) for tail, head, hop in graph.edges(data=True)]
        [(('a', 'rise'), ('y', 'fall'), 'g1', 1.0), (('a', 'fall'), ('y', 'rise'), 'g1', 1.0)]
        """
        return to_networkx(self.loaded.flat, self.graph, self.loaded.names)

    def draft(self) -> str:
        """Return a parts file skeleton for all that has no delay yet."""
        return draft_of(self.loaded)

    @cached_property
    def _records(self) -> Records:
        return Records(self.loaded.flat, self.loaded.names, self.graph)

    @cached_property
    def _picker(self) -> Picker:
        return Picker(self.loaded.flat, self.loaded.names, self.graph)


def read(
    *files: str | Path,
    parts: str | Path | Iterable[str | Path] = (),
    top: str | None = None,
    condition: str | None = None,
    include: Iterable[str | Path] = (),
    define: Mapping[str, str] | None = None,
    grade: Grade = "span",
) -> Design:
    """Read Verilog files and parts files.

    `top`: the top module, where several could be; `condition`: a column of the parts files (default: the
    first); `include`: folders for `include` directives; `define`: macros; `grade`: what missing delays are
    judged by. Raises InputRefusedError.
    """
    _check_grade(grade)
    several = [parts] if isinstance(parts, str | Path) else parts
    return Design(
        load(
            Request(
                tuple(str(file) for file in files),
                tuple(str(file) for file in several),
                top,
                tuple(str(folder) for folder in include),
                tuple((define or {}).items()),
                condition,
                grade,
            )
        )
    )


def read_text(
    verilog: str,
    *,
    parts: str = "",
    top: str | None = None,
    condition: str | None = None,
    grade: Grade = "span",
) -> Design:
    """Read a design from a text, its parts from another; see `read`."""
    _check_grade(grade)
    file = SourceFile("design.v", verilog.encode())
    described = (SourceFile("design.parts", parts.encode()),) if parts else ()
    return Design(load(Request((file,), described, top, condition=condition, grade=grade)))


def _last(times: Iterable[float | None]) -> float | None:
    return max((time for time in times if time is not None), default=None)


def _first(times: Iterable[float | None]) -> float | None:
    return min((time for time in times if time is not None), default=None)


def _check_grade(grade: str) -> None:
    if grade not in GRADES:
        raise ValueError(f"grade {grade!r} is none of {', '.join(GRADES)}")


def _names(names: Names) -> tuple[str, ...]:
    return (names,) if isinstance(names, str) else tuple(names)


def _edge(edge: Edge) -> str:
    return "rise" if edge == Edge.RISE else "fall"


def _ns(time: float | None) -> float | None:
    return None if time is None else time / _NS


def _sink(record: SinkRecord) -> SinkTimes:
    return SinkTimes(record.name, *map(_ns, record.settles), *map(_ns, record.stirs))


def _trail(record: TrailRecord) -> Trail:
    hops = tuple(_hop(hop) for hop in record.hops if isinstance(hop, HopRecord))
    source, sink = record.source, record.sink
    return Trail(source.name, _edge(source.edge), sink.name, _edge(sink.edge), record.total / _NS, hops)


def _hop(hop: HopRecord) -> Hop:
    return Hop(
        hop.instance, hop.kind, hop.from_pin, _edge(hop.from_edge), hop.to_pin, _edge(hop.to_edge), hop.net,
        hop.delay / _NS, hop.over / _NS, str(hop.place),
    )  # fmt: skip
