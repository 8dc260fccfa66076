"""A user-defined primitive as written, before anything is known to be legal. Data only.

Every word has `at` and `stop`, offsets in the placed text.
"""

from __future__ import annotations

from typing import NamedTuple


class Word(NamedTuple):
    """A name, a number, or a symbol of a table (lower case; an edge in brackets as its two levels)."""

    text: str
    at: int
    stop: int


class Declared(NamedTuple):
    """Names declared with a direction and, with `stored`, `reg`; `direction` is empty in a mere `reg q;`."""

    direction: str
    stored: bool
    vector: bool
    names: tuple[Word, ...]
    value: Word | None


class DraftRow(NamedTuple):
    """A row: the symbols between its colons."""

    fields: tuple[tuple[Word, ...], ...]

    @property
    def at(self) -> int:
        """Where its first symbol begins."""
        return self.fields[0][0].at

    @property
    def stop(self) -> int:
        """Where its last symbol ends."""
        return self.fields[-1][-1].stop


class Draft(NamedTuple):
    """A primitive: a port of the header is a bare name or declared there."""

    name: Word
    ports: tuple[Word | Declared, ...]
    declarations: tuple[Declared, ...]
    initial: tuple[Word, Word] | None
    rows: tuple[DraftRow, ...]
