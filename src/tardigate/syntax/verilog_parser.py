"""One module's text through the grammar; lark only says what is wrong with one that is refused.

Takes a text and what its marks stand for, gives a tree. Does not look any name up.
"""

from __future__ import annotations

from functools import cache
from typing import TYPE_CHECKING, cast

from tardigate.source.diagnostic import Diagnostic
from tardigate.source.faults import InputRefusedError
from tardigate.source.placed import PlacedText
from tardigate.syntax.grammar import Reader
from tardigate.syntax.numbers import BadNumberError
from tardigate.syntax.tree import Module, PlainPorts, Run
from tardigate.syntax.verilog_tree_maker import TreeMaker

if TYPE_CHECKING:
    from tardigate.syntax.cuts import Cuts

FRIENDLY = {
    "IDENT": "a name", "NUMBER": "a number", "STRING": "a text in quotes", "SYSTEM": "a system function",
    "GATE": "a gate", "DIRECTION": "`input`, `output` or `inout`", "NET_TYPE": "a type of net",
    "STRENGTH": "a strength", "UNARY": "an operator", "AND_OR": "an operator", "BINARY": "an operator",
    "PLAIN_RUN": "an instance", "PLAIN_PORTS": "`(`", "$END": "the end of the module",
}  # fmt: skip
"""What the grammar's terminals are called in messages."""


@cache
def _reader() -> tuple[Reader, TreeMaker]:
    maker = TreeMaker()
    return Reader("verilog", maker), maker


def accepts(text: str) -> bool:
    """Tell whether the text of a module follows the grammar."""
    reader, maker = _reader()
    maker.begin(lambda at: at, {}, {})
    try:
        return reader.accepts(text)
    except BadNumberError:
        return True  # told where the whole module is parsed


def parse(
    text: str, cuts: Cuts, runs: dict[int, Run], ports: dict[int, PlainPorts], placed: PlacedText
) -> Module:
    """Return the tree of a module.

    Raises InputRefusedError: V001 for what the grammar does not accept, V009 for a number that is none.
    """
    reader, maker = _reader()
    maker.begin(cuts.where, runs, ports)
    try:
        return cast(Module, reader.read(text))
    except BadNumberError as error:
        span = placed.span(error.at, error.at + len(error.text))
        diagnostic = Diagnostic.of("V009", span, number=error.text, reason=error.reason)
    except Exception as error:  # explain raises again what is not about the text
        from tardigate.syntax.lark_errors import explain

        diagnostic = explain(error, reader.lark, placed, "V001", cuts.where, FRIENDLY)
    raise InputRefusedError((diagnostic,))
