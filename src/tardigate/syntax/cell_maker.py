"""Makes the trees of procedural code and specify blocks while the parser reduces.

One method a rule of `verilog.lark`; offsets are those of the placed text.
"""

from __future__ import annotations

import re
from typing import Any, NamedTuple

from tardigate.syntax import tree
from tardigate.syntax.expression_maker import ExpressionMaker, child_of, word_of
from tardigate.syntax.lalr import Token

_EDGES = re.compile(r"[01xXzZ]{2}")


class CellMaker(ExpressionMaker):
    """The callbacks of what cells are made of."""

    # Procedural code

    def opaque(self, children: list[Any]) -> tree.Opaque:
        return tree.Opaque("procedural code", self._at(children[0]))

    def always(self, children: list[Any]) -> tree.Always:
        events = children[0]
        body = children[1]
        at = events[0].at if events else body.at if body is not None else -1
        return tree.Always(events, body, at)

    def event_control(self, children: list[Any]) -> tuple[tree.Event, ...]:
        if isinstance(children[0], tree.Reference):
            return (tree.Event("", children[0], children[0].at),)
        return tuple(c for c in children if isinstance(c, tree.Event))

    def event(self, children: list[Any]) -> tree.Event:
        edge = str(children[0]) if isinstance(children[0], Token) else ""
        return tree.Event(edge, children[-1], children[-1].at)

    def nonblocking(self, children: list[Any]) -> tree.Move:
        return self._move(children, False)

    def blocking(self, children: list[Any]) -> tree.Move:
        return self._move(children, True)

    def _move(self, children: list[Any], blocking: bool) -> tree.Move:
        delay = child_of(children, tree.Delay)
        return tree.Move(children[0], children[-1], delay, blocking, children[0].at)

    def if_statement(self, children: list[Any]) -> tree.If:
        no = children[2] if len(children) > 2 else None
        return tree.If(children[0], children[1], no, children[0].at)

    def sequence(self, children: list[Any]) -> tree.Begin:
        name = children[0] if children and isinstance(children[0], Token) else None
        statements = tuple(c for c in children if c is not None and not isinstance(c, Token))
        at = self._at(name) if name is not None else statements[0].at if statements else -1
        return tree.Begin(word_of(name) if name is not None else "", statements, at)

    # Specify blocks

    def specify(self, children: list[Any]) -> tree.Specify:
        items = tuple(c for c in children if c is not None)
        return tree.Specify(items, items[0].at if items else -1)

    def path(self, children: list[Any]) -> tree.Path:
        tokens = [c for c in children if isinstance(c, Token)]
        sides = [c for c in children if isinstance(c, tuple) and not isinstance(c, tree.Path)]
        edge, sign = (next((str(t) for t in tokens if t.type == kind), "") for kind in ("EDGE", "SIGN"))
        full = any(t.type == "ARROW" and t == "*>" for t in tokens)
        inputs, end = sides[0], sides[-1]
        outputs, polarity, data = end if isinstance(end, _PathEnd) else (end, "", None)
        return tree.Path(inputs, outputs, full, edge, sign or polarity, data, None, False, (), inputs[0].at)

    def path_end(self, children: list[Any]) -> tuple[tree.Reference, ...]:
        return children[0]  # type: ignore[no-any-return]

    def path_end_with_data(self, children: list[Any]) -> _PathEnd:
        sign = next((str(c)[0] for c in children if isinstance(c, Token)), "")
        return _PathEnd(children[0], sign, children[-1])

    def terminals(self, children: list[Any]) -> tuple[tree.Reference, ...]:
        return tuple(children)

    path_values = terminals

    def plain_path(self, children: list[Any]) -> tree.Path:
        path: tree.Path = children[0]
        return path._replace(values=children[1])

    def path_if(self, children: list[Any]) -> tree.Path:
        path: tree.Path = children[1]
        return path._replace(condition=children[0], values=children[2])

    def path_ifnone(self, children: list[Any]) -> tree.Path:
        path: tree.Path = children[0]
        return path._replace(ifnone=True, values=children[1])

    def timing_check(self, children: list[Any]) -> tree.TimingCheck:
        arguments = [None if isinstance(c, list) else c for c in children[1:]]
        return tree.TimingCheck(str(children[0]), tuple(arguments), self._at(children[0]))

    def check_argument(self, children: list[Any]) -> tree.Expression | list[Any]:
        return children[0] if children else []

    def check_event(self, children: list[Any]) -> tree.CheckEvent:
        edge = ""
        if isinstance(children[0], Token):
            edge = " ".join(_EDGES.findall(str(children[0])[4:])) or str(children[0])
        rest = [c for c in children if not isinstance(c, Token)]
        return tree.CheckEvent(edge, rest[0], rest[1] if len(rest) > 1 else None, rest[0].at)


class _PathEnd(NamedTuple):
    """The outputs of an edge-sensitive path with a data source, its polarity and that source."""

    outputs: tuple[tree.Reference, ...]
    polarity: str
    data: tree.Expression
