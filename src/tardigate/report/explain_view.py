"""The view of `explain`: the long text of a code with its examples, or the list of codes.

Takes entries of the table of codes, gives lines.
"""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence

from rich.text import Text

from tardigate.report.columns import Cell, Column, lay_out
from tardigate.report.looks import STYLES, Look
from tardigate.report.shorten import cells, take, wrap
from tardigate.source.code_table import Entry

ARGUMENTS = "arguments"
"""The key of a sample that holds words of the command line rather than a file."""


def explain_view(entry: Entry, look: Look) -> list[Text]:
    """Return the long text of a code."""
    head = Text().append(entry.code, STYLES["name"]).append(f"  {entry.severity}", STYLES[entry.severity])
    lines = [*wrap(head.append(f": {headline(entry.headline, look)}"), look.width, 4), Text()]
    for paragraph in re.split(r"\n\s*\n", entry.text):
        lines += [*wrap(Text(" ".join(paragraph.split())), look.width), Text()]
    if entry.hint:
        lines += [*wrap(Text(f"hint: {headline(entry.hint, look)}", STYLES["hint"]), look.width, 6), Text()]
    for words, sample in (("faulty", entry.faulty), ("mended", entry.mended)):
        if sample:
            lines += _sample(words, sample, look)
    return lines[:-1]


def codes_view(entries: Sequence[Entry], look: Look) -> list[Text]:
    """Return the list of codes with their headlines, one line each."""
    columns = [Column("code", style="name"), Column("", least=5), Column("says", least=20)]
    rows: list[list[Cell]] = []
    for entry in entries:
        says = headline(entry.headline, look)
        room = look.width - 17
        if cells(says) > room:
            says = take(says, room - cells(look.glyph("cut"))) + look.glyph("cut")
        rows.append([entry.code, (entry.severity, entry.severity), says])
    return lay_out(columns, rows, look.width, look)


def headline(words: str, look: Look) -> str:
    """Return a headline with its open places marked: `cannot read ‹path›`."""
    mark = rf"{look.glyph('open')}\1{look.glyph('close')}"
    return re.sub(r"`?\{(\w+)[^}]*\}`?", mark, words)


def sample_words(sample: Mapping[str, str]) -> list[str]:
    """Return the words that run the tool on a sample's files, `pace` when the sample names no command."""
    words = sample.get(ARGUMENTS, "").split()
    command = words.pop(0) if words and words[0].isalpha() else "pace"
    sources = [name for name in sample if name.endswith(".v")]
    parts = [word for name in sample if name.endswith(".parts") for word in ("--parts", name)]
    return [command, *sources, *words, *parts]


def _sample(words: str, sample: Mapping[str, str], look: Look) -> list[Text]:
    lines: list[Text] = []
    for name, text in sample.items():
        if name == ARGUMENTS:
            typed = " ".join(["tardigate", *sample_words(sample)])
            lines += [*wrap(Text(f"{words}: {typed}", STYLES["title"]), look.width, 4), Text()]
            continue
        lines.append(Text(f"{words}, {name}", STYLES["title"]))
        for row in text.expandtabs(4).rstrip("\n").split("\n"):
            lines += _sample_line(look.safe(row), look)
        lines.append(Text())
    return lines


def _sample_line(row: str, look: Look) -> list[Text]:
    gutter = f"  {look.glyph('gutter')} "
    shown = row
    if cells(row) > look.width - cells(gutter):
        shown = take(row, look.width - cells(gutter) - 2) + look.glyph("cut")
    return [Text().append(gutter, STYLES["quiet"]).append(shown)]
