"""Writes what a command made to the file that an option names. Never over a file that is there."""

from __future__ import annotations

import os
from contextlib import suppress

from tardigate.source.diagnostic import Diagnostic
from tardigate.source.faults import InputRefusedError


def save(text: str, path: str, encoding: str = "utf-8") -> None:
    """Write to a file that is not there yet, or to a device, which has nothing that could be lost.

    Raises InputRefusedError (U106: the file cannot be written, U108: it is there already).
    """
    device = os.path.exists(path) and not os.path.isfile(path)
    try:
        file = open(path, "w" if device else "x", encoding=encoding)  # noqa: SIM115 - closed below
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
