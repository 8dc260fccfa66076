"""The whole tool as a list of passes. No printing, and no logic between the passes.

Takes a request, gives the loaded design; from that the graph, times, trails and assumptions.
"""

from __future__ import annotations

import os
from collections.abc import Mapping
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from tardigate.analysis.assumptions import Assumption, find_assumptions
from tardigate.analysis.audit import audit
from tardigate.analysis.check import refuse_missing
from tardigate.analysis.model import Grade, Times, Trail
from tardigate.analysis.sweep import sweep
from tardigate.analysis.trails import fastest, slowest
from tardigate.graph.build import build as build_graph
from tardigate.graph.model import Graph
from tardigate.netlist.build import build
from tardigate.netlist.check import check_structure
from tardigate.netlist.flat import Flat
from tardigate.netlist.names import Names
from tardigate.netlist.strangers import Undescribed
from tardigate.parts.kind import Kind, Origin
from tardigate.parts.library import Library
from tardigate.source.arrays import distinct
from tardigate.source.collector import Collector
from tardigate.source.diagnostic import Diagnostic, did_you_mean
from tardigate.source.files import SourceFile, read_file
from tardigate.syntax.preprocess import Preprocessed, PreprocessOptions, preprocess
from tardigate.syntax.verilog_reader import Unit, read_unit
from tardigate.syntax.words import GATES

FLAT_ENCODING = "latin-1"
"""What `flat_text_of` is to be encoded in: names keep the bytes that they have in the source."""


class Request(NamedTuple):
    """What is asked for: files and how to read them.

    Files are paths, or texts that are at hand. `bulk` False sends every statement through the grammar: slow,
    and the same.
    """

    files: tuple[str | SourceFile, ...]
    parts: tuple[str | SourceFile, ...] = ()
    top: str | None = None
    include_dirs: tuple[str, ...] = ()
    defines: tuple[tuple[str, str], ...] = ()
    condition: str | None = None
    grade: Grade = "span"
    bulk: bool = True

    def paths(self, files: tuple[str | SourceFile, ...]) -> tuple[str, ...]:
        """Return the paths of `files` or `parts`."""
        return tuple(file if isinstance(file, str) else file.path for file in files)


class Loaded(NamedTuple):
    """A design, read and checked for structure.

    `missing` are the kinds in use that have no delay, `undescribed` the modules that nobody describes (of
    those in `behavioural` there is but procedural code);
    `units_assumed` counts delays in the source without a `timescale`.
    """

    request: Request
    top: str
    flat: Flat
    names: Names
    library: Library
    modules: int
    module_names: tuple[str, ...]
    warnings: tuple[Diagnostic, ...]
    missing: tuple[Kind, ...]
    undescribed: tuple[Undescribed, ...]
    units_assumed: int
    behavioural: Mapping[str, tuple[Diagnostic, ...]]


def load(request: Request) -> Loaded:
    """Read files, parts, elaborate, check the structure. Raises InputRefusedError."""
    collector = Collector()
    library = Library.read([_file(file) for file in request.parts], request.condition, collector)
    units = _units(request, collector)
    collector.refuse()
    built = build(units, library, request.top, collector, bulk=request.bulk)
    names = Names(built.flat)
    check_structure(built.flat, names, collector, complete=not built.undescribed)
    collector.refuse()
    used = distinct(built.flat.inst_kind)
    missing = tuple(built.flat.kinds[k] for k in used if built.flat.kinds[k].origin == Origin.MISSING)
    return Loaded(
        request, built.top, built.flat, names, library, built.modules,
        tuple(module.name for unit in units for module in unit.modules), collector.warnings(), missing,
        built.undescribed, built.units_assumed, built.behavioural,
    )  # fmt: skip


def graph_of(loaded: Loaded) -> Graph:
    """Return the graph. Raises InputRefusedError for undescribed modules, missing delays and loops."""
    collector = Collector()
    _tell_undescribed(loaded, collector)
    if loaded.missing:
        collector.tell("N302", count=len(loaded.missing), kinds=tuple(map(_without_delay, loaded.missing)))
    collector.refuse()
    graph = build_graph(loaded.flat, collector)
    collector.refuse()
    refuse_missing(loaded.flat, graph, loaded.request.grade, collector)
    return graph


