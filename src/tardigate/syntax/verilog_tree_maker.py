"""Makes the tree of a module while the parser reduces, so that no walk is needed afterwards.

One method a rule of `verilog.lark`; offsets are those of the placed text.
"""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any, NamedTuple

from tardigate.syntax import tree
from tardigate.syntax.cell_maker import CellMaker
from tardigate.syntax.expression_maker import child_of, word_of
from tardigate.syntax.lalr import Token


class TreeMaker(CellMaker):
    """The callbacks of modules and their items."""

    # Header

    def start(self, children: list[Any]) -> tree.Module:
        """Make the module."""
        name = children[0]
        parameters = child_of(children, _Parameters) or ()
        ports = child_of(children[1:], (_Ports, tree.PlainPorts))
        items = _items(children[1:])
        return tree.Module(
            word_of(name),
            tuple(parameters),
            ports if ports is not None else (),
            items,
            self._at(name),
            tuple(self._generated),
        )

    def parameter_ports(self, children: list[Any]) -> _Parameters:
        return _Parameters(children)

    def parameter_port(self, children: list[Any]) -> tree.Parameter:
        return _parameter(children, "parameter", (children[-1],))

    def parameter_type(self, children: list[Any]) -> _ParameterType:
        word = next((str(c) for c in children if isinstance(c, Token) and c.type == "VARIABLE"), "")
        return _ParameterType(child_of(children, tree.Range), word, _signed(children))

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
        words = [c for c in children if isinstance(c, Token) and c.type != "SIGNED"]
        net = str(words[0]) if words else "wire"
        return _Type(net, _signed(children), child_of(children, tree.Range))

    def declared_port(self, children: list[Any]) -> tree.HeaderPort:
        direction = children[0]
        kind: _Type = child_of(children, _Type) or _PLAIN
        name = next(c for c in children[1:] if isinstance(c, Token))
        at = self._at(name)
        value = children[-1] if children[-1] is not name else None
        named = (tree.Named(word_of(name), value, at),)
        declaration = tree.Declaration(str(direction), kind.net, kind.signed, kind.range, None, named, at)
        return tree.HeaderPort(word_of(name), tree.Reference((word_of(name),), (), at), declaration, at)

    def named_port(self, children: list[Any]) -> tree.HeaderPort:
        at = self._at(children[0])
        word = word_of(children[0])
        return tree.HeaderPort(word, tree.Reference((word,), (), at), None, at)

    def port_expression(self, children: list[Any]) -> tree.HeaderPort:
        if isinstance(children[0], Token):
            at = self._at(children[0])
            inside: tree.Expression = tree.Reference((word_of(children[0]),), (children[1],), at)
            return tree.HeaderPort("", inside, None, at)
        return tree.HeaderPort("", children[0], None, children[0].at)

    def renamed_port(self, children: list[Any]) -> tree.HeaderPort:
        inside = children[1] if len(children) > 1 else None
        return tree.HeaderPort(word_of(children[0]), inside, None, self._at(children[0]))

    # Items

    def plain_run(self, children: list[Any]) -> tree.Run:
        return self._runs[self._at(children[0])]

    def port_declaration(self, children: list[Any]) -> tree.Declaration:
        kind: _Type = child_of(children, _Type) or _PLAIN
        at = self._at(children[0])
        return tree.Declaration(str(children[0]), kind.net, kind.signed, kind.range, None, children[-1], at)

    def net_declaration(self, children: list[Any]) -> tree.Declaration:
        shape: _Type = child_of(children, _Type) or _Type(
            "", _signed(children), child_of(children, tree.Range)
        )
        delay, at = child_of(children, tree.Delay), self._at(children[0])
        word = str(children[0])
        return tree.Declaration("", word, shape.signed, shape.range, delay, children[-1], at)

    def net_shape(self, children: list[Any]) -> _Type:
        return _Type("", _signed(children), child_of(children, tree.Range))

    def parameter(self, children: list[Any]) -> tree.Parameter:
        return _parameter(children, "parameter", children[-1])

    def localparam(self, children: list[Any]) -> tree.Parameter:
        return _parameter(children, "localparam", children[-1])

    def specparam(self, children: list[Any]) -> tree.Parameter:
        return _parameter(children, "specparam", children[-1])

    def variables(self, children: list[Any]) -> tree.Declaration:
        at = self._at(children[0])
        return tree.Declaration("", str(children[0]), True, None, None, children[-1], at)

    def events_declared(self, children: list[Any]) -> tree.Declaration:
        return tree.Declaration("", "event", False, None, None, children[0], children[0][0].at)

    def continuous(self, children: list[Any]) -> tree.Continuous:
        return tree.Continuous(child_of(children, tree.Delay), children[-1], children[-1][0].at)

    def gates(self, children: list[Any]) -> tree.Gates:
        gates = tuple(c for c in children if isinstance(c, tree.Gate))
        return tree.Gates(str(children[0]), child_of(children, tree.Delay), gates, self._at(children[0]))

    def pulls(self, children: list[Any]) -> tree.Pulls:
        gates = tuple(c for c in children if isinstance(c, tree.Gate))
        return tree.Pulls(str(children[0]), gates, self._at(children[0]))

    def instances(self, children: list[Any]) -> tree.Instances:
        instances = tuple(c for c in children if isinstance(c, tree.Instance))
        overrides = tuple(child_of(children, _Overrides) or ())
        return tree.Instances(word_of(children[0]), overrides, instances, self._at(children[0]))

    def nothing(self, _children: list[Any]) -> None:
        return None

    def strength(self, _children: list[Any]) -> None:
        return None

    charge = pull_strength = strength

    def declared_names(self, children: list[Any]) -> tuple[tree.Named, ...]:
        return tuple(children)

    assignments = net_assignments = specparams = defparams = declared_names

    def declared_name(self, children: list[Any]) -> tree.Named:
        dimensions = tuple(c for c in children if isinstance(c, tree.Range))
        value = children[-1] if len(children) > 1 + len(dimensions) else None
        return tree.Named(word_of(children[0]), value, self._at(children[0]), dimensions)

    assignment = specparam_assignment = declared_name

    def pulse_limits(self, children: list[Any]) -> tree.Named:
        return tree.Named(word_of(children[0]), children[1], self._at(children[0]))

    def net_assignment(self, children: list[Any]) -> tree.Assign:
        return tree.Assign(children[0], children[1], children[0].at)

    defparam_assignment = net_assignment

    def gate(self, children: list[Any]) -> tree.Gate:
        name, ranged = "", child_of(children[:2], tree.Range)
        at = children[0].at if not isinstance(children[0], Token) else self._at(children[0])
        if isinstance(children[0], Token):
            name = word_of(children[0])
        skip = bool(name) + (ranged is not None)
        return tree.Gate(name, ranged, tuple(children[skip:]), at)

    def overrides(self, children: list[Any]) -> _Overrides:
        if isinstance(children[0], Token):
            delay = self.short_delay(children)
            return _Overrides([tree.Connection("", delay.values[0], delay.at)])
        return _Overrides(children)

    def override(self, children: list[Any]) -> tree.Connection:
        return tree.Connection("", children[0], children[0].at)

    def by_name(self, children: list[Any]) -> tree.Connection:
        net = children[1] if len(children) > 1 else None
        return tree.Connection(word_of(children[0]), net, self._at(children[0]))

    named_override = by_name

    def by_order(self, children: list[Any]) -> tree.Connection:
        return tree.Connection("", children[0] if children else None, children[0].at if children else -1)

    def connections(self, children: list[Any]) -> tuple[tree.Connection, ...]:
        return tuple(children)

    def instance(self, children: list[Any]) -> tree.Instance:
        connections = children[-1]
        if len(connections) == 1 and connections[0].net is None and not connections[0].pin:
            connections = ()  # `()` connects nothing
        if len(children) == 1:
            at = max((connection.at for connection in connections), default=-1)
            return tree.Instance("", None, connections, connections[0].at if connections else at)
        return tree.Instance(
            word_of(children[0]), child_of(children, tree.Range), connections, self._at(children[0])
        )

    # Generate

    def region(self, children: list[Any]) -> _Region:
        region = _Region(_items(children))
        self._note_runs(region)
        return region

    def _note_runs(self, items: Iterable[tree.Item]) -> None:
        self._generated += [item for item in items if isinstance(item, tree.Run)]

    def genvars(self, children: list[Any]) -> tree.Genvars:
        return tree.Genvars(tuple(children), children[0].at)

    def genvar_name(self, children: list[Any]) -> tree.Named:
        return tree.Named(word_of(children[0]), None, self._at(children[0]))

    def begun_block(self, children: list[Any]) -> tree.Block:
        name = children[0] if children and isinstance(children[0], Token) else None
        items = _items(children)
        self._note_runs(items)
        at = self._at(name) if name is not None else items[0].at if items else -1
        return tree.Block(word_of(name) if name is not None else "", items, True, at)

    def lone_block(self, children: list[Any]) -> tree.Block:
        return tree.Block("", (children[0],), False, children[0].at)

    def generate_for(self, children: list[Any]) -> tree.GenerateFor:
        variable, first, condition, stepped, following, block = children
        at = self._at(variable)
        return tree.GenerateFor(word_of(variable), first, condition, word_of(stepped), following, block, at)

    def generate_if(self, children: list[Any]) -> tree.GenerateIf:
        no = children[2] if len(children) > 2 else None
        return tree.GenerateIf(children[0], children[1], no, children[0].at)

    def generate_case(self, children: list[Any]) -> tree.GenerateCase:
        return tree.GenerateCase(children[0], tuple(children[1:]), children[0].at)

    def case_arm(self, children: list[Any]) -> tree.CaseArm:
        return tree.CaseArm(tuple(children[:-1]), children[-1], children[0].at)

    def default_arm(self, children: list[Any]) -> tree.CaseArm:
        block = children[0]
        return tree.CaseArm((), block, block.at if block is not None else -1)

    def defparam(self, children: list[Any]) -> tree.Defparam:
        return tree.Defparam(children[0], children[0][0].at)


