"""The words of the command line as one frozen record.

Takes words, gives `Options`. Does not open the files that are named.
"""

from __future__ import annotations

from argparse import Action, ArgumentParser, ArgumentTypeError, Namespace, RawDescriptionHelpFormatter
from typing import Any, Literal, NamedTuple, NoReturn

from tardigate.report.looks import NARROWEST
from tardigate.source.diagnostic import Diagnostic, did_you_mean
from tardigate.source.faults import InputRefusedError

Colour = Literal["auto", "always", "never"]

MOST_TRAILS = 10_000

COMMANDS = {
    "survey": "what is in a design: hierarchy, parts, clocks, what has no delay yet",
    "pace": "when each output settles, and what limits it",
    "trail": "the slowest or the fastest trails, hop by hop",
    "draft": "write a parts file to fill in, for all that has no delay yet",
    "explain": "tell more about a diagnostic code",
}

HELP = f"""usage: tardigate COMMAND ...

When does every net of a gate-level design settle, and which chain of gates
sets the limit?

commands:
{chr(10).join(f"  {name:<8} {words}" for name, words in COMMANDS.items())}

`tardigate COMMAND --help` tells the options of a command.
`tardigate --version` tells the version.
Exit status: 0 it holds, 2 the input is wrong or incomplete, 3 a fault of
tardigate itself, 130 interrupted.
"""


class Options(NamedTuple):
    """What the command line asks for; what a command has no option for stands at its default."""

    command: str
    files: tuple[str, ...] = ()
    parts: tuple[str, ...] = ()
    top: str | None = None
    condition: str | None = None
    grade: Literal["min", "typ", "max", "span"] = "span"
    include_dirs: tuple[str, ...] = ()
    defines: tuple[tuple[str, str], ...] = ()
    json: bool = False
    colour: Colour = "auto"
    width: int | None = None
    trails: int = 3
    fastest: bool = False
    from_names: tuple[str, ...] = ()
    to_names: tuple[str, ...] = ()
    outputs: int = 12
    output_file: str | None = None
    flat_file: str | None = None
    code: str | None = None


class _Once(Action):
    """Refuses an option that is given a second time: which of the two values is meant is not guessed."""

    _first: str | None = None

    def __call__(
        self, parser: ArgumentParser, namespace: Namespace, values: Any, option: str | None = None
    ) -> None:
        del parser
        if self._first is not None:
            told = Diagnostic.of("U111", option=option, first=self._first, second=values)
            raise InputRefusedError((told,))
        self._first = values
        setattr(namespace, self.dest, values)


class _Parser(ArgumentParser):
    """Refuses wrong words with a diagnostic."""

    def error(self, message: str) -> NoReturn:
        raise InputRefusedError((Diagnostic.of("U103", reason=message),))


def read_options(words: list[str]) -> Options:
    """Read the words after `tardigate`, the first of which is a command.

    Raises InputRefusedError (U103: what is not understood, U107: no such command) and, for `--help` once it
    is printed, SystemExit.
    """
    command = words[0]
    if command not in COMMANDS:
        raise InputRefusedError(
            (Diagnostic.of("U107", word=command, hint=did_you_mean(command, list(COMMANDS))),)
        )
    parser = _parser(command)
    found, unknown = parser.parse_known_intermixed_args(words[1:])
    if unknown:
        known = [word for action in parser._actions for word in action.option_strings]
        hint = did_you_mean(unknown[0].partition("=")[0], known)
        reason = f"`{command}` has no option `{unknown[0]}`"
        raise InputRefusedError((Diagnostic.of("U103", reason=reason, hint=hint),))
    return _options(command, found)


def _options(command: str, found: Namespace) -> Options:
    values: dict[str, Any] = {
        name: tuple(value) if isinstance(value, list) else value
        for name, value in vars(found).items()
        if value is not None
    }
    return Options(command, **values)