def _tell_undescribed(loaded: Loaded, collector: Collector) -> None:
    for stranger in loaded.undescribed:
        if stranger.name in loaded.behavioural:
            for diagnostic in loaded.behavioural[stranger.name]:
                collector.add(diagnostic)
            continue
        known = [*GATES, *loaded.library.part_names(), *loaded.module_names]
        hint = did_you_mean(stranger.name, known) if collector.room("N301") else None
        collector.tell("N301", stranger.place, name=stranger.name, count=stranger.count, hint=hint)


def _without_delay(kind: Kind) -> str:
    return f"`{kind.name}` ({kind.words or f'{kind.inputs} in'})"


def times_of(graph: Graph, grade: Grade, sources: NDArray[np.integer] | None = None) -> Times:
    """Return when each vertex settles and stirs."""
    return sweep(graph, grade, sources)


def trails_of(
    loaded: Loaded,
    graph: Graph,
    grade: Grade,
    count: int,
    slow: bool = True,
    sources: NDArray[np.integer] | None = None,
    sinks: NDArray[np.integer] | None = None,
    times: Times | None = None,
) -> tuple[Trail, ...]:
    """Return the slowest (or fastest) trails, each added up again by other means.

    `times`: the sweep from the same sources, where it is at hand. Raises InternalFaultError when the two
    ways differ.
    """
    times = sweep(graph, grade, sources) if times is None else times
    found = (slowest if slow else fastest)(graph, grade, count, sources, sinks, times)
    whole = sources is None and sinks is None
    audit(loaded.flat, graph, found, grade, slow, times, whole)
    return tuple(found)


def assumptions_of(loaded: Loaded, graph: Graph, grade: Grade, times: Times) -> tuple[Assumption, ...]:
    """Return what the figures rest on that nobody stated."""
    found = find_assumptions(loaded.flat, graph, grade, times)
    kinds, rated = loaded.flat.kinds, loaded.library.rated()
    at_rated = np.array([kind.group == "part" and kind.name in rated for kind in kinds], np.bool_)
    more = (
        Assumption("at_rated_load", int(at_rated[loaded.flat.inst_kind].sum())),
        Assumption("wire_rows_left_out", loaded.library.wire_rows()),
        Assumption("units_assumed", loaded.units_assumed),
    )
    return (*found, *(assumption for assumption in more if assumption.count))


def draft_of(loaded: Loaded) -> str:
    """Return a parts file skeleton for all that has no delay yet."""
    from tardigate.parts.draft import UndescribedModule, draft_text  # few runs need it

    strangers = [
        UndescribedModule(s.name, tuple((pin, s.ways.get(pin)) for pin in s.pins), s.pins)
        for s in loaded.undescribed
    ]
    return draft_text(loaded.missing, strangers)


def flat_text_of(loaded: Loaded) -> str:
    """Return the design as one flat module of Verilog, and the definitions of cells that it uses.

    Where there are such, the files are read once more. Raises InputRefusedError for undescribed modules.
    """
    from tardigate.netlist.modules import collect  # few runs need them
    from tardigate.netlist.write_cells import cell_texts
    from tardigate.netlist.write_flat import write_flat

    collector = Collector()
    _tell_undescribed(loaded, collector)
    collector.refuse()
    described = loaded.library.describes
    kinds = [loaded.flat.kinds[number] for number in distinct(loaded.flat.inst_kind)]
    names = {kind.name for kind in kinds if kind.group == "part" and not described(kind.name)}
    units = _units(loaded.request, collector) if names else []
    cells = cell_texts(collect(units, described, collector, loaded.request.bulk), names)
    return write_flat(loaded.flat, loaded.top, cells)


def _units(request: Request, collector: Collector) -> list[Unit]:
    options = PreprocessOptions(request.include_dirs, dict(request.defines))
    units: list[Unit] = []
    before: Preprocessed | None = None
    paths = [os.path.normpath(file) for file in request.files if isinstance(file, str)]
    for path in dict.fromkeys(path for path in paths if paths.count(path) > 1):
        collector.tell("U112", path=path)
    collector.refuse()
    for file in request.files:
        before = preprocess(_file(file), options, collector, before)
        units.append(read_unit(before, collector))
    return units


def _file(file: str | SourceFile) -> SourceFile:
    return read_file(file) if isinstance(file, str) else file
