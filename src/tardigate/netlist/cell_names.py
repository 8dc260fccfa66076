"""What a specify block's items ask of their module: terminals, conditions, times, places.

Takes references and expressions, gives bits and nodes of the part; the `CellDesk` of the parts house.
"""

from __future__ import annotations

from collections import ChainMap
from collections.abc import Sequence
from copy import copy

from tardigate.netlist.body import Body, flat_nets
from tardigate.netlist.cell_function import UNKNOWN, Functions
from tardigate.netlist.cell_times import CellTimes
from tardigate.netlist.expression import Expressions
from tardigate.parts.cell_desk import INNER
from tardigate.parts.function import Network
from tardigate.parts.kind import Way
from tardigate.parts.model import Place
from tardigate.parts.source_delay import Triple
from tardigate.source.diagnostic import Diagnostic
from tardigate.syntax import tree

_READ = (
    "~", "!", "&", "|", "^", "~&", "~|", "~^", "^~", "==", "!=", "===", "!==", "&&", "||", "+", "<<", ">>",
    "<<<", ">>>",
)  # fmt: skip
"""Operators that `Expressions` makes nodes of; a condition with any other is not looked into."""


class CellNames:
    """Answers for one module."""

    def __init__(self, body: Body, times: CellTimes, place: Place) -> None:
        self.body, self.times, self.network = body, times, Network()
        self.collector, self.text = times.collector, times.text
        self.wiring = copy(body.wiring)
        self.wiring.values = ChainMap(dict(times.constants()), dict(body.wiring.values))
        self._flat_net = flat_nets(body.flat)
        self._bit_of: dict[int, list[int]] = {}
        for bit, port in enumerate(body.flat.ports):
            self._bit_of.setdefault(port.net, []).append(bit)
        self.functions = Functions(body, self.network, {}, place)
        self._made: list[int] = []
        self._free: dict[int, int] = {}
        self._expressions = Expressions(self.wiring, self._emit)

    def follow(self, signals: Sequence[tuple[tree.Reference, tree.Reference]]) -> None:
        """Let delayed signals of checks be what they follow (15.5.1)."""
        for delayed, signal in signals:
            pairs = zip(self._nets(delayed), self._nets(signal), strict=False)
            self.functions.follows.update(pair for pair in pairs if UNKNOWN not in pair)
        self.functions.forget()

    def _nets(self, reference: tree.Reference) -> list[int]:
        return [self._flat(net) for net in self.wiring.bits(reference)]

    def _flat(self, net: int) -> int:
        """Return the flat net of a local one; `UNKNOWN` where none is told, as of a net in a module below."""
        return self._flat_net[net] if net < len(self._flat_net) else UNKNOWN

    # What `CellDesk` promises

    def terminal(self, reference: tree.Reference) -> tuple[int, ...]:
        """Return the bits of a terminal; see `CellDesk`."""
        return tuple(self._bit_of.get(net, [INNER])[0] for net in self._nets(reference))

    def way(self, bit: int) -> Way:
        """Return the way of a port's bit."""
        return self.body.flat.ports[bit].way

    def triple(self, value: tree.Expression, negative: bool = False) -> Triple | None:
        """Return a time in fs; see `CellDesk`."""
        return self.times.triple(value, negative)

    def place(self, at: int, length: int = 1) -> Place:
        """Return a place in the module's text."""
        return Place(self.text, at, at + length)

    def tell(self, code: str, at: int, length: int = 1, **words: object) -> None:
        """Tell a fault."""
        span = self.text.span(at, at + length)
        self.collector.add(Diagnostic.of(code, span, hint=None, related=(), **words))

    def node(self, condition: tree.Expression) -> int:
        """Return the node of a condition; see `CellDesk`."""
        if not _is_read(condition):
            return self.functions.maker.free()
        nets = self._expressions.nets(condition)
        return self._node(nets[0]) if nets else self.functions.maker.free()

    # Conditions

    def _node(self, net: int) -> int:
        """Return the node of a local net or of a result, a free one where that is unknown."""
        if net < 0:
            return self._made[-1 - net]
        node = self.functions.node(self._flat(net))
        if node != UNKNOWN:
            return node
        if net not in self._free:
            self._free[net] = self.functions.maker.free()
        return self._free[net]

    def _emit(self, operator: str, inputs: Sequence[int], *_: object) -> int:
        """Make a node of an operator; results are numbered from -1 down."""
        made = self.functions.maker.operator(operator, [self._node(net) for net in inputs])
        self._made.append(self.functions.maker.free() if made is None else made)
        return -len(self._made)


def _is_read(expression: tree.Expression) -> bool:
    for node in tree.walk(expression):
        if isinstance(node, tree.Unary | tree.Binary) and node.operator not in _READ:
            return False
        if isinstance(node, tree.Call | tree.Decimal | tree.String | tree.Triplet):
            return False
    return True
