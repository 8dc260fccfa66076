"""The exit status, owned by one object.

Takes an action, runs it, and turns however it ends into a status and, by way of the screen, into words.
"""

from __future__ import annotations

import os
import sys
from collections.abc import Callable
from enum import IntEnum

from tardigate.cli.screen import Screen, UnwrittenError
from tardigate.source.faults import InputRefusedError


class Status(IntEnum):
    """Exit status of the process."""

    HOLDS = 0
    BROKEN = 1
    REFUSED = 2
    FAULT = 3
    INTERRUPTED = 130


def status_of(action: Callable[[], None], screen: Screen) -> Status:
    """Run `action` and return the status it ends with; tell on the screen why when it did not go well."""
    try:
        return _told(action, screen)
    except BrokenPipeError:  # the reader of our output has seen enough
        _flush_into_nothing()
        return Status.HOLDS
    except UnwrittenError as unwritten:
        _flush_into_nothing()
        screen.complain((unwritten.diagnostic,))
        return Status.REFUSED


def _flush_into_nothing() -> None:
    """Give Python, which flushes once more at its end, an output that takes it."""
    sys.stdout = open(os.devnull, "w", encoding="utf-8")  # noqa: SIM115


def _told(action: Callable[[], None], screen: Screen) -> Status:
    try:
        action()
    except InputRefusedError as refusal:
        screen.refuse(refusal.diagnostics)
        return Status.REFUSED
    except KeyboardInterrupt:
        screen.remark("interrupted")
        return Status.INTERRUPTED
    except (BrokenPipeError, UnwrittenError):
        raise
    except SystemExit as ended:  # --help, once it is printed
        return Status(ended.code if isinstance(ended.code, int) else 0)
    except Exception as fault:
        if os.environ.get("TARDIGATE_DEBUG") == "1":
            raise
        screen.fault(f"{type(fault).__name__}: {fault}" if str(fault) else type(fault).__name__)
        return Status.FAULT
    return Status.HOLDS
