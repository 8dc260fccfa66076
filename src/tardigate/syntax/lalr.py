"""Runs a grammar's tables over a text: a plain LALR(1) machine (Aho, Sethi, Ullman 1986, section 4.7).

Takes tables as `grammar_tables` makes them and an object with a method for each rule, gives what its method
for the start rule returns. It knows the grammar from the tables alone and says of a faulty text only that it
is faulty: `recovery`, on the same tables, tells where and what could stand there.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from typing import Any

from tardigate.syntax.patterns import compiled

Make = Callable[[list[Any]], Any]


class Token(str):
    """A token: its text, its terminal and its place in the parsed text."""

    __slots__ = ("end_pos", "start_pos", "type")
    type: str
    start_pos: int
    end_pos: int


class NotInGrammarError(Exception):
    """The text does not follow the grammar."""


class Machine:
    """A grammar's tables with the methods of a maker bound to its rules.

    A rule's method gets the list of its children, a terminal's method (named like it, in capitals) its token.
    A rule whose name begins with `_` gives its children to the rule around it; one that has no method is
    given as a list with its name before its children.
    """

    def __init__(self, tables: dict[str, Any], maker: object) -> None:
        self.tables = tables
        self._states: list[dict[str, int]] = tables["states"]
        self._start, self._end = tables["start"], tables["end"]
        self._scan = compiled(tables["pattern"])
        self._words: dict[str, dict[str, str]] = tables["words"]
        self.words = frozenset(word for some in self._words.values() for word in some)
        self._ignored = frozenset(tables["ignored"])
        self._unseen = frozenset(tables["unseen"])
        self._shifted = {name: getattr(maker, name, None) for name in tables["terminals"]}
        self._rules = [(rule["size"], rule["name"], _make(rule, maker)) for rule in tables["rules"]]

    def run(self, text: str) -> Any:
        """Return what the maker makes of a text. Raises NotInGrammarError."""
        states, rules = self._states, self._rules
        stack: list[int] = [self._start]
        values: list[Any] = []
        for kind, value in self._tokens(text):
            while (action := states[stack[-1]].get(kind)) is None or action < 0:
                if action is None:
                    raise NotInGrammarError
                size, name, make = rules[-1 - action]
                made = make(values[len(values) - size :])
                del stack[len(stack) - size :], values[len(values) - size :]
                stack.append(states[stack[-1]][name])
                values.append(made)
                if kind == "$END" and stack[-1] == self._end:
                    return made
            stack.append(action)
            values.append(value)
        raise NotInGrammarError

    def _tokens(self, text: str) -> Iterator[tuple[str, Any]]:
        """Yield terminals with their values, None for words that no rule keeps, `$END` last.

        One at a time, so that a text that is refused is not read to its end.
        """
        words, ignored, unseen, shifted = self._words, self._ignored, self._unseen, self._shifted
        match = self._scan.scanner(text).match  # type: ignore[attr-defined]  # in re since 2.2, in no stub
        end = 0
        while (piece := match()) is not None and piece.lastgroup is not None:
            kind: str = piece.lastgroup
            start, end = piece.span()
            if kind in ignored:
                continue
            if kind in words:
                kind = words[kind].get(piece.group(), kind)
            if kind in unseen:
                yield kind, None
                continue
            token = Token(piece.group())
            token.type, token.start_pos, token.end_pos = kind, start, end
            turn = shifted[kind]
            yield kind, turn(token) if turn is not None else token
        if end != len(text):
            raise NotInGrammarError
        yield "$END", None


def _make(rule: dict[str, Any], maker: object) -> Make:
    """Return what is done when a rule is reduced."""
    call = getattr(maker, rule["calls"], None)
    if rule["inlined"]:
        call = _same
    elif call is None:
        call = _named(rule["calls"])
    if rule["lone"]:
        call = _unless_lone(call)
    return call if rule["takes"] is None else _taking(rule["takes"], call)


def _same(children: list[Any]) -> list[Any]:
    return children


def _named(name: str) -> Make:
    return lambda children: [name, *children]


def _unless_lone(call: Make) -> Make:
    return lambda children: children[0] if len(children) == 1 else call(children)


def _taking(takes: list[int | None], call: Make) -> Make:
    """Return a call with some of the children: None for one left out, -1 - i for those within child i."""

    def make(children: list[Any]) -> Any:
        taken: list[Any] = []
        for place in takes:
            if place is None:
                taken.append(None)
            elif place >= 0:
                taken.append(children[place])
            elif taken:
                taken += children[-1 - place]
            else:
                taken = children[-1 - place]  # repetitions grow to the left: one list for all of them
        return call(taken)

    return make
