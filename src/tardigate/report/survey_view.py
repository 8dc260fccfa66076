"""The view of `survey`: what is in a design and what is missing.

Takes a record, gives lines. Does not know the terminal.
"""

from __future__ import annotations

from rich.text import Text

from tardigate.report.columns import Cell, Column, lay_out
from tardigate.report.looks import STYLES, Look
from tardigate.report.model import KindRecord, ScopeRecord, SurveyRecord
from tardigate.report.prose import counted, listed, named, sentence

MOST_SCOPES = 24
"""Rows of the hierarchy that are shown."""

MOST_KINDS = 40
"""Kinds that are shown."""

MOST_CLOCKS = 8
"""Clock nets that are shown."""

MOST_NAMES = 5
"""Modules described nowhere that are named."""


def survey_view(record: SurveyRecord, look: Look) -> list[Text]:
    """Return the lines of the view."""
    lines = _lead(record, look) + _missing(record, look)
    lines += _hierarchy(record.hierarchy, look) + _kinds(record.kinds, look) + _clocks(record, look)
    return lines


def _lead(record: SurveyRecord, look: Look) -> list[Text]:
    subject = record.subject
    inputs, outputs, inouts = record.ports
    ports = [counted(inputs, "input bit"), counted(outputs, "output bit")]
    if inouts:
        ports.append(counted(inouts, "inout bit"))
    return sentence(
        look,
        named(subject.top, look),
        f" holds {counted(subject.instances, 'part instance')} on {counted(subject.nets, 'net')},"
        f" in {counted(record.scopes, 'instance')} of {counted(record.modules, 'module')};"
        f" {listed(ports)}; {counted(record.registers, 'register') if record.registers else 'no registers'}.",
    )


def _missing(record: SurveyRecord, look: Look) -> list[Text]:
    missing = [kind for kind in record.kinds if kind.origin == "missing"]
    lines = []
    if missing:
        count = sum(kind.instances for kind in missing)
        lines += sentence(
            look,
            Text(f"Without a delay: {counted(len(missing), 'kind')}", STYLES["missing"]),
            f" ({counted(count, 'instance')}); `tardigate draft` writes the entries to fill in.",
        )
    if record.undescribed:
        lines += sentence(
            look,
            Text(f"Described nowhere: {counted(len(record.undescribed), 'module')}", STYLES["missing"]),
            " (",
            listed([named(name, look).plain for name, _ in record.undescribed[:MOST_NAMES]]),
            ", and others)." if len(record.undescribed) > MOST_NAMES else ").",
        )
    return lines


def _hierarchy(scopes: tuple[ScopeRecord, ...], look: Look) -> list[Text]:
    if len(scopes) < 2:
        return []
    rows: list[list[Cell]] = []
    for scope in scopes[:MOST_SCOPES]:
        alike = f"{scope.module} {look.glyph('times')} {scope.alike}" if scope.alike > 1 else scope.module
        name = _branches(scope.lasts, look) + scope.name.replace("…", look.glyph("cut"))
        rows.append([name if scope.lasts else scope.module, alike if scope.lasts else "", str(scope.total)])
    columns = [
        Column("hierarchy", least=8),
        Column("module", style="quiet", least=6),
        Column("parts each", "right"),
    ]
    lines = [Text(), *_ruled(lay_out(columns, rows, look.width, look), look)]
    if len(scopes) > MOST_SCOPES:
        more = f"{look.glyph('dot')} {len(scopes) - MOST_SCOPES} more groups"
        lines.append(Text(more, STYLES["quiet"]))
    return lines


def _branches(lasts: tuple[bool, ...], look: Look) -> str:
    if not lasts:
        return ""
    trunks = "".join("   " if last else look.glyph("trunk") for last in lasts[:-1])
    return trunks + look.glyph("leaf" if lasts[-1] else "branch")


def _kinds(kinds: tuple[KindRecord, ...], look: Look) -> list[Text]:
    rows: list[list[Cell]] = []
    for kind in kinds[:MOST_KINDS]:
        what = f"{kind.group}, register" if kind.register else kind.group
        rows.append([kind.name, (what, "quiet"), str(kind.inputs), str(kind.instances), _origin(kind)])
    columns = [
        Column("kind", least=6),
        Column("", least=4),
        Column("inputs", "right"),
        Column("instances", "right"),
        Column("delays from", least=6),
    ]
    lines = [Text(), *_ruled(lay_out(columns, rows, look.width, look), look)] if rows else []
    if len(kinds) > MOST_KINDS:
        lines.append(Text(f"{look.glyph('dot')} {len(kinds) - MOST_KINDS} more kinds", STYLES["quiet"]))
    return lines


def _origin(kind: KindRecord) -> Cell:
    if kind.origin == "missing":
        return "missing", "missing"
    return kind.words if kind.words and kind.origin in ("parts file", "family default") else kind.origin


def _clocks(record: SurveyRecord, look: Look) -> list[Text]:
    rows: list[list[Cell]] = [[clock.net, str(clock.registers)] for clock in record.clocks[:MOST_CLOCKS]]
    if not rows:
        return []
    columns = [Column("clock net", least=12), Column("registers", "right")]
    lines = [Text(), *_ruled(lay_out(columns, rows, look.width, look), look)]
    more = len(record.clocks) - len(rows)
    if more:
        lines.append(Text(f"{look.glyph('dot')} {counted(more, 'more clock net')}", STYLES["quiet"]))
    return lines


def _ruled(lines: list[Text], look: Look) -> list[Text]:
    """Put a rule under the head."""
    return [lines[0], Text(look.glyph("rule") * lines[0].cell_len, STYLES["quiet"]), *lines[1:]]
