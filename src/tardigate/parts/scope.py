"""The names of one part: pins, hidden states and parameters, and the bits they stand for.

Takes references as written, gives bit numbers; tells names and bits that are not there. Bits of parameters
have negative numbers.
"""

from __future__ import annotations

from typing import NamedTuple

from tardigate.parts.desk import Desk
from tardigate.parts.model import Place
from tardigate.syntax.parts_tree import PinRef, Range, Word

WIDEST = 4096
"""Bits of one pin."""


class Signal(NamedTuple):
    """A name of a part; `way`: `input`, `output`, `inout`, `state` or `parameter`; `bits` msb first."""

    name: str
    way: str
    msb: int
    lsb: int
    vector: bool
    bits: tuple[int, ...]
    place: Place

    def picked(self, msb: int, lsb: int) -> tuple[int, ...] | None:
        """Return the bits from index `msb` to `lsb`, None where one is not there or the order is reversed."""
        step = 1 if self.lsb >= self.msb else -1
        first, last = (msb - self.msb) * step, (lsb - self.msb) * step
        if not (self.vector and 0 <= first <= last < len(self.bits)):
            return None
        return self.bits[first : last + 1]


class Scope:
    """Names of one part under work."""

    def __init__(self, desk: Desk, part: str) -> None:
        self.desk = desk
        self.part = part
        self.signals: dict[str, Signal] = {}
        self.bit_names: list[str] = []
        self.parameter_bits = 0
        self._missed: set[str] = set()

    def declare(self, way: str, name: Word, written: Range | None) -> Signal | None:
        """Add a name; None when it is refused (declared twice, too wide)."""
        msb, lsb = bounds(written)
        width = abs(msb - lsb) + 1
        if width > WIDEST:
            self.desk.tell("P027", name, name=name.text, width=width, widest=WIDEST)
            self._missed.add(name.text)
            return None
        if name.text in self.signals:
            first = ((self.signals[name.text].place, "the first one"),)
            self.desk.tell("P008", name, what="name", name=name.text, related=first)
            return None
        if way == "parameter":
            bits = tuple(range(-1 - self.parameter_bits, -1 - self.parameter_bits - width, -1))
            self.parameter_bits += width
        else:
            bits = tuple(range(len(self.bit_names), len(self.bit_names) + width))
            step = 1 if lsb >= msb else -1
            many = (f"{name.text}[{i}]" for i in range(msb, lsb + step, step))
            self.bit_names += many if written else [name.text]
        signal = Signal(name.text, way, msb, lsb, written is not None, bits, self.desk.place(name))
        self.signals[name.text] = signal
        return signal

    def find(self, name: Word) -> Signal | None:
        """Return what a name stands for; tell it if there is no such name, once for all uses in the part."""
        signal = self.signals.get(name.text)
        if signal is None and name.text not in self._missed:
            self._missed.add(name.text)
            self.desk.tell("P004", name, name=name.text, known=self.signals, part=self.part)
        return signal

    def pick(self, ref: PinRef) -> tuple[Signal, tuple[int, ...]] | None:
        """Return a name and the bits of it that are meant; None when told."""
        signal = self.find(ref.name)
        if signal is None:
            return None
        if ref.select is None:
            return signal, signal.bits
        bits = self.slice(signal, ref.name, ref.select)
        return None if bits is None else (signal, bits)

    def slice(self, signal: Signal, at: Word, select: Range) -> tuple[int, ...] | None:
        """Return selected bits of a signal, msb first; None when told."""
        msb, lsb = bounds(select)
        bits = signal.picked(msb, lsb)
        if bits is None:
            written = f"[{msb}]" if select.lsb is None else f"[{msb}:{lsb}]"
            declared = f"{signal.name}[{signal.msb}:{signal.lsb}]" if signal.vector else "a single bit"
            place = self.desk.place(at, select.lsb or select.msb)
            first = ((signal.place, "declared here"),)
            self.desk.tell("P005", place, name=signal.name, bits=written, declared=declared, related=first)
        return bits


def bounds(written: Range | None) -> tuple[int, int]:
    """Return msb and lsb of a range as numbers; (0, 0) without one. Over nine digits count as the largest."""
    if written is None:
        return 0, 0
    msb = _index(written.msb)
    return msb, msb if written.lsb is None else _index(written.lsb)


def _index(word: Word) -> int:
    return int(word.text) if word.text.isdigit() and len(word.text) < 10 else 10**9
