"""Text whose every byte knows where it was written, through includes and macros.

Takes pieces of files, gives one text and its map back. Does not know any language.
"""

from __future__ import annotations

from bisect import bisect_right
from dataclasses import dataclass, field
from typing import NamedTuple

from tardigate.source.files import SourceFile
from tardigate.source.span import Span


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
    _starts: list[int] = field(init=False, repr=False, compare=False)

    def __post_init__(self) -> None:
        object.__setattr__(self, "_starts", [piece.at for piece in self.pieces])

    @classmethod
    def whole(cls, file: SourceFile, data: bytes | None = None) -> PlacedText:
        """Place a file as it is; `data` stands in for its bytes and must be as long (comments blanked)."""
        return cls(file.data if data is None else data, (Piece(0, file, 0),))

    def span(self, start: int, stop: int | None = None) -> Span:
        """Return where the bytes from `start` to before `stop` (one byte without it) were written."""
        piece = self.pieces[max(0, bisect_right(self._starts, start) - 1)]
        if piece.stop is not None:
            return piece.file.span(piece.offset, piece.stop)
        length = 1 if stop is None else stop - start
        first = piece.offset + start - piece.at
        return piece.file.span(first, first + length)
