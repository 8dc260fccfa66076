"""Trees of families to the model.

Takes families as written, gives them with names looked up and numbers converted; what it refuses it tells.
What needs more than one family or file is for `check`.
"""

from __future__ import annotations

from tardigate.parts.build_part import build_part
from tardigate.parts.build_rows import TRANSITIONS, divided
from tardigate.parts.columns import columns, quantity, unit_known
from tardigate.parts.desk import Desk
from tardigate.parts.gates import BUFFERS, GATES, OPERATORS, THREE_STATE
from tardigate.parts.model import Columns, Condition, Entry, Family, Part, Place, Wires
from tardigate.parts.register_kind import REGISTER
from tardigate.parts.units import CELSIUS, FEMTOFARADS, MICROMETRES, VOLTS, amount
from tardigate.source.collector import Collector
from tardigate.syntax import parts_tree as tree

MOST_INPUTS = 1 << 20
KNOWN = {"gates": tuple(GATES), "operators": (*OPERATORS, REGISTER)}


def build_family(family: tree.Family, collector: Collector, broken: set[str]) -> Family:
    """Return a family; names of parts that something was told of are added to `broken`."""
    desk = Desk(family.file, collector)
    conditions: list[Condition] = []
    for item in family.items:
        if isinstance(item, tree.Conditions):
            _conditions(desk, item, conditions)
    count = max(1, len(conditions))
    entries: dict[str, list[Entry]] = {"gates": [], "operators": [], "default": []}
    wires = Wires()
    parts: list[Part] = []
    for item in family.items:
        if isinstance(item, tree.Part):
            before = desk.faults
            parts.append(build_part(desk, item, family.name.text, count))
            broken.update({item.name.text} if desk.faults > before else ())
        elif isinstance(item, tree.KindTable):
            entries[item.form] += _kind_table(desk, item, count)
        elif isinstance(item, tree.Wires):
            wires = _wires(desk, item, count, wires)
    text = family.text.text if family.text else ""
    provenance = tuple(item.text.text for item in family.items if isinstance(item, tree.Provenance))
    return Family(
        family.name.text, text, provenance, tuple(conditions), tuple(parts), _aliases(desk, family),
        _equivalents(desk, family), tuple(entries["gates"]), tuple(entries["operators"]),
        tuple(entries["default"]), wires, desk.place(family.name),
    )  # fmt: skip


def _conditions(desk: Desk, item: tree.Conditions, found: list[Condition]) -> None:
    for written in item.conditions:
        first = [known for known in found if known.name == written.name.text]
        if first:
            beside = ((first[0].place, "the first one"),)
            desk.tell("P008", written.name, what="condition", name=written.name.text, related=beside)
            continue
        spans = tuple((span.low.text, span.high.text, span.unit.text) for span in written.spans)
        for span in written.spans:
            _span(desk, span)
        text = written.text.text if written.text else ""
        found.append(Condition(written.name.text, text, spans, desk.place(written.name)))


def _span(desk: Desk, span: tree.Span) -> None:
    units = {**VOLTS, **CELSIUS}
    if not unit_known(desk, span.unit, units, "a condition"):
        return
    try:
        low, high = (amount(word.text, span.unit.text, units) for word in (span.low, span.high))
    except OverflowError:
        desk.tell("P003", span.low, number=span.low.text)
        return
    if low > high:
        desk.tell("P010", span.high, larger="lower end", smaller="upper end")


def _aliases(desk: Desk, family: tree.Family) -> dict[str, tuple[str, Place]]:
    found: dict[str, tuple[str, Place]] = {}
    for item in family.items:
        for name in item.names if isinstance(item, tree.Alias) else ():
            assert isinstance(item, tree.Alias)
            if name.text in found:
                first = ((found[name.text][1], "the first one"),)
                desk.tell("P008", name, what="alias", name=name.text, related=first)
                continue
            found[name.text] = (item.part.text, desk.place(name))
    return found


