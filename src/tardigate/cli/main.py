"""The way from the words of the command line to the exit status.

Takes argv, runs one command, gives the status.
"""

from __future__ import annotations

import gc
import sys
from collections.abc import Callable, Sequence

from tardigate import __version__
from tardigate.cli.answer import Answer
from tardigate.cli.options import HELP, Options, command_of, read_options
from tardigate.cli.screen import Screen, UnwrittenError
from tardigate.cli.status import Status, status_of
from tardigate.report.looks import Look

MOST_WARNINGS = 3
"""Warnings that stand before a report; `survey` tells all."""


def run(words: Sequence[str] | None = None) -> int:
    """Run `tardigate` with the words after its name (None: the process's own); return the exit status."""
    words = list(sys.argv[1:] if words is None else words)
    first = words[0] if words else ""
    screen = Screen(command_of(words), json="--json" in words)
    if first in ("-h", "--help", "--version"):
        told = f"tardigate {__version__}\n" if first == "--version" else HELP
        return status_of(lambda: screen.text(told), screen)
    if not words:
        screen.remark("no command\n\n" + HELP.rstrip())
        return Status.REFUSED
    collecting = gc.isenabled()
    gc.disable()  # what is made lives to the end: looking for garbage in it takes a tenth of the time
    try:
        return status_of(lambda: _act(words, screen), screen)
    finally:
        if collecting:
            gc.enable()


def _act(words: list[str], screen: Screen) -> None:
    try:
        options = read_options(words)
    except BrokenPipeError:
        raise
    except OSError as error:  # older Pythons let through what hinders the help
        raise UnwrittenError(error.strerror or str(error)) from None
    except SystemExit:
        screen.text("")  # the help has been printed; whether it arrived is known once it is flushed
        raise
    screen.adopt(options)
    answer = _command(options.command)(options, screen.look())
    screen.answer(answer, None if options.command == "survey" else MOST_WARNINGS)


def _command(name: str) -> Callable[[Options, Look], Answer]:
    """Return the function of a command; only its own imports are paid for."""
    if name == "survey":
        from tardigate.cli.survey import survey as command
    elif name == "pace":
        from tardigate.cli.pace import pace as command
    elif name == "trail":
        from tardigate.cli.trail import trail as command
    elif name == "draft":
        from tardigate.cli.draft import draft as command
    else:
        from tardigate.cli.explain import explain as command
    return command
