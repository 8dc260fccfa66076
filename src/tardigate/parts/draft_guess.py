"""Which undescribed modules look like registers, by the names of their pins.

Takes pins with what is known of them, gives a guess. Does not know whether it is right: the reader is told.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import NamedTuple

from tardigate.parts.kind import Way

CLOCKS = frozenset({"CK", "CLK", "CP", "C", "CLOCK", "CLKIN"})
INVERTED = frozenset({"QN", "Q_N", "NQ", "QB"})

Pins = Sequence[tuple[str, Way | None]]


class Guess(NamedTuple):
    """The pins of a register: `out` stores `data` at `clock`; `inverted` show the inverse of `out`."""

    clock: str
    data: str
    out: str
    inverted: tuple[str, ...]

    def named(self) -> frozenset[str]:
        """Return the pins whose part in it is known."""
        return frozenset((self.clock, self.data, self.out, *self.inverted))


def guessed(pins: Pins, widths: Mapping[str, int]) -> Guess | None:
    """Return the register that the names tell of, in capital or small letters; None where they do not.

    Its data, output and inverted output are equally wide; a pin that drives and is none of them speaks
    against it, and so do two pins that could be the same one.
    """
    clocks = _called(pins, CLOCKS, Way.INPUT)
    data = _called(pins, {"D"}, Way.INPUT)
    outs = _called(pins, {"Q"}, Way.OUTPUT)
    if not len(clocks) == len(data) == len(outs) == 1:
        return None
    guess = Guess(clocks[0], data[0], outs[0], tuple(_called(pins, INVERTED, Way.OUTPUT)))
    others = [way for name, way in pins if name not in guess.named()]
    alike = {widths.get(name, 1) for name in guess.named() - {guess.clock}}
    if len(alike) > 1 or widths.get(guess.clock, 1) != 1 or {Way.OUTPUT, Way.INOUT}.intersection(others):
        return None
    return guess


def _called(pins: Pins, names: set[str] | frozenset[str], way: Way) -> list[str]:
    return [name for name, known in pins if name.upper() in names and known in (way, None)]
