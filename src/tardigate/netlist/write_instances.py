"""Part instances as statements: a table of writers by sort of kind.

Takes the instances kind by kind, gives a line each that, read again, makes the very same kind. What a kind is
called and how its pins are ordered is said in `parts/gates.py` and `netlist/expression.py`.
"""

from __future__ import annotations

from collections.abc import Callable, Collection, Mapping, Sequence
from dataclasses import dataclass, field
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.batches import Batch
from tardigate.netlist.flat import OPEN
from tardigate.netlist.write_registers import register_module
from tardigate.netlist.write_sheet import Sheet
from tardigate.netlist.write_words import delay_words, spelled
from tardigate.parts.gates import NET, operator_of
from tardigate.parts.kind import Kind
from tardigate.parts.register_kind import REGISTER

Texts = NDArray[np.object_]
_TRUTH = ("!", "&&", "||")
_EQUAL = ("==", "!=")


@dataclass(slots=True)
class Desk:
    """What a writer works with.

    `whole`: whether delays count whole femtoseconds; `primitives`: the names of user-defined ones; `modules`:
    names of modules that are taken; `helpers`: the texts of modules that statements have asked for.
    """

    sheet: Sheet
    whole: bool
    primitives: frozenset[str]
    modules: set[str]
    helpers: list[str] = field(default_factory=list)

    def delay(self, kind: Kind) -> str:
        """Return the delay of a kind as written, with a space behind it; empty for none."""
        return delay_words(kind.source, self.whole)

    def free_module(self, stem: str) -> str:
        """Return a name that no module has yet: the stem, with a number where that is taken."""
        name, number = stem, 1
        while name in self.modules:
            number += 1
            name = f"{stem}{number}"
        self.modules.add(name)
        return name


Writer = Callable[[Batch, Desk], list[str]]
"""Returns a statement for each member of a batch."""


def sort_of(kind: Kind, primitives: Collection[str] = ()) -> str:
    """Return the sort of a kind: the key of its writer."""
    if kind.group == "operator" and kind.name == REGISTER:
        return "register"
    return "primitive" if kind.group == "part" and kind.name in primitives else kind.group


def statements(batch: Batch, desk: Desk) -> list[str]:
    """Return a statement for each member. Raises KeyError for a sort that has no writer."""
    return WRITERS[sort_of(batch.kind, desk.primitives)](batch, desk)


def _filled(form: str, columns: Sequence[Sequence[str] | Texts]) -> list[str]:
    """Return the form filled with a row of the columns each."""
    return list(map(form.__mod__, zip(*columns, strict=True)))


def _percent(text: str) -> str:
    return text.replace("%", "%%")


# Gates and user-defined primitives (clauses 7 and 8): terminals by order


def _gates(batch: Batch, desk: Desk) -> list[str]:
    terminals = ", ".join(["%s"] * len(batch.kind.pins))
    head = batch.kind.name if batch.kind.group == "gate" else _percent(spelled(batch.kind.name))
    form = f"{head} {desk.delay(batch.kind)}%s({terminals});"
    return _filled(form, [desk.sheet.instance[batch.members], *desk.sheet.net[batch.nets]])


# Operators (clause 5.1): each is a continuous assignment of its own


class _Shape(NamedTuple):
    """The right side of an assignment, the pins that fill it, and which of them stand alone as operands."""

    form: str
    pins: list[int]
    alone: list[bool]


def _operators(batch: Batch, desk: Desk) -> list[str]:
    kind = batch.kind
    operator = operator_of(kind)
    shape = _shape(operator, kind.inputs)
    sheet = desk.sheet
    texts = [
        (sheet.alone if alone else sheet.net)[batch.nets[pin]]
        for pin, alone in zip(shape.pins, shape.alone, strict=True)
    ]
    for pin, member, text in _stand_ins(operator, batch, sheet):
        texts[shape.pins.index(pin)][member] = text
    form = f"assign {desk.delay(kind)}%s = {shape.form};"
    return _filled(form, [sheet.net[batch.nets[0]], *texts])


def _shape(operator: str, inputs: int) -> _Shape:
    """Return how an operator with so many input bits is written; the first input is the lowest bit."""
    pins = list(range(1, inputs + 1))
    if operator in ("copy", NET):  # the delay of a net is written as that of an assignment
        return _Shape("%s", pins, [False])
    sides = [pins]
    if operator == "?:":
        sides, form = [pins[:-2], pins[-2:-1], pins[-1:]], "{} ? {} : {}"
    elif operator in ("~", "!") or operator.startswith("reduce "):
        form = f"{operator.removeprefix('reduce ')}{{}}"
    else:
        left = inputs // 2 if operator in _EQUAL else 1
        sides, form = [pins[:left], pins[left:]], f"{{}} {operator} {{}}"
    words = [f"{{{', '.join(['%s'] * len(side))}}}" if len(side) > 1 else "%s" for side in sides]
    alone = [len(side) == 1 and (operator != "?:" or at == 0) for at, side in enumerate(sides) for _ in side]
    return _Shape(form.format(*words), [pin for side in sides for pin in reversed(side)], alone)


