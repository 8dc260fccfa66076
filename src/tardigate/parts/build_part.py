"""One part of a tree to the model: its names first, then functions and registers, then rows that use them.

Takes the tree of a part, gives a `Part`; what it refuses it tells. Whether rows and functions agree is for
`check_part`.
"""

from __future__ import annotations

from tardigate.parts.build_rows import build_check, build_load, build_row
from tardigate.parts.columns import quantity
from tardigate.parts.desk import Desk
from tardigate.parts.expression import Bits, compile_expression, number_bits
from tardigate.parts.function import Network
from tardigate.parts.kind import Edge, Way
from tardigate.parts.model import Check, Load, Parameter, Part, Pin, Register, Row
from tardigate.parts.scope import Scope
from tardigate.parts.units import FEMTOFARADS
from tardigate.syntax import parts_tree as tree

WAYS = {"input": Way.INPUT, "output": Way.OUTPUT, "inout": Way.INOUT}
OPENS = {"posedge": Edge.RISE, "negedge": Edge.FALL, "high": Edge.RISE, "low": Edge.FALL}
MOST_IN_PACKAGE = 1024


class _Draft:
    """A part under work."""

    def __init__(self, scope: Scope, columns: int) -> None:
        self.scope, self.columns = scope, columns
        self.network = Network()
        self.package = 1
        self.pins: list[Pin] = []
        self.states: list[Pin] = []
        self.parameters: list[Parameter] = []
        self.functions: dict[int, int] = {}
        self.enables: dict[int, int] = {}
        self.stored: frozenset[int] = frozenset()
        self.registers: list[Register] = []
        self.rows: list[Row] = []
        self.checks: list[Check] = []
        self.loads: list[Load] = []


def build_part(desk: Desk, part: tree.Part, family: str, columns: int) -> Part:
    """Return the part; `columns` is the number of conditions of its family."""
    draft = _Draft(Scope(desk, part.name.text), columns)
    declared = [item for item in part.items if isinstance(item, tree.Pins)]
    for item in sorted(declared, key=lambda pins: pins.way == "state"):  # states are numbered after the pins
        _pins(draft, item)
    for each in part.items:
        if isinstance(each, tree.Parameter):
            _parameter(draft, each)
        elif isinstance(each, tree.Package):
            _package(draft, each)
    draft.stored = _stored(draft, part)
    for item in declared:
        _functions(draft, item)
    for each in part.items:
        if isinstance(each, tree.Register):
            _register(draft, each)
    for each in part.items:
        _table(draft, each)
    return Part(
        part.name.text, part.text.text if part.text else "", family, draft.package, tuple(draft.pins),
        tuple(draft.states), tuple(draft.parameters), draft.network, draft.functions, draft.enables,
        tuple(draft.registers), tuple(draft.rows), tuple(draft.checks), tuple(draft.loads),
        desk.place(part.name), tuple(draft.scope.bit_names),
    )  # fmt: skip


def _pins(draft: _Draft, item: tree.Pins) -> None:
    desk = draft.scope.desk
    for declared in item.pins:
        signal = draft.scope.declare(item.way, declared.name, declared.range)
        written = declared.capacitance or item.each
        capacitance = quantity(desk, written, FEMTOFARADS, "a capacitance") if written else None
        if signal is None:
            continue
        way = WAYS.get(item.way, Way.INPUT)
        pin = Pin(signal.name, way, signal.msb, signal.lsb, signal.vector, capacitance, signal.place)
        (draft.states if item.way == "state" else draft.pins).append(pin)


def _parameter(draft: _Draft, item: tree.Parameter) -> None:
    signal = draft.scope.declare("parameter", item.name, item.range)
    if signal is None:
        return
    default = None
    if item.value is not None:
        bits = number_bits(item.value.text)
        width = len(signal.bits)
        if bits is None or any(bits[:-width]):
            draft.scope.desk.tell("P029", item.value, name=signal.name, value=item.value.text, width=width)
            return
        default = sum(bit << i for i, bit in enumerate(reversed(bits)))
    draft.parameters.append(Parameter(signal.name, signal.msb, signal.lsb, default))


def _package(draft: _Draft, item: tree.Package) -> None:
    text = item.number.text
    if not text.isdigit() or not 0 < int(text[:9]) <= MOST_IN_PACKAGE:
        draft.scope.desk.tell("P003", item.number, number=text)
        return
    draft.package = int(text)


