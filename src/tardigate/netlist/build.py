"""Elaboration as a list of passes: units and a library to the flat design.

Takes scanned files, the parts library and the top's name, gives a `Built`. Delays may still be missing and
instances undescribed: `check` and the pipeline refuse what a figure would need.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from typing import NamedTuple

from tardigate.netlist.flat import Flat
from tardigate.netlist.hierarchy import Overrides
from tardigate.netlist.modules import Modules, collect, find_top
from tardigate.netlist.rings import tell_ring
from tardigate.netlist.shop import Shop
from tardigate.netlist.stamp import TooLargeError, stamp
from tardigate.netlist.strangers import Undescribed
from tardigate.netlist.template import Template
from tardigate.parts.kind import Kind
from tardigate.parts.library import Library
from tardigate.source.collector import Collector
from tardigate.source.diagnostic import Diagnostic
from tardigate.source.faults import InputRefusedError
from tardigate.syntax.verilog_reader import Unit


class Built(NamedTuple):
    """What elaboration gives: the flat design, the undescribed, and the delays whose unit was assumed.

    `behavioural`: what is to be told of those undescribed modules that are there and hold procedural code.
    """

    top: str
    flat: Flat
    modules: int
    undescribed: tuple[Undescribed, ...]
    units_assumed: int
    behavioural: Mapping[str, tuple[Diagnostic, ...]]


def build(
    units: Sequence[Unit], library: Library, top: str | None, collector: Collector, *, bulk: bool = True
) -> Built:
    """Elaborate a design. Raises InputRefusedError."""
    modules = collect(units, library.describes, collector, bulk)
    collector.refuse()
    doubt = Collector()
    found = find_top(modules, top, doubt)
    if found is None:
        unread = _tell_unreadable(modules, modules.names(), collector)
        for told in doubt.all() if not unread else ():
            collector.add(told)
        collector.refuse()
    assert found is not None
    shop = Shop(modules, library, collector)
    if any(unit.cells for unit in units):
        from tardigate.netlist.cell_shop import Cells  # few designs have any

        shop.cells = Cells(shop)
    if not modules.readable(found, collector):
        _tell_unreadable(modules, _below(modules, found), collector)
    collector.refuse()
    if shop.is_cell(found):
        collector.tell("N107", modules.span(found), name=found)
    collector.refuse()
    first = shop.number(found, Overrides({}))
    templates = shop.elaborate_all()
    tell_ring(templates, collector)
    if modules.has_broken:
        _tell_unreadable(modules, _below(modules, found), collector)
    collector.refuse()
    flat = _stamped(templates, first, shop.kinds.kinds, found, modules, collector)
    return Built(
        found, flat, len({t.module for t in templates}), shop.strangers.resolved(), shop.assumed,
        modules.behavioural,
    )  # fmt: skip


def _stamped(
    templates: Sequence[Template], first: int, kinds: Sequence[Kind], top: str, modules: Modules,
    collector: Collector,
) -> Flat:  # fmt: skip
    try:
        return stamp(templates, first, kinds)
    except TooLargeError:
        collector.tell("N124", modules.span(top))
        collector.refuse()
        raise


def _tell_unreadable(modules: Modules, names: Iterable[str], collector: Collector) -> bool:
    """Tell what is wrong with those of some modules that do not parse; return whether there are any."""
    from tardigate.syntax.verilog_parser import SYNTAX  # few runs come here

    any_told = False
    for name in names:
        try:
            if not modules.described(name):
                modules.tree(name)
        except InputRefusedError as refused:
            for diagnostic in refused.diagnostics:
                if diagnostic.code in SYNTAX:
                    collector.add(diagnostic)
                    any_told = True
    return any_told


def _below(modules: Modules, top: str) -> list[str]:
    """Return the modules that the texts of a module and of those below it name."""
    found = {top: None}
    work = [top]
    while work:
        more = [below for below in modules.uses(work.pop()) if below not in found]
        found |= dict.fromkeys(more)
        work += more
    return list(found)
