"""Makes the tree of a module while the parser reduces, so that no walk is needed afterwards.

One method a rule of `verilog.lark`; offsets are those of the placed text.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any, NamedTuple

from tardigate.syntax import tree
from tardigate.syntax.lalr import Token
from tardigate.syntax.numbers import read_number
from tardigate.syntax.precedence import resolve


def _word(token: Token) -> str:
    text = str(token)
    return text[1:] if text[0] == "\\" else text


def _of(children: list[Any], kind: type | tuple[type, ...]) -> Any:
    """Return the first child of a type, or None."""
    return next((child for child in children if isinstance(child, kind)), None)


class TreeMaker:
    """The callbacks. `begin` sets what one parse needs: the map of offsets and the plain stretches."""

    def begin(
        self,
        where: Callable[[int], int],
        runs: dict[int, tree.Run],
        ports: dict[int, tree.PlainPorts],
    ) -> None:
        """Prepare for a text: `where` maps its offsets to the placed text's."""
        self._where, self._runs, self._plain_ports = where, runs, ports

    def _at(self, token: Token) -> int:
        return self._where(token.start_pos or 0)

    # Header

    def start(self, children: list[Any]) -> tree.Module:
        """Make the module."""
        name = children[0]
        parameters = _of(children, _Parameters) or ()
        ports = _of(children[1:], (_Ports, tree.PlainPorts))
        items = tuple(c for c in children[1:] if isinstance(c, _ITEMS))
        return tree.Module(
            _word(name), tuple(parameters), ports if ports is not None else (), items, self._at(name)
        )

    def parameter_ports(self, children: list[Any]) -> _Parameters:
        return _Parameters(children)

    def parameter_port(self, children: list[Any]) -> tree.Parameter:
        named = _of(children, tree.Named)
        return tree.Parameter(False, _of(children, tree.Range), (named,), named.at)

    def parameter_type(self, children: list[Any]) -> tree.Range | None:
        return _of(children, tree.Range)  # type: ignore[no-any-return]

    def ports(self, children: list[Any]) -> _Ports:
        ports = _Ports()
        for child in children:
            ports.append(self._inherit(child, ports[-1] if ports else None))
        return ports

    def _inherit(self, port: tree.HeaderPort, before: tree.HeaderPort | None) -> tree.HeaderPort:
        """Give a bare name after a declared port that port's declaration (clause 12.3.4)."""
        if (
            port.declaration
            or not before
            or not before.declaration
            or not isinstance(port.inside, tree.Reference)
        ):
            return port
        named = (tree.Named(port.name, None, port.at),)
        return port._replace(declaration=before.declaration._replace(names=named, at=port.at))

    def plain_ports(self, children: list[Any]) -> tree.PlainPorts:
        return self._plain_ports[self._at(children[0])]

    def direction(self, children: list[Any]) -> Token:
        return children[0]  # type: ignore[no-any-return]

    def declared_type(self, children: list[Any]) -> _Type:
        net = next((str(c) for c in children if isinstance(c, Token) and c.type == "NET_TYPE"), "wire")
        return _Type(net, _signed(children), _of(children, tree.Range))

    def declared_port(self, children: list[Any]) -> tree.HeaderPort:
        direction = children[0]
        kind: _Type = _of(children, _Type) or _PLAIN
        name = next(c for c in children[1:] if isinstance(c, Token))
        at = self._at(name)
        value = children[-1] if children[-1] is not name else None
        named = (tree.Named(_word(name), value, at),)
        declaration = tree.Declaration(str(direction), kind.net, kind.signed, kind.range, None, named, at)
        return tree.HeaderPort(_word(name), tree.Reference((_word(name),), (), at), declaration, at)

    def named_port(self, children: list[Any]) -> tree.HeaderPort:
        at = self._at(children[0])
        word = _word(children[0])
        return tree.HeaderPort(word, tree.Reference((word,), (), at), None, at)

    def port_expression(self, children: list[Any]) -> tree.HeaderPort:
        if isinstance(children[0], Token):
            at = self._at(children[0])
            inside: tree.Expression = tree.Reference((_word(children[0]),), (children[1],), at)
            return tree.HeaderPort("", inside, None, at)
        return tree.HeaderPort("", children[0], None, children[0].at)

    def renamed_port(self, children: list[Any]) -> tree.HeaderPort:
        inside = children[1] if len(children) > 1 else None
        return tree.HeaderPort(_word(children[0]), inside, None, self._at(children[0]))

    # Items

    def plain_run(self, children: list[Any]) -> tree.Run:
        return self._runs[self._at(children[0])]

    def port_declaration(self, children: list[Any]) -> tree.Declaration:
        kind: _Type = _of(children, _Type) or _PLAIN
        at = self._at(children[0])
        return tree.Declaration(str(children[0]), kind.net, kind.signed, kind.range, None, children[-1], at)

    def net_declaration(self, children: list[Any]) -> tree.Declaration:
        word, bounds, delay = str(children[0]), _of(children, tree.Range), _of(children, tree.Delay)
        at = self._at(children[0])
        return tree.Declaration("", word, _signed(children), bounds, delay, children[-1], at)

    def parameter(self, children: list[Any]) -> tree.Parameter:
        return tree.Parameter(False, _of(children, tree.Range), children[-1], children[-1][0].at)

    def localparam(self, children: list[Any]) -> tree.Parameter:
        return tree.Parameter(True, _of(children, tree.Range), children[-1], children[-1][0].at)

    def continuous(self, children: list[Any]) -> tree.Continuous:
        return tree.Continuous(_of(children, tree.Delay), children[-1], children[-1][0].at)

    def gates(self, children: list[Any]) -> tree.Gates:
        gates = tuple(c for c in children if isinstance(c, tree.Gate))
        return tree.Gates(str(children[0]), _of(children, tree.Delay), gates, self._at(children[0]))

    def instances(self, children: list[Any]) -> tree.Instances:
        instances = tuple(c for c in children if isinstance(c, tree.Instance))
        overrides = tuple(_of(children, _Overrides) or ())
        return tree.Instances(_word(children[0]), overrides, instances, self._at(children[0]))

    def nothing(self, _children: list[Any]) -> None:
        return None

    def vectored(self, _children: list[Any]) -> None:
        return None

    def strength(self, _children: list[Any]) -> None:
        return None

    def declared_names(self, children: list[Any]) -> tuple[tree.Named, ...]:
        return tuple(children)

    assignments = net_assignments = declared_names

    def declared_name(self, children: list[Any]) -> tree.Named:
        value = children[1] if len(children) > 1 else None
        return tree.Named(_word(children[0]), value, self._at(children[0]))

    assignment = declared_name

    def net_assignment(self, children: list[Any]) -> tree.Assign:
        return tree.Assign(children[0], children[1], children[0].at)

    def gate(self, children: list[Any]) -> tree.Gate:
        name, ranged = "", _of(children[:2], tree.Range)
        at = children[0].at if not isinstance(children[0], Token) else self._at(children[0])
        if isinstance(children[0], Token):
            name = _word(children[0])
        skip = bool(name) + (ranged is not None)
        return tree.Gate(name, ranged, tuple(children[skip:]), at)

    def overrides(self, children: list[Any]) -> _Overrides:
        if isinstance(children[0], Token):
            return _Overrides([tree.Connection("", self._number(children[0]), self._at(children[0]))])
        return _Overrides(children)

    def override(self, children: list[Any]) -> tree.Connection:
        return tree.Connection("", children[0], children[0].at)

    def by_name(self, children: list[Any]) -> tree.Connection:
        net = children[1] if len(children) > 1 else None
        return tree.Connection(_word(children[0]), net, self._at(children[0]))

    named_override = by_name

    def by_order(self, children: list[Any]) -> tree.Connection:
        return tree.Connection("", children[0] if children else None, children[0].at if children else -1)

    def connections(self, children: list[Any]) -> tuple[tree.Connection, ...]:
        return tuple(children)

    def instance(self, children: list[Any]) -> tree.Instance:
        connections = children[-1]
        if len(connections) == 1 and connections[0].net is None and not connections[0].pin:
            connections = ()  # `()` connects nothing
        return tree.Instance(
            _word(children[0]), _of(children, tree.Range), connections, self._at(children[0])
        )

    # Delays

    def short_delay(self, children: list[Any]) -> tree.Delay:
        token = children[0]
        at = self._at(token)
        if token.type == "NUMBER":
            return tree.Delay((self._number(token),), at)
        return tree.Delay((tree.Reference((_word(token),), (), at),), at)

    def delay(self, children: list[Any]) -> tree.Delay:
        return tree.Delay(tuple(children), children[0].at)

    def triple(self, children: list[Any]) -> tree.Expression:
        return children[0] if len(children) == 1 else self.grouped_triple(children)

    # Expressions

    def conditional(self, children: list[Any]) -> tree.Conditional:
        condition = resolve(*children[0])
        return tree.Conditional(condition, children[1], children[2], condition.at)

    def resolved(self, children: list[Any]) -> tree.Expression:
        return resolve(*children[0])

    def operands(self, children: list[Any]) -> tuple[list[Any], list[int]]:
        if len(children) == 1:
            return [children[0]], []
        row, places = children[0]
        row += (str(children[1]), children[2])
        places.append(self._at(children[1]))
        return row, places

    def unary(self, children: list[Any]) -> tree.Expression:
        if len(children) == 1:
            child = children[0]
            if not isinstance(child, Token):
                return child  # type: ignore[no-any-return]
            if child.type == "STRING":
                return tree.String(str(child)[1:-1], self._at(child))
            return self._number(child)
        return tree.Unary(str(children[0]), children[1], self._at(children[0]))

    def _number(self, token: Token) -> tree.Number | tree.Decimal:
        return read_number(str(token), self._at(token))

    def call(self, children: list[Any]) -> tree.Call:
        return tree.Call(str(children[0]), tuple(children[1:]), self._at(children[0]))

    def grouped(self, children: list[Any]) -> tree.Expression:
        return children[0]  # type: ignore[no-any-return]

    def grouped_triple(self, children: list[Any]) -> tree.Triplet:
        low, middle, high = children
        return tree.Triplet(low, middle, high, low.at)

    def reference(self, children: list[Any]) -> tree.Reference:
        path = tuple(_word(c) for c in children if isinstance(c, Token))
        selections = tuple(c for c in children if isinstance(c, tree.Selection))
        return tree.Reference(path, selections, self._at(children[0]))

    def selection(self, children: list[Any]) -> tree.Selection:
        return tree.Selection("bit", children[0], None)

    def part(self, children: list[Any]) -> tree.Selection:
        return tree.Selection("part", children[0], children[1])

    def part_up(self, children: list[Any]) -> tree.Selection:
        return tree.Selection("up", children[0], children[-1])

    def part_down(self, children: list[Any]) -> tree.Selection:
        return tree.Selection("down", children[0], children[-1])

    def range(self, children: list[Any]) -> tree.Range:
        return tree.Range(children[0], children[1], children[0].at)

    def concatenation(self, children: list[Any]) -> tree.Concatenation:
        return tree.Concatenation(tuple(children), children[0].at)

    def replication(self, children: list[Any]) -> tree.Replication:
        return tree.Replication(children[0], tuple(children[1:]), children[0].at)


class _Ports(list[tree.HeaderPort]):
    """The ports of a header."""


class _Parameters(list[tree.Parameter]):
    """The parameters of a header."""


class _Overrides(list[tree.Connection]):
    """The parameter overrides of an instance statement."""


class _Type(NamedTuple):
    """A net type, whether it is signed, and a range."""

    net: str
    signed: bool
    range: tree.Range | None


_PLAIN = _Type("wire", False, None)


def _signed(children: list[Any]) -> bool:
    return any(isinstance(c, Token) and c.type == "SIGNED" for c in children)


_ITEMS = (tree.Declaration, tree.Parameter, tree.Gates, tree.Instances, tree.Continuous, tree.Run)