def _parser(command: str) -> _Parser:
    parser = _Parser(
        prog=f"tardigate {command}",
        description=f"{COMMANDS[command][0].upper()}{COMMANDS[command][1:]}.",
        formatter_class=RawDescriptionHelpFormatter,
        allow_abbrev=False,
    )
    if command == "explain":
        parser.add_argument("code", nargs="?", metavar="CODE", help="such as V101; none: list all codes")
    else:
        _add_design(parser)
    if command == "survey":
        parser.add_argument(
            "--write-flat", dest="flat_file", metavar="FILE",
            help="also write the design there as one flat module of Verilog, which read again with the same"
            " parts files gives the same figures",
        )  # fmt: skip
    if command == "pace":
        parser.add_argument(
            "--outputs", type=_rows, default=12, metavar="N", help="rows of outputs to show (default: 12)"
        )
    if command == "trail":
        _add_trail(parser)
    if command == "draft":
        parser.add_argument(
            "-o", dest="output_file", metavar="FILE", help="write there, not to standard output"
        )
    _add_look(parser)
    return parser


def _add_design(parser: ArgumentParser) -> None:
    add = parser.add_argument
    add("files", nargs="+", metavar="FILE", help="Verilog source, read in this order")
    add("--parts", action="append", metavar="FILE", help="parts file with delays; may be given several times")
    add(
        "--top",
        action=_Once,
        metavar="MODULE",
        help="the module to start from (default: the one that nothing instantiates)",
    )
    add(
        "--condition",
        action=_Once,
        metavar="NAME",
        help="named condition of the parts files (default: the first)",
    )
    add(
        "--grade",
        action=_Once,
        choices=("span", "min", "typ", "max"),
        default="span",
        help="which of min, typ, max is used; span: max for settles, min for stirs (default: span)",
    )
    add(
        *("-I", "--include"),
        dest="include_dirs",
        action="append",
        metavar="DIR",
        help="folder to look for included files in",
    )
    add(
        *("-D", "--define"),
        dest="defines",
        action="append",
        type=_definition,
        metavar="NAME[=VALUE]",
        help="define a macro, as `define would",
    )


def _add_trail(parser: ArgumentParser) -> None:
    add = parser.add_argument
    add(
        "--count",
        dest="trails",
        type=_trail_count,
        default=3,
        metavar="K",
        help="how many trails (default: 3)",
    )
    add("--fastest", action="store_true", help="the fastest instead of the slowest")
    add(
        "--from",
        dest="from_names",
        action="append",
        metavar="NAME",
        help="where trails begin: port, net, part instance or pin (`alu.u3.A`), `*` for any text; may be"
        " given several times. A net stands for the register clock pins on it too, a pin for the net it is on"
        " (a register clock pin for itself), an instance for what it drives, a register for its clock pin",
    )
    add(
        "--to",
        dest="to_names",
        action="append",
        metavar="NAME",
        help="where trails end: likewise, but a register stands for its data and control pins",
    )


def _add_look(parser: ArgumentParser) -> None:
    add = parser.add_argument
    add("--json", action="store_true", help="print one JSON object and nothing else")
    add("--colour", choices=("auto", "always", "never"), default="auto", help="colours (default: auto)")
    add("--width", type=_width, metavar="N", help="columns to lay out for (default: the terminal's)")


def _definition(words: str) -> tuple[str, str]:
    name, _, value = words.partition("=")
    if not name.replace("_", "a").replace("$", "a").isalnum() or name[0].isdigit():
        raise ArgumentTypeError(f"`{name}` is no name of a macro")
    return name, value


def _whole(words: str, least: int, most: int) -> int:
    if not words.isdecimal() or not least <= int(words[:9]) <= most or len(words) > 9:
        raise ArgumentTypeError(f"`{words}` is no whole number from {least} to {most}")
    return int(words)


def _trail_count(words: str) -> int:
    return _whole(words, 1, MOST_TRAILS)


def _rows(words: str) -> int:
    return _whole(words, 0, 1_000_000)


def _width(words: str) -> int:
    return _whole(words, NARROWEST, 400)


def command_of(words: list[str]) -> str | None:
    """Return the command that some words begin with, or None."""
    return words[0] if words and words[0] in COMMANDS else None
