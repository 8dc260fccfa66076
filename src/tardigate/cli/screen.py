"""What is printed: reports to standard output, diagnostics to standard error, or one JSON object.

Takes lines and objects, writes them as the terminal can show them. The only file that prints.
"""

from __future__ import annotations

import os
import sys
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from typing import Any, TextIO

from rich.console import Console
from rich.text import Text

from tardigate import __version__
from tardigate.cli.answer import Answer
from tardigate.cli.options import Colour, Options
from tardigate.report.diagnostic_view import diagnostic_lines
from tardigate.report.looks import NARROWEST, WIDEST, Look
from tardigate.source.diagnostic import Diagnostic, printable

PIPED_WIDTH = 100
"""Columns to lay out for where no terminal says how many it has."""

MOST_FAULTS = 20
"""Diagnostics that are printed of an input that is refused; the others are counted."""


class UnwrittenError(Exception):
    """Standard output cannot be written; the diagnostic (U109) is for standard error."""

    def __init__(self, reason: str) -> None:
        self.diagnostic = Diagnostic.of("U109", reason=reason)
        super().__init__(reason)


class Screen:
    """Standard output and standard error of one run."""

    def __init__(self, command: str | None, json: bool, colour: Colour = "auto", width: int | None = None):
        self.command, self.json = command, json
        self._colour, self._width = colour, width

    def look(self, stream: TextIO | None = None) -> Look:
        """Return what to lay out for on a stream (standard output for None)."""
        stream = stream or sys.stdout
        encoding = (getattr(stream, "encoding", None) or "ascii").lower()
        plain = not encoding.startswith("utf") or os.environ.get("TERM") == "dumb"
        return Look(min(WIDEST, max(NARROWEST, self._width or _width_of(stream))), plain)

    def adopt(self, options: Options) -> None:
        """Follow what the options say about the look."""
        self.json, self._colour, self._width = options.json, options.colour, options.width

    def answer(self, answer: Answer, most_warnings: int | None) -> None:
        """Print an answer: the first `most_warnings` of its warnings (all for None), then its report."""
        if self.json:
            self.object(answer.body(), answer.warnings)
            return
        if answer.warnings:
            lines = diagnostic_lines(answer.warnings, self.look(sys.stderr), most_warnings)
            self._print([*lines, Text()], sys.stderr)
        if answer.remark:
            self.remark(answer.remark)
        view = answer.view()
        if isinstance(view, str):
            self.text(view)
        else:
            self._print(view, sys.stdout)

    def text(self, text: str) -> None:
        """Print text as it is."""
        _write(text, sys.stdout)

    def object(self, body: dict[str, Any], diagnostics: Sequence[Diagnostic]) -> None:
        """Print the JSON object."""
        from tardigate.report.json_form import json_text  # for those who ask for it

        self.text(json_text(self.command, body, diagnostics, __version__))

    def refuse(self, diagnostics: Sequence[Diagnostic]) -> None:
        """Print why the input is refused."""
        if self.json:
            self.object({}, diagnostics)
        else:
            self.complain(diagnostics)

    def complain(self, diagnostics: Sequence[Diagnostic]) -> None:
        """Print the first diagnostics on standard error."""
        lines = diagnostic_lines(diagnostics, self.look(sys.stderr), MOST_FAULTS, "`--json` lists")
        self._print(lines, sys.stderr)

    def remark(self, words: str) -> None:
        """Print a line on standard error."""
        _write(f"tardigate: {words}\n", sys.stderr)

    def fault(self, words: str) -> None:
        """Say that tardigate is at fault, and how to report it."""
        if self.json:
            self.object({"fault": words}, ())
            return
        self.remark(f"a fault of tardigate itself, not of the input: {printable(words, 400)}")
        self.remark("please report it with the command, its files and what TARDIGATE_DEBUG=1 prints")

    def _print(self, lines: Sequence[Text], stream: TextIO) -> None:
        look = self.look(stream)
        console = self._console(stream, look.width)
        for line in lines:
            line.rstrip()
        with _writing(stream):  # `console` writes nothing and flushes even that
            with console.capture() as capture:
                console.print(Text("\n").join(lines), soft_wrap=True)
            shown = capture.get()
            _write(shown.encode("ascii", "replace").decode() if look.plain else shown, stream)

    def _console(self, stream: TextIO, width: int) -> Console:
        return Console(
            file=stream,
            width=width,
            force_terminal={"auto": None, "always": True, "never": False}[self._colour],
            color_system={"auto": "auto", "always": "standard", "never": None}[self._colour],
            markup=False,
            highlight=False,
            emoji=False,
        )


def _width_of(stream: TextIO) -> int:
    columns = os.environ.get("COLUMNS", "")
    if columns.isdecimal() and int(columns):
        return int(columns)
    for terminal in (stream, sys.stderr):  # who pipes a report mostly reads it on the same terminal
        try:
            return os.get_terminal_size(terminal.fileno()).columns or PIPED_WIDTH
        except (AttributeError, OSError, ValueError):  # None stands for a stream that was closed
            continue
    return PIPED_WIDTH


def _write(text: str, stream: TextIO | None) -> None:
    """Write text as far as the encoding can say it."""
    encoding = getattr(stream, "encoding", None) or "ascii"
    with _writing(stream):
        if stream is None:
            raise OSError("it is closed")
        stream.write(text.encode(encoding, "replace").decode(encoding))
        stream.flush()


@contextmanager
def _writing(stream: TextIO | None) -> Iterator[None]:
    """Turn what goes wrong with standard output into UnwrittenError; of standard error nobody can be told.

    A reader that has gone away (BrokenPipeError) is another matter, for either.
    """
    try:
        yield
    except BrokenPipeError:
        raise
    except OSError as error:
        if stream is not sys.stderr:
            raise UnwrittenError(error.strerror or str(error)) from None
