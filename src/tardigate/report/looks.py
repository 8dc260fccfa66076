"""The looks, named once: styles, glyphs with their plain fallbacks, and the width to lay out for.

Takes names of looks, gives what the terminal can show. Does not know the terminal itself.
"""

from __future__ import annotations

from typing import NamedTuple

STYLES = {
    "name": "bold",
    "title": "bold",
    "quiet": "dim",
    "bar": "cyan",
    "longest": "bold yellow",
    "fold": "dim cyan",
    "error": "bold red",
    "warning": "bold yellow",
    "hint": "green",
    "missing": "yellow",
}
"""Style name → what it looks like. Only the sixteen colours that every terminal lets its user choose."""

GLYPHS = {
    "rise": ("↑", "/"),
    "fall": ("↓", "\\"),
    "to": ("→", "->"),
    "cut": ("…", ".."),
    "dash": ("–", "-"),
    "times": ("×", "x"),
    "dot": ("·", "-"),
    "rule": ("─", "-"),
    "tick": ("┬", "+"),
    "gutter": ("│", "|"),
    "branch": ("├─ ", "|- "),
    "leaf": ("└─ ", "`- "),
    "trunk": ("│  ", "|  "),
    "micro": ("µs", "us"),
    "open": ("‹", "<"),
    "close": ("›", ">"),
}
"""Glyph name → the glyph, and what stands in for it where only ASCII can be shown."""

BARS = {
    "bar": (("╸", "╺", "━"), ("=", "=", "=")),
    "longest": (("▌", "▐", "█"), ("#", "#", "#")),
    "fold": (("╴", "╶", "─"), ("-", "-", "-")),
}
"""Bar name → its cell when the left half, the right half or both are covered; then the plain ones."""

NARROWEST = 48
"""Columns; a terminal narrower than that is laid out as if it had them."""

WIDEST = 160
"""Columns; beyond that the eye no longer finds the end of a row."""


class Look(NamedTuple):
    """What a view lays out for: columns, and whether only ASCII can be shown (`plain`)."""

    width: int = 100
    plain: bool = False

    def glyph(self, name: str) -> str:
        """Return a glyph of the table."""
        return GLYPHS[name][self.plain]

    def edge(self, edge: int) -> str:
        """Return the glyph of an edge (`Edge.RISE` 0, `Edge.FALL` 1)."""
        return self.glyph("fall" if edge else "rise")

    def halves(self, bar: str) -> tuple[str, str, str]:
        """Return a bar's cells: left half, right half, both."""
        return BARS[bar][self.plain]

    def safe(self, text: str) -> str:
        """Return text without control characters, in ASCII when that is all that can be shown."""
        if not text.isprintable():
            text = "".join(c if c.isprintable() else "�" for c in text)
        return text.encode("ascii", "replace").decode() if self.plain else text


def edge_word(edge: int) -> str:
    """Return `rise` or `fall` for an edge (`Edge.RISE` 0, `Edge.FALL` 1)."""
    return "fall" if edge else "rise"
