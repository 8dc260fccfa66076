"""A refused text in the user's words: what stands there, and what could.

Takes what `recovery` found, gives diagnostics. The languages' own files name their terminals and know the
usual slips. Does not decide whether a text is refused.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Iterable, Mapping
from types import MappingProxyType
from typing import NamedTuple

from tardigate.source.diagnostic import Diagnostic, did_you_mean
from tardigate.source.placed import PlacedText
from tardigate.syntax.recovery import END, Language, Scout, Token, Trouble, troubles

CLOSING = ("`}`", "`;`", "`)`")
"""What is missing most often, listed first."""

NO_NAMES: Mapping[str, str] = MappingProxyType({})


NONE: frozenset[str] = frozenset()
STATEMENTS = Language(frozenset(";"), NONE, NONE, NONE, NO_NAMES, (), "")
"""A language of which only the first fault is wanted."""


class Scene(NamedTuple):
    """A fault as a language's adviser sees it.

    `found` is what stands there (empty at the end of the text) from offset `start` of `data` on; `before` the
    tokens before it, from the text's beginning; `accepted` the terminals that could stand there.
    """

    found: str
    start: int
    data: bytes
    before: list[Token]
    accepted: frozenset[str]


class Advice(NamedTuple):
    """What a language knows better: a hint, names for terminals, all that is wanted, all that is found."""

    hint: str | None = None
    names: Mapping[str, str] = NO_NAMES
    wanted: str | None = None
    found: str | None = None


def explain_first(
    scout: Scout,
    source: str,
    text: PlacedText,
    code: str,
    where: Callable[[int], int],
    friendly: Mapping[str, str],
) -> Diagnostic:
    """Return the diagnostic `code` of the first fault of a text that was refused.

    `where` maps an offset in `source` to one in `text`.
    """
    (trouble,), _ = troubles(scout, source, STATEMENTS, 1)
    found = trouble.found
    start, word = where(found.start), found.text
    if found.kind == END:
        start = where(len(source.rstrip()) - 1)
    hint = _likely(scout, word, trouble, text.data, start)
    shown = f"`{word}`" if word else "the end of the text"
    wanted = listed(trouble.accepted, scout, friendly)
    return Diagnostic.of(
        code, text.span(start, start + max(1, len(word))), hint=hint, found=shown, wanted=wanted
    )


def explain_all(
    scout: Scout,
    text: PlacedText,
    language: Language,
    code: str,
    friendly: Mapping[str, str],
    advise: Callable[[Scene], Advice],
    most: int,
) -> Iterable[Diagnostic]:
    """Yield diagnostics `code` (words: `found`, `wanted`) of the first `most` faults, the last counting on.

    `friendly` names terminals that are no fixed word.
    """
    found, more = troubles(scout, text.data.decode("latin-1"), language, most)
    for at, trouble in enumerate(found):
        told = _explain(scout, text, trouble, code, friendly, advise)
        yield told.counted(1 + more) if more and at == len(found) - 1 else told


def _explain(
    scout: Scout,
    text: PlacedText,
    trouble: Trouble,
    code: str,
    friendly: Mapping[str, str],
    advise: Callable[[Scene], Advice],
) -> Diagnostic:
    found = trouble.found
    start, word = found.start, found.text
    if found.kind == END:
        start = max(0, len(text.data.rstrip()) - 1)
    elif not found.kind:
        word = text.data[start : start + 4].decode("utf-8", "replace")[:1]
    end = start if word else len(text.data)
    before = list(scout.tokens(text.data[:end].decode("latin-1")))[:-1]
    advice = advise(Scene(word, end, text.data, before, trouble.accepted))
    wanted = advice.wanted or listed(trouble.accepted, scout, {**friendly, **advice.names})
    shown = advice.found or (f"`{word}`" if word else "the end of the file")
    hint = advice.hint
    if hint is None and found.kind and word:
        hint = _likely(scout, word, trouble, text.data, start)
    return Diagnostic.of(
        code, text.span(start, start + max(1, len(word))), hint=hint, found=shown, wanted=wanted
    )


def _likely(scout: Scout, word: str, trouble: Trouble, data: bytes, start: int) -> str | None:
    """Return the hint that any language may need: a word that is near, or a `;` that may be missing."""
    hint = near(word, trouble.accepted, scout)
    if hint is None and opens_line(data, start) and scout.kinds.get(";") in trouble.accepted:
        hint = "Perhaps a `;` is missing at the end of the line before."
    return hint


def near(word: str, accepted: Iterable[str], scout: Scout) -> str | None:
    """Return the hint that names a fixed word which is near and could stand there."""
    if not re.match(r"\w", word):
        return None
    fixed = [scout.fixed.get(name, "") for name in sorted(accepted)]
    words = [known for known in fixed if known[:1].isalpha()]
    alike = [known for known in words if known.lower() == word.lower()]
    return f"Did you mean `{alike[0]}`?" if alike else did_you_mean(word, words)


def opens_line(data: bytes, start: int) -> bool:
    """Say whether nothing but blanks stands before an offset on its line, and a line before that."""
    line = data.rfind(b"\n", 0, start)
    return line >= 0 and not data[line:start].strip()


def listed(accepted: Iterable[str], scout: Scout, friendly: Mapping[str, str], most: int = 6) -> str:
    """Return what could stand there; words that would serve as names go unmentioned beside "a name".

    Of more than `most` things only the first are listed.
    """
    named = "NAME" in accepted
    signs, words, others = set(), set(), set()
    for name in accepted:
        shown = friendly.get(name) or f"`{scout.fixed.get(name)}`"
        if name in friendly and not shown.startswith("`"):
            others.add(shown)
        elif not shown[1:2].isalpha():
            signs.add(shown)
        elif not named:
            words.add(shown)
    found = [sign for sign in CLOSING if sign in signs]
    found += [*sorted(others), *sorted(words), *sorted(signs.difference(CLOSING))]
    if not found:
        return "nothing"
    if len(found) > most:
        return ", ".join(found[: most - 1]) + " or another of its kind"
    return found[0] if len(found) == 1 else ", ".join(found[:-1]) + " or " + found[-1]
