"""Reads Verilog files: preprocessing, coarse lexing, outline, and the grammar for what is not plain.

Takes files, gives a `Unit` each, whose modules are parsed one by one when asked for. Does not elaborate.
"""

from __future__ import annotations

from itertools import pairwise
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

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

_RUN, _PORTS = b"\x01", b"\x02"


class Unit(NamedTuple):
    """One file, scanned: its text, marks, plain statements and the modules that stand in it.

    `unread` lists the codes, and numbers of names, of words in the text that begin what is not read.
    """

    source: Preprocessed
    scan: Scan
    marks: NDArray[np.uint8]
    plain: Plain
    modules: tuple[ModuleText, ...]
    unread: tuple[tuple[str, NDArray[np.int32]], ...]

    @property
    def text(self) -> PlacedText:
        """The placed text."""
        return self.source.text

    def uses(self, module: ModuleText) -> list[str]:
        """Return the names that may be modules which `module` uses."""
        return used_names(self.scan, self.marks, module)


def read_unit(source: Preprocessed, collector: Collector) -> Unit:
    """Scan a preprocessed file; tells of what stands outside modules."""
    found = scan(source.text.data)
    marks = refine(found, classify_names(found))
    modules = outline(found, marks, source.text, collector)
    return Unit(source, found, marks, find_plain(found, marks), modules, _unread(found))


def _unread(found: Scan) -> tuple[tuple[str, NDArray[np.int32]], ...]:
    """Return the names in the text that begin what is not read, with the codes that refuse them."""
    groups = (("V004", words.PROCEDURAL), ("V005", (*words.UNREAD, *words.SWITCHES)))
    numbers = [(code, found.names.find_all(group)) for code, group in groups]
    return tuple((code, those[those >= 0]) for code, those in numbers if (those >= 0).any())


def parse_module(unit: Unit, module: ModuleText, *, bulk: bool = True) -> Module:
    """Parse one module; with `bulk` plain statements go past the grammar.

    Raises InputRefusedError: V001 for what the grammar does not accept, V004 and V005 for constructs that are
    not read.
    """
    _refuse_unread(unit, module)
    text, cuts, runs, ports = _coarse(unit, module, bulk)
    from tardigate.syntax.verilog_parser import parse  # lark only when something is parsed

    return parse(text, cuts, runs, ports, unit.text)


def _refuse_unread(unit: Unit, module: ModuleText) -> None:
    """Refuse a module with constructs that are not read: procedural code, or parts of the standard."""
    found = unit.scan
    window = slice(int(found.word_of[module.first]), int(found.word_of[module.stop - 1]) + 1)
    names = found.word[window]
    for code, numbers in unit.unread:
        hits = np.isin(names, numbers)
        if found.escaped is not None:
            hits &= ~found.escaped[window]
        places = np.flatnonzero(hits)
        if len(places):
            word = window.start + int(places[0])
            stop = int(found.word_stop[word])
            name = found.names.text(int(found.word[word]))
            span = unit.text.span(stop - len(name), stop)
            raise InputRefusedError((Diagnostic.of(code, span, construct=name, module=module.name),))


def _coarse(
    unit: Unit, module: ModuleText, bulk: bool
) -> tuple[str, Cuts, dict[int, Run], dict[int, PlainPorts]]:
    """Return the module's text with plain stretches replaced by marks, and what the marks stand for."""
    data, found = unit.scan.data, unit.scan
    if not bulk:
        return data[module.start : module.end].decode("latin-1"), Cuts([0], [module.start]), {}, {}
    pieces: list[bytes] = []
    cuts = Cuts([], [])
    length, at = 0, module.start

    def cut(start: int, stop: int, mark: bytes) -> None:
        nonlocal length, at
        cuts.coarse.append(length)
        cuts.placed.append(at)
        pieces.extend((data[at:start], mark))
        length += start - at
        cuts.coarse.append(length)
        cuts.placed.append(start)
        length += len(mark)
        at = stop

    ports: dict[int, PlainPorts] = {}
    header = _plain_header(unit, module)
    if header is not None:
        start, stop, span = header
        ports[start] = span
        cut(start, stop, _PORTS)
    runs: dict[int, Run] = {}
    for first, last in _runs(unit.plain, module):
        start = int(found.at[unit.plain.first[first]])
        runs[start] = Run(first, last, start)
        cut(start, int(found.at[unit.plain.stop[last - 1] - 1]) + 1, _RUN)
    cuts.coarse.append(length)
    cuts.placed.append(at)
    pieces.append(data[at : module.end])
    return b"".join(pieces).decode("latin-1"), cuts, runs, ports


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
