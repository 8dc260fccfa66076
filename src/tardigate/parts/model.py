"""What a parts file says, names looked up and numbers converted. Data only.

Bits of a part are numbered: the bits of its pins in the order of their declaration, most significant first,
then the bits of its hidden states. Times are triples in fs, one a condition; nodes are those of `Network`.
"""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType
from typing import NamedTuple

from tardigate.parts.function import Network
from tardigate.parts.kind import Edge, Way
from tardigate.parts.source_delay import Triple
from tardigate.source.files import SourceFile
from tardigate.source.placed import PlacedText
from tardigate.source.span import Span

SYMBOLS: Mapping[str, str] = {
    "LH": "tPLH", "HL": "tPHL", "ZH": "tPZH", "ZL": "tPZL", "HZ": "tPHZ", "LZ": "tPLZ",
}  # fmt: skip
"""The letter symbol (JEDEC JESD99) of each transition of an output."""

Columns = tuple[Triple, ...]
"""One triple (min, typ, max; fs, or the unit that is named) a condition."""


class Place(NamedTuple):
    """Where something is written; made into a span only when it is told."""

    file: SourceFile | PlacedText
    start: int
    stop: int

    def span(self) -> Span:
        """Return the span."""
        return self.file.span(self.start, self.stop)

    def __str__(self) -> str:
        span = self.span()
        return f"{span.path}:{span.line}"


class Condition(NamedTuple):
    """A column: `spans` are (low, high, unit), volts or degrees Celsius as written."""

    name: str
    text: str
    spans: tuple[tuple[str, str, str], ...]
    place: Place


class Pin(NamedTuple):
    """A pin: `msb` and `lsb` as declared (both 0 for a scalar), `capacitance` in fF or None."""

    name: str
    way: Way
    msb: int = 0
    lsb: int = 0
    vector: bool = False
    capacitance: float | None = None
    place: Place | None = None

    @property
    def width(self) -> int:
        """Number of bits."""
        return abs(self.msb - self.lsb) + 1

    @property
    def bits(self) -> tuple[str, ...]:
        """Names of the bits, most significant first."""
        if not self.vector:
            return (self.name,)
        step = 1 if self.lsb >= self.msb else -1
        return tuple(f"{self.name}[{i}]" for i in range(self.msb, self.lsb + step, step))


class Parameter(NamedTuple):
    """A parameter; `default` None where an instance has to give the value."""

    name: str
    msb: int
    lsb: int
    default: int | None

    @property
    def width(self) -> int:
        """Number of bits."""
        return abs(self.msb - self.lsb) + 1


class Register(NamedTuple):
    """A register (`edge` the clock's that stores) or latch (`edge` the one that opens it).

    `stores` maps a stored bit to the node of what is stored; `clear` and `set` are nodes, -1 for none.
    """

    latch: bool
    edge: Edge
    clock: int
    stores: Mapping[int, int]
    clear: int
    set: int
    place: Place


class Row(NamedTuple):
    """A row of times, for each of `pairs` (from bit, to bit).

    `transitions` are of the output: `LH HL ZH ZL HZ LZ`; `edge` the input's where it is named; `polarity`
    `+`, `-` or empty; `when` a node, -1 for always.
    """

    symbol: str
    transitions: tuple[str, ...]
    edge: Edge | None
    polarity: str
    pairs: tuple[tuple[int, int], ...]
    when: int
    columns: Columns
    place: Place


class Check(NamedTuple):
    """A row of checks: `tsu th trec trem` of data bits at an edge of the reference, or `tw period` of bits.

    `level` is `high` or `low` for a width; `reference` -1 for a width or period; `when` -1 for always.
    """

    symbol: str
    bits: tuple[int, ...]
    edge: Edge | None
    reference: int
    reference_edge: Edge | None
    level: str
    when: int
    columns: Columns
    place: Place


class Load(NamedTuple):
    """Rated load of output bits, fF; `more`: fs for each fF beyond it, one triple a condition, or empty."""

    bits: tuple[int, ...]
    rated: float
    more: Columns
    place: Place


class Part(NamedTuple):
    """A part.

    `functions` and `enables` map an output bit to the node of its function and of what makes it drive;
    an output that a register stores is in neither.
    """

    name: str
    text: str
    family: str
    package: int
    pins: tuple[Pin, ...]
    states: tuple[Pin, ...]
    parameters: tuple[Parameter, ...]
    network: Network
    functions: Mapping[int, int]
    enables: Mapping[int, int]
    registers: tuple[Register, ...]
    rows: tuple[Row, ...]
    checks: tuple[Check, ...]
    loads: tuple[Load, ...]
    place: Place
    bit_names: tuple[str, ...] = ()

    @property
    def pin_bits(self) -> int:
        """Number of bits of pins."""
        return sum(pin.width for pin in self.pins)


class Entry(NamedTuple):
    """Delay by kind: gate or operator `name` with `low` to `high` inputs (0 and 0: any number).

    `transition` is of the output; `symbol` says which row gave it.
    """

    name: str
    low: int
    high: int
    transition: str
    symbol: str
    columns: Columns
    place: Place


class Wires(NamedTuple):
    """Wire delays: by fan-out, for each more, by net pattern; lengths are already multiplied out.

    `load` is the wire capacitance for each fan-out, fF.
    """

    fanout: Mapping[int, Columns] = MappingProxyType({})
    more: Columns = ()
    nets: Mapping[str, Columns] = MappingProxyType({})
    load: float | None = None


class Family(NamedTuple):
    """A family. `default` has one entry a transition, with an empty name."""

    name: str
    text: str
    provenance: tuple[str, ...]
    conditions: tuple[Condition, ...]
    parts: tuple[Part, ...]
    aliases: Mapping[str, tuple[str, Place]]
    equivalents: tuple[tuple[tuple[str, Place], ...], ...]
    gates: tuple[Entry, ...]
    operators: tuple[Entry, ...]
    default: tuple[Entry, ...]
    wires: Wires
    place: Place
