"""Whether rows of a primitive's table contradict one another (IEEE 1364-2005, 8.1.4).

Takes rows whose symbols are legal, tells rows with another output for inputs and states that an earlier row
has already. A row without an edge and one with an edge never contradict: the first dominates (8.8). A row
that keeps several states may meet those that give a value in some: it is about the others.
"""

from __future__ import annotations

from collections.abc import Sequence

from tardigate.source.collector import Collector
from tardigate.source.diagnostic import Related
from tardigate.source.placed import PlacedText
from tardigate.syntax.tree import Row
from tardigate.syntax.udp_draft import Draft

_LEVELS = {"0": "0", "1": "1", "x": "x", "?": "01x", "b": "01"}
_EDGES = {"*": "??", "r": "01", "f": "10"}
_SEVERAL_STATES = ("?", "b")
_SEVERAL = {"p": ("01", "0x", "x1"), "n": ("10", "1x", "x0")}


def check_rows(draft: Draft, rows: Sequence[Row], text: PlacedText, collector: Collector) -> None:
    """Tell (V149) rows that contradict an earlier one, each once."""
    groups: dict[int, list[int]] = {}
    for number, row in enumerate(rows):
        if row.output == "-" and row.state in _SEVERAL_STATES:
            continue
        edge = next((i for i, symbol in enumerate(row.inputs) if symbol not in _LEVELS), -1)
        groups.setdefault(edge, []).append(number)
    pairs = [pair for members in groups.values() for pair in _conflicts(rows, members)]
    for first, second in sorted(pairs, key=lambda pair: pair[1]):
        spans = [text.span(draft.rows[number].at, draft.rows[number].stop) for number in (first, second)]
        related = (Related(spans[0], "the other row"),)
        outputs = {"first": rows[first].output, "second": rows[second].output}
        collector.tell("V149", spans[1], related=related, primitive=draft.name.text, **outputs)


def _conflicts(rows: Sequence[Row], members: list[int]) -> list[tuple[int, int]]:
    """Return pairs of rows, earlier one first, that give different outputs for the same change.

    Sets of rows are whole numbers, bit `k` for the `k`-th row so far: for each input and what may happen on
    it the rows that take it, and for each present state and next state the rows that make it.
    """
    takes: dict[tuple[int, str], int] = {}
    makes: dict[tuple[str, str], int] = {}
    found = []
    for number, member in enumerate(members):
        row = rows[member]
        same = (1 << number) - 1
        for i, symbol in enumerate(row.inputs):
            events = _events(symbol)
            fitting = 0
            for event in events:
                fitting |= takes.get((i, event), 0)
                takes[i, event] = takes.get((i, event), 0) | 1 << number
            same &= fitting
        output = row.state if row.output == "-" else row.output
        wrong = 0
        for state in _LEVELS.get(row.state, " "):
            for value in "01x":
                wrong |= same & makes.get((state, value), 0) if value != output else 0
            makes[state, output] = makes.get((state, output), 0) | 1 << number
        if wrong:
            earliest = (wrong & -wrong).bit_length() - 1
            found.append((members[earliest], member))
    return found


def _events(symbol: str) -> tuple[str, ...]:
    """Return what may happen on an input: levels, or edges as two levels."""
    if symbol in _LEVELS:
        return tuple(_LEVELS[symbol])
    if symbol in _SEVERAL:
        return _SEVERAL[symbol]
    before, after = (_LEVELS[level] for level in _EDGES.get(symbol, symbol))
    return tuple(a + b for a in before for b in after if a != b)
