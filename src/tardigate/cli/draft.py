"""The command `draft`."""

from __future__ import annotations

from typing import Any

from tardigate.cli.answer import Answer
from tardigate.cli.given import request_of
from tardigate.cli.options import Options
from tardigate.pipeline import draft_of, load
from tardigate.report.looks import Look
from tardigate.source.diagnostic import Diagnostic
from tardigate.source.faults import InputRefusedError


def draft(options: Options, look: Look) -> Answer:  # noqa: ARG001 - its text is the same for every look
    """Write a parts file to fill in. Raises InputRefusedError (U106: the file cannot be written)."""
    text = draft_of(load(request_of(options)))
    if options.output_file is not None:
        _save(text, options.output_file)
    shown = text if options.output_file is None else f"wrote {options.output_file}\n"
    return Answer(lambda: shown, lambda: _body(text, options.output_file))


def _save(text: str, path: str) -> None:
    try:
        with open(path, "w", encoding="utf-8") as file:
            file.write(text)
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or str(error)
        raise InputRefusedError((Diagnostic.of("U106", path=path, reason=reason),)) from None


def _body(text: str, file: str | None) -> dict[str, Any]:
    from tardigate.report.json_form import draft_json  # for those who ask for it

    return draft_json(text, file)
