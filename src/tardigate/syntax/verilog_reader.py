"""Reads Verilog files: preprocessing, coarse lexing, outline, and the grammar for what is not plain.

Takes files, gives a `Unit` each, whose modules are parsed one by one when asked for. Does not elaborate.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from itertools import pairwise
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from tardigate.source.arrays import distinct
from tardigate.source.collector import Collector
from tardigate.source.diagnostic import Diagnostic
from tardigate.source.faults import InputRefusedError
from tardigate.source.placed import PlacedText
from tardigate.syntax import words
from tardigate.syntax.cuts import Cuts
from tardigate.syntax.outline import ModuleText, outline, used_names
from tardigate.syntax.plain import NAME, Plain, classify_names, find_plain, refine
from tardigate.syntax.preprocess import Preprocessed
from tardigate.syntax.scan import CLOSE, COMMA, OPEN, SEMICOLON, WORD, Scan, scan
from tardigate.syntax.tree import Module, PlainPorts, Run

_RUN, _PORTS, _OPAQUE = b"\x01", b"\x02", b"\x03"


class Unit(NamedTuple):
    """One file, scanned: its text, marks, plain statements and the modules that stand in it.

    `noted` has, by what the reader does about them, the numbers of names of certain words in the text:
    `procedural`, `unread`. `cells` are the names of modules with a specify block.
    """

    source: Preprocessed
    scan: Scan
    marks: NDArray[np.uint8]
    plain: Plain
    modules: tuple[ModuleText, ...]
    noted: Mapping[str, NDArray[np.int32]]
    cells: frozenset[str]

    @property
    def text(self) -> PlacedText:
        """The placed text."""
        return self.source.text

    def uses(self, known: Sequence[str]) -> dict[str, list[str]]:
        """Return, by module, which of the names in `known` it may use as modules."""
        return used_names(self.scan, self.marks, self.modules, known)


def read_unit(source: Preprocessed, collector: Collector) -> Unit:
    """Scan a preprocessed file; tells of what stands outside modules."""
    found = scan(source.text.data)
    marks = refine(found, classify_names(found))
    modules = outline(found, marks, source.text, collector)
    groups = {"procedural": words.PROCEDURAL, "unread": (*words.UNREAD, *words.SWITCHES)}
    noted = {note: found.names.find_all(group) for note, group in groups.items()}
    return Unit(
        source, found, marks, find_plain(found, marks), modules,
        {note: numbers[numbers >= 0] for note, numbers in noted.items() if (numbers >= 0).any()},
        _cells(found, modules),
    )  # fmt: skip


def _cells(found: Scan, modules: tuple[ModuleText, ...]) -> frozenset[str]:
    """Return the modules that hold the word `specify`."""
    number = found.names.find("specify")
    if number < 0 or not modules:
        return frozenset()
    hits = found.word == number
    if found.escaped is not None:
        hits &= ~found.escaped
    first = found.word_of[np.array([module.first for module in modules])]
    owners = distinct(np.searchsorted(first, np.flatnonzero(hits).astype(first.dtype), "right") - 1)
    return frozenset(modules[owner].name for owner in owners.tolist() if owner >= 0)


def parse_module(unit: Unit, module: ModuleText, *, bulk: bool = True) -> Module:
    """Parse one module; with `bulk` plain statements go past the grammar.

    Raises InputRefusedError: V001 for what the grammar does not accept, V004 and V005 for constructs that are
    not read. Procedural code that is no register stands as `Opaque` in a module with a specify block.
    """
    _refuse(unit, module, "V005", "unread")
    opaque: list[tuple[str, int, int]] = []
    if "procedural" in unit.noted and _first(unit, module, "procedural") is not None:
        opaque = _opaque(unit, module)
    coarse = _coarse(unit, module, bulk, opaque)
    from tardigate.syntax.verilog_parser import parse  # lark only when something is parsed

    tree = parse(coarse.text, coarse.cuts, coarse.runs, coarse.ports, unit.text)
    if any(_declares_ports(unit, run) for run in tree.generated):
        return parse_module(unit, module, bulk=False)  # the grammar says where
    return tree


def _declares_ports(unit: Unit, run: Run) -> bool:
    """Tell whether a run has a declaration of ports: they cannot stand in generate (A.1.4)."""
    heads = unit.plain.head[run.first : run.last][unit.plain.is_declaration[run.first : run.last]]
    return bool((heads != unit.scan.names.find("wire")).any()) if len(heads) else False


def _first(unit: Unit, module: ModuleText, note: str) -> int | None:
    """Return the first of a module's words that is noted so."""
    found = unit.scan
    window = slice(int(found.word_of[module.first]), int(found.word_of[module.stop - 1]) + 1)
    hits = np.isin(found.word[window], unit.noted[note])
    if found.escaped is not None:
        hits &= ~found.escaped[window]
    places = np.flatnonzero(hits)
    return window.start + int(places[0]) if len(places) else None


