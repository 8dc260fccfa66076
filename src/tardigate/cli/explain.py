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
        hint = did_you_mean(options.code.upper(), every_code())
        raise InputRefusedError((Diagnostic.of("U105", word=options.code, hint=hint),)) from None
    return Answer(lambda: explain_view(entry, look), lambda: _body([entry]))


def _body(entries: list[Entry]) -> dict[str, Any]:
    from tardigate.report.json_form import explain_json  # for those who ask for it

    return explain_json(entries)
