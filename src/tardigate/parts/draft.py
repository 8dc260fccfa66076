"""A parts file skeleton for what has no delays yet.

Takes kinds without delays and modules that nothing describes, gives text that the parts language accepts, a
`-` for each number that is to be filled in. What is not known (functions, registers) it leaves to the reader.
"""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from types import MappingProxyType
from typing import NamedTuple

from tardigate.parts.draft_guess import Guess, guessed
from tardigate.parts.gates import BUFFERS, THREE_STATE, operator_of
from tardigate.parts.kind import Kind, Way
from tardigate.parts.register_kind import REGISTER
from tardigate.syntax.parts_reader import reserved_words

PLAIN = ("tPLH", "tPHL")
LETTING_GO = ("tPZH", "tPZL", "tPHZ", "tPLZ")
EMPTY = "-:-:-"

HEAD = """\
// Parts without delays yet. Replace each `-` by a number in ns, as min:typ:max. A min that the
// data sheet does not give may stay `-`; typ and max are needed where the grade asks for them.
// One number alone stands for all three, and `tpd` for tPLH and tPHL alike.
"""

GUESSED = """\
    // Guessed from the names of the pins: a register that stores at the rising edge of its clock.
    // Compare it with the data sheet: a latch or a falling edge is written otherwise.
"""

OTHERS = """\
    // Say what these do: an enable belongs to what is stored, Q = EN ? D : Q; a clear or set that
    // acts at once is a line of the register, clear ~CLR; with a row of times of its own.
"""


class UndescribedModule(NamedTuple):
    """A module that is used and that nothing describes: its pins as used, their `Way` where it is known.

    `widths` gives the bits of pins that are wider than one.
    """

    name: str
    pins: tuple[tuple[str, Way | None], ...]
    widths: Mapping[str, int] = MappingProxyType({})


def spelled(name: str) -> str:
    """Return a name as a parts file writes it, escaped when it is no plain word (IEEE 1364-2005 3.7.1)."""
    if re.fullmatch(r"[A-Za-z_][A-Za-z0-9_$]*", name) and name not in reserved_words():
        return name
    return f"\\{name} "


def draft_text(kinds: Sequence[Kind], modules: Sequence[UndescribedModule]) -> str:
    """Return the skeleton for gates and operators among `kinds` and for `modules`; equal entries once."""
    gates = sorted({_gate_entry(kind) for kind in kinds if kind.group == "gate"})
    operators = sorted({_operator_entry(kind) for kind in kinds if kind.group == "operator"})
    parts = [_part(_named(module)) for module in sorted(modules, key=lambda module: module.name)]
    lines = [HEAD + "family DRAFT {", '  provenance "to be filled in";']
    for word, entries in (("gates", gates), ("operators", operators)):
        if entries:
            lines += ["", f"  {word} ns {{               //  min:typ:max", *_table(entries), "  }"]
    cells = sorted({kind.name for kind in kinds if kind.group == "part"})
    if cells:
        lines += ["", *_default(cells)]
    for part in parts:
        lines += ["", *part]
    return "\n".join([*lines, "}", ""])


def _default(cells: Sequence[str]) -> list[str]:
    """Return a default, for primitives and cells of the source whose own times do not cover every change."""
    shown = ", ".join(f"`{name}`" for name in cells[:6]) + (" ..." if len(cells) > 6 else "")
    return [
        f"  // {shown}: not every change has a time in the source. Give the instance of a",
        "  // primitive a `#`, the specify block of a cell a path, or fill in what counts for all of them:",
        "  default ns {",
        *(f"    {symbol}  {EMPTY};" for symbol in PLAIN),
        "  }",
    ]


def _gate_entry(kind: Kind) -> tuple[str, int, bool]:
    """Return a gate as an entry, its number of inputs (so that 2 sorts before 10), and whether it lets go."""
    inputs = sum(1 for way in kind.ways if way == Way.INPUT)
    bare = kind.name in BUFFERS or kind.name in THREE_STATE
    return (kind.name if bare else f"{kind.name}({inputs})", inputs, kind.name in THREE_STATE)


