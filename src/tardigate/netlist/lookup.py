"""Numbers of names, for one name at a time.

Takes an interned text, gives the numbers of names given as text; remembers, and turns to one big table when
there are many.
"""

from __future__ import annotations

from collections.abc import Iterable

from tardigate.syntax.intern import Interned

_MANY = 2000


class Lookup:
    """The names of one file by text."""

    def __init__(self, names: Interned) -> None:
        self._names = names
        self._known: dict[str, int] = {}
        self._asked = 0

    def find(self, text: str) -> int:
        """Return the number of a name, -1 when the file does not have it."""
        number = self._known.get(text)
        if number is None:
            self._asked += 1
            if self._asked == _MANY:
                self._known |= {self._names.text(i): i for i in range(len(self._names))}
                return self._known.setdefault(text, -1)
            number = self._known[text] = self._names.find(text) if self._asked < _MANY else -1
        return number

    def find_all(self, texts: Iterable[str]) -> list[int]:
        """Return the numbers of several names."""
        missing = [text for text in texts if text not in self._known]
        if len(missing) < _MANY:
            self._known |= dict(zip(missing, self._names.find_all(missing).tolist(), strict=True))
        return [self.find(text) for text in texts]
