"""One module's text through the grammar.

Takes a text and what its marks stand for, gives a tree. Does not look any name up.
"""

from __future__ import annotations

from functools import cache
from typing import TYPE_CHECKING, cast

from tardigate.source.diagnostic import Diagnostic
from tardigate.source.faults import InputRefusedError
from tardigate.source.placed import PlacedText
from tardigate.syntax.grammar import Reader
from tardigate.syntax.lalr import NotInGrammarError
from tardigate.syntax.numbers import BadNumberError, read_number
from tardigate.syntax.tree import Module, PlainPorts, Run
from tardigate.syntax.verilog_tree_maker import TreeMaker

if TYPE_CHECKING:
    from tardigate.syntax.cuts import Cuts

SYNTAX = frozenset({"V001", "V009", "V151", "V152", "V153", "V154", "V155"})
"""The codes of what `parse` refuses."""

MOST = 10
"""Faults of one module that are told; the last one counts the others."""


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

    Raises InputRefusedError with the first faults of the text: V001 and V151 to V155 for what the grammar
    does not accept, V009 for numbers that are none.
    """
    reader, maker = _reader()
    maker.begin(cuts.where, runs, ports)
    told: list[Diagnostic] = []
    try:
        return cast(Module, reader.read(text))
    except BadNumberError as error:
        told.append(_bad_number(error, placed))
    except NotInGrammarError:
        pass
    raise InputRefusedError((*told, *_faults(text, cuts, placed)))


def _faults(text: str, cuts: Cuts, placed: PlacedText) -> list[Diagnostic]:
    """Return all that is wrong with a text that was refused."""
    from tardigate.syntax.verilog_advice import explain_all  # only on the way to a refusal

    scout = _reader()[0].scout
    told = explain_all(scout, text, placed, cuts.where, MOST)
    for token in scout.tokens(text):
        if token.kind == "NUMBER" and "'" in token.text:
            try:
                read_number(token.text, cuts.where(token.start))
            except BadNumberError as error:
                told.append(_bad_number(error, placed))
                if len(told) > 2 * MOST:
                    break
    return told


def _bad_number(error: BadNumberError, placed: PlacedText) -> Diagnostic:
    span = placed.span(error.at, error.at + len(error.text))
    return Diagnostic.of("V009", span, number=error.text, reason=error.reason)
