"""Plain statements: instances and declarations so simple that they are read in bulk.

Takes a scan, gives columns of all plain statements of the text. What is plain is a small part of what the
grammar accepts; a statement that is not exactly of that shape is left to the grammar.

    kind [name] ( net, net[3], 1'b0 ) ;        a gate, or a module instance with a name
    kind name ( .pin(net), .pin() ) ;
    input|output|inout|wire net, net ;
"""

from __future__ import annotations

from functools import cache
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from tardigate.syntax import words
from tardigate.syntax.scan import CLOSE, COMMA, DOT, LEFT, OPEN, RIGHT, SEMICOLON, WORD, Scan

NAME, GATE, DECLARATION, NUMBER, CONSTANT, STRANGE = range(16, 22)
"""What a word is: an identifier, a gate primitive, `input` and its like, a decimal number, a constant of one
bit, anything else (reserved words among it)."""

_ONE_BIT = {
    f"1'{base}{digit}": value for base in "bBhHdDoO" for digit, value in zip("01", (0, 1), strict=True)
}
_ONE_BIT |= {f"1'{base}{digit}": 2 + (digit in "zZ?") for base in "bBhHoO" for digit in "xXzZ?"}
_LARGEST_INDEX_DIGITS = 8


class Plain(NamedTuple):
    """All plain statements of a text, in order, in columns.

    `first` int32[statements]: its first mark; `stop` int32[statements]: the mark after its semicolon.
    `head` int32: the number of the name of its first word; `is_declaration` bool.
    Instances: `name` int32: number of the instance's name, or -1. Connections of statement `s` are
    `start[s]` to `start[s + 1]`: `pin` int32 (number of the pin's name, -1 by order), `net` int32 (number of
    the net's name; -1 open; -2, -3, -4, -5 the constants 0, 1, x, z), `bit` int32 (index, -1 for the whole
    net), `at` int32 (offset of the connection's word in the text). Of a declaration the connections are its
    names.
    """

    first: NDArray[np.int32]
    stop: NDArray[np.int32]
    head: NDArray[np.int32]
    is_declaration: NDArray[np.bool_]
    name: NDArray[np.int32]
    start: NDArray[np.int64]
    pin: NDArray[np.int32]
    net: NDArray[np.int32]
    bit: NDArray[np.int32]
    at: NDArray[np.int32]


def classify_names(scan: Scan) -> NDArray[np.uint8]:
    """Return what each name of the text is when it is not escaped, uint8[names]."""
    names = scan.names
    first = np.frombuffer(scan.data, np.uint8)[names.start] if len(names) else np.zeros(0, np.uint8)
    kinds = np.full(len(names), NAME, np.uint8)
    for name in np.flatnonzero((first < 0x41) | _hold_quote(scan)):
        text = names.text(int(name))
        if text.isdigit() and len(text) <= _LARGEST_INDEX_DIGITS:
            kinds[name] = NUMBER
        elif text in _ONE_BIT:
            kinds[name] = CONSTANT
        else:
            kinds[name] = STRANGE
    for group, kind in (
        (words.RESERVED, STRANGE),
        (words.GATES, GATE),
        (words.PLAIN_DECLARATIONS, DECLARATION),
    ):
        found = names.find_all(tuple(group))
        kinds[found[found >= 0]] = kind
    return kinds


def _hold_quote(scan: Scan) -> NDArray[np.bool_]:
    """Tell which names hold a `'` after their first byte (bool[names])."""
    found = np.zeros(len(scan.names), bool)
    if b"'" in scan.data:
        quotes = np.flatnonzero(np.frombuffer(scan.data, np.uint8) == 0x27)
        owner = np.searchsorted(scan.word_stop, quotes, "right")
        inside = owner < len(scan.word)
        owner, quotes = owner[inside], quotes[inside]
        starts = scan.at[np.flatnonzero(scan.kind == WORD)]
        found[scan.word[owner[starts[owner] <= quotes]]] = True  # others stand in strings
    return found


def refine(scan: Scan, kinds: NDArray[np.uint8]) -> NDArray[np.uint8]:
    """Return the kind of each mark, words by what they are (uint8[marks])."""
    of_words = kinds[scan.word]
    if scan.escaped is not None:
        of_words[scan.escaped] = NAME
    refined = scan.kind.copy()
    refined[scan.kind == WORD] = of_words
    return refined