def _equivalents(desk: Desk, family: tree.Family) -> tuple[tuple[tuple[str, Place], ...], ...]:
    items = [item for item in family.items if isinstance(item, tree.Equivalent)]
    return tuple(tuple((name.text, desk.place(name)) for name in item.names) for item in items)


def _kind_table(desk: Desk, table: tree.KindTable, count: int) -> list[Entry]:
    found: list[Entry] = []
    for row in table.rows:
        made = columns(desk, row.cells, table.unit, count, row.symbol)
        named: list[tuple[str, int, int, Place]] = [("", 0, 0, desk.place(row.symbol))]
        if table.form != "default":
            named = [one for entry in row.entries if (one := _entry(desk, table.form, entry)) is not None]
        for name, low, high, place in named:
            for transition in TRANSITIONS[row.symbol.text] if made is not None else ():
                if "Z" in transition and name and name not in THREE_STATE:
                    desk.tell("P024", row.symbol, symbol=row.symbol.text, name=name)
                    break
                assert made is not None
                found.append(Entry(name, low, high, transition, row.symbol.text, made, place))
    return found


def _entry(desk: Desk, form: str, entry: tree.Entry) -> tuple[str, int, int, Place] | None:
    name = entry.name.text
    if name not in KNOWN[form]:
        what = "gate primitive" if form == "gates" else "operator"
        desk.tell("P022", entry.name, name=name, known=KNOWN[form], what=what)
        return None
    low = high = 0
    if entry.low is not None and entry.high is not None:
        low, high = (
            int(w.text) if w.text.isdigit() and len(w.text) < 9 else 0 for w in (entry.low, entry.high)
        )
        fixed = 1 if name in BUFFERS or name in ("~", "copy") else 2 if name in THREE_STATE else 0
        fits = 0 < low <= high <= MOST_INPUTS and name != REGISTER
        if not fits or (fixed and (low, high) != (fixed, fixed)):
            desk.tell("P023", entry.low, name=name)
            return None
        low, high = (0, 0) if fixed else (low, high)
    return name, low, high, desk.place(entry.name)


def _wires(desk: Desk, table: tree.Wires, count: int, before: Wires) -> Wires:
    fanout, nets = dict(before.fanout), dict(before.nets)
    more, load = before.more, before.load
    for line in table.lines:
        made = _wire_columns(desk, table, line, count)
        if made is None:
            continue
        if line.form == "fanout" and line.name is not None:
            if not line.name.text.isdigit() or not 0 < int(line.name.text[:9]) <= MOST_INPUTS:
                desk.tell("P003", line.name, number=line.name.text)
                continue
            _once(desk, line.name, "fanout", int(line.name.text) in fanout)
            fanout[int(line.name.text)] = made
        elif line.form == "more":
            more = made
        elif line.form == "load" and line.amount is not None:
            load = quantity(desk, line.amount, FEMTOFARADS, "a capacitance")
        elif line.name is not None:
            _once(desk, line.name, "net", line.name.text in nets)
            nets[line.name.text] = made
    return Wires(fanout, more, nets, load)


def _once(desk: Desk, word: tree.Word, what: str, again: bool) -> None:
    if again:
        desk.tell("P008", word, what=what, name=word.text)


def _wire_columns(desk: Desk, table: tree.Wires, line: tree.Wire, count: int) -> Columns | None:
    """Return the times of a line; a length times the delay of its unit of length."""
    if line.form == "load":
        return ()
    at = line.name or table.unit
    if line.form != "length" or line.amount is None or line.time_unit is None or line.length_unit is None:
        return columns(desk, line.cells, table.unit, count, at)
    length = quantity(desk, line.amount, MICROMETRES, "a length")
    if length is None or not unit_known(desk, line.length_unit, MICROMETRES, "a length"):
        return None
    per = columns(desk, line.cells, line.time_unit, count, at)
    return divided(per, float(MICROMETRES[line.length_unit.text]) / length) if length else None
