"""Parts files to trees.

Takes a file, gives its families as written; each method of `_Maker` is named like the rule or terminal of
`parts.lark` that it stands for. Does not look anything up.
"""

from __future__ import annotations

from functools import cache
from typing import Any

from tardigate.source.collector import Collector
from tardigate.source.files import SourceFile
from tardigate.source.placed import PlacedText
from tardigate.syntax import parts_tree as tree
from tardigate.syntax.grammar import Reader
from tardigate.syntax.lalr import NotInGrammarError
from tardigate.syntax.parts_tree import Expr, PinDecl, PinRef, Word

SYNTAX = "P001"
"""The code of text that the grammar does not know."""

MOST = 10
"""Faults of one file that are told; the last one counts the others."""

BYTE_ORDER_MARK = b"\xef\xbb\xbf"
"""What some editors write before a text in UTF-8."""


def read_families(file: SourceFile, collector: Collector) -> tuple[tree.Family, ...] | None:
    """Return the families of a parts file; what the grammar does not know is told, and gives None."""
    reader = _reader()
    text = file.data.decode("latin-1")  # a byte a character: offsets stay those of the file
    if file.data.startswith(BYTE_ORDER_MARK):
        text = " " * len(BYTE_ORDER_MARK) + text[len(BYTE_ORDER_MARK) :]
    try:
        families: list[tree.Family] = reader.read(text)
    except NotInGrammarError:
        from tardigate.syntax.parts_advice import FRIENDLY, LANGUAGE, advise  # only on the way to a refusal
        from tardigate.syntax.trouble import explain_all

        placed = PlacedText.whole(file, text.encode("latin-1"))
        for told in explain_all(reader.scout, placed, LANGUAGE, SYNTAX, FRIENDLY, advise, MOST):
            collector.add(told)
        return None
    return tuple(family._replace(file=file) for family in families)


def reserved_words() -> frozenset[str]:
    """Return the words of the language; as a name, each is best written escaped."""
    return _reader().words


@cache
def _reader() -> Reader:
    return Reader("parts", _Maker())


_NOWHERE = SourceFile("", b"")


def _word(token: Any) -> Word:
    return Word(str(token), token.start_pos, token.end_pos)


def _only(children: list[Any]) -> Any:
    return children[0]


def _all(children: list[Any]) -> tuple[Any, ...]:
    return tuple(children)


def _fields(made: Any, count: int) -> Any:
    """Make the maker of a node whose first `count` children are fields and the others its last field."""

    def make(children: list[Any]) -> Any:
        return made(*children[:count], tuple(children[count:]))

    return staticmethod(make)


def _form(made: Any, form: str) -> Any:
    def make(children: list[Any]) -> Any:
        return made(form, *children)

    return staticmethod(make)


def _plain(made: Any) -> Any:
    return staticmethod(lambda children: made(*children))


