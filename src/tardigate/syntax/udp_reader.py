"""Reads user-defined primitives (IEEE 1364-2005 clause 8), one at a time.

Takes a unit and the stretch of a primitive in it, gives its tree; refuses what clause 8 does not allow. Does
not say what the table does.
"""

from __future__ import annotations

from dataclasses import replace
from functools import cache
from typing import Any, cast

from tardigate.source.collector import Collector
from tardigate.source.faults import InputRefusedError
from tardigate.source.placed import PlacedText
from tardigate.syntax.grammar import Reader
from tardigate.syntax.lalr import NotInGrammarError, Token
from tardigate.syntax.outline import ModuleText
from tardigate.syntax.patterns import compiled
from tardigate.syntax.tree import Primitive
from tardigate.syntax.udp_check import Checker
from tardigate.syntax.udp_draft import Declared, Draft, DraftRow, Word
from tardigate.syntax.verilog_reader import Unit

FRIENDLY = {
    "IDENT": "a name", "NUMBER": "a number", "DIRECTION": "`input` or `output`",
    "SYMBOL": "a symbol of the table",
}  # fmt: skip
"""What the grammar's terminals are called in messages."""

_WIDE = 0xFEE0
"""From a sign of ASCII to its full-width form: see `udp.lark`."""
_INNER = {code: code + _WIDE for code in range(128) if chr(code).isalnum()}
_OUTER = {wide: code for code, wide in _INNER.items()}
_ENDS = compiled(r'\\\S+|"(?:[^"\\\n]++|\\.)*+"|(?<![\w$])(?:table|endtable)(?![\w$])')


def parse_primitive(unit: Unit, block: ModuleText) -> Primitive:
    """Parse a primitive: `block` is its stretch of the unit's text.

    Raises InputRefusedError: V001 for what the grammar does not accept, V130, V135 to V140 and V145 to V149
    for what clause 8 forbids.
    """
    return read_primitive(unit.text, block.start, block.end)


def read_primitive(text: PlacedText, start: int, end: int) -> Primitive:
    """Parse the primitive that stands in a placed text without comments from `start` to before `end`."""
    collector = Collector()
    draft = _parse(text, start, end)
    made = Checker(draft, text, collector).primitive()
    collector.refuse()
    return made


@cache
def _reader() -> tuple[Reader, _Maker]:
    maker = _Maker()
    return Reader("udp", maker), maker


def _parse(text: PlacedText, start: int, end: int) -> Draft:
    reader, maker = _reader()
    maker.start_at = start
    source = _with_symbols(text.data[start:end].decode("latin-1"))
    try:
        return cast(Draft, reader.read(source))
    except NotInGrammarError:
        from tardigate.syntax.trouble import explain_first  # only on the way to a refusal

        said = explain_first(reader.scout, source, text, "V001", lambda at: at + start, FRIENDLY)
    plain = replace(said, message=said.message.translate(_OUTER), hint=said.hint.translate(_OUTER))
    raise InputRefusedError((plain,))


def _with_symbols(text: str) -> str:
    """Return the text of a primitive with the letters and digits of its table as symbols."""
    ends = [found for found in _ENDS.finditer(text) if found[0] in ("table", "endtable")]
    if len(ends) < 2:
        return text
    start, stop = ends[0].end(), ends[1].start()
    return text[:start] + text[start:stop].translate(_INNER) + text[stop:]


class _Maker:
    """One method a rule of `udp.lark`; `start_at` is where the parsed text begins in the placed text."""

    start_at = 0

    def _word(self, token: Token) -> Word:
        text = str(token).removeprefix("\\")
        return Word(text, token.start_pos + self.start_at, token.end_pos + self.start_at)

    IDENT = NUMBER = LEFT = RIGHT = _word

    def SYMBOL(self, token: Token) -> Word:  # noqa: N802  # named like its terminal
        return self._word(token)._replace(text=str(token).translate(_OUTER).lower())

    def start(self, children: list[Any]) -> Draft:
        declarations = tuple(child for child in children if isinstance(child, Declared))
        initial = next((child for child in children if isinstance(child, _Initial)), None)
        rows = next((tuple(child) for child in children if isinstance(child, _Table)), ())
        return Draft(children[0], tuple(children[1]), declarations, initial, rows)

    def ports(self, children: list[Any]) -> list[Word | Declared]:
        return children

    def bare_port(self, children: list[Any]) -> Word:
        return cast(Word, children[0])

    def declared_port(self, children: list[Any]) -> Declared:
        name = next(child for child in children if isinstance(child, Word))
        return self._declared([child for child in children if child is not name], (name,))

    def declaration(self, children: list[Any]) -> Declared:
        names = next(child for child in children if isinstance(child, _Names))
        return self._declared(children, tuple(names))

    def _declared(self, children: list[Any], names: tuple[Word, ...]) -> Declared:
        kinds = {child.type: str(child) for child in children if isinstance(child, Token)}
        value = next((child.number for child in children if isinstance(child, _Value)), None)
        vector = any(isinstance(child, _Range) for child in children)
        return Declared(kinds.get("DIRECTION", ""), "REG" in kinds, vector, names, value)

    def names(self, children: list[Any]) -> _Names:
        return _Names(children)

    def range(self, _children: list[Any]) -> _Range:
        return _Range()

    def value(self, children: list[Any]) -> _Value:
        return _Value(children[0])

    def initial(self, children: list[Any]) -> _Initial:
        return _Initial((children[0], children[1].number))

    def table(self, children: list[Any]) -> _Table:
        return _Table(children)

    def row(self, children: list[Any]) -> DraftRow:
        return DraftRow(tuple(children))

    def symbols(self, children: list[Any]) -> tuple[Word, ...]:
        return tuple(children)

    def symbol(self, children: list[Any]) -> Word:
        return cast(Word, children[0])

    def edge(self, children: list[Any]) -> Word:
        left, before, after, right = children
        return Word(before.text + after.text, left.at, right.stop)


class _Names(tuple[Word, ...]):
    """The names of a declaration."""

    __slots__ = ()


class _Table(tuple[DraftRow, ...]):
    """The rows of a table."""

    __slots__ = ()


class _Initial(tuple[Word, Word]):
    """The name and the value of an initial statement."""

    __slots__ = ()


class _Range:
    """The range of a vector."""

    __slots__ = ()


class _Value:
    """What follows a `=`."""

    __slots__ = ("number",)

    def __init__(self, number: Word) -> None:
        self.number = number