def find_plain(scan: Scan, marks: NDArray[np.uint8]) -> Plain:
    """Find and read all plain statements; `marks` is what `refine` gives."""
    bounds = np.flatnonzero(marks == SEMICOLON)
    if not len(bounds):
        return _read(scan, marks, np.zeros(0, np.int64), np.zeros(0, np.int64), np.zeros(len(marks), np.int8))
    first = np.concatenate(([0], bounds[:-1] + 1))
    stop = bounds + 1
    depth = _depth(marks, first, stop)
    wrong = np.cumsum(~_fits(marks, depth), dtype=np.int32)
    before = np.concatenate(([0], wrong))
    plain = before[stop] == before[first]
    plain &= stop - first >= 3
    plain &= _whole(marks, first, stop, depth)
    return _read(scan, marks, first[plain], stop[plain], depth)


def _depth(marks: NDArray[np.uint8], first: NDArray[np.int64], stop: NDArray[np.int64]) -> NDArray[np.int8]:
    """Return how deep in parentheses each mark stands within its statement (before it; at most 3)."""
    # Counting modulo 256 does no harm: what is deeper than 3 in between is not plain anyway.
    step = (marks == OPEN).view(np.int8) - (marks == CLOSE).view(np.int8)
    depth = np.zeros(len(marks), np.int8)
    np.cumsum(step[:-1], dtype=np.int8, out=depth[1:])
    base = depth[first]
    if base.any():
        last = int(stop[-1])
        depth[:last] -= np.repeat(base, stop - first)
    return np.clip(depth, -1, 3, out=depth)


def _shift(marks: NDArray[np.uint8], by: int) -> NDArray[np.uint8]:
    moved = np.full(len(marks), SEMICOLON, np.uint8)
    moved[by:] = marks[: len(marks) - by]
    return moved


_KINDS = 22
_PIECE = 1 << 16


@cache
def _allowed() -> NDArray[np.bool_]:
    """Build the table of what may follow what: [depth + 1, mark before the last, last mark, mark]."""
    table = np.zeros((5, _KINDS, _KINDS, _KINDS), bool)
    anything = slice(None)
    outside, inside, pin = table[1], table[2], table[3]
    outside[anything, SEMICOLON, [NAME, GATE, DECLARATION]] = True
    outside[SEMICOLON, NAME, NAME] = outside[SEMICOLON, GATE, NAME] = True  # kind, then its instance's name
    outside[anything, SEMICOLON, NAME] = True
    outside[SEMICOLON, GATE, OPEN] = True
    outside[[NAME, GATE], NAME, OPEN] = True
    outside[anything, CLOSE, SEMICOLON] = True
    outside[SEMICOLON, DECLARATION, NAME] = True
    outside[[DECLARATION, COMMA], NAME, [[COMMA], [SEMICOLON]]] = True
    outside[NAME, COMMA, NAME] = True
    for level in (inside, pin):
        level[[OPEN, COMMA], NAME, LEFT] = level[NAME, LEFT, NUMBER] = level[LEFT, NUMBER, RIGHT] = True
    inside[anything, OPEN, [[NAME], [CONSTANT], [DOT]]] = True
    inside[anything, COMMA, [[NAME], [CONSTANT], [DOT]]] = True
    inside[[OPEN, COMMA], NAME, [[COMMA], [CLOSE]]] = True
    inside[[OPEN, COMMA], CONSTANT, [[COMMA], [CLOSE]]] = True
    inside[anything, RIGHT, [[COMMA], [CLOSE]]] = True
    inside[[OPEN, COMMA], DOT, NAME] = True
    inside[DOT, NAME, OPEN] = True
    inside[anything, CLOSE, [[COMMA], [CLOSE]]] = True
    pin[NAME, OPEN, [[NAME], [CONSTANT], [CLOSE]]] = True
    pin[OPEN, [NAME, CONSTANT], CLOSE] = True
    pin[NUMBER, RIGHT, CLOSE] = True
    return table.reshape(-1)


def _fits(marks: NDArray[np.uint8], depth: NDArray[np.int8]) -> NDArray[np.bool_]:
    """Tell for each mark whether it may stand after the two before it, at its depth."""
    fits = np.empty(len(marks), np.bool_)
    allowed = _allowed()
    one, two = _shift(marks, 1), _shift(marks, 2)
    for first in range(0, len(marks), _PIECE):
        these = slice(first, first + _PIECE)
        key = (depth[these] + np.int8(1)).astype(np.int32)
        for column in (two, one, marks):
            key *= _KINDS
            key += column[these]
        np.take(allowed, key, out=fits[these])
    return fits


