"""The definitions that a flat file needs beside its own module: cells and user-defined primitives.

Takes the modules of a design and the names that it uses as parts, gives their texts, and those of what they
use in turn, each under the directives that were in force. What a parts file describes is left out.
"""

from __future__ import annotations

from collections.abc import Iterable
from typing import NamedTuple

from tardigate.netlist.modules import Modules
from tardigate.source.arrays import distinct
from tardigate.syntax.outline import ModuleText
from tardigate.syntax.placing import in_force
from tardigate.syntax.preprocess import Preprocessed
from tardigate.syntax.verilog_reader import Unit

_UNITS = ((10**15, "s"), (10**12, "ms"), (10**9, "us"), (10**6, "ns"), (10**3, "ps"), (1, "fs"))


class CellText(NamedTuple):
    """A definition: `text` with the directives that it needs; `primitive`: a user-defined primitive."""

    name: str
    primitive: bool
    text: str


def cell_texts(modules: Modules, names: Iterable[str]) -> tuple[CellText, ...]:
    """Return the definitions of those names that stand in the source, and of what they use, by name."""
    found: dict[str, CellText] = {}
    work = list(names)
    while work:
        name = work.pop()
        primitive = name in modules.primitives
        if name in found or modules.described(name) or not (primitive or name in modules):
            continue
        unit, text = modules.primitives[name] if primitive else (modules.unit(name), modules.text(name))
        if not primitive:
            work += modules.uses(name)
            work += _words(unit, text).intersection(modules.primitives)  # which may stand without a name
        body = unit.text.data[text.start : text.end].decode("latin-1")
        lines = [line.rstrip() for line in body.splitlines()]
        shown = "\n".join(line for line in lines if line)
        found[name] = CellText(name, primitive, f"{_directives(unit.source, text.start)}{shown}\n")
    return tuple(found[name] for name in sorted(found))


def _words(unit: Unit, text: ModuleText) -> set[str]:
    """Return the words of a module."""
    found = unit.scan
    words = found.word[found.word_of[text.first] : found.word_of[text.stop - 1] + 1]
    return {found.names.text(number) for number in distinct(words).tolist()}


def _directives(source: Preprocessed, at: int) -> str:
    """Return the directives in force at an offset that a module's meaning hangs on (clause 19)."""
    unit, precision = in_force(source.timescales, at)
    net_type = in_force(source.default_nettypes, at)
    scale = ""
    if unit is not None and precision is not None:
        scale = f"`timescale {_time_words(unit)}/{_time_words(precision)}\n"
    nets = "" if net_type == "wire" else f"`default_nettype {net_type}\n"
    return f"`resetall\n{scale}{nets}"


def _time_words(femtoseconds: float) -> str:
    for size, unit in _UNITS:
        if femtoseconds >= size:
            return f"{int(femtoseconds) // size}{unit}"
    return "1fs"
