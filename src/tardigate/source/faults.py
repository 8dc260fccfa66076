"""The two exceptions.

An input that is refused carries its diagnostics; a fault of the program carries a sentence.
"""

from __future__ import annotations

from tardigate.source.diagnostic import Diagnostic


class InputRefusedError(Exception):
    """The input is wrong or incomplete (exit status 2)."""

    def __init__(self, diagnostics: tuple[Diagnostic, ...]) -> None:
        self.diagnostics = diagnostics
        first = diagnostics[0]
        place = f"{first.span}: " if first.span else ""
        more = f" (and {len(diagnostics) - 1} more)" if len(diagnostics) > 1 else ""
        super().__init__(f"{place}{first.code}: {first.message}{more}")


class InternalFaultError(Exception):
    """Tardigate contradicts itself (exit status 3)."""
