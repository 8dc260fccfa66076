"""Text whose every byte knows where it was written, through includes and macros.

Takes pieces of files, gives one text and its map back. Does not know any language.
"""

from __future__ import annotations

from bisect import bisect_right
from dataclasses import dataclass, field
from typing import NamedTuple

from tardigate.source.files import SourceFile
from tardigate.source.span import Span
from tardigate.source.traces import TOKEN, USE, Traces, alone

LONGEST = 1000
"""Bytes of a macro's name that are looked through for its beginning."""


class Piece(NamedTuple):
    """A stretch of placed text and where it was written.

    Byte `i` of the stretch stands at `offset + i` of `file`; in a macro's expansion (`stop` not None) every
    byte stands at the use of the macro, `offset` to before `stop`.
    """

    at: int
    file: SourceFile
    offset: int
    stop: int | None = None


@dataclass(frozen=True, slots=True)
class PlacedText:
    """A text and the pieces it was put together from, in order of `Piece.at`."""

    data: bytes
    pieces: tuple[Piece, ...]
    traces: Traces | None = None
    _starts: list[int] = field(init=False, repr=False, compare=False)

    def __post_init__(self) -> None:
        object.__setattr__(self, "_starts", [piece.at for piece in self.pieces])

    @classmethod
    def whole(cls, file: SourceFile, data: bytes | None = None) -> PlacedText:
        """Place a file as it is; `data` stands in for its bytes and must be as long (comments blanked)."""
        return cls(file.data if data is None else data, (Piece(0, file, 0),))

    def span(self, start: int, stop: int | None = None) -> Span:
        """Return where the bytes from `start` to before `stop` (one byte without it) were written.

        What comes of a macro stands at its use, or at the argument that it comes from.
        """
        piece = self.pieces[max(0, bisect_right(self._starts, start) - 1)]
        first = piece.offset + start - piece.at
        last = first + (1 if stop is None else stop - start)
        if self.traces is None:
            return piece.file.span(*((first, last) if piece.stop is None else (piece.offset, piece.stop)))
        via: tuple[tuple[Span, str], ...] = ()
        use = (piece.offset, piece.stop) if piece.stop is not None else self._use(piece, first)
        if use is not None:
            (first, last), via = self._traced(piece.file, use, start)
        via += self.traces.included(start, piece.file.path)
        found = piece.file.span(first, last)
        return found._replace(via=via) if via else found

    def _use(self, piece: Piece, place: int) -> tuple[int, int] | None:
        """Return the use of a macro that a byte of a file is part of, if the expansion took its place."""
        assert self.traces is not None
        data = piece.file.data
        grave = data.rfind(b"`", max(piece.offset, place - LONGEST), place + 1) if self.traces.macros else -1
        found = USE.match(data, grave) if grave >= 0 else None
        if found is None or found.end() <= place or self.data[piece.at + grave - piece.offset] == data[grave]:
            return None
        return found.span()

    def _traced(
        self, file: SourceFile, use: tuple[int, int], at: int
    ) -> tuple[tuple[int, int], tuple[tuple[Span, str], ...]]:
        """Return what to show of a use for the byte at an offset of this text, and where it is written."""
        assert self.traces is not None
        named = USE.match(file.data, use[0])
        token = TOKEN.match(self.data, at)
        if named is None or token is None or token[0].isspace():
            return use, ()
        via = self.traces.written(at, named[1].removeprefix(b"\\"), token[0])
        if via and via[0][1].startswith("written"):
            return use, via
        given = alone(token[0]).search(file.data, named.end(), use[1])
        return (given.span() if given else use), via
