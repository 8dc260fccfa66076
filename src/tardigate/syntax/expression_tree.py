"""The tree of expressions, delays and parameters, as written. Data only; see `tree`."""

from __future__ import annotations

from collections.abc import Iterator
from typing import NamedTuple


class Number(NamedTuple):
    """A number: `value` with x and z bits 0; `unknown`, `floating` their masks; `width` None when unsized.

    `signed` as clause 3.5.1 says: plain decimals and based numbers with an `s`.
    """

    value: int
    width: int | None
    unknown: int
    floating: int
    signed: bool
    at: int


class Decimal(NamedTuple):
    """An unsized decimal number that is not whole, or a delay as written: `text` without underscores."""

    text: str
    at: int


class String(NamedTuple):
    """A string, without its quotes."""

    text: str
    at: int


class Selection(NamedTuple):
    """`[high]` (mode `bit`), `[high:low]` (`part`), `[high+:low]` (`up`), `[high-:low]` (`down`)."""

    mode: str
    high: Expression
    low: Expression | None


class Reference(NamedTuple):
    """A name, hierarchical or not, with its selections.

    `path` is one name, or several: `g[2].u.n` is `("g", "u", "n")`. `indices` has the index behind each name
    but the last (None for none) and is empty when no name of the path has one; `selections` follow the last.
    """

    path: tuple[str, ...]
    selections: tuple[Selection, ...]
    at: int
    indices: tuple[Expression | None, ...] = ()


class Concatenation(NamedTuple):
    """`{a, b}`."""

    parts: tuple[Expression, ...]
    at: int


class Replication(NamedTuple):
    """`{times{a, b}}`."""

    times: Expression
    parts: tuple[Expression, ...]
    at: int


class Unary(NamedTuple):
    """An operator before its operand."""

    operator: str
    operand: Expression
    at: int


class Binary(NamedTuple):
    """An operator between two operands."""

    operator: str
    left: Expression
    right: Expression
    at: int


class Conditional(NamedTuple):
    """`condition ? yes : no`."""

    condition: Expression
    yes: Expression
    no: Expression
    at: int


class Call(NamedTuple):
    """A call of a system function."""

    name: str
    arguments: tuple[Expression, ...]
    at: int


class Triplet(NamedTuple):
    """`minimum : typical : maximum`."""

    minimum: Expression
    typical: Expression
    maximum: Expression
    at: int


Expression = (
    Number | Decimal | String | Reference | Concatenation | Replication | Unary | Binary | Conditional
    | Call | Triplet
)  # fmt: skip


def operands(node: Expression) -> tuple[Expression, ...]:
    """Return what a node operates on; the count of a replication and the indices of a selection are not."""
    if isinstance(node, Binary):
        return (node.left, node.right)
    if isinstance(node, Unary):
        return (node.operand,)
    if isinstance(node, Conditional):
        return (node.condition, node.yes, node.no)
    if isinstance(node, Concatenation | Replication):
        return node.parts
    if isinstance(node, Call):
        return node.arguments
    return ()


def walk(root: Expression) -> Iterator[Expression]:
    """Yield a node and all that it operates on, however deep (see `operands`), in no order."""
    work = [root]
    while work:
        node = work.pop()
        yield node
        work += operands(node)


class Range(NamedTuple):
    """`[msb:lsb]`."""

    msb: Expression
    lsb: Expression
    at: int


class Named(NamedTuple):
    """A declared name, with the expression that follows its `=`; `dimensions` of an array (clause 4.9)."""

    name: str
    value: Expression | None
    at: int
    dimensions: tuple[Range, ...] = ()


class Delay(NamedTuple):
    """`#` and its one to three values."""

    values: tuple[Expression, ...]
    at: int


class Parameter(NamedTuple):
    """`parameter`, `localparam` (`local`) or `specparam` (`word`); `type` is `integer`, `real`, ... or empty.

    A specparam's value may be a `Triplet`.
    """

    local: bool
    range: Range | None
    names: tuple[Named, ...]
    at: int
    word: str = "parameter"
    type: str = ""
    signed: bool = False
