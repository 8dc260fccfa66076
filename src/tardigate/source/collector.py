"""Where the passes put what they have to tell.

Takes diagnostics, gives them in a stable order, like ones told once with a count. Does not print.
"""

from __future__ import annotations

from tardigate.source.diagnostic import Diagnostic, Related
from tardigate.source.faults import InputRefusedError
from tardigate.source.span import Span

MOST = 40
"""Diagnostics of one code that are kept; the last one counts the rest."""


class Collector:
    """Collects diagnostics; `refuse` ends the run when one of them is an error."""

    def __init__(self) -> None:
        self._kept: dict[str, list[Diagnostic]] = {}
        self._seen: set[tuple[str, str, Span | None]] = set()
        self._beyond: dict[str, int] = {}

    def add(self, diagnostic: Diagnostic) -> None:
        """Take a diagnostic; the same at the same place is taken once."""
        key = (diagnostic.code, diagnostic.message, diagnostic.span)
        if key in self._seen:
            return
        kept = self._kept.setdefault(diagnostic.code, [])
        if len(kept) < MOST:
            self._seen.add(key)
            kept.append(diagnostic)
        else:
            self._beyond[diagnostic.code] = self._beyond.get(diagnostic.code, 0) + diagnostic.count

    def room(self, code: str) -> bool:
        """Tell whether another diagnostic of a code would be kept: else a costly hint is not worth making."""
        return len(self._kept.get(code, ())) < MOST

    def tell(
        self,
        code: str,
        span: Span | None = None,
        *,
        hint: str | None = None,
        related: tuple[Related, ...] = (),
        **words: object,
    ) -> None:
        """Make a diagnostic (see `Diagnostic.of`) and take it."""
        self.add(Diagnostic.of(code, span, hint=hint, related=related, **words))

    def all(self) -> tuple[Diagnostic, ...]:
        """Return errors before warnings, each in order of place."""
        found = []
        for code, kept in self._kept.items():
            beyond = self._beyond.get(code, 0)
            last = kept[-1].counted(kept[-1].count + beyond) if beyond else kept[-1]
            found += [*kept[:-1], last]
        return tuple(sorted(found, key=_order))

    def warnings(self) -> tuple[Diagnostic, ...]:
        """Return the warnings."""
        return tuple(d for d in self.all() if d.severity == "warning")

    def refuse(self) -> None:
        """Raise InputRefusedError with all diagnostics when one of them is an error."""
        found = self.all()
        if any(d.severity == "error" for d in found):
            raise InputRefusedError(found)


def _order(d: Diagnostic) -> tuple[int, str, int, int, str, str]:
    place = ("", 0, 0) if d.span is None else (d.span.path, d.span.line, d.span.column)
    return (0 if d.severity == "error" else 1, *place, d.code, d.message)