def _refuse(unit: Unit, module: ModuleText, code: str, note: str) -> None:
    """Refuse a module with a word that is noted so."""
    word = _first(unit, module, note) if note in unit.noted else None
    if word is not None:
        stop = int(unit.scan.word_stop[word])
        name = unit.scan.names.text(int(unit.scan.word[word]))
        span = unit.text.span(stop - len(name), stop)
        raise InputRefusedError((Diagnostic.of(code, span, construct=name, module=module.name),))


def _opaque(unit: Unit, module: ModuleText) -> list[tuple[str, int, int]]:
    """Return the stretches of procedural code that are no register; refuse them where no cell is (V004)."""
    from tardigate.syntax.procedural import stretches  # few modules have any
    from tardigate.syntax.verilog_parser import accepts

    found = []
    for word, start, stop in stretches(unit.scan, unit.marks, module):
        text = unit.scan.data[start:stop].decode("latin-1")
        if word == "always" and accepts(f"module m; {text} endmodule"):
            continue
        if module.name not in unit.cells:
            span = unit.text.span(start, start + len(word))
            raise InputRefusedError((Diagnostic.of("V004", span, construct=word, module=module.name),))
        found.append((word, start, stop))
    return found


class _Coarse(NamedTuple):
    """A module's text with stretches replaced by marks, the way back, and what the marks stand for."""

    text: str
    cuts: Cuts
    runs: dict[int, Run]
    ports: dict[int, PlainPorts]


def _coarse(unit: Unit, module: ModuleText, bulk: bool, opaque: Sequence[tuple[str, int, int]]) -> _Coarse:
    """Replace plain stretches and procedural code by marks."""
    data = unit.scan.data
    marked = [(start, stop, _OPAQUE) for _, start, stop in opaque]
    header = _plain_header(unit, module) if bulk else None
    if header is not None:
        marked.append((header[0], header[1], _PORTS))
    runs = _placed_runs(unit, module) if bulk else []
    runs = [run for run in runs if not any(start <= run[0].at < stop for _, start, stop in opaque)]
    marked += [(run.at, stop, _RUN) for run, stop in runs]
    if not marked:
        return _Coarse(data[module.start : module.end].decode("latin-1"), Cuts([0], [module.start]), {}, {})
    pieces: list[bytes] = []
    cuts = Cuts([], [])
    length, at = 0, module.start
    for start, stop, mark in sorted(marked):
        cuts.coarse.extend((length, length + start - at))
        cuts.placed.extend((at, start))
        pieces.extend((data[at:start], mark))
        length += start - at + len(mark)
        at = stop
    cuts.coarse.append(length)
    cuts.placed.append(at)
    pieces.append(data[at : module.end])
    ports = {} if header is None else {header[0]: header[2]}
    return _Coarse(b"".join(pieces).decode("latin-1"), cuts, {run.at: run for run, _ in runs}, ports)


def _placed_runs(unit: Unit, module: ModuleText) -> list[tuple[Run, int]]:
    """Return the unbroken runs of plain statements inside a module, and the offset where each ends."""
    at, plain = unit.scan.at, unit.plain
    return [
        (Run(first, last, int(at[plain.first[first]])), int(at[plain.stop[last - 1] - 1]) + 1)
        for first, last in _runs(plain, module)
    ]


def _runs(plain: Plain, module: ModuleText) -> list[tuple[int, int]]:
    """Return the unbroken runs of plain statements inside a module."""
    low, high = np.searchsorted(plain.first, np.array((module.first, module.stop), np.int32)).tolist()
    if low == high:
        return []
    breaks = np.flatnonzero(plain.first[low + 1 : high] != plain.stop[low : high - 1]) + low + 1
    bounds = [low, *breaks.tolist(), high]
    return list(pairwise(bounds))


def _plain_header(unit: Unit, module: ModuleText) -> tuple[int, int, PlainPorts] | None:
    """Return where the header's port list begins and ends when it only lists names."""
    marks, found = unit.marks, unit.scan
    first = module.first
    ends = np.flatnonzero(marks[first : module.stop] == SEMICOLON)
    if not len(ends):
        return None
    stop = first + int(ends[0])
    if stop - first < 5 or marks[first + 1] != NAME or marks[first + 2] != OPEN or marks[stop - 1] != CLOSE:
        return None
    names, commas = marks[first + 3 : stop - 1 : 2], marks[first + 4 : stop - 1 : 2]
    if (names != NAME).any() or (commas != COMMA).any() or found.kind[stop - 2] != WORD:
        return None
    word = int(found.word_of[first + 3])
    return int(found.at[first + 2]), int(found.at[stop - 1]) + 1, PlainPorts(word, word + len(names))
