"""Coarse lexing of Verilog: bytes to columns of words and marks, without a loop over the text.

Takes placed text, gives `Scan`. Knows what is a word and what a mark, not what they mean; whatever it does
not understand it leaves to the grammar.
"""

from __future__ import annotations

import re
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from tardigate.syntax.intern import PAD, Interned, intern
from tardigate.syntax.patterns import compiled

SPACE, WORD, OPEN, CLOSE, COMMA, SEMICOLON, DOT, LEFT, RIGHT, OTHER = range(10)
"""Classes of bytes, and of marks: white space, word, ( ) , ; . [ ], anything else."""

_CLASSES = bytearray([OTHER] * 256)
for _chars, _class in (
    (b" \t\r\n\f\v", SPACE),
    (b"abcdefghijklmnopqrstuvwxyzABCDEFGHIJKLMNOPQRSTUVWXYZ0123456789_$'", WORD),
    (b"(", OPEN), (b")", CLOSE), (b",", COMMA), (b";", SEMICOLON), (b".", DOT), (b"[", LEFT), (b"]", RIGHT),
):  # fmt: skip
    for _char in _chars:
        _CLASSES[_char] = _class
_TABLE = bytes(_CLASSES)

_PIECE = 1 << 18
"""Bytes that are looked at in one go."""

_STRING = compiled(rb'\\[^ \t\r\n\f\v]+|"(?:[^"\\\n]++|\\.)*+"?', re.DOTALL)


class Scan(NamedTuple):
    """The marks of a text, in order.

    `kind` uint8[marks]: class of each mark (WORD for a word, else the class of a single byte);
    `at` int32[marks]: its first byte. For words, in order: `word` int32[words] is the number of the name in
    `names`, `word_stop` int32[words] where it ends, `escaped` bool[words] or None when there is no escaped
    identifier. `word_of` int32[marks]: number of the word that a mark is, or of the next one.
    """

    data: bytes
    kind: NDArray[np.uint8]
    at: NDArray[np.int32]
    word: NDArray[np.int32]
    word_stop: NDArray[np.int32]
    escaped: NDArray[np.bool_] | None
    word_of: NDArray[np.int32]
    names: Interned


def scan(data: bytes) -> Scan:
    """Split a text into words and marks.

    A word is a run of identifier characters and `'`, so that `1'b0` is one, or an escaped identifier
    (IEEE 1364-2005 clause 3.7.1), whose name is without the backslash. Each byte of a string is a mark of
    class OTHER.
    """
    kind, at, stop = _marks(data)
    is_word = kind == WORD
    start = at[np.flatnonzero(is_word)]
    escaped = None
    if b"\\" in data:
        escaped = np.frombuffer(data, np.uint8)[start] == 0x5C
        start = start + escaped
    names = intern(data + bytes(PAD), start, stop)
    word_of = np.cumsum(is_word, dtype=np.int32)
    word_of -= is_word
    return Scan(data, kind, at, names.ids, stop, escaped, word_of, names)


def _marks(data: bytes) -> tuple[NDArray[np.uint8], NDArray[np.int32], NDArray[np.int32]]:
    """Return kind and place of each mark, and where each word ends.

    A piece of the text at a time, so that what is made on the way stays in the processor's cache.
    """
    special, inside = None, None
    if b"\\" in data or b'"' in data:
        special = _protect(data, np.frombuffer(data.translate(_TABLE), np.uint8).copy())
        inside = _escapes(data, special)
    kinds, places, ends = [np.zeros(0, np.uint8)], [np.zeros(0, np.int32)], [np.zeros(0, np.int32)]
    before = SPACE
    for first in range(0, len(data), _PIECE):
        last = min(first + _PIECE, len(data))
        if special is None:
            classes = np.frombuffer(data[first:last].translate(_TABLE), np.uint8)
        else:
            classes = special[first:last]
        is_word = classes == WORD
        after_word = np.empty(len(is_word), np.bool_)
        after_word[0], after_word[1:] = before == WORD, is_word[:-1]
        begins, over = is_word > after_word, after_word > is_word
        if inside is not None:  # `a\b ` is two words
            over |= after_word & inside[first:last]
            begins |= inside[first:last]
        begins |= classes >= OPEN
        found = np.flatnonzero(begins)
        kinds.append(classes[found])
        places.append(found.astype(np.int32) + np.int32(first))
        ends.append(np.flatnonzero(over).astype(np.int32) + np.int32(first))
        before = int(classes[-1])
    if before == WORD:
        ends.append(np.array([len(data)], np.int32))
    return np.concatenate(kinds), np.concatenate(places), np.concatenate(ends)


def _protect(data: bytes, classes: NDArray[np.uint8]) -> NDArray[np.uint8]:
    """Make escaped identifiers words and strings OTHER, whatever bytes they hold."""
    if b'"' not in data:
        start = np.flatnonzero(np.frombuffer(data, np.uint8) == 0x5C)
        spaces = np.flatnonzero(classes == SPACE)
        # A backslash inside an escaped identifier is part of it: keep the first up to each end.
        order = np.searchsorted(spaces, start)
        stop = np.append(spaces, len(data))[order]
        first = np.ones(len(start), bool)
        first[1:] = stop[1:] != stop[:-1]
        first &= stop > start + 1  # a backslash with nothing behind it names nothing
        start, stop = start[first], stop[first]
        length = stop - start
        flat = np.arange(length.sum()) + np.repeat(start - (np.cumsum(length) - length), length)
        classes[flat] = WORD
        return classes
    for found in _STRING.finditer(data):
        classes[found.start() : found.end()] = WORD if data[found.start()] == 0x5C else OTHER
    return classes


def _escapes(data: bytes, classes: NDArray[np.uint8]) -> NDArray[np.bool_]:
    """Tell for each byte whether an escaped identifier begins there (bool[bytes])."""
    start = np.flatnonzero((np.frombuffer(data, np.uint8) == 0x5C) & (classes == WORD))
    ends = np.searchsorted(np.flatnonzero(classes == SPACE), start)
    first = np.ones(len(start), bool)
    first[1:] = ends[1:] != ends[:-1]
    begins = np.zeros(len(data), bool)
    begins[start[first]] = True
    return begins
