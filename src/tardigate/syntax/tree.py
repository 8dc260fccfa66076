"""The tree of a Verilog module, as written. Data only.

Every node has `at`, the offset in the placed text where it begins. Nothing is evaluated: widths, parameters
and names are the netlist's business.
"""

from __future__ import annotations

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
    """A name, hierarchical or not, with its selections."""

    path: tuple[str, ...]
    selections: tuple[Selection, ...]
    at: int


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


class Range(NamedTuple):
    """`[msb:lsb]`."""

    msb: Expression
    lsb: Expression
    at: int


class Named(NamedTuple):
    """A declared name, with the expression that follows its `=`."""

    name: str
    value: Expression | None
    at: int


class Declaration(NamedTuple):
    """`input`, `output`, `inout` or a type of net, over names."""

    direction: str
    net_type: str
    signed: bool
    range: Range | None
    delay: Delay | None
    names: tuple[Named, ...]
    at: int


class Parameter(NamedTuple):
    """`parameter` or `localparam` (`local`)."""

    local: bool
    range: Range | None
    names: tuple[Named, ...]
    at: int


class Delay(NamedTuple):
    """`#` and its one to three values."""

    values: tuple[Expression, ...]
    at: int


class Gate(NamedTuple):
    """One gate of a gate statement; `name` is empty for one without."""

    name: str
    range: Range | None
    terminals: tuple[Expression, ...]
    at: int


class Gates(NamedTuple):
    """A gate statement."""

    gate: str
    delay: Delay | None
    gates: tuple[Gate, ...]
    at: int


class Connection(NamedTuple):
    """A connection of an instance: `pin` is empty when by order, `net` None when open."""

    pin: str
    net: Expression | None
    at: int


class Instance(NamedTuple):
    """One instance of an instance statement."""

    name: str
    range: Range | None
    connections: tuple[Connection, ...]
    at: int


class Instances(NamedTuple):
    """An instance statement; `overrides` have an empty pin when by order."""

    module: str
    overrides: tuple[Connection, ...]
    instances: tuple[Instance, ...]
    at: int


class Assign(NamedTuple):
    """One assignment: `target` is a reference or a concatenation."""

    target: Expression
    value: Expression
    at: int


class Continuous(NamedTuple):
    """A continuous assignment statement."""

    delay: Delay | None
    assigns: tuple[Assign, ...]
    at: int


class Run(NamedTuple):
    """Plain statements that were read in bulk: `first` to before `last` of the file's `Plain`."""

    first: int
    last: int
    at: int


Item = Declaration | Parameter | Gates | Instances | Continuous | Run


class HeaderPort(NamedTuple):
    """A port in the header: `name` outside (empty: none), `inside` the expression it stands for."""

    name: str
    inside: Expression | None
    declaration: Declaration | None
    at: int


class PlainPorts(NamedTuple):
    """A header that only lists names, read in bulk: the words `first` to before `last`, step 1."""

    first: int
    last: int


class Module(NamedTuple):
    """A module as written."""

    name: str
    parameters: tuple[Parameter, ...]
    ports: tuple[HeaderPort, ...] | PlainPorts
    items: tuple[Item, ...]
    at: int
