"""What may be refused once all parts files are read: names across families, aliases, the chosen condition.

Takes families, tells duplicates, aliases to nothing and in a ring, parts that cannot stand in for each other,
entries by kind that overlap. Faults inside one part are `check_part`'s.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence

from tardigate.parts.check_part import check_part
from tardigate.parts.model import Entry, Family, Part, Place
from tardigate.source.collector import Collector
from tardigate.source.diagnostic import Related, did_you_mean


def check_families(families: Sequence[Family], broken: frozenset[str], collector: Collector) -> None:
    """Tell what is wrong with the families together; parts named in `broken` were told already."""
    has_default = any(family.default for family in families)
    parts = check_names(families, collector)
    for family in families:
        for part in family.parts:
            if part.name not in broken:
                check_part(part, has_default, collector)
    check_aliases(families, parts, collector)
    check_equivalents(families, parts, broken, collector)
    for entries in (
        [entry for family in families for entry in family.gates],
        [entry for family in families for entry in family.operators],
    ):
        check_entries(entries, collector)
    check_default([entry for family in families for entry in family.default], collector)


def _twice(place: Place, first: Place, collector: Collector, what: str, name: str) -> None:
    related = (Related(first.span(), "the first one"),)
    collector.tell("P008", place.span(), related=related, what=what, name=name)


def check_names(families: Iterable[Family], collector: Collector) -> dict[str, Part]:
    """Tell parts and aliases whose name is taken, across families and files; return the parts by name."""
    parts: dict[str, Part] = {}
    places: dict[str, Place] = {}
    for family in families:
        named = [(part.name, part.place) for part in family.parts]
        named += [(name, place) for name, (_, place) in family.aliases.items()]
        for name, place in sorted(named, key=lambda pair: pair[1].start):
            if name in places:
                _twice(place, places[name], collector, "part or alias", name)
            places.setdefault(name, place)
        for part in family.parts:
            parts.setdefault(part.name, part)
    return parts


def check_aliases(families: Iterable[Family], parts: Mapping[str, Part], collector: Collector) -> None:
    """Tell aliases that end in nothing or in themselves."""
    aliases = {name: to for family in families for name, to in family.aliases.items()}
    ringed: set[str] = set()
    for name, (target, place) in aliases.items():
        chain = {name: None}  # in order
        while target in aliases and target not in parts and target not in chain:
            chain[target] = None
            target = aliases[target][0]
        if target in parts or ringed.intersection(chain) or (len(chain) > 1 and target not in chain):
            continue  # fine, or told at the alias that names nothing
        if target in chain:
            ring = [*chain][[*chain].index(target) :]
            ringed.update(chain)
            related = tuple(Related(aliases[one][1].span(), f"`{one}`") for one in ring[1:])
            where = aliases[ring[0]][1].span()
            collector.tell("P017", where, related=related, ring=" → ".join([*ring, ring[0]]))
        else:
            hint = did_you_mean(target, [*parts, *aliases]) if collector.room("P016") else None
            collector.tell("P016", place.span(), hint=hint, what=f"alias `{name}`", name=target)


def resolve(names: Sequence[str], families: Iterable[Family], parts: Mapping[str, Part]) -> dict[str, Part]:
    """Return the parts that names or aliases stand for; a name that stands for none is left out."""
    aliases = {alias: to for family in families for alias, (to, _) in family.aliases.items()}
    ends: dict[str, Part | None] = dict(parts)
    for name in names:
        chain: dict[str, None] = {}
        at = name
        while at not in ends and at not in chain and at in aliases:
            chain[at] = None
            at = aliases[at]
        ends.update(dict.fromkeys([*chain, name], ends.get(at)))
    return {name: part for name in names if (part := ends[name]) is not None}


def check_equivalents(
    families: Sequence[Family], parts: Mapping[str, Part], broken: frozenset[str], collector: Collector
) -> None:
    """Tell equivalents that are not described, or whose pins are others than those of the first.

    Of a part in `broken` it is not known what pins it was meant to have.
    """
    aliases = {alias for family in families for alias in family.aliases}
    groups = [group for family in families for group in family.equivalents]
    known = resolve([name for group in groups for name, _ in group], families, parts)
    for group in groups:
        first: Part | None = None
        for name, place in group:
            part = known.get(name)
            if part is None and name in aliases:
                continue  # told there
            if part is None:
                hint = did_you_mean(name, list(parts))
                collector.tell("P016", place.span(), hint=hint, what="`equivalent`", name=name)
                continue
            if part.name in broken:
                continue
            first = first or part
            if _shape(part) != _shape(first):
                related = (Related(first.place.span(), f"`{first.name}`"),)
                collector.tell("P021", place.span(), related=related, name=name, first=first.name)


def _shape(part: Part) -> list[tuple[str, int, int, int]]:
    return sorted((pin.name, int(pin.way), pin.msb, pin.lsb) for pin in part.pins)


def check_entries(entries: Iterable[Entry], collector: Collector) -> None:
    """Tell entries by kind that say the same thing twice; numbers of inputs may not overlap."""
    seen: dict[tuple[str, str], list[Entry]] = {}
    for entry in entries:
        others = seen.setdefault((entry.name, entry.transition), [])
        for other in others:
            both_any = entry.high == other.high == 0
            overlap = entry.high and other.high and entry.low <= other.high and other.low <= entry.high
            if both_any or overlap:
                name = f"{entry.symbol} {entry.name}"
                _twice(entry.place, other.place, collector, "entry", name)
                break
        others.append(entry)


def check_default(entries: Iterable[Entry], collector: Collector) -> None:
    """Tell a second default; there is one for all families together."""
    seen: dict[str, Entry] = {}
    for entry in entries:
        if entry.transition in seen:
            related = (Related(seen[entry.transition].place.span(), "the first one"),)
            collector.tell("P028", entry.place.span(), related=related, symbol=entry.symbol)
        seen.setdefault(entry.transition, entry)


def choose_condition(
    families: Sequence[Family], wanted: str | None, collector: Collector
) -> tuple[list[int], str | None]:
    """Return the column of each family, and the condition that was assumed because none was chosen.

    A family without conditions has one column, which serves any.
    """
    names = list(dict.fromkeys(c.name for family in families for c in family.conditions))
    if wanted is not None and wanted not in names:
        known = f"Known conditions: {', '.join(names)}." if names else "The parts files name no conditions."
        collector.tell("P018", None, hint=did_you_mean(wanted, names) or known, name=wanted)
        return [0] * len(families), None
    chosen = wanted if wanted is not None else names[0] if names else None
    columns = []
    for family in families:
        own = [condition.name for condition in family.conditions]
        if own and chosen not in own:
            collector.tell("P019", family.place.span(), family=family.name, name=chosen)
        columns.append(own.index(chosen) if chosen in own else 0)
    return columns, chosen if wanted is None and len(names) > 1 else None