def _stored(draft: _Draft, part: tree.Part) -> frozenset[int]:
    """Return the bits that registers store, without telling what is wrong with them: that comes later."""
    bits: set[int] = set()
    for item in part.items:
        if not isinstance(item, tree.Register):
            continue
        for line in item.lines:
            signal = draft.scope.signals.get(line.pin.name.text) if line.pin else None
            if signal is None or line.pin is None:
                continue
            select = line.pin.select
            bits.update(
                signal.bits if select is None else draft.scope.slice(signal, line.pin.name, select) or ()
            )
    return frozenset(bits)


def _functions(draft: _Draft, item: tree.Pins) -> None:
    desk = draft.scope.desk
    for declared in item.pins:
        signal = draft.scope.signals.get(declared.name.text)
        if signal is None or signal.place.start != declared.name.start:
            continue
        if declared.function is not None:
            if draft.stored.intersection(signal.bits):
                desk.tell("P008", declared.name, what="function of", name=signal.name)
            bits = _expression(draft, declared.function, len(signal.bits))
            draft.functions.update(zip(signal.bits, bits, strict=True) if bits else ())
        if declared.when is not None:
            enable = _expression(draft, declared.when, 1)
            draft.enables.update((bit, enable[0]) for bit in signal.bits if enable)


def _expression(draft: _Draft, expr: tree.Expr, width: int) -> Bits | None:
    bits = compile_expression(expr, draft.scope, draft.network, draft.stored)
    if bits is not None and len(bits) != width:
        desk = draft.scope.desk
        desk.tell("P007", expr, left=width, right=len(bits), what="a function and what it is for")
        return None
    return bits


def _register(draft: _Draft, item: tree.Register) -> None:
    desk = draft.scope.desk
    picked = draft.scope.pick(item.clock)
    if picked is None:
        return
    signal, bits = picked
    if signal.way not in ("input", "inout") or len(bits) != 1:
        fact = "an output" if signal.way == "output" else f"{len(bits)} bits of {signal.way}"
        desk.tell("P006", item.clock, name=signal.name, fact=fact, wanted="a clock is one input bit")
        return
    stores: dict[int, int] = {}
    extra = {"clear": -1, "set": -1}
    for line in item.lines:
        if line.pin is None:
            made = _expression(draft, line.function, 1)
            if extra[line.form] >= 0:
                desk.tell("P008", line.function, what="line", name=line.form)
            extra[line.form] = made[0] if made else -1
        else:
            _store(draft, line, line.pin, stores)
    taken = {bit for register in draft.registers for bit in register.stores}
    if taken & stores.keys():
        name = draft.scope.bit_names[min(taken & stores.keys())]
        desk.tell("P008", item.clock, what="register of", name=name)
    if not stores:
        desk.tell("P031", item.clock, name=signal.name)
    register = Register(
        item.how.text in ("high", "low"), OPENS[item.how.text], bits[0], stores, extra["clear"], extra["set"],
        desk.place(item.how),
    )  # fmt: skip
    draft.registers.append(register)


def _store(draft: _Draft, line: tree.Stored, pin: tree.PinRef, stores: dict[int, int]) -> None:
    desk = draft.scope.desk
    picked = draft.scope.pick(pin)
    if picked is None:
        return
    signal, bits = picked
    if signal.way not in ("output", "state", "inout"):
        desk.tell("P006", pin, name=signal.name, fact=f"an {signal.way}".replace("an p", "a p"),
                  wanted="a register stores an output or a state")  # fmt: skip
        return
    if stores.keys() & set(bits):
        desk.tell("P008", pin, what="stored", name=signal.name)
        return
    made = _expression(draft, line.function, len(bits))
    if made:
        stores.update(zip(bits, made, strict=True))


def _table(draft: _Draft, item: tree.PartItem) -> None:
    scope, network, stored = draft.scope, draft.network, draft.stored
    if isinstance(item, tree.Times):
        rows = [build_row(scope, network, stored, row, item.unit, draft.columns) for row in item.rows]
        draft.rows += [row for row in rows if row is not None]
    elif isinstance(item, tree.Checks):
        checks = [build_check(scope, network, stored, row, item.unit, draft.columns) for row in item.rows]
        draft.checks += [check for check in checks if check is not None]
    elif isinstance(item, tree.Load):
        load = build_load(scope, item, draft.columns)
        draft.loads += [load] if load is not None else []
