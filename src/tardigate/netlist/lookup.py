"""Numbers of names, for one name at a time.

Takes an interned text, gives the numbers of names given as text; remembers, and turns to one big table when
there are many.
"""

from __future__ import annotations

from collections.abc import Collection

from tardigate.syntax.intern import Interned

_MANY = 2000
"""Names in a file, or questions, up to which names are put in a table at once, or sought one at a time."""


class Lookup:
    """The names of one file by text."""

    def __init__(self, names: Interned) -> None:
        self._names = names
        self._known: dict[str, int] = {}
        self._asked = 0
        self._complete = False
        if len(names) < _MANY:
            self._complete_table()

    def _complete_table(self) -> None:
        self._complete = True
        self._known = {self._names.text(i): i for i in range(len(self._names))}

    def find(self, text: str) -> int:
        """Return the number of a name, -1 when the file does not have it."""
        number = self._known.get(text)
        if number is not None:
            return number
        if self._complete:
            return -1
        self._asked += 1
        if self._asked < _MANY:
            return self._known.setdefault(text, self._names.find(text))
        self._complete_table()
        return self._known.get(text, -1)

    def find_all(self, texts: Collection[str]) -> list[int]:
        """Return the numbers of several names."""
        if not self._complete:
            missing = [text for text in texts if text not in self._known]
            self._known |= dict(zip(missing, self._names.find_all(missing).tolist(), strict=True))
        return [self._known.get(text, -1) for text in texts]
