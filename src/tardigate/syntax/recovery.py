"""Where a text leaves its grammar, several times in one pass: panic mode and single-token repairs.

Takes a grammar's tables and what the language knows of its statements (Aho, Sethi, Ullman 1986, section 4.8;
Graham, Haley, Joy 1979 for the repairs), gives a `Trouble` for each fault. It rather misses a fault than
tells one that an earlier one caused. Used on refused texts alone; words nothing.
"""

from __future__ import annotations

from collections import deque
from collections.abc import Iterator, Mapping, Sequence
from typing import Any, NamedTuple

from tardigate.syntax.patterns import compiled

END = "$END"
"""The terminal for the end of the text."""

DEEPEST = 4000
"""States on the stack beyond which nothing is tried after a fault."""

FAR = 40
"""Tokens that a repair must carry on, unless the statement ends before."""

LONGEST = 20_000
"""Tokens of a statement that is still read a second time."""

MOST_FAULTS = 100_000
"""Faults, those that follow from others among them, after which nobody counts on."""

MOST_REPAIRS = 100
"""Faults for which a repair is looked for."""

STOP = ";"
"""What ends a statement."""


class Token(NamedTuple):
    """A token: its terminal (empty for a character that begins none), its text and its offset."""

    kind: str
    text: str
    start: int

    @property
    def stop(self) -> int:
        """The offset past its end."""
        return self.start + len(self.text)


class Language(NamedTuple):
    """What recovery needs to know of a language; all but `header` are texts of tokens.

    `over` are those after which a statement may begin, `wholes` those that are one; `starters` begin one and
    stand nowhere else; `closers` end a block or belong to one, and are never told again once something was
    told. A statement that is given up ends with `;`; of the `blocks` in it each goes up to what closes it.
    `signs` may be missing; `name` is the terminal of a name. `header` is the least text before the first
    statement; a fault in a header gives up all of it.
    """

    over: frozenset[str]
    wholes: frozenset[str]
    starters: frozenset[str]
    closers: frozenset[str]
    blocks: Mapping[str, str]
    signs: Sequence[str]
    name: str
    header: str = ""


class Repair(NamedTuple):
    """A change of one token with which the text goes on: `insert`, `replace`, `drop` or `drop before`.

    `sign` is what is put in, or taken out.
    """

    how: str
    sign: str


class Trouble(NamedTuple):
    """A fault: `found` (at the text's end a token without text) after the tokens `before` of its statement.

    `accepted` are the terminals that could stand there, `after` some tokens behind, `state` the parser's;
    `opened` the blocks that are open.
    """

    found: Token
    before: tuple[Token, ...]
    after: tuple[Token, ...]
    accepted: frozenset[str]
    repair: Repair | None
    state: int
    opened: tuple[Token, ...] = ()


class Scout:
    """A grammar's tables, run without making anything."""

    def __init__(self, tables: dict[str, Any]) -> None:
        self._states: list[dict[str, int]] = tables["states"]
        self._rules = [(rule["size"], rule["name"]) for rule in tables["rules"]]
        self._start, self._last = tables["start"], tables["end"]
        self._scan = compiled(tables["pattern"])
        self._words: dict[str, dict[str, str]] = tables["words"]
        self._ignored = frozenset(tables["ignored"])
        self._terminals = (*tables["terminals"], END)
        self.fixed: dict[str, str] = tables["fixed"]
        self.kinds = {text: kind for kind, text in self.fixed.items()}

    def tokens(self, text: str) -> Iterator[Token]:
        """Yield the tokens of a text, END last; a character that begins none is one of its own."""
        at = 0
        while at < len(text):
            found = self._scan.match(text, at)
            if found is None or found.lastgroup is None or found.end() == at:
                yield Token("", text[at], at)
                at += 1
                continue
            at = found.end()
            kind = found.lastgroup
            if kind not in self._ignored:
                kind = self._words.get(kind, {}).get(found[0], kind)
                yield Token(kind, found[0], found.start())
        yield Token(END, "", len(text))

    def start(self) -> list[int]:
        """Return the stack before the first token."""
        return [self._start]

    def takes(self, stack: Sequence[int], kind: str) -> bool:
        """Tell whether a terminal may come next; changes nothing."""
        depth, above = len(stack), [stack[-1]]
        while True:
            action = self._states[above[-1]].get(kind)
            if action is None:
                return False
            if action >= 0:
                return True
            size, name = self._rules[-1 - action]
            if size < len(above):
                del above[len(above) - size :]
            else:
                depth -= size - len(above) + 1
                above = [stack[depth - 1]]
            above.append(self._states[above[-1]][name])
            if kind == END and above[-1] == self._last:
                return True

    def step(self, stack: list[int], kind: str) -> bool:
        """Move over a terminal, if it may come next."""
        action = self._states[stack[-1]].get(kind)
        if action is None or (action < 0 and not self.takes(stack, kind)):
            return False
        while action is not None and action < 0:
            size, name = self._rules[-1 - action]
            del stack[len(stack) - size :]
            stack.append(self._states[stack[-1]][name])
            if kind == END and stack[-1] == self._last:
                return True
            action = self._states[stack[-1]].get(kind)
        assert action is not None
        stack.append(action)
        return True

    def accepted(self, stack: Sequence[int]) -> frozenset[str]:
        """Return the terminals that may come next."""
        here = self._states[stack[-1]]
        return frozenset(kind for kind in self._terminals if kind in here and self.takes(stack, kind))


