"""The tree of what cells are made of: procedural code, specify blocks, user-defined primitives. Data only."""

from __future__ import annotations

from typing import NamedTuple

from tardigate.syntax.expression_tree import Delay, Expression, Parameter, Reference

# Procedural code (clause 9): what the textbook register is made of


class Event(NamedTuple):
    """A member of an event list: `edge` is `posedge`, `negedge` or empty."""

    edge: str
    expression: Expression
    at: int


class Move(NamedTuple):
    """A procedural assignment: `q <= #1 d;` or (`blocking`) `q = d;`."""

    target: Expression
    value: Expression
    delay: Delay | None
    blocking: bool
    at: int


class If(NamedTuple):
    """`if (condition) yes else no`; None for a `;` or nothing at all."""

    condition: Expression
    yes: Statement | None
    no: Statement | None
    at: int


class Begin(NamedTuple):
    """`begin ... end`."""

    name: str
    statements: tuple[Statement, ...]
    at: int


Statement = Move | If | Begin


class Always(NamedTuple):
    """`always @(events) body`; no events for `@*`."""

    events: tuple[Event, ...]
    body: Statement | None
    at: int


class Opaque(NamedTuple):
    """Procedural code in a module with a specify block, left unread; `word` is for messages."""

    word: str
    at: int


# Specify blocks (clause 14 and 15)


class Path(NamedTuple):
    """A module path declaration (A.7.2).

    `full`: `*>`, else `=>`. `edge` of the inputs is `posedge`, `negedge` or empty. `polarity` is `+`, `-` or
    empty; of an edge-sensitive path with a data source that of the data. `condition` stands behind `if`.
    """

    inputs: tuple[Reference, ...]
    outputs: tuple[Reference, ...]
    full: bool
    edge: str
    polarity: str
    data: Expression | None
    condition: Expression | None
    ifnone: bool
    values: tuple[Expression, ...]
    at: int


class CheckEvent(NamedTuple):
    """A timing check's event (A.7.5.3): `edge` is `posedge`, `negedge`, a list (`01 x1`), or empty."""

    edge: str
    terminal: Expression
    condition: Expression | None
    at: int


class TimingCheck(NamedTuple):
    """A timing check (clause 15): its name (`$setup`) and arguments, None for one left out."""

    name: str
    arguments: tuple[CheckEvent | Expression | None, ...]
    at: int


class Specify(NamedTuple):
    """A specify block."""

    items: tuple[Path | TimingCheck | Parameter, ...]
    at: int


# User-defined primitives (clause 8)


class Row(NamedTuple):
    """A row of a table.

    `inputs`: a symbol for each input: `0 1 x ? b * r f p n`, or two level symbols for an edge: `01` for
    `(01)`.
    `state`: the present state (`0 1 x ? b`), empty in a combinational table; `output`: `0 1 x` or `-`.
    """

    inputs: tuple[str, ...]
    state: str
    output: str
    at: int


class Primitive(NamedTuple):
    """A UDP: `ports`, output first; `sequential`: its output is a `reg`; `initial`: first value or empty."""

    name: str
    ports: tuple[str, ...]
    sequential: bool
    initial: str
    rows: tuple[Row, ...]
    at: int