class _Ports(list[tree.HeaderPort]):
    """The ports of a header."""


class _Parameters(list[tree.Parameter]):
    """The parameters of a header."""


class _Overrides(list[tree.Connection]):
    """The parameter overrides of an instance statement."""


class _Region(list[tree.Item]):
    """What stands between `generate` and `endgenerate`."""


class _ParameterType(NamedTuple):
    """The range or type of a parameter declaration."""

    range: tree.Range | None
    word: str
    signed: bool


class _Type(NamedTuple):
    """A net type, whether it is signed, and a range."""

    net: str
    signed: bool
    range: tree.Range | None


_PLAIN = _Type("wire", False, None)


def _signed(children: list[Any]) -> bool:
    return any(isinstance(c, Token) and c.type == "SIGNED" for c in children)


def _items(children: list[Any]) -> tuple[tree.Item, ...]:
    """Return the items among children, those of generate regions among them."""
    found: list[tree.Item] = []
    for child in children:
        if isinstance(child, _Region):
            found += child
        elif isinstance(child, _ITEMS):
            found.append(child)
    return tuple(found)


def _parameter(children: list[Any], word: str, names: tuple[tree.Named, ...]) -> tree.Parameter:
    kind = child_of(children, _ParameterType) or _ParameterType(child_of(children, tree.Range), "", False)
    return tree.Parameter(word != "parameter", kind.range, names, names[0].at, word, kind.word, kind.signed)


_ITEMS = (
    tree.Declaration, tree.Parameter, tree.Gates, tree.Instances, tree.Continuous, tree.Run, tree.Pulls,
    tree.Genvars, tree.GenerateFor, tree.GenerateIf, tree.GenerateCase, tree.Defparam, tree.Always,
    tree.Opaque, tree.Specify,
)  # fmt: skip
