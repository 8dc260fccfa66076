"""Where procedural code begins and ends in a module (IEEE 1364-2005 clauses 9 and 10), without a grammar.

Takes a scan and a module's stretch of it, gives the stretches of `always`, `initial`, tasks and functions.
Does not check what stands in them.
"""

from __future__ import annotations

import re

import numpy as np
from numpy.typing import NDArray

from tardigate.syntax.outline import ModuleText
from tardigate.syntax.patterns import compiled
from tardigate.syntax.plain import STRANGE
from tardigate.syntax.scan import CLOSE, DOT, LEFT, OPEN, OTHER, RIGHT, SEMICOLON, WORD, Scan

_BEGINNERS = {"always": "", "initial": "", "task": "endtask", "function": "endfunction"}
_BLOCKS = {"begin": "end", "fork": "join"}
_CASES = ("case", "casex", "casez")
_WITH_PARENTHESES = ("if", "for", "while", "repeat", "wait")
_CLOSERS = ("end", "join", "endcase", "endtask", "endfunction")
_WORDS = (*_BEGINNERS, *_BLOCKS, *_CASES, *_WITH_PARENTHESES, *_CLOSERS, "forever", "else", "default")

_STRING = compiled(rb'"(?:[^"\\\n]++|\\.)*+"?', re.DOTALL)
_REAL = re.compile(rb"[0-9][0-9_]*(?:\.[0-9][0-9_]*)?(?:[eE][+\-]?[0-9_]+)?")
_BASED = re.compile(
    rb"'[sS]?(?:[bB]\s*[01xXzZ?_]+|[oO]\s*[0-7xXzZ?_]+|[hH]\s*[0-9a-fA-FxXzZ?_]+|[dD]\s*(?:[0-9_]+|[xXzZ?]_*))"
)
_DEPTH = {OPEN: 1, LEFT: 1, b"{": 1, CLOSE: -1, RIGHT: -1, b"}": -1}


def stretches(scan: Scan, marks: NDArray[np.uint8], module: ModuleText) -> list[tuple[str, int, int]]:
    """Return word, first byte and end of each `always`, `initial`, task and function of a module.

    `marks` is what `plain.refine` gives. A stretch that is not closed goes up to the module's last word.
    """
    names = scan.names.find_all(_WORDS).tolist()
    texts = {name: word for word, name in zip(_WORDS, names, strict=True) if name >= 0}
    window = slice(module.first, module.stop - 1)
    of_marks = scan.word[np.minimum(scan.word_of[window], len(scan.word) - 1)]
    begins = np.isin(of_marks, [name for name, word in texts.items() if word in _BEGINNERS])
    begins &= marks[window] == STRANGE
    reader = _Reader(scan, marks, texts, module.stop - 1)
    found: list[tuple[str, int, int]] = []
    after = -1
    for mark in (np.flatnonzero(begins) + module.first).tolist():
        if mark >= after:
            word = reader.word(mark)
            closer = _BEGINNERS[word]
            after = reader.behind_word(mark + 1, closer) if closer else reader.behind_statement(mark + 1)
            found.append((word, int(scan.at[mark]), reader.end_of(after)))
    return found


