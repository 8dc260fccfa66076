"""Where the parts house works on one file: places of its words, and where faults are told.

Takes words of a tree, gives places; passes codes on to the collector. Decides nothing.
"""

from __future__ import annotations

from collections.abc import Iterable

from tardigate.parts.model import Place
from tardigate.source.collector import Collector
from tardigate.source.diagnostic import Related, did_you_mean
from tardigate.source.files import SourceFile
from tardigate.syntax.parts_tree import Expr, PinRef, Word


class Desk:
    """One file under work; `faults` counts what was told."""

    def __init__(self, file: SourceFile, collector: Collector) -> None:
        self.file = file
        self.collector = collector
        self.faults = 0

    def place(self, word: Word | PinRef | Expr, last: Word | None = None) -> Place:
        """Return the place of a word, or of everything from it to `last`."""
        if isinstance(word, PinRef):
            last = (word.select.lsb or word.select.msb) if word.select else last
            word = word.name
        elif isinstance(word, Expr):
            word = word.word
        return Place(self.file, word.start, (last or word).stop)

    def tell(
        self,
        code: str,
        at: Word | PinRef | Expr | Place,
        *,
        hint: str | None = None,
        known: Iterable[str] | None = None,
        name: str = "",
        related: tuple[tuple[Place, str], ...] = (),
        **words: object,
    ) -> None:
        """Tell a fault; `known` are the names among which the nearest to `name` is offered before `hint`."""
        self.faults += 1
        place = at if isinstance(at, Place) else self.place(at)
        if known is not None:
            hint = (did_you_mean(name, list(known)) if self.collector.room(code) else None) or hint
        beside = tuple(Related(where.span(), label) for where, label in related)
        self.collector.tell(code, place.span(), hint=hint, related=beside, name=name, **words)
