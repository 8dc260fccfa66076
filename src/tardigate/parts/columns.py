"""Cells of a table to triples of numbers, checked.

Takes cells and a unit, gives one triple a condition; tells unknown units, numbers out of range, negative
delays, a wrong order and a wrong number of columns. Does not know what the row is about.
"""

from __future__ import annotations

from collections.abc import Mapping
from functools import lru_cache

from tardigate.parts.desk import Desk
from tardigate.parts.model import Columns
from tardigate.parts.source_delay import Triple
from tardigate.parts.units import FEMTOSECONDS, LONGEST, UNITS, amount
from tardigate.syntax.parts_tree import Cell, Quantity, Word

NAN = float("nan")
ORDER = ("min", "typ", "max")

Units = Mapping[str, int]


def unit_known(desk: Desk, unit: Word, units: Units, what: str) -> bool:
    """Say whether a unit is one of `units`; tell it if not."""
    if unit.text in units:
        return True
    hint = f"Known units of {what}: {', '.join(units)}."
    desk.tell("P002", unit, name=unit.text, known=units, hint=hint, what=what)
    return False


def quantity(desk: Desk, written: Quantity, units: Units, what: str) -> float | None:
    """Return a quantity in what `units` counts in, or None when it is refused."""
    if not unit_known(desk, written.unit, units, what):
        return None
    return _number(desk, written.number, written.unit.text, units)


def columns(
    desk: Desk, cells: tuple[Cell, ...], unit: Word, count: int, at: Word, *, negative: bool = False
) -> Columns | None:
    """Return the triples of a row's cells, fs, one for each of `count` conditions; None when refused.

    `at` is the word of the row that a wrong number of columns is told at; `negative` allows numbers below 0.
    """
    if not unit_known(desk, unit, FEMTOSECONDS, "a time"):
        return None
    if len(cells) != count:
        desk.tell("P009", at, found=len(cells), count=count)
        return None
    triples = [_triple(desk, cell, unit.text, negative) for cell in cells]
    return None if None in triples else tuple(triple for triple in triples if triple is not None)


def _triple(desk: Desk, cell: Cell, unit: str, negative: bool) -> Triple | None:
    numbers = []
    for word in cell.numbers:
        number: float | None = NAN
        if word is not None:
            number = _number(desk, word, unit, FEMTOSECONDS)
            if number is None:
                return None
            if number < 0 and not negative:
                desk.tell("P011", word, number=word.text)
                return None
        numbers.append(number)
    if len(numbers) == 1:
        numbers *= 3  # IEEE 1364-2005 clause 4.3.5: one number stands for min, typ and max
    low, mid, high = numbers
    if low is None or mid is None or high is None:  # told above
        return None
    return (low, mid, high) if _in_order(desk, cell, (low, mid, high)) else None


def _in_order(desk: Desk, cell: Cell, triple: Triple) -> bool:
    """Say whether the numbers that are there rise; NaN compares with nothing."""
    for first, second in ((0, 1), (1, 2), (0, 2)):
        if triple[first] > triple[second]:
            word = cell.numbers[second]
            assert word is not None  # NaN is not less
            desk.tell("P010", word, larger=ORDER[first], smaller=ORDER[second])
            return False
    return True


def _number(desk: Desk, word: Word, unit: str, units: Units) -> float | None:
    value = _value(word.text, unit, LONGEST if units is FEMTOSECONDS else 1e30)
    if value is None:
        desk.tell("P003", word, number=f"{word.text} {unit}")
    return value


@lru_cache(4096)
def _value(number: str, unit: str, most: float) -> float | None:
    try:
        value = amount(number, unit, UNITS[unit])
    except OverflowError:
        return None
    return value if abs(value) <= most else None
