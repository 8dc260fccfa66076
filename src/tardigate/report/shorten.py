"""Text that has to fit: long names shortened in the middle, prose broken between words.

Measures in terminal cells, not in characters. Does not know any console.
"""

from __future__ import annotations

from collections.abc import Iterable

from rich.cells import cell_len
from rich.text import Text


def cells(text: str) -> int:
    """Return the number of terminal cells a text takes."""
    return len(text) if text.isascii() else cell_len(text)


def take(text: str, room: int) -> str:
    """Return the longest beginning of a text that fits in `room` cells."""
    if text.isascii():
        return text[: max(0, room)]
    return text[: _fitting(text, room)]


def take_end(text: str, room: int) -> str:
    """Return the longest end of a text that fits in `room` cells."""
    if text.isascii():
        return text[max(0, len(text) - max(0, room)) :]
    return text[len(text) - _fitting(reversed(text), room) :]


def _fitting(characters: Iterable[str], room: int) -> int:
    count = 0
    for character in characters:
        room -= cell_len(character)
        if room < 0:
            break
        count += 1
    return count


def shorten(name: str, room: int, cut: str = "…") -> str:
    """Return a hierarchical name in at most `room` cells (1 or more).

    What goes is the middle, marked by `cut`; the last segment stays whole when it fits beside the mark, or
    else keeps its beginning and, with its index, its end.
    """
    if cells(name) <= room:
        return name
    cut = take(cut, room)
    last = name[max(0, name.rfind(".")) :]
    left = room - cells(cut) - cells(last)
    if name != last and left >= 0:
        return take(name, left) + cut + last
    left = room - cells(cut)
    segment = name if name == last else last[1:]
    tail = take_end(segment, (left + 1) // 2)
    return take(segment, left - cells(tail)) + cut + tail


def wrap(text: Text, width: int, indent: int = 0) -> list[Text]:
    """Break prose between words into lines of at most `width` cells; lines after the first are indented.

    A word longer than a line stands on a line of its own and is not broken.
    """
    breaks, at = [], 0
    line, gap = 0, 0
    for word in text.plain.split(" "):
        size = cells(word)
        if line and line + gap + size > width:
            breaks.append(at)
            line = indent + size
        else:
            line += gap + size
        gap = 1
        at += len(word) + 1
    pieces = text.divide(breaks) if breaks else [text.copy()]
    lines = []
    for number, piece in enumerate(pieces):
        piece.rstrip()
        if number:
            spaces = len(piece.plain) - len(piece.plain.lstrip(" "))
            piece = Text(" " * indent).append_text(piece[spaces:])
        lines.append(piece)
    return lines