def _stand_ins(operator: str, batch: Batch, sheet: Sheet) -> list[tuple[int, int, str]]:
    """Return pin, member and text of inputs that the reader would leave out were they written as they are.

    That is a 0 of several bits that are taken as a truth value, and a pair that an equality has already
    compared or that are one constant; such inputs come about where the operator stands in a module whose
    ports are on one net or on a constant. A second name of the net keeps them in.
    """
    inputs = batch.nets[1:]
    if operator in _TRUTH and len(inputs) > (1 if operator == "!" else 2):
        zero = sheet.second(0, 1) if (inputs == 0).any() else ""
        return [(pin + 1, member, zero) for pin, member in np.argwhere(inputs == 0).tolist()]
    return _equal_stand_ins(inputs, sheet) if operator in _EQUAL else []


def _equal_stand_ins(inputs: NDArray[np.int32], sheet: Sheet) -> list[tuple[int, int, str]]:
    count = len(inputs) // 2
    left, right = inputs[:count].astype(np.int64), inputs[count:]
    trivial = (left == right) & (left <= 1)
    if count == 1:
        trivial &= left > 0  # 0 against 0 is what the reader compares where nothing is left
    pairs = np.sort(left << 32 | right, axis=0)
    odd = trivial.any(axis=0) | (pairs[1:] == pairs[:-1]).any(axis=0)
    found = []
    for member in np.flatnonzero(odd).tolist():
        seen: dict[tuple[int, int], int] = {}
        for pin, pair in enumerate(zip(left[:, member].tolist(), right[:, member].tolist(), strict=True)):
            before = seen.get(pair, int(trivial[pin, member]))
            seen[pair] = before + 1
            if before:
                found.append((pin + 1, member, sheet.second(pair[0], before)))
    return found


# Parts (clause 12.1.2)


def _parts(batch: Batch, desk: Desk) -> list[str]:
    kind, sheet = batch.kind, desk.sheet
    names, columns = [], []
    for name, pins in _pin_groups(kind.pins):
        nets = batch.nets[pins]
        names.append(_percent(spelled(name)))
        columns.append(sheet.net[nets[0]] if len(pins) == 1 else _joined(nets, sheet))
    head = _percent(f"{spelled(kind.name)} {_parameters(kind)}")
    form = f"{head}%s({', '.join(f'.{name}(%s)' for name in names)});"
    return _filled(form, [sheet.instance[batch.members], *columns])


def _pin_groups(pins: Sequence[str]) -> list[tuple[str, list[int]]]:
    """Return the pins with the numbers of their bits, most significant first."""
    groups: dict[str, list[int]] = {}
    for number, pin in enumerate(pins):
        groups.setdefault(pin.rpartition("[")[0] if pin.endswith("]") else pin, []).append(number)
    return list(groups.items())


def _joined(nets: NDArray[np.int32], sheet: Sheet) -> list[str]:
    """Return the nets of a pin put together, for each instance; open bits, the highest, are left out."""
    form = f"{{{', '.join(['%s'] * len(nets))}}}"
    texts = _filled(form, list(sheet.net[nets]))
    for member in np.flatnonzero((nets == OPEN).any(axis=0)).tolist():
        left = nets[:, member]
        inside = ", ".join(sheet.net[left[left != OPEN]])
        texts[member] = f"{{{inside}}}" if inside else ""
    return texts


def _parameters(kind: Kind) -> str:
    if not kind.parameters:
        return ""
    values = ", ".join(f".{spelled(name)}({_value(value)})" for name, value in kind.parameters)
    return f"#({values}) "


def _value(value: int | str) -> str:
    if isinstance(value, str):
        return value
    return str(value) if value < 1 << 31 else f"{value.bit_length()}'h{value:x}"


# Registers (clause 9): each is an instance of a module of its kind


def _registers(batch: Batch, desk: Desk) -> list[str]:
    name, sheet = desk.free_module("register"), desk.sheet
    desk.helpers.append(register_module(batch.kind, name, desk.whole))
    instances = [f"{sheet.free(f'{sheet.names[net]}~register')} " for net in batch.nets[0].tolist()]
    form = f"{name} %s({', '.join(['%s'] * len(batch.kind.pins))});"
    return _filled(form, [instances, *sheet.net[batch.nets]])


WRITERS: Mapping[str, Writer] = {
    "gate": _gates, "operator": _operators, "part": _parts, "primitive": _gates, "register": _registers,
}  # fmt: skip
"""The writer of each sort of kind."""
