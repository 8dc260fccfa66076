"""Sentences and lines that several views share.

Takes words and records, gives lines that fit. Does not choose what a view tells.
"""

from __future__ import annotations

from collections.abc import Sequence

from rich.text import Text

from tardigate.report.looks import STYLES, Look, edge_word
from tardigate.report.model import EndRecord, Subject
from tardigate.report.shorten import shorten, wrap

CAUTION = (
    "Computed times are no substitute for measurement and for the applicable safety standards"
    " and licensed practice."
)


def sentence(look: Look, *words: str | Text) -> list[Text]:
    """Put words and styled pieces together to a sentence that is broken to the width."""
    text = Text()
    for word in words:
        text.append_text(word if isinstance(word, Text) else Text(word))
    return wrap(text, look.width)


def named(name: str, look: Look) -> Text:
    """Return a name for prose: in grave accents, shortened when it would fill a line."""
    return Text(f"`{shorten(look.safe(name), look.width // 2, look.glyph('cut'))}`", STYLES["name"])


def end_text(end: EndRecord, look: Look) -> Text:
    """Return an end of a trail for prose, with its edge."""
    what = "" if end.what.endswith("port") else f"{end.what} "
    return Text(what).append_text(named(end.name, look)).append(f" ({edge_word(end.edge)})")


def subject_lines(subject: Subject, look: Look) -> list[Text]:
    """Say which delays the figures were made from."""
    condition = f", condition {subject.condition}" if subject.condition else ""
    condition += " (the first, as none was chosen)" if subject.condition_assumed else ""
    size = f"{counted(subject.instances, 'part instance')}, {counted(subject.nets, 'net')}"
    return wrap(Text(look.safe(f"grade {subject.grade}{condition}; {size}"), STYLES["quiet"]), look.width)


def title(words: str) -> list[Text]:
    """Return an empty line and a heading."""
    return [Text(), Text(words, STYLES["title"])]


def caution_lines(look: Look) -> list[Text]:
    """Return the caution that ends each report of times."""
    return [Text(), *wrap(Text(CAUTION, STYLES["quiet"]), look.width)]


def counted(count: int, thing: str, things: str = "") -> str:
    """Return a count with its noun."""
    return f"{count} {thing}" if count == 1 else f"{count} {things or thing + 's'}"


def listed(words: Sequence[str]) -> str:
    """Return words as a list in prose: `a, b and c`."""
    return " and ".join([*([", ".join(words[:-1])] if len(words) > 1 else []), *words[-1:]])
