"""The only file that knows lark's errors.

Takes an error of the parser and the text it read, gives a diagnostic in the user's words: what stands there
and what could stand there. Does not decide whether the text is refused.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Mapping
from types import MappingProxyType
from typing import TYPE_CHECKING, NamedTuple

from tardigate.source.diagnostic import Diagnostic, did_you_mean
from tardigate.source.placed import PlacedText

if TYPE_CHECKING:
    from lark import Lark
    from lark.exceptions import UnexpectedInput

END = "$END"
"""Lark's terminal for the end of the text."""

MOST = 6
"""Things that could stand there which are listed; of more, only the first and that there are others."""

CLOSING = ("`}`", "`;`", "`)`")
"""What is missing most often, listed first."""


NO_NAMES: Mapping[str, str] = MappingProxyType({})


class Before(NamedTuple):
    """A token before the fault: its terminal, its text and its offset in the parsed text."""

    kind: str
    text: str
    start: int


class Trouble(NamedTuple):
    """A fault as a language's adviser sees it.

    `found` is what stands there (empty at the end of the text) from offset `start` of `data` on; `before` the
    tokens before it; `accepted` the terminals that could stand there.
    """

    found: str
    start: int
    data: bytes
    before: list[Before]
    accepted: frozenset[str]


class Advice(NamedTuple):
    """What a language knows better: a hint, names for terminals, all that is wanted, all that is found."""

    hint: str | None = None
    names: Mapping[str, str] = NO_NAMES
    wanted: str | None = None
    found: str | None = None


def explain(
    error: Exception,
    parser: Lark,
    text: PlacedText,
    code: str,
    where: Callable[[int], int] = lambda offset: offset,
    friendly: Mapping[str, str] = NO_NAMES,
    advise: Callable[[Trouble], Advice] | None = None,
) -> Diagnostic:
    """Make the diagnostic `code` (words: `found`, `wanted`) of an error that `parser.parse` raised.

    `where` maps an offset in the parsed text to one in `text`; both count bytes. `friendly` names terminals
    that are no fixed word. Raises `error` itself when it is none of lark's complaints about its input.
    """
    from lark.exceptions import UnexpectedCharacters, UnexpectedEOF, UnexpectedToken

    if not isinstance(error, UnexpectedToken | UnexpectedCharacters | UnexpectedEOF):
        raise error
    accepted = _accepted(error)
    token = getattr(error, "token", None)
    if isinstance(error, UnexpectedCharacters):
        start = where(error.pos_in_stream or 0)
        word = _character(text, start)
    elif token is None or token.type in (END, "<EOF>"):
        start, word = max(0, len(text.data.rstrip()) - 1), ""
    else:
        start, word = where(token.start_pos or 0), str(token)
    advice = Advice()
    if advise is not None:
        end = start if word else len(text.data)
        advice = advise(Trouble(word, end, text.data, _before(parser, text, end), frozenset(accepted)))
    wanted = advice.wanted or _wanted(accepted, parser, {**friendly, **advice.names})
    found = advice.found or (f"`{word}`" if word else "the end of the file")
    hint = advice.hint
    if hint is None and token is not None and word:
        hint = _hint(word, text, start, accepted, parser)
    return Diagnostic.of(
        code, text.span(start, start + max(1, len(word))), hint=hint, found=found, wanted=wanted
    )


def _hint(word: str, text: PlacedText, start: int, accepted: set[str], parser: Lark) -> str | None:
    """Return a word that is near and could stand there, or that a `;` is missing."""
    hint = None
    if re.match(r"\w", word):
        words = _words(accepted, parser)
        alike = [known for known in words if known.lower() == word.lower()]
        hint = f"Did you mean `{alike[0]}`?" if alike else did_you_mean(word, words)
    if hint is None and _opens_line(text, start) and any(_fixed(name, parser) == ";" for name in accepted):
        hint = "Perhaps a `;` is missing at the end of the line before."
    return hint


def _accepted(error: UnexpectedInput) -> set[str]:
    """Return the terminals that could stand there: after all reductions, not what the merged states allow."""
    interactive = getattr(error, "interactive_parser", None)
    if interactive is not None:
        return set(interactive.accepts())
    return set(getattr(error, "expected", None) or getattr(error, "allowed", None) or ())


def _before(parser: Lark, text: PlacedText, end: int) -> list[Before]:
    """Return the tokens before an offset; the text up to there is known to be made of tokens."""
    part = text.data[:end].decode("latin-1")
    return [Before(token.type, str(token), token.start_pos or 0) for token in parser.lex(part)]


def _opens_line(text: PlacedText, start: int) -> bool:
    """Say whether nothing but blanks stands before a token on its line, and a line before that."""
    line = text.data.rfind(b"\n", 0, start)
    return line >= 0 and not text.data[line:start].strip()


def _character(text: PlacedText, start: int) -> str:
    return text.data[start : start + 4].decode("utf-8", "replace")[:1]


def _fixed(name: str, parser: Lark) -> str | None:
    """Return the word or sign that a terminal stands for, or None when it has many forms."""
    for terminal in parser.terminals:
        if terminal.name == name:
            return terminal.pattern.value if terminal.pattern.type == "str" else None
    return None


def _words(accepted: set[str], parser: Lark) -> list[str]:
    words = [_fixed(name, parser) for name in sorted(accepted)]
    return [word for word in words if word is not None and word[:1].isalpha()]


def _wanted(accepted: set[str], parser: Lark, friendly: Mapping[str, str]) -> str:
    """Return what could stand there; words that would serve as names go unmentioned beside "a name"."""
    named = "NAME" in accepted
    signs, words, others = set(), set(), set()
    for name in accepted:
        fixed = _fixed(name, parser)
        shown = friendly.get(name) or f"`{fixed}`"
        if name in friendly and not shown.startswith("`"):
            others.add(shown)
        elif not shown[1:2].isalpha():
            signs.add(shown)
        elif not named:
            words.add(shown)
    listed = [sign for sign in CLOSING if sign in signs]
    listed += [*sorted(others), *sorted(words), *sorted(signs.difference(CLOSING))]
    if not listed:
        return "nothing"
    if len(listed) > MOST:
        return ", ".join(listed[: MOST - 1]) + " or another of its kind"
    return listed[0] if len(listed) == 1 else ", ".join(listed[:-1]) + " or " + listed[-1]
