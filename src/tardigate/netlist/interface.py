"""What an instance sees of what it instantiates: pins with widths and ways. Data only."""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

from tardigate.parts.kind import Way
from tardigate.source.collector import Collector
from tardigate.source.diagnostic import did_you_mean
from tardigate.source.span import Span


class InterfacePin(NamedTuple):
    """A pin or port: its name (empty when only by order), way and width in bits."""

    name: str
    way: Way
    width: int


class Interface:
    """The pins of a part or module, in order; open inputs are on the net `pulled`, where it is not None."""

    def __init__(self, name: str, pins: Sequence[InterfacePin], pulled: int | None = None) -> None:
        self.name, self.pins, self.pulled = name, tuple(pins), pulled
        self._at = {pin.name: i for i, pin in enumerate(self.pins) if pin.name}
        self.bits = sum(pin.width for pin in self.pins)
        self.first_bit = [0]
        for pin in self.pins:
            self.first_bit.append(self.first_bit[-1] + pin.width)

    def find(self, pin: str) -> int:
        """Return a pin's number, -1 when there is none of that name."""
        return self._at.get(pin, -1)

    def tell_unknown(self, pin: str, span: Span, collector: Collector) -> None:
        """Tell of a pin that is not there (N160)."""
        known = list(self._at)
        hint = did_you_mean(pin, known) if collector.room("N160") else None
        hint = hint or f"Its pins are {', '.join(known[:12])}."
        collector.tell("N160", span, pin=pin, module=self.name, hint=hint)
