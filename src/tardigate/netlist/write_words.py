"""The words of a flat file: how names, nets and delays are spelled in Verilog (IEEE 1364-2005 clause 3.7).

Takes a flat design, gives a text for each net and part instance, in bulk. Does not know statements.
"""

from __future__ import annotations

import re
from collections.abc import Collection, Sequence
from decimal import Decimal

import numpy as np

from tardigate.netlist.flat import CONSTANT_NAMES, Flat
from tardigate.netlist.names import Names
from tardigate.parts.source_delay import SourceDelay, Triple
from tardigate.syntax.words import RESERVED

_PLAIN = re.compile(r"[A-Za-z_][A-Za-z0-9_$]*").fullmatch
_INTEGER = 1 << 31
"""Unsized whole numbers are sure to hold up to here (clause 3.5.1); beyond it a real number is written."""


def spelled(name: str) -> str:
    """Return an identifier: plain where it may be, else escaped, with the space that ends it."""
    return name if _PLAIN(name) and name not in RESERVED else f"\\{name} "


def unlike(names: Sequence[str], taken: Collection[str]) -> list[str]:
    """Return the names, those that are taken or come a second time with `~` and a number behind them."""
    known = set(names)
    if len(known) == len(names) and known.isdisjoint(taken):
        return list(names)
    known.update(taken)
    used, made = set(taken), []
    for name in names:
        new, number = name, 1
        while new in used or (number > 1 and new in known):
            number += 1
            new = f"{name}~{number}"
        used.add(new)
        made.append(new)
    return made


def net_names(flat: Flat, names: Names) -> list[str]:
    """Return the hierarchical name of every net, the constants' first."""
    found = list(CONSTANT_NAMES)
    bounds = np.searchsorted(flat.net_raw, flat.scope_net).tolist()
    known: dict[int, list[str]] = {}
    for scope, template in enumerate(flat.scope_template.tolist()):
        first, last = max(bounds[scope], len(CONSTANT_NAMES)), bounds[scope + 1]
        if first < last:
            local = known.get(template) or list(flat.templates[template].net_names[:])
            known[template] = local
            path = names.scope(scope)
            rows = (flat.net_raw[first:last] - flat.scope_net[scope]).tolist()
            found += [path + local[row] for row in rows]
    return found


def instance_names(flat: Flat, names: Names) -> list[str]:
    """Return the hierarchical name of every part instance, empty for one that has none."""
    found: list[str] = []
    known: dict[int, list[str]] = {}
    for scope, template in enumerate(flat.scope_template.tolist()):
        local = known.get(template)
        if local is None:
            local = known[template] = list(flat.templates[template].inst_names[:])
        path = names.scope(scope)
        found += [path + name if name else "" for name in local] if path else local
    return found


def is_whole(delay: SourceDelay | None) -> bool:
    """Tell whether a delay counts whole femtoseconds."""
    return delay is None or all(time.is_integer() for triple in delay.values for time in triple)


def delay_words(delay: SourceDelay | None, whole: bool) -> str:
    """Return `#(1:2:3, 4) `, in fs with `whole`, else in ns; empty for no delay."""
    if delay is None:
        return ""
    values = [_triple_words(triple, whole) for triple in delay.values]
    if len(values) == 1 and ":" not in values[0]:
        return f"#{values[0]} "
    return f"#({', '.join(values)}) "


def _triple_words(triple: Triple, whole: bool) -> str:
    times = [_whole_words(int(time)) if whole else _decimal_words(time) for time in triple]
    return times[0] if len(set(times)) == 1 else ":".join(times)


def _whole_words(time: int) -> str:
    return str(time) if time < _INTEGER else f"{time}.0"


def _decimal_words(time: float) -> str:
    """Return a time in ns, with the shortest digits that make the same number of fs again."""
    return f"{Decimal(repr(time)).scaleb(-6).normalize():f}"
