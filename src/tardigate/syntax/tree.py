"""The tree of a Verilog module, as written. Data only.

Every node has `at`, the offset in the placed text where it begins. Nothing is evaluated: widths, parameters
and names are the netlist's business.
"""

from __future__ import annotations

from typing import NamedTuple

from tardigate.syntax.cell_tree import (
    Always as Always,
    Begin as Begin,
    CheckEvent as CheckEvent,
    Event as Event,
    If as If,
    Move as Move,
    Opaque as Opaque,
    Path as Path,
    Primitive as Primitive,
    Row as Row,
    Specify as Specify,
    Statement as Statement,
    TimingCheck as TimingCheck,
)
from tardigate.syntax.expression_tree import (
    Binary as Binary,
    Call as Call,
    Concatenation as Concatenation,
    Conditional as Conditional,
    Decimal as Decimal,
    Delay as Delay,
    Expression as Expression,
    Named as Named,
    Number as Number,
    Parameter as Parameter,
    Range as Range,
    Reference as Reference,
    Replication as Replication,
    Selection as Selection,
    String as String,
    Triplet as Triplet,
    Unary as Unary,
    operands as operands,
    walk as walk,
)


class Declaration(NamedTuple):
    """`input`, `output`, `inout` or a type of net or variable (`reg`, `integer`, `real`), over names."""

    direction: str
    net_type: str
    signed: bool
    range: Range | None
    delay: Delay | None
    names: tuple[Named, ...]
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
    """One instance of an instance statement; one of a UDP may have no name."""

    name: str
    range: Range | None
    connections: tuple[Connection, ...]
    at: int


class Instances(NamedTuple):
    """An instance statement; `overrides` (of a UDP: delays) have an empty pin when by order."""

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


class Pulls(NamedTuple):
    """`pullup` or `pulldown` (`word`) statements (clause 7.8): each gate has one terminal."""

    word: str
    gates: tuple[Gate, ...]
    at: int


# Generate (clause 12.4)


class Genvars(NamedTuple):
    """`genvar i, j;`."""

    names: tuple[Named, ...]
    at: int


class Block(NamedTuple):
    """A generate block: `name` empty for one without; `begun` says whether `begin` and `end` stand around."""

    name: str
    items: tuple[Item, ...]
    begun: bool
    at: int


class GenerateFor(NamedTuple):
    """`for (variable = first; condition; stepped = following) block`."""

    variable: str
    first: Expression
    condition: Expression
    stepped: str
    following: Expression
    block: Block
    at: int


class GenerateIf(NamedTuple):
    """`if (condition) yes else no`; None for a `;` or nothing at all."""

    condition: Expression
    yes: Block | None
    no: Block | None
    at: int


class CaseArm(NamedTuple):
    """One arm; no labels for `default`."""

    labels: tuple[Expression, ...]
    block: Block | None
    at: int


class GenerateCase(NamedTuple):
    """`case (subject) ... endcase`."""

    subject: Expression
    arms: tuple[CaseArm, ...]
    at: int


class Defparam(NamedTuple):
    """`defparam u.N = 4, v.M = 5;` (clause 12.2.1); targets are hierarchical references."""

    assigns: tuple[Assign, ...]
    at: int


Item = (
    Declaration | Parameter | Gates | Instances | Continuous | Run | Pulls | Genvars | GenerateFor
    | GenerateIf | GenerateCase | Defparam | Always | Opaque | Specify
)  # fmt: skip


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
    """A module as written; `generated`: the runs of plain statements that stand inside generate."""

    name: str
    parameters: tuple[Parameter, ...]
    ports: tuple[HeaderPort, ...] | PlainPorts
    items: tuple[Item, ...]
    at: int
    generated: tuple[Run, ...] = ()