class _Maker:
    """What becomes of each rule and terminal; lark calls these with a list of children, or with a token."""

    NAME = NUMBER = SIZED = staticmethod(_word)
    CLEAR = SET = LOAD = HIGH = LOW = STATE = LATCH = PERIOD = NET = staticmethod(_word)
    OR = AND = XOR = XNOR = NOT = MINUS = staticmethod(_word)
    TPD = TPLH = TPHL = TPZH = TPZL = TPHZ = TPLZ = TEN = TDIS = staticmethod(_word)
    TSU = TH = TREC = TREM = TW = POSEDGE = NEGEDGE = PLUS = staticmethod(_word)
    PARALLEL = FULL = LBRACE = staticmethod(_word)

    @staticmethod
    def ESCAPED(token: Any) -> Word:  # noqa: N802
        return Word(str(token)[1:], token.start_pos, token.end_pos)

    @staticmethod
    def STRING(token: Any) -> Word:  # noqa: N802
        inside = str(token)[1:-1].encode("latin-1").decode("utf-8", "replace")
        return Word(inside, token.start_pos, token.end_pos)

    name = delay = width = period = check_before = check_after = edge = staticmethod(_only)
    level = polarity = arrow = each = when = staticmethod(_only)
    names = pins = staticmethod(_all)

    @staticmethod
    def no_polarity(children: list[Any]) -> None:
        """Nothing is written there."""

    @staticmethod
    def start(children: list[Any]) -> list[tree.Family]:
        return children

    @staticmethod
    def family(children: list[Any]) -> tree.Family:
        return tree.Family(_NOWHERE, children[0], children[1], tuple(children[2:]))

    provenance = _plain(tree.Provenance)
    condition = _fields(tree.Condition, 2)
    conditions = _fields(tree.Conditions, 0)

    @staticmethod
    def span(children: list[Any]) -> tree.Span:
        low, high, unit = children
        return tree.Span(low, high or low, unit)

    alias = _plain(tree.Alias)
    equivalent = _plain(tree.Equivalent)

    @staticmethod
    def inputs(children: list[Any]) -> tuple[Word, Word]:
        return children[0], children[1] or children[0]

    @staticmethod
    def gate(children: list[Any]) -> tree.Entry:
        name, count = children
        return tree.Entry(name, None, None) if count is None else tree.Entry(name, *count)

    operator = gate

    @staticmethod
    def gate_row(children: list[Any]) -> tree.KindRow:
        return tree.KindRow(children[0], tuple(children[1:-1]), children[-1])

    operator_row = default_row = gate_row

    @staticmethod
    def gates(children: list[Any]) -> tree.KindTable:
        return tree.KindTable("gates", children[0], tuple(children[1:]))

    @staticmethod
    def operators(children: list[Any]) -> tree.KindTable:
        return tree.KindTable("operators", children[0], tuple(children[1:]))

    @staticmethod
    def default(children: list[Any]) -> tree.KindTable:
        return tree.KindTable("default", children[0], tuple(children[1:]))

    wires = _fields(tree.Wires, 1)
    wire_fanout = _form(tree.Wire, "fanout")
    wire_net = _form(tree.Wire, "net")

    @staticmethod
    def wire_more(children: list[Any]) -> tree.Wire:
        return tree.Wire("more", None, children[0])

    @staticmethod
    def wire_length(children: list[Any]) -> tree.Wire:
        name, number, unit, cells, time_unit, length_unit = children
        return tree.Wire("length", name, cells, tree.Quantity(number, unit), time_unit, length_unit)

    @staticmethod
    def wire_load(children: list[Any]) -> tree.Wire:
        return tree.Wire("load", None, (), tree.Quantity(*children))

    part = _fields(tree.Part, 2)
    package = _plain(tree.Package)
    farads = _plain(tree.Quantity)
    range = _plain(tree.Range)
    select = _plain(tree.Range)
    pin = _plain(PinRef)
    pin_in = pin_out = hidden = _plain(PinDecl)
    parameter = _plain(tree.Parameter)

    @staticmethod
    def pins_in(children: list[Any]) -> tree.Pins:
        return tree.Pins("input", tuple(children[:-1]), children[-1])

    @staticmethod
    def pins_out(children: list[Any]) -> tree.Pins:
        return tree.Pins("output", tuple(children[:-1]), children[-1])

    @staticmethod
    def pins_inout(children: list[Any]) -> tree.Pins:
        return tree.Pins("inout", tuple(children[:-1]), children[-1])

    @staticmethod
    def state(children: list[Any]) -> tree.Pins:
        return tree.Pins("state", tuple(children), None)

    register = _fields(tree.Register, 2)
    latch = _fields(tree.Register, 2)
    store = _form(tree.Stored, "store")

    @staticmethod
    def clear(children: list[Any]) -> tree.Stored:
        return tree.Stored("clear", None, children[0])

    @staticmethod
    def set(children: list[Any]) -> tree.Stored:
        return tree.Stored("set", None, children[0])

    times = _fields(tree.Times, 1)
    row = _plain(tree.Row)
    side = _plain(tree.Side)
    checks = _fields(tree.Checks, 1)

    @staticmethod
    def check_pair(children: list[Any]) -> tree.Check:
        symbol, data, reference, when, cells = children
        return tree.Check(symbol, data, reference, None, when, cells)

    @staticmethod
    def check_width(children: list[Any]) -> tree.Check:
        symbol, pins, level, cells = children
        return tree.Check(symbol, tree.Side(None, pins), None, level, None, cells)

    @staticmethod
    def check_period(children: list[Any]) -> tree.Check:
        symbol, pins, cells = children
        return tree.Check(symbol, tree.Side(None, pins), None, None, None, cells)

    @staticmethod
    def load(children: list[Any]) -> tree.Load:
        pins, number, unit, more = children
        cells, time_unit, load_unit = more or ((), None, None)
        return tree.Load(pins or (), tree.Quantity(number, unit), cells, time_unit, load_unit)

    more = staticmethod(_all)

    @staticmethod
    def cells(children: list[Any]) -> tuple[tree.Cell, ...]:
        return tuple(children[::2])  # a `|` between any two

    @staticmethod
    def cell(children: list[Any]) -> tree.Cell:
        return tree.Cell(tuple(children))

    @staticmethod
    def negative(children: list[Any]) -> Word:
        minus, number = children
        return Word("-" + number.text, minus.start, number.stop)

    @staticmethod
    def missing(children: list[Any]) -> None:
        """`-`: nobody gave this number."""

    @staticmethod
    def binary(children: list[Any]) -> Expr:
        left, operator, right = children
        return Expr("binary", operator, (left, right))

    @staticmethod
    def prefix(children: list[Any]) -> Expr:
        return Expr("prefix", children[0], (children[1],))

    @staticmethod
    def choose(children: list[Any]) -> Expr:
        return Expr("choose", children[0].word, tuple(children))

    @staticmethod
    def concat(children: list[Any]) -> Expr:
        return Expr("concat", children[0].word, tuple(children))

    number = _form(Expr, "number")
    read = _form(Expr, "read")

    @staticmethod
    def read_bit(children: list[Any]) -> Expr:
        return Expr("read_bit", children[0], (children[1],))

    @staticmethod
    def read_bits(children: list[Any]) -> Expr:
        return Expr("read_bits", children[0], (), tree.Range(children[1], children[2]))
