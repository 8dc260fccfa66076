"""A diagnostic as data: codes, spans, strings and numbers only.

Takes a code of the table and the words that fill its headline. Does not print anything.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Literal, NamedTuple

from tardigate.source.code_table import look_up
from tardigate.source.span import Span

Severity = Literal["error", "warning"]


class Related(NamedTuple):
    """A second place that belongs to a diagnostic, with what it is."""

    span: Span
    label: str


@dataclass(frozen=True, slots=True)
class Diagnostic:
    """One fault of the input: what is wrong, where, what belongs to it, and what to do.

    `count` says how many like it there are; the others are not listed. It can fill a `result` of SARIF 2.1.0
    (3.27): `ruleId` is `code`, `level` `severity`, `message.text` `message`, `locations` `span`,
    `relatedLocations` `related` with their labels, `occurrenceCount` `count`; `span` tells what a region is.
    """

    code: str
    severity: Severity
    message: str
    span: Span | None = None
    hint: str = ""
    related: tuple[Related, ...] = ()
    count: int = 1

    @classmethod
    def of(
        cls,
        code: str,
        span: Span | None = None,
        *,
        hint: str | None = None,
        related: tuple[Related, ...] = (),
        **words: object,
    ) -> Diagnostic:
        """Make the diagnostic of a code; `words` fill headline and hint; `hint` stands in for its own."""
        entry = look_up(code)
        severity: Severity = "warning" if entry.severity == "warning" else "error"
        shown = {key: printable(value) for key, value in words.items()}
        message = entry.headline.format_map(shown)
        if span is not None and span.via:
            related += tuple(Related(place, label) for place, label in span.via)
        return cls(
            code, severity, message, span, entry.hint.format_map(shown) if hint is None else hint, related
        )

    def counted(self, count: int) -> Diagnostic:
        """Return the same diagnostic for `count` like cases."""
        return replace(self, count=count)


def printable(value: object, longest: int = 120) -> str:
    """Return a value as text that is safe in one line: no control characters, cut in the middle when long.

    Of a tuple each member is cut by itself.
    """
    if isinstance(value, tuple):
        return ", ".join(printable(member, longest) for member in value)
    text = "".join(c if c.isprintable() else "�" for c in str(value))
    if len(text) <= longest:
        return text
    half = longest // 2
    return f"{text[:half]}…{text[-half:]}"


def did_you_mean(name: str, known: list[str]) -> str | None:
    """Return the hint that names the nearest of the known words, or None if none is near."""
    from difflib import get_close_matches  # only on the way to a refusal

    near = get_close_matches(name[:80], known[:20000], n=1, cutoff=0.6)
    return f"Did you mean `{near[0]}`?" if near else None
