"""The bodies of cells: modules with a specify block, elaborated on their own to be read as parts.

Takes the modules of a design, gives a cell's `Part`, made once for a set of parameters. Inside a cell a gate
or operator without `#` takes no time (IEEE 1364-2005 clause 14.4): parts files say nothing about it.
"""

from __future__ import annotations

from collections.abc import Mapping
from contextlib import ExitStack

from tardigate.netlist.body import Body, Inner
from tardigate.netlist.cells import cell_part
from tardigate.netlist.constants import Value, rounded
from tardigate.netlist.hierarchy import Overrides
from tardigate.netlist.interface import Interface
from tardigate.netlist.primitives import Primitives
from tardigate.netlist.rings import tell_ring
from tardigate.netlist.shop import Shop
from tardigate.netlist.stamp import TooLargeError, stamp
from tardigate.netlist.template import Template
from tardigate.netlist.wiring import Wiring
from tardigate.parts.library import Library
from tardigate.parts.model import Part
from tardigate.parts.source_delay import SourceDelay
from tardigate.source.diagnostic import Diagnostic
from tardigate.syntax import tree


class Cells:
    """The cells of a design as parts."""

    def __init__(self, outer: Shop) -> None:
        self._outer = outer
        self._library = outer.library.without_times()
        self._parts: dict[object, Part | None] = {}
        self._making: list[str] = []

    def part(self, module: str, parameters: Mapping[str, Value]) -> Part | None:
        """Return a cell as a part, None after telling what is wrong with it."""
        key = (module, tuple(sorted(parameters.items())))
        if key not in self._parts:
            if module in self._making:
                ring = " > ".join([*self._making, module])
                self._outer.collector.tell("N106", self._outer.modules.span(module), ring=ring)
                return None
            self._making.append(module)
            self._parts[key] = self._made(module, parameters)
            self._making.pop()
        return self._parts[key]

    def _made(self, module: str, parameters: Mapping[str, Value]) -> Part | None:
        shop = _BodyShop(self._outer, self, self._library)
        number = shop.number(module, Overrides(dict(parameters)))
        templates = shop.elaborate_all()
        self._outer.assumed += shop.assumed
        if tell_ring(templates, shop.collector):
            return None
        values = shop.values(number)
        delays = shop.delays_of(module, values)
        with ExitStack() as kept:
            body = shop.body(number, templates, kept)
            part = None if body is None else cell_part(shop.modules.tree(module), body, delays)
        self._outer.assumed += delays.assumed
        return part


class _BodyShop(Shop):
    """The shop of one cell's body."""

    def __init__(self, outer: Shop, cells: Cells, library: Library) -> None:
        super().__init__(outer.modules, library, outer.collector)
        self.lookups, self.tables = outer.lookups, outer.tables
        self.cells = self._cells = cells
        self._outer = outer
        self.inner: dict[int, Inner] = {}
        self.is_opaque = False

    @property
    def primitives(self) -> Primitives:
        """Those of the design."""
        return self._outer.primitives

    def no_register(self, _told: Diagnostic) -> None:
        """Take an `always` that is no register for procedural code that nobody reads."""
        self.is_opaque = True

    def part(self, module: str, parameters: Mapping[str, Value]) -> tuple[Interface, int] | None:
        """Return the interface and kind of a described part inside the cell."""
        found = super().part(module, parameters)
        if found is not None and self.library.describes(module):
            values = {name: rounded(value) for name, value in parameters.items()}
            self.inner[found[1]] = Inner(*self.library.part(module, values))
        return found

    def cell(self, module: str, parameters: Mapping[str, Value]) -> tuple[Interface, int] | None:
        """Return the interface and kind of a cell inside the cell."""
        found = super().cell(module, parameters)
        part = self._cells.part(module, parameters) if found is not None else None
        if found is not None and part is not None:
            self.inner[found[1]] = Inner(part)
        return found

    def primitive(self, name: str, delay: SourceDelay | None) -> tuple[Interface, int] | None:
        """Return the interface and kind of a user-defined primitive."""
        found = super().primitive(name, delay)
        part = self.primitives.part(name)
        if found is not None and part is not None:
            self.inner[found[1]] = Inner(part)
        return found

    def body(self, number: int, templates: list[Template], kept: ExitStack) -> Body | None:
        """Return the body, flat; its wiring may be asked as long as `kept` is open."""
        try:
            flat = stamp(templates, number, self.kinds.kinds)
        except TooLargeError:
            self.collector.tell("N124", self.modules.span(templates[number].module))
            return None
        hierarchy = self.hierarchy(number)
        table = kept.enter_context(self.tables.of(hierarchy.declarer.unit, hierarchy.variables))
        wiring = Wiring(hierarchy.declarer, hierarchy.variables, hierarchy.scopes, table, hierarchy)
        opaque = (
            self.is_opaque
            or bool(self.strangers.modules)
            or any(isinstance(item, tree.Opaque) for scope in hierarchy.scopes for item in scope.items)
        )
        return Body(flat, wiring, self.inner, opaque)
