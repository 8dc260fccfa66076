"""Modules that are instantiated and that nobody describes: what their instances tell of them.

Takes instances as connected, gives pins with widths and, where the connections leave no doubt, their ways.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.items import Strange
from tardigate.parts.kind import Way
from tardigate.source.span import Span

Pin = tuple[str, str]
"""Module and pin."""


@dataclass(slots=True)
class Undescribed:
    """One such module: where first, how many instances, pins as connected with widths and known ways."""

    name: str
    place: Span
    count: int = 0
    pins: dict[str, int] = field(default_factory=dict)
    ways: dict[str, Way] = field(default_factory=dict)


@dataclass(slots=True)
class Strangers:
    """All of them, in order of first instances."""

    modules: dict[str, Undescribed] = field(default_factory=dict)
    _nets: list[set[Pin]] = field(default_factory=list)

    def add(self, strange: Sequence[Strange], spans: Sequence[Span], driven: NDArray[np.bool_]) -> None:
        """Take note of the instances in one module; `driven` tells of each local net.

        A connection of an array that is as wide as all its copies is dealt out among them (IEEE 1364-2005,
        7.1.6).
        """
        shared: dict[int, set[Pin]] = {}
        for instance, span in zip(strange, spans, strict=True):
            module = self.modules.setdefault(instance.module, Undescribed(instance.module, span))
            module.count += instance.copies
            for pin, nets in instance.pins:
                width = max(1, len(nets))
                if instance.copies > 1 and width % instance.copies == 0:
                    width //= instance.copies
                module.pins[pin] = max(width, module.pins.get(pin, 1))
                if nets and driven[list(nets)].any():
                    module.ways[pin] = Way.INPUT
                for net in nets:
                    shared.setdefault(net, set()).add((instance.module, pin))
        self._nets += [pins for net, pins in shared.items() if not driven[net]]

    def resolved(self) -> tuple[Undescribed, ...]:
        """Return the modules, with the way of each pin for which it is certain.

        What something known drives is an input. A net that nothing known drives has one output on it; where
        only one pin is left that could be it, it is, and a module has at least one output.
        """
        before = -1
        while before != (before := sum(len(module.ways) for module in self.modules.values())):
            for module in self.modules.values():
                self._last_is_output([(module.name, pin) for pin in module.pins])
            for pins in self._nets:
                self._last_is_output(sorted(pins))
                if any(self._way(pin) == Way.OUTPUT for pin in pins):
                    for name, pin in pins:
                        self.modules[name].ways.setdefault(pin, Way.INPUT)
        return tuple(self.modules.values())

    def _way(self, pin: Pin) -> Way | None:
        return self.modules[pin[0]].ways.get(pin[1])

    def _last_is_output(self, pins: Sequence[Pin]) -> None:
        open_pins = [pin for pin in pins if self._way(pin) != Way.INPUT]
        if len(open_pins) == 1:
            name, pin = open_pins[0]
            self.modules[name].ways[pin] = Way.OUTPUT
