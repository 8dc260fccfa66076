"""Timing checks of a specify block to checks of a part (IEEE 1364-2005 clause 15).

Takes the checks of one module in order, gives checks as a parts file would: data or control bits at an edge
of a clock bit. Tells of wrong arguments, and of checks that the model does not keep (N177).
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from types import MappingProxyType
from typing import NamedTuple

from tardigate.parts.cell_desk import INNER, CellDesk
from tardigate.parts.kind import Edge
from tardigate.parts.model import Check
from tardigate.parts.paths import EDGES, never
from tardigate.parts.source_delay import Triple
from tardigate.syntax import tree


class Form(NamedTuple):
    """A timing check's arguments, by their place.

    `bits`: the event that is checked; `reference`: the clock's, -1 for none; `limits`: symbol and place of
    each limit; `least` and `most` arguments; `negative`: a limit may be negative.
    """

    bits: int
    reference: int
    limits: tuple[tuple[str, int], ...]
    least: int
    most: int
    negative: bool = False


FORMS: Mapping[str, Form] = MappingProxyType(
    {
        "$setup": Form(0, 1, (("tsu", 2),), 3, 4),  # 15.2.1: data, reference
        "$hold": Form(1, 0, (("th", 2),), 3, 4),  # 15.2.2: reference, data
        "$setuphold": Form(1, 0, (("tsu", 2), ("th", 3)), 4, 9, True),  # 15.2.3
        "$removal": Form(0, 1, (("trem", 2),), 3, 4),  # 15.2.4: reference (the control), data (the clock)
        "$recovery": Form(0, 1, (("trec", 2),), 3, 4),  # 15.2.5
        "$recrem": Form(0, 1, (("trec", 2), ("trem", 3)), 4, 9, True),  # 15.2.6
        "$width": Form(0, -1, (("tw", 1),), 2, 4),  # 15.3.4
        "$period": Form(0, -1, (("period", 1),), 2, 3),  # 15.3.5
    }
)
"""The checks that are kept."""

LEFT_OUT = ("$skew", "$timeskew", "$fullskew", "$nochange")
"""Checks that are read and not kept (15.3.1 to 15.3.3, 15.3.6)."""

_NOTIFIER, _DELAYED = 4, 7
"""Where `$setuphold` and `$recrem` have their notifier and the first of two delayed signals."""


class _Event(NamedTuple):
    """An event with its bits looked up; `edges` are those that are meant, None for any."""

    bits: tuple[int, ...]
    edges: tuple[Edge | None, ...]
    when: int
    at: int


def build_checks(checks: Sequence[tree.TimingCheck], desk: CellDesk) -> list[Check]:
    """Return the checks of a module."""
    found: list[Check] = []
    for check in checks:
        if check.name in LEFT_OUT:
            desk.tell("N177", check.at, len(check.name), name=check.name)
        elif (form := FORMS.get(check.name)) is None:
            desk.tell("N178", check.at, len(check.name), name=check.name)
        elif not form.least <= _given(check) or len(check.arguments) > form.most:
            words = {"name": check.name, "count": len(check.arguments)}
            desk.tell("N179", check.at, len(check.name), least=form.least, most=form.most, **words)
        else:
            found += _checks(check, form, desk)
    return found


def _given(check: tree.TimingCheck) -> int:
    """Return how many arguments stand there before the first that is left out."""
    return next((i for i, each in enumerate(check.arguments) if each is None), len(check.arguments))


def delayed_signals(checks: Sequence[tree.TimingCheck]) -> list[tuple[tree.Reference, tree.Reference]]:
    """Return the signals that checks with negative limits make: (delayed, what it follows), 15.5.1."""
    found = []
    for check in checks:
        if check.name not in ("$setuphold", "$recrem"):
            continue
        delayed = check.arguments[_DELAYED : _DELAYED + 2]
        for signal, event in zip(delayed, check.arguments[:2], strict=False):
            follows = _terminal(event)
            if isinstance(signal, tree.Reference) and isinstance(follows, tree.Reference):
                found.append((signal, follows))
    return found


def _terminal(event: tree.CheckEvent | tree.Expression | None) -> tree.Expression | None:
    return event.terminal if isinstance(event, tree.CheckEvent) else event


def _checks(check: tree.TimingCheck, form: Form, desk: CellDesk) -> list[Check]:
    bits = _event(check, form.bits, desk)
    reference = _event(check, form.reference, desk) if form.reference >= 0 else None
    limits = [(symbol, _limit(check, at, desk, form.negative)) for symbol, at in form.limits]
    if bits is None or (form.reference >= 0 and reference is None):
        return []
    if form.reference < 0 and bits.edges == (None,):
        desk.tell("N182", bits.at, name=check.name)
        return []
    when = _both(bits.when, reference.when if reference else -1, desk)
    if never(when, desk):
        return []
    found = []
    for symbol, limit in limits:
        if limit is not None:
            found += _of_limit(symbol, limit, bits, reference, when, check, desk)
    return found


def _of_limit(
    symbol: str, limit: Triple, bits: _Event, reference: _Event | None, when: int, check: tree.TimingCheck,
    desk: CellDesk,
) -> list[Check]:  # fmt: skip
    """Return a check for each edge that is meant and each bit of the reference."""
    place = desk.place(check.at, len(check.name))
    if reference is None:
        levels = ["high" if edge == Edge.RISE else "low" for edge in bits.edges]
        return [
            Check(symbol, bits.bits, edge, -1, None, level if symbol == "tw" else "", when, (limit,), place)
            for edge, level in zip(bits.edges, levels, strict=True)
        ]
    return [
        Check(symbol, bits.bits, own, bit, edge, "", when, (limit,), place)
        for bit in reference.bits
        for edge in reference.edges
        for own in bits.edges
    ]


def _event(check: tree.TimingCheck, at: int, desk: CellDesk) -> _Event | None:
    """Return an event, None after telling that it is none (N183)."""
    written = check.arguments[at]
    event = written if isinstance(written, tree.CheckEvent) else None
    terminal = _terminal(written)
    if not isinstance(terminal, tree.Reference):
        place = check.at if terminal is None else terminal.at
        desk.tell("N183", place, name=check.name, fact="no signal")
        return None
    bits = desk.terminal(terminal)
    if INNER in bits:
        name = ".".join(terminal.path)
        desk.tell("N184", terminal.at, len(name), name=name, check=check.name)
        return None
    when = desk.node(event.condition) if event is not None and event.condition is not None else -1
    edges = event_edges(event.edge) if event is not None else (None,)
    return _Event(bits, edges, when, terminal.at) if bits else None


def event_edges(edge: str) -> tuple[Edge | None, ...]:
    """Return the edges of an event: `posedge`, `negedge`, a list such as `01 x1` (15.4), or empty.

    `posedge` is `01 0x x1`, `negedge` is `10 1x x0`; z counts as x.
    """
    if edge in EDGES:
        return (EDGES[edge],)
    rises = any(each[0] == "0" or each[1] == "1" for each in edge.split())
    falls = any(each[0] == "1" or each[1] == "0" for each in edge.split())
    found = ([Edge.RISE] if rises else []) + ([Edge.FALL] if falls else [])
    return tuple(found) or (None,)


def _limit(check: tree.TimingCheck, at: int, desk: CellDesk, negative: bool) -> Triple | None:
    written = check.arguments[at]
    if written is None or isinstance(written, tree.CheckEvent):
        place = check.at if written is None else written.at
        desk.tell("N183", place, name=check.name, fact="no limit")
        return None
    return desk.triple(written, negative)


def _both(one: int, other: int, desk: CellDesk) -> int:
    if one < 0 or other < 0:
        return max(one, other)
    return one if one == other else desk.network.add("and", *sorted((one, other)))