class _Reader:
    """Goes over marks: each method takes the number of a mark and returns the one where it ends."""

    def __init__(self, scan: Scan, marks: NDArray[np.uint8], texts: dict[int, str], stop: int) -> None:
        self._scan, self._marks, self._texts, self._stop = scan, marks, texts, stop

    def word(self, mark: int) -> str:
        """Return the reserved word that a mark is, empty for any other mark."""
        if mark >= self._stop or self._marks[mark] != STRANGE:
            return ""
        return self._texts.get(int(self._scan.word[self._scan.word_of[mark]]), "")

    def end_of(self, mark: int) -> int:
        """Return the offset where the text before a mark ends, that of the module's last word beyond it."""
        scan = self._scan
        if mark > self._stop:
            return int(scan.at[self._stop])
        if scan.kind[mark - 1] == WORD:
            return int(scan.word_stop[scan.word_of[mark - 1]])
        return int(scan.at[mark - 1]) + 1

    def _sign(self, mark: int, text: bytes) -> bool:
        """Tell whether a sign of one or several bytes stands at a mark."""
        return self._kind(mark) in (OTHER, OPEN) and self._scan.data.startswith(
            text, int(self._scan.at[mark])
        )

    def _kind(self, mark: int) -> int:
        return int(self._scan.kind[mark]) if mark < self._stop else -1

    def _from(self, mark: int, offset: int) -> int:
        """Return the first mark, from `mark` on, that does not begin before an offset."""
        while mark < self._stop and self._scan.at[mark] < offset:
            mark += 1
        return mark

    def behind_word(self, mark: int, word: str) -> int:
        """Return the mark behind the next `word`, one beyond the module where there is none."""
        while mark < self._stop and self.word(mark) != word:
            mark += 1
        return mark + 1

    # Statements (A.6.4)

    def behind_statement(self, mark: int) -> int:
        """Return the mark behind the statement that begins at a mark.

        `open_` has what is not complete yet: the closing words of blocks, `if` for one that may go on with
        `else`.
        """
        open_: list[str] = []
        while mark < self._stop:
            mark, complete = self._beginning(mark, open_)
            if complete:
                mark, complete = self._closing(mark, open_)
            if complete:
                return mark
        return self._stop + 1

    def _beginning(self, mark: int, open_: list[str]) -> tuple[int, bool]:
        """Step over what a statement begins with, or over one that ends with `;`; say whether it is over."""
        word, before = self.word(mark), mark
        if word in _WITH_PARENTHESES:
            open_ += ["if"] if word == "if" else []
            return self._behind_parentheses(mark + 1), False
        if word in _BLOCKS:
            open_.append(_BLOCKS[word])
            return self._behind_label(mark + 1), True
        if word in _CASES:
            open_.append("endcase")
            return self._behind_parentheses(mark + 1), True
        if word == "forever":
            return mark + 1, False
        if self._sign(mark, b"@"):
            mark = self._behind_event(mark + 1)
        elif self._sign(mark, b"#"):
            mark = self._behind_delay(mark + 1)
        elif self._sign(mark, b"(*"):
            mark = self._behind_attribute(mark + 2)
        return (mark, False) if mark > before else (self._behind_simple(mark), True)

    def _closing(self, mark: int, open_: list[str]) -> tuple[int, bool]:
        """Close what ends with a statement; say whether that is all, or else go to the next statement."""
        while open_ and open_[-1] in ("if", self.word(mark)):
            if open_.pop() != "if":
                mark += 1
            elif self.word(mark) == "else":
                return mark + 1, False
        if open_ and open_[-1] == "endcase":
            mark = self._behind_labels(mark)
        return mark, not open_

    def _behind_simple(self, mark: int) -> int:
        """Step behind the next `;`, or up to a closing word before it: there the `;` is missing."""
        first = mark
        while mark < self._stop:
            kind = self._kind(mark)
            if kind == SEMICOLON:
                return mark + 1
            if kind == WORD and mark > first and self.word(mark) in _CLOSERS:
                return mark
            mark += 1
        return mark

    def _behind_label(self, mark: int) -> int:
        return mark + 2 if self._sign(mark, b":") else mark

    def _behind_parentheses(self, mark: int) -> int:
        """Step over `( ... )`, if it stands here."""
        depth = 0
        while mark < self._stop:
            kind = self._kind(mark)
            depth += (kind == OPEN) - (kind == CLOSE)
            if depth <= 0:
                return mark + (kind == CLOSE)
            mark += 1
        return mark

    def _behind_attribute(self, mark: int) -> int:
        """Step behind the next `*)` (clause 3.8)."""
        while mark < self._stop and not (self._sign(mark, b"*)") and self._kind(mark + 1) == CLOSE):
            mark += 1
        return mark + 2

    def _behind_event(self, mark: int) -> int:
        """Step over what follows an `@`: `( ... )`, `*`, or a name, hierarchical or not (A.6.5)."""
        if self._kind(mark) == OPEN:
            return self._behind_parentheses(mark)
        if self._kind(mark) != WORD:
            return mark + 1
        mark += 1
        while self._kind(mark) in (DOT, LEFT):
            if self._kind(mark) == DOT:
                mark += 2
                continue
            while mark < self._stop and self._kind(mark) != RIGHT:
                mark += 1
            mark += 1
        return mark

    def _behind_delay(self, mark: int) -> int:
        """Step over what follows a `#`: `( ... )`, a number, or a name (A.2.2.3)."""
        if self._kind(mark) == OPEN:
            return self._behind_parentheses(mark)
        number = _REAL.match(self._scan.data, int(self._scan.at[min(mark, self._stop)]))
        return self._from(mark + 1, number.end()) if number else mark + 1

    def _behind_labels(self, mark: int) -> int:
        """Step over `a, b[1:0], c ? d : e :` or `default` before a statement of a case (A.6.7)."""
        if self.word(mark) == "default":
            return mark + 2 if self._sign(mark + 1, b":") else mark + 1
        depth = choices = 0
        while mark < self._stop:
            kind = self._kind(mark)
            at = int(self._scan.at[mark])
            sign = self._scan.data[at : at + 1] if kind == OTHER else b""
            if kind == SEMICOLON or self.word(mark) in _CLOSERS:
                return mark  # no label: whatever this is, it is a statement
            depth += _DEPTH.get(kind, 0) or _DEPTH.get(sign, 0)
            if depth == 0 and sign == b"?":
                choices += 1
            elif depth == 0 and sign == b":":
                if not choices:
                    return mark + 1
                choices -= 1
            mark = self._behind_token(mark, kind, sign)
        return mark

    def _behind_token(self, mark: int, kind: int, sign: bytes) -> int:
        """Step over a mark, or all of a string or of a number with a base: both may hold a `?`."""
        scan = self._scan
        found = None
        if sign == b'"':
            found = _STRING.match(scan.data, int(scan.at[mark]))
        elif kind == WORD:
            number = scan.word_of[mark]
            word = scan.data[int(scan.at[mark]) : int(scan.word_stop[number])]
            if b"'" in word and not word.startswith(b"\\"):
                found = _BASED.match(scan.data, int(scan.at[mark]) + word.index(b"'"))
        return self._from(mark + 1, found.end()) if found else mark + 1
