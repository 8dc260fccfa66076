"""The only file that knows lark's errors.

Takes an error of the parser and the text it read, gives a diagnostic in the user's words: what stands there
and what could stand there. Does not decide whether the text is refused.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Mapping
from typing import TYPE_CHECKING

from tardigate.source.diagnostic import Diagnostic, did_you_mean
from tardigate.source.placed import PlacedText

if TYPE_CHECKING:
    from lark import Lark
    from lark.exceptions import UnexpectedInput

FRIENDLY: Mapping[str, str] = {
    "NAME": "a name",
    "ESCAPED": "a name",
    "NUMBER": "a number",
    "SIZED": "a sized number",
    "STRING": "a text in quotes",
    "$END": "the end of the file",
}
"""What terminals that are no fixed word are called; a parser's own names are added by the caller."""

MOST = 6
"""Things that could stand there which are listed; of more, only the first and that there are others."""


def explain(
    error: Exception,
    parser: Lark,
    text: PlacedText,
    code: str,
    where: Callable[[int], int] = lambda offset: offset,
    friendly: Mapping[str, str] = FRIENDLY,
) -> Diagnostic:
    """Make the diagnostic `code` (words: `found`, `wanted`) of an error that `parser.parse` raised.

    `where` maps an offset in the parsed text to one in `text`; both count bytes. Raises `error` itself when
    it is none of lark's complaints about its input.
    """
    from lark.exceptions import UnexpectedCharacters, UnexpectedEOF, UnexpectedToken

    if not isinstance(error, UnexpectedToken | UnexpectedCharacters | UnexpectedEOF):
        raise error
    accepted = _accepted(error)
    wanted = _wanted(accepted, parser, friendly)
    token = getattr(error, "token", None)
    if isinstance(error, UnexpectedCharacters):
        start = where(error.pos_in_stream or 0)
        return Diagnostic.of(code, text.span(start), found=f"`{_character(text, start)}`", wanted=wanted)
    if token is None or token.type in ("$END", "<EOF>"):
        last = max(0, len(text.data.rstrip()) - 1)
        return Diagnostic.of(code, text.span(last), found="the end of the file", wanted=wanted)
    start = where(token.start_pos or 0)
    span = text.span(start, start + max(1, len(token)))
    hint = did_you_mean(str(token), _words(accepted, parser)) if re.match(r"\w", token) else None
    if hint is None and _opens_line(text, start) and any(_fixed(name, parser) == ";" for name in accepted):
        hint = "Perhaps a `;` is missing at the end of the line before."
    return Diagnostic.of(code, span, hint=hint, found=f"`{token}`", wanted=wanted)


def _accepted(error: UnexpectedInput) -> set[str]:
    """Return the terminals that could stand there: after all reductions, not what the merged states allow."""
    interactive = getattr(error, "interactive_parser", None)
    if interactive is not None:
        return set(interactive.accepts())
    return set(getattr(error, "expected", None) or getattr(error, "allowed", None) or ())


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
        if name in friendly:
            others.add(friendly[name])
        elif fixed is None:
            others.add(name.lower().replace("_", " "))
        elif not fixed[:1].isalpha():
            signs.add(f"`{fixed}`")
        elif not named:
            words.add(f"`{fixed}`")
    listed = sorted(others) + sorted(words) + sorted(signs)
    if not listed:
        return "nothing"
    if len(listed) > MOST:
        return ", ".join(listed[: MOST - 1]) + " or another of its kind"
    return listed[0] if len(listed) == 1 else ", ".join(listed[:-1]) + " or " + listed[-1]