def _operator_entry(kind: Kind) -> tuple[str, int, bool]:
    if kind.name == REGISTER:
        return (f'"{REGISTER}"', 0, False)
    name = operator_of(kind)
    inputs = len(kind.pins) - 1
    return (f'"{name}"' if inputs == 1 else f'"{name}"({inputs})', inputs, False)


def _table(entries: Sequence[tuple[str, int, bool]]) -> list[str]:
    rows: list[str] = []
    for entry, _, lets_go in sorted(entries, key=lambda e: (e[0].partition("(")[0], e[1])):
        symbols = PLAIN + LETTING_GO if lets_go else PLAIN
        rows += [f"    {symbol}  {entry:<18}  {EMPTY};" for symbol in symbols]
    return rows


def _named(module: UndescribedModule) -> UndescribedModule:
    """Return the module with a name for each pin that was connected by order."""
    pins = tuple((name or f"pin{i + 1}", way) for i, (name, way) in enumerate(module.pins))
    return module._replace(pins=pins)


def _part(module: UndescribedModule) -> list[str]:
    """Return the lines of a part: a row for each pin that may drive, from all that may be driven."""
    guess = guessed(module.pins, module.widths)
    if guess is not None:
        return _register(module, guess)
    ins = [name for name, way in module.pins if way == Way.INPUT]
    outs = [name for name, way in module.pins if way == Way.OUTPUT]
    both = [name for name, way in module.pins if way == Way.INOUT]
    unsure = [name for name, way in module.pins if way is None]
    lines = [f"  part {spelled(module.name)} {{"]
    if unsure:
        lines.append(
            "    // Nothing tells which of these are outputs: move them to `outputs`, with rows of their own."
        )
        lines.append(_declared(module, "inputs", unsure))
    for word, names in (("inputs", ins), ("outputs", outs), ("inouts", both)):
        if names:
            lines.append(_declared(module, word, names))
    if outs or unsure:
        lines.append(
            "    // Give each output its function, as in output Y = ~(A & B); without one, every edge of an"
        )
        lines.append("    // input may cause either edge of the output.")
        lines.append("    // A register: register posedge CK { Q = D; }, with rows from CK alone.")
    heads = outs + both
    tails = ins + both + unsure
    rows = [
        f"      {symbol}  {_listed([tail for tail in tails if tail != head])} *> {spelled(head)}  {EMPTY};"
        for head in heads
        for symbol in PLAIN
        if any(tail != head for tail in tails)
    ]
    lines += ["    times ns {", *rows, "    }", "  }"] if rows else ["  }"]
    return lines


def _register(module: UndescribedModule, guess: Guess) -> list[str]:
    """Return the lines of a register, guessed from the names of its pins."""
    clock, data, out = (spelled(name) for name in (guess.clock, guess.data, guess.out))
    heads = [out, *map(spelled, guess.inverted)]
    others = [name for name, _ in module.pins if name not in guess.named()]
    lines = [
        f"  part {spelled(module.name)} {{",
        *GUESSED.splitlines(),
        _declared(module, "inputs", [guess.data, guess.clock]),
    ]
    if others:
        lines += [*OTHERS.splitlines(), _declared(module, "inputs", others)]
    lines.append(_declared(module, "outputs", [guess.out]))
    for name in guess.inverted:
        lines.append(_declared(module, "output", [name]).removesuffix(";") + f" = ~{out};")
    lines += [f"    register posedge {clock} {{ {out} = {data}; }}", "    times ns {"]
    lines += [f"      {symbol}  {clock} *> {', '.join(heads)}  {EMPTY};" for symbol in PLAIN]
    lines += ["    }", "    checks ns {", f"      tsu  {data} before {clock}  {EMPTY};"]
    return [*lines, f"      th   {data} after {clock}  {EMPTY};", "    }", "  }"]


def _declared(module: UndescribedModule, word: str, names: Sequence[str]) -> str:
    pins = []
    for name in names:
        width = module.widths.get(name, 1)
        pins.append(spelled(name) + (f"[{width - 1}:0]" if width > 1 else ""))
    return f"    {word} {', '.join(pins)};"


def _listed(names: Sequence[str]) -> str:
    return ", ".join(spelled(name) for name in names)
