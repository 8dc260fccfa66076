"""The command `draft`."""

from __future__ import annotations

import os
from contextlib import suppress
from typing import Any

from tardigate.cli.answer import Answer
from tardigate.cli.given import request_of
from tardigate.cli.options import Options
from tardigate.pipeline import draft_of, load
from tardigate.report.looks import Look
from tardigate.source.diagnostic import Diagnostic
from tardigate.source.faults import InputRefusedError

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
        _save(text, options.output_file)
    shown = text if options.output_file is None else f"wrote {options.output_file}\n"
    return Answer(lambda: shown, lambda: _body(text, options.output_file))


def _save(text: str, path: str) -> None:
    """Write to a file that is not there yet, or to a device, which has nothing that could be lost."""
    device = os.path.exists(path) and not os.path.isfile(path)
    try:
        file = open(path, "w" if device else "x", encoding="utf-8")  # noqa: SIM115 - closed below
    except FileExistsError:
        raise InputRefusedError((Diagnostic.of("U108", path=path),)) from None
    except (OSError, ValueError) as error:
        raise _cannot(path, error) from None
    try:
        with file:
            file.write(text)
    except (OSError, ValueError) as error:
        if not device:
            with suppress(OSError):
                os.remove(path)  # half a file would only stand in the way of the next try
        raise _cannot(path, error) from None


def _cannot(path: str, error: OSError | ValueError) -> InputRefusedError:
    reason = getattr(error, "strerror", None) or str(error)
    return InputRefusedError((Diagnostic.of("U106", path=path, reason=reason),))


def _body(text: str, file: str | None) -> dict[str, Any]:
    from tardigate.report.json_form import draft_json  # for those who ask for it

    return draft_json(text, file)
