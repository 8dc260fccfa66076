"""The command `explain`."""

from __future__ import annotations

from typing import Any

from tardigate.cli.answer import Answer
from tardigate.cli.options import Options
from tardigate.report.explain_view import codes_view, explain_view
from tardigate.report.looks import Look
from tardigate.source.code_table import Entry, every_code, look_up
from tardigate.source.diagnostic import Diagnostic, did_you_mean
from tardigate.source.faults import InputRefusedError


def explain(options: Options, look: Look) -> Answer:
    """Tell the long text of a code, or list the codes. Raises InputRefusedError (U105)."""
    if options.code is None:
        entries = [look_up(code) for code in every_code()]
        return Answer(lambda: codes_view(entries, look), lambda: _body(entries))
    try:
        entry = look_up(options.code.upper())
    except KeyError:
        raise InputRefusedError(
            (Diagnostic.of("U105", word=options.code, hint=_near(options.code)),)
        ) from None
    return Answer(lambda: explain_view(entry, look), lambda: _body([entry]))


def _near(word: str) -> str | None:
    """Return the hint that names the first code that the word begins, or else the nearest of its letter."""
    code, codes = word.upper(), every_code()
    of_letter = [known for known in codes if known[0] == code[:1]]
    begun = [known for known in of_letter if known.startswith(code)]
    return did_you_mean(code, begun[:1] or of_letter or codes)


def _body(entries: list[Entry]) -> dict[str, Any]:
    from tardigate.report.json_form import explain_json  # for those who ask for it

    return explain_json(entries)
