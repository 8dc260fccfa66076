"""The command `draft`."""

from __future__ import annotations

from typing import Any

from tardigate.cli.answer import Answer
from tardigate.cli.given import request_of
from tardigate.cli.options import Options
from tardigate.cli.save import save
from tardigate.pipeline import draft_of, load
from tardigate.report.looks import Look

COMPLETE = "nothing is missing: every kind has a delay"


def draft(options: Options, look: Look) -> Answer:  # noqa: ARG001 - its text is the same for every look
    """Write a parts file to fill in; none when nothing is missing.

    Raises InputRefusedError (U106: the file cannot be written, U108: it is there already).
    """
    loaded = load(request_of(options))
    if not loaded.missing and not loaded.undescribed:
        return Answer(lambda: "", lambda: _body("", None), remark=COMPLETE)
    text = draft_of(loaded)
    if options.output_file is not None:
        save(text, options.output_file)
    shown = text if options.output_file is None else f"wrote {options.output_file}\n"
    return Answer(lambda: shown, lambda: _body(text, options.output_file))


def _body(text: str, file: str | None) -> dict[str, Any]:
    from tardigate.report.json_form import draft_json  # for those who ask for it

    return draft_json(text, file)
