"""The tree of a parts file: what is written, in order, nothing looked up. Data only.

Every word keeps its place, so that whatever is refused later can be shown. Numbers are still text. Named
tuples, here and in the model: thirty frozen dataclasses would take longer to define than a file to read.
"""

from __future__ import annotations

from typing import NamedTuple

from tardigate.source.files import SourceFile


class Word(NamedTuple):
    """A word or number as written, without the quotes of a text and the backslash of an escaped name.

    `start` to before `stop` are its bytes in the file.
    """

    text: str
    start: int
    stop: int


class Quantity(NamedTuple):
    """A number with its unit."""

    number: Word
    unit: Word


class Span(NamedTuple):
    """`low..high unit`; both the same for a single number."""

    low: Word
    high: Word
    unit: Word


class Cell(NamedTuple):
    """One column of a row: one number for min, typ and max alike, or three; None where a `-` stands."""

    numbers: tuple[Word | None, ...]


class Range(NamedTuple):
    """`[msb:lsb]`, or `[msb]` with `lsb` None."""

    msb: Word
    lsb: Word | None


class PinRef(NamedTuple):
    """A pin, bits of it where `select` says so."""

    name: Word
    select: Range | None


class Expr(NamedTuple):
    """A piece of a function.

    `form`: `binary`, `prefix`, `choose` (condition, then, else), `concat`, `number`, `read`, `read_bit` (its
    one argument is the index) or `read_bits`; `word`: the operator, number or name.
    """

    form: str
    word: Word
    args: tuple[Expr, ...] = ()
    select: Range | None = None


class Condition(NamedTuple):
    """A column: name, text, voltage and temperature."""

    name: Word
    text: Word | None
    spans: tuple[Span, ...]


class PinDecl(NamedTuple):
    """A declared pin (or hidden state, or parameter): its function and when it drives where that is given."""

    name: Word
    range: Range | None
    capacitance: Quantity | None = None
    function: Expr | None = None
    when: Expr | None = None


class Pins(NamedTuple):
    """A list of pins; `way`: `input`, `output`, `inout` or `state`."""

    way: str
    pins: tuple[PinDecl, ...]
    each: Quantity | None


class Parameter(NamedTuple):
    """A parameter of a part and its default."""

    name: Word
    range: Range | None
    value: Word | None


class Stored(NamedTuple):
    """One line of a register: `store` (of `pin`), `clear` or `set`."""

    form: str
    pin: PinRef | None
    function: Expr


class Register(NamedTuple):
    """A register or latch; `how`: `posedge`, `negedge` (register), `high`, `low` (latch)."""

    how: Word
    clock: PinRef
    lines: tuple[Stored, ...]


class Side(NamedTuple):
    """Pins on one side of a row, one edge of them where it is named."""

    edge: Word | None
    pins: tuple[PinRef, ...]


class Row(NamedTuple):
    """A row of a table of times."""

    symbol: Word
    source: Side
    polarity: Word | None
    arrow: Word
    to: tuple[PinRef, ...]
    when: Expr | None
    cells: tuple[Cell, ...]


class Times(NamedTuple):
    """A table of times in one unit."""

    unit: Word
    rows: tuple[Row, ...]


class Check(NamedTuple):
    """A row of a table of checks: `reference` for those between two pins, `level` for a width."""

    symbol: Word
    data: Side
    reference: Side | None
    level: Word | None
    when: Expr | None
    cells: tuple[Cell, ...]


class Checks(NamedTuple):
    """A table of checks in one unit."""

    unit: Word
    rows: tuple[Check, ...]


class Load(NamedTuple):
    """Rated load of outputs (all where `pins` is empty), and the delay of each unit of load beyond it."""

    pins: tuple[PinRef, ...]
    rated: Quantity
    more: tuple[Cell, ...]
    time_unit: Word | None
    load_unit: Word | None


class Package(NamedTuple):
    """How many instances share one package."""

    number: Word


PartItem = Package | Pins | Parameter | Register | Times | Checks | Load


class Part(NamedTuple):
    """A part."""

    name: Word
    text: Word | None
    items: tuple[PartItem, ...]


class Entry(NamedTuple):
    """What a row by kind is for: a gate or operator with `low` to `high` inputs, any number where None."""

    name: Word
    low: Word | None
    high: Word | None


class KindRow(NamedTuple):
    """A row of a table by kind; no entries in the family default."""

    symbol: Word
    entries: tuple[Entry, ...]
    cells: tuple[Cell, ...]


class KindTable(NamedTuple):
    """`gates`, `operators` or `default`."""

    form: str
    unit: Word
    rows: tuple[KindRow, ...]


class Wire(NamedTuple):
    """A line about wires; `form`: `fanout`, `more`, `net`, `length` or `load`.

    `name`: the number of the fan-out or the pattern of the net; `amount`: the length or the load;
    `time_unit`, `length_unit` belong to a length.
    """

    form: str
    name: Word | None = None
    cells: tuple[Cell, ...] = ()
    amount: Quantity | None = None
    time_unit: Word | None = None
    length_unit: Word | None = None


class Wires(NamedTuple):
    """A table of wire delays."""

    unit: Word
    lines: tuple[Wire, ...]


class Provenance(NamedTuple):
    """Where the figures come from."""

    text: Word


class Conditions(NamedTuple):
    """The columns of the family's tables."""

    conditions: tuple[Condition, ...]


class Alias(NamedTuple):
    """Other names of a part."""

    names: tuple[Word, ...]
    part: Word


class Equivalent(NamedTuple):
    """Parts that may stand in for one another."""

    names: tuple[Word, ...]


FamilyItem = Provenance | Conditions | Part | Alias | Equivalent | KindTable | Wires


class Family(NamedTuple):
    """A family and the file it stands in."""

    file: SourceFile
    name: Word
    text: Word | None
    items: tuple[FamilyItem, ...]
