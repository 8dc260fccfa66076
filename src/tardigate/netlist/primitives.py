"""The user-defined primitives of a design as parts (IEEE 1364-2005 clause 8), each read when it is used.

Takes the modules, gives parts; tells what is wrong with a primitive, and (N190) of a table in which neither a
function nor a register nor a latch is seen.
"""

from __future__ import annotations

from tardigate.netlist.modules import Modules
from tardigate.parts.model import Part, Place
from tardigate.parts.udp import udp_part
from tardigate.source.collector import Collector
from tardigate.source.faults import InputRefusedError
from tardigate.syntax.udp_reader import parse_primitive


class Primitives:
    """Parts made of primitives, by name."""

    def __init__(self, modules: Modules, collector: Collector) -> None:
        self._modules, self._collector = modules, collector
        self._parts: dict[str, Part | None] = {}

    def part(self, name: str) -> Part | None:
        """Return a primitive as a part, None after telling what is wrong with it."""
        if name not in self._parts:
            self._parts[name] = self._read(name)
        return self._parts[name]

    def _read(self, name: str) -> Part | None:
        unit, block = self._modules.primitives[name]
        try:
            primitive = parse_primitive(unit, block)
        except InputRefusedError as refused:
            for diagnostic in refused.diagnostics:
                self._collector.add(diagnostic)
            return None
        place = Place(unit.text, block.at, block.at + len(name))
        part, reason = udp_part(primitive, place)
        if reason:
            self._collector.tell("N190", place.span(), name=name, reason=reason)
        return part