def _whole(
    marks: NDArray[np.uint8], first: NDArray[np.int64], stop: NDArray[np.int64], depth: NDArray[np.int8]
) -> NDArray[np.bool_]:
    """Tell which statements are by name throughout or by order throughout, and closed."""
    whole: NDArray[np.bool_] = depth[stop - 1] == 0
    count = np.zeros(len(first), np.int32)
    by_name = marks == DOT
    if by_name.any():
        dots = np.concatenate(([0], np.cumsum(by_name, dtype=np.int32)))
        commas = np.concatenate(([0], np.cumsum((marks == COMMA) & (depth == 1), dtype=np.int32)))
        count = dots[stop] - dots[first]
        whole &= (count == 0) | (count == commas[stop] - commas[first] + 1)
    # A module instance has a name; only a gate may go without (clause 7.1, 12.1.2).
    second = marks[np.minimum(first + 1, len(marks) - 1)]
    whole &= (marks[first] != NAME) | (second == NAME)
    gate_by_name = (marks[first] == GATE) & (count > 0)
    whole &= ~gate_by_name
    return whole


def _read(
    scan: Scan,
    marks: NDArray[np.uint8],
    first: NDArray[np.int64],
    stop: NDArray[np.int64],
    depth: NDArray[np.int8],
) -> Plain:
    """Read the plain statements that begin and end at the given marks."""
    is_declaration = marks[first] == DECLARATION
    second = np.minimum(first + 1, max(len(marks) - 1, 0))
    has_name = (marks[second] == NAME) & ~is_declaration
    name = np.full(len(first), -1, np.int32)
    name[has_name] = _names_at(scan, second[has_name])
    terms, start = _terms(marks, first, stop, depth, bool(is_declaration.any()))
    net = _nets(scan, marks, terms)
    pin = np.full(len(terms), -1, np.int32)
    by_name = np.flatnonzero(depth[terms] == 2)
    pin[by_name] = _names_at(scan, terms[by_name] - 2)
    bit = np.full(len(terms), -1, np.int32)
    selected = np.flatnonzero((marks[np.minimum(terms + 1, len(marks) - 1)] == LEFT) & (net >= 0))
    if len(selected):
        bit[selected] = _numbers(scan, _names_at(scan, terms[selected] + 2))
    return Plain(
        first.astype(np.int32), stop.astype(np.int32), _names_at(scan, first), is_declaration, name,
        start, pin, net, bit, scan.at[terms],
    )  # fmt: skip


def _names_at(scan: Scan, marks: NDArray[np.int64]) -> NDArray[np.int32]:
    """Return the numbers of the names of marks that are words."""
    names: NDArray[np.int32] = scan.word[scan.word_of[marks]]
    return names


def _terms(
    marks: NDArray[np.uint8],
    first: NDArray[np.int64],
    stop: NDArray[np.int64],
    depth: NDArray[np.int8],
    declarations: bool,
) -> tuple[NDArray[np.int64], NDArray[np.int64]]:
    """Return the marks that are connections, and where those of each statement begin among them.

    A connection is a net, a constant, or the `)` of an open pin.
    """
    if not len(first):
        return np.zeros(0, np.int64), np.zeros(1, np.int64)
    low, high = int(first[0]), int(stop[-1])
    kind, level, before = marks[low:high], depth[low:high], _shift(marks[low:high], 1)
    apart = (before == OPEN) | (before == COMMA)
    term = (level >= 1) & ((kind == NAME) | (kind == CONSTANT)) & apart
    term |= (level == 2) & (kind == CLOSE) & (before == OPEN)
    if declarations:
        term |= (level == 0) & (kind == NAME) & ((before == DECLARATION) | (before == COMMA))
    length = stop - first
    if int(length.sum()) < high - low:  # statements between that are not plain
        inside = np.zeros(high - low + 1, np.int8)
        inside[first - low] += 1
        inside[stop - low] -= 1
        term &= np.cumsum(inside[:-1], dtype=np.int8).view(bool)
    before = np.cumsum(term, dtype=np.int32)  # a statement's first mark is no connection
    return np.flatnonzero(term) + low, np.append(before[first - low], before[-1]).astype(np.int64)


def _nets(scan: Scan, marks: NDArray[np.uint8], terms: NDArray[np.int64]) -> NDArray[np.int32]:
    """Return what each connection is on: a name's number, -1 open, -2 to -5 a constant."""
    net = np.full(len(terms), -1, np.int32)
    named = marks[terms] != CLOSE
    net[named] = _names_at(scan, terms[named])
    constants = np.flatnonzero(marks[terms] == CONSTANT)
    if len(constants):
        distinct, back = np.unique(net[constants], return_inverse=True)
        values = np.array([-2 - _ONE_BIT[scan.names.text(int(name))] for name in distinct], np.int32)
        net[constants] = values[back]
    return net


def _numbers(scan: Scan, names: NDArray[np.int32]) -> NDArray[np.int32]:
    """Return the values of decimal numbers, given the numbers of their names."""
    distinct, back = np.unique(names, return_inverse=True)
    values = np.array([int(scan.names.text(int(name))) for name in distinct], np.int32)
    return values[back].astype(np.int32)
