"""The outline of a Verilog text: where its modules stand and which modules each one uses.

Takes a scan, gives `ModuleText`s without reading what is in them, so that a design pays only for the modules
it uses. Does not check the modules.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from tardigate.source.arrays import distinct
from tardigate.source.collector import Collector
from tardigate.source.diagnostic import did_you_mean
from tardigate.source.placed import PlacedText
from tardigate.syntax.plain import NAME
from tardigate.syntax.scan import OPEN, OTHER, SEMICOLON, WORD, Scan

_PARTS_HINT = "This looks like a parts file: give it with `--parts`."
_BLOCKS = {
    "module": "endmodule", "macromodule": "endmodule", "primitive": "endprimitive", "config": "endconfig",
}  # fmt: skip


class ModuleText(NamedTuple):
    """A module's stretch of the text.

    `word` is `module` or, for what is not read, `primitive` or `config`; `first`, `stop` are marks, `start`,
    `end` offsets of the whole stretch from its first word to after `endmodule`; `at` is the name's offset.
    """

    name: str
    word: str
    first: int
    stop: int
    start: int
    end: int
    at: int


def outline(
    scan: Scan, marks: NDArray[np.uint8], text: PlacedText, collector: Collector
) -> tuple[ModuleText, ...]:
    """Find the modules of a text; tell what stands outside of them (V003) or is not closed (V002)."""
    opening = {w: name for name in _BLOCKS if (w := scan.names.find(name)) >= 0}
    closing = {w: name for name in set(_BLOCKS.values()) if (w := scan.names.find(name)) >= 0}
    wanted = np.isin(scan.word, np.array([*opening, *closing], np.int32))
    if scan.escaped is not None:
        wanted &= ~scan.escaped
    words_at = np.flatnonzero(scan.kind == WORD) if wanted.any() else np.zeros(0, np.int64)
    found: list[ModuleText] = []
    after = 0
    open_word, open_mark = "", -1
    for word in np.flatnonzero(wanted).tolist():
        mark, name = int(words_at[word]), int(scan.word[word])
        if name in opening and not open_word:
            _outside(scan, after, mark, text, collector)
            open_word, open_mark = opening[name], mark
        elif name in closing and open_word and closing[name] == _BLOCKS[open_word]:
            found.append(_module(scan, marks, open_word, open_mark, mark, word))
            after, open_word = mark + 1, ""
        elif name in opening:
            start = int(scan.at[open_mark])
            collector.tell("V002", text.span(start, start + len(open_word)),
                           word=open_word, closing=_BLOCKS[open_word])  # fmt: skip
            open_word, open_mark = opening[name], mark
            after = mark
        elif not open_word:
            _outside(scan, after, mark + 1, text, collector)
            after = mark + 1
    if open_word:
        start = int(scan.at[open_mark])
        collector.tell(
            "V002", text.span(start, start + len(open_word)), word=open_word, closing=_BLOCKS[open_word]
        )
    else:
        _outside(scan, after, len(scan.kind), text, collector)
    return tuple(found)


def _module(
    scan: Scan, marks: NDArray[np.uint8], word: str, first: int, last: int, last_word: int
) -> ModuleText:
    named = first + 1 if marks[first + 1] == NAME else first
    name_word = int(scan.word_of[named])
    name = scan.names.text(int(scan.word[name_word])) if named > first else ""
    return ModuleText(
        name, "module" if word == "macromodule" else word, first, last + 1,
        int(scan.at[first]), int(scan.word_stop[last_word]), int(scan.at[named]),
    )  # fmt: skip


def _outside(scan: Scan, first: int, stop: int, text: PlacedText, collector: Collector) -> None:
    """Tell of the first thing that stands outside modules, attributes apart."""
    place = first
    data = scan.data
    while place < stop:
        at = int(scan.at[place])
        if data[at : at + 2] != b"(*":
            end = int(scan.word_stop[scan.word_of[place]]) if scan.kind[place] == WORD else at + 1
            word = data[at:end].decode("latin-1")
            hint = _PARTS_HINT if word == "family" else did_you_mean(word, [*_BLOCKS])
            collector.tell("V003", text.span(at, end), found=word, hint=hint)
            return
        close = data.find(b"*)", at + 2)
        if close < 0:
            collector.tell("V003", text.span(at, at + 2), found="(*")
            return
        place = int(np.searchsorted(scan.at, np.int32(close + 2)))


def used_names(
    scan: Scan, marks: NDArray[np.uint8], modules: Sequence[ModuleText], known: Sequence[str]
) -> dict[str, list[str]]:
    """Return, by module, which of the names in `known` it may use as modules, in order of their numbers.

    Those are names before a name or a `#`, or as `; name (`; neither a module's own name in its header
    (`module m #(...)`) nor that of a delay (`buf #D g (...)`).
    """
    numbers = scan.names.find_all(known)
    is_known = np.zeros(len(scan.names), np.bool_)
    is_known[numbers[numbers >= 0]] = True
    at = np.flatnonzero(marks == NAME)
    at = at[(at > 0) & (at < len(marks) - 1)]
    at = at[is_known[scan.word[scan.word_of[at]]]]
    before, behind = marks[at - 1], marks[at + 1]
    uses = (behind == NAME) | ((behind == OPEN) & (before == SEMICOLON))
    other = np.flatnonzero(behind == OTHER)
    uses[other] = _sharp(scan, at[other] + 1)
    behind_sign = np.flatnonzero(uses & (before == OTHER))
    uses[behind_sign] &= ~_sharp(scan, at[behind_sign] - 1)
    at = at[uses]
    first = np.array([module.first for module in modules], np.int64)
    stop = np.array([module.stop for module in modules], np.int64)
    owner = np.searchsorted(first, at, "right") - 1
    inside = (owner >= 0) & (at < stop[owner]) & (at > first[owner] + 1)
    pairs = owner[inside].astype(np.int64) * len(scan.names) + scan.word[scan.word_of[at[inside]]]
    found: dict[str, list[str]] = {}
    for pair in distinct(pairs).tolist():
        module, name = divmod(pair, len(scan.names))
        found.setdefault(modules[module].name, []).append(scan.names.text(name))
    return found


def _sharp(scan: Scan, marks: NDArray[np.int64]) -> NDArray[np.bool_]:
    """Tell which marks are a `#`."""
    sharp: NDArray[np.bool_] = np.frombuffer(scan.data, np.uint8)[scan.at[marks]] == 0x23
    return sharp
