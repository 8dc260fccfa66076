"""The view of diagnostics: what is wrong, where, the source line with carets, and what to do.

Takes diagnostics, gives lines. Does not read files: a span carries its line.
"""

from __future__ import annotations

from collections.abc import Sequence

from rich.text import Text

from tardigate.report.looks import STYLES, Look
from tardigate.report.shorten import cells, shorten, take, take_end, wrap
from tardigate.source.diagnostic import Diagnostic
from tardigate.source.span import Span

TAB = 4
"""Cells between tab stops in a source line that is shown."""


def diagnostic_lines(
    diagnostics: Sequence[Diagnostic],
    look: Look,
    most: int | None = None,
    elsewhere: str = "`tardigate survey` shows",
) -> list[Text]:
    """Return the lines of the first `most` diagnostics (all for None), then a line that counts them all.

    `elsewhere` says what lists those that are left out.
    """
    shown = diagnostics if most is None else diagnostics[:most]
    lines: list[Text] = []
    for diagnostic in shown:
        lines += [*_diagnostic(diagnostic, look), Text()]
    left = len(diagnostics) - len(shown)
    if left:
        lines += [Text(f"and {left} more, which {elsewhere}", STYLES["quiet"]), Text()]
    return lines + (_count_line(diagnostics, look) if diagnostics else [])


def _diagnostic(diagnostic: Diagnostic, look: Look) -> list[Text]:
    lines = _headline(diagnostic, look)
    if diagnostic.span:
        lines += _source(diagnostic.span, STYLES[diagnostic.severity], look)
    for related in diagnostic.related:
        lines += _indented(f"{related.span}, {look.safe(related.label)}", look, "")
        lines += _source(related.span, STYLES["quiet"], look)
    if diagnostic.count > 1:
        lines += _indented(f"and {diagnostic.count - 1} more like it", look, "quiet")
    if diagnostic.hint:
        lines += _indented(f"hint: {look.safe(diagnostic.hint)}", look, "hint")
    return lines


def _headline(diagnostic: Diagnostic, look: Look) -> list[Text]:
    line = Text()
    if diagnostic.span:
        line.append(f"{look.safe(str(diagnostic.span))}  ", STYLES["name"])
    line.append(f"{diagnostic.severity} {diagnostic.code}", STYLES[diagnostic.severity])
    line.append(f": {look.safe(diagnostic.message)}")
    return wrap(line, look.width, 4)


def _indented(words: str, look: Look, style: str) -> list[Text]:
    return wrap(Text("    " + look.safe(words), STYLES.get(style, "")), look.width, 6)


def _source(span: Span, style: str, look: Look) -> list[Text]:
    """Return the source line and the carets under it; the part around the carets when the line is long."""
    first = span.column - span.snippet_column
    before = untabbed(span.snippet[:first], 0)
    marked = untabbed(span.snippet[first : first + span.length], cells(before))
    after = untabbed(span.snippet[first + span.length :], cells(before) + cells(marked))
    before, marked, after = (look.safe(piece) for piece in (before, marked, after))
    gutter = f"{span.line:>6} {look.glyph('gutter')} "
    before, marked, after = _window(before, marked, after, look.width - cells(gutter), look.glyph("cut"))
    shown = Text().append(gutter, STYLES["quiet"]).append(f"{before}{marked}{after}".rstrip())
    under = Text().append(f"{'':>6} {look.glyph('gutter')} ", STYLES["quiet"]).append(" " * cells(before))
    return [shown, under.append("^" * max(1, cells(marked)), style)]


def untabbed(text: str, at: int) -> str:
    """Return text with each tab as the spaces up to its stop, for text that begins in cell `at`."""
    pieces = text.split("\t")
    text_so_far = pieces[0]
    for piece in pieces[1:]:
        text_so_far += " " * (TAB - (at + cells(text_so_far)) % TAB) + piece
    return text_so_far


def _window(before: str, marked: str, after: str, room: int, cut: str) -> tuple[str, str, str]:
    """Cut a line to `room` cells so that what is marked stays to be seen."""
    if cells(marked) > room // 2:
        marked = shorten(marked, room // 2, cut)
    left = room - cells(marked)
    if cells(before) + cells(after) > left:
        ahead = max(left - cells(after), left * 2 // 3)
        if cells(before) > ahead:
            before = cut + take_end(before, ahead - cells(cut))
        if cells(after) > left - cells(before):
            after = take(after, left - cells(before) - cells(cut)) + cut
    return before, marked, after


def _count_line(diagnostics: Sequence[Diagnostic], look: Look) -> list[Text]:
    words = []
    for severity in ("error", "warning"):
        count = sum(d.count for d in diagnostics if d.severity == severity)
        if count:
            words.append(f"{count} {severity}{'s' if count > 1 else ''}")
    code = diagnostics[0].code
    line = f"{', '.join(words)}; `tardigate explain {code}` says more about {code}"
    return wrap(Text(line, STYLES["quiet"]), look.width)