def troubles(scout: Scout, text: str, language: Language, most: int) -> tuple[list[Trouble], int]:
    """Return the first faults of a text in order of place, and how many more there are."""
    return _Pass(scout, text, language).run(most)


class _Pass:
    """One pass over a text.

    `_resume` is the stack at the beginning of the statement. `_quiet` holds after a fault until a statement
    is whole again: what is odd up to there may follow from it.
    """

    def __init__(self, scout: Scout, text: str, language: Language) -> None:
        self.scout, self.language = scout, language
        self.stack = scout.start()
        self.statement: list[Token] = []
        self._tokens = scout.tokens(text)
        self._ahead: deque[Token] = deque()
        self._resume: list[int] | None = self.stack[:]
        self._opened: list[Token] = []
        self._brackets = 0
        self._in_header = bool(language.header)
        self._quiet = False
        self._repairs = 0

    def run(self, most: int) -> tuple[list[Trouble], int]:
        found: list[Trouble] = []
        more = faults = 0
        while faults < MOST_FAULTS:
            token = self._look(0)
            if self.scout.step(self.stack, token.kind):
                if token.kind == END:
                    break
                self._shifted(self._ahead.popleft())
                continue
            faults += 1
            repair = self._repair()
            closes = token.kind == END or token.text in self.language.closers
            if closes and found and not (repair and repair.sign == STOP):
                repair = None  # an earlier fault may have taken what it closes
            follows = self._quiet or (closes and repair is None)
            if not found or (not follows and len(found) < most):
                found.append(self._trouble(token, repair))
            elif not follows:
                more += 1
            if not self._go_on(token, repair):
                break
            self._quiet = True
        return found, more

    def _look(self, far: int) -> Token:
        """Return a token that is not read yet, the last one for all beyond it."""
        while len(self._ahead) <= far:
            token = next(self._tokens, None)
            if token is None:
                return self._ahead[-1]
            self._ahead.append(token)
        return self._ahead[far]

    def _shifted(self, token: Token) -> None:
        """Note a token that was taken, and whether a statement may begin behind it."""
        self.statement.append(token)
        text = token.text
        self._brackets += (text in "([") - (text in ")]") if len(text) == 1 else 0
        if text in self.language.blocks:
            self._opened.append(self.statement[0] if text == "{" else token)
        elif self._opened and text in self.language.closers:
            closing = self.language.blocks.get("{" if text == "}" else self._opened[-1].text)
            if closing == text:
                self._opened.pop()
        if text in self.language.over and self._brackets <= 0 and not self._in_expression(text):
            if text == STOP or text in self.language.wholes:
                self._quiet = self._in_header = False
            self._begin()

    def _in_expression(self, text: str) -> bool:
        """Tell whether a brace joins bits: it stands behind a `=`."""
        return text in "{}" and any(token.text == "=" for token in self.statement)

    def _begin(self) -> None:
        self.statement = []
        self._brackets = 0
        self._resume = self.stack[:] if len(self.stack) <= DEEPEST else None

    def _trouble(self, found: Token, repair: Repair | None) -> Trouble:
        after = tuple(self._look(far) for far in range(1, 4))
        accepted = self.scout.accepted(self.stack)
        opened = tuple(self._opened[-8:])
        return Trouble(found, tuple(self.statement), after, accepted, repair, self.stack[-1], opened)

    # Repairs

    def _repair(self) -> Repair | None:
        """Return a change of one token after which the statement goes on to its end."""
        self._repairs += 1
        if len(self.stack) > DEEPEST or self._repairs > MOST_REPAIRS:
            return None
        found, before = self._look(0), self.statement[-1:]
        if before and before[0].text == "," and len(self.statement) <= LONGEST and self._resume is not None:
            stack = self._replayed()
            if self._carries(stack, 0):
                return Repair("drop before", ",")
        if self.statement and found.text in self.language.starters | self.language.closers:
            stack = self.stack[:]
            if self.scout.step(stack, self.scout.kinds[STOP]) and self.scout.step(stack, found.kind):
                return Repair("insert", STOP)
        for sign in self.language.signs:
            stack = self.stack[:]
            if self.scout.step(stack, self.scout.kinds.get(sign, "")) and self._carries(stack, 0):
                return Repair("insert", sign)
        others = [sign for sign in self.language.signs if sign in "()[]{}="] if len(found.text) <= 2 else []
        for sign in (*others, self.language.name):
            kind = self.scout.kinds.get(sign, sign)
            stack = self.stack[:]
            if kind != found.kind and self.scout.step(stack, kind) and self._carries(stack, 1):
                return Repair("replace", sign)
        begins = found.text in self.language.starters and self.statement
        if found.kind != END and not begins and self._carries(self.stack[:], 1):
            return Repair("drop", found.text)
        return None

    def _replayed(self) -> list[int]:
        """Return the stack before the last token of the statement."""
        stack = list(self._resume or ())
        for token in self.statement[:-1]:
            self.scout.step(stack, token.kind)
        return stack

    def _carries(self, stack: list[int], first: int) -> bool:
        """Tell whether the tokens from `first` on are taken up to the end of the statement and one more."""
        brackets, last = 0, False
        for far in range(first, FAR):
            token = self._look(far)
            if not self.scout.step(stack, token.kind):
                return False
            if last or token.kind == END:
                return True
            brackets += (token.text == "(") - (token.text == ")")
            last = token.text == STOP and brackets <= 0
        return True

    # Going on

    def _go_on(self, token: Token, repair: Repair | None) -> bool:
        """Bring the parser to where it can go on; tell whether there is such a place."""
        kinds = self.scout.kinds
        if repair is None:
            return self._give_up(token)
        if repair.how == "drop before":
            self.stack = self._replayed()
            self.statement.pop()
        elif repair.how == "drop":
            self._ahead.popleft()
        else:
            kind = kinds.get(repair.sign, repair.sign)
            if repair.how == "replace":
                self._ahead.popleft()
            at = token.start
            self._ahead.appendleft(Token(kind, "" if kind == repair.sign else repair.sign, at))
        return True

    def _give_up(self, token: Token) -> bool:
        """Go back to the beginning of the statement, and on behind its end."""
        if self._resume is None or token.kind == END:
            return False
        starts = token.text in self.language.starters or token.text in self.language.closers
        if not (starts and self.statement):
            self._skip(token)
        if self._in_header:
            self.stack = self.scout.start()
            for part in self.scout.tokens(self.language.header):
                self.scout.step(self.stack, part.kind) if part.kind != END else None
            self._in_header = False
        else:
            self.stack = self._resume[:]
        self._begin()
        return True

    def _skip(self, token: Token) -> None:
        """Pass the rest of a statement: up to its end, or to before a word that begins or closes another."""
        language = self.language
        self._ahead.popleft()
        closing = [language.blocks[token.text]] if self._opens(token.text) else []
        if token.text in (*language.closers, STOP):
            return
        while (here := self._look(0)).kind != END:
            text = here.text
            if not closing and (text in language.starters or text in language.closers):
                return
            self._ahead.popleft()
            self.statement.append(here)
            if closing and text == closing[-1]:
                closing.pop()
                if not closing and not self._in_expression(text):
                    return
            elif self._opens(text):
                closing.append(language.blocks[text])
            elif text == STOP and not closing:
                return

    def _opens(self, text: str) -> bool:
        """Tell whether a word opens a block that goes with the statement that is given up."""
        return text in self.language.blocks and text not in self.language.starters
