"""Connects instances: each pin of a gate, part or module to nets.

Takes an instance as written and the interface of what it instantiates, gives the net of every bit, for each
of the instances of an array (IEEE 1364-2005 clauses 7.1.6 and 12.3).
"""

from __future__ import annotations

from collections.abc import Sequence

from tardigate.netlist.expression import Expressions
from tardigate.netlist.flat import OPEN
from tardigate.netlist.interface import Interface, InterfacePin
from tardigate.netlist.wiring import Wiring
from tardigate.parts.kind import Way
from tardigate.source.diagnostic import Related
from tardigate.syntax import tree

MOST_INSTANCES = 1 << 16
"""Instances that one array may have."""


class Connector:
    """Connects the instances of one module."""

    def __init__(self, wiring: Wiring, expressions: Expressions) -> None:
        self.wiring, self.expressions = wiring, expressions

    def array(self, bounds: tree.Range | None) -> Sequence[int] | None:
        """Return the indices of an array of instances, left to right; (0,) for one; None after telling."""
        if bounds is None:
            return (0,)
        found = self.wiring.declarer.range(bounds, self.wiring.values)
        if found is None:
            return None
        left, right = found
        if abs(left - right) >= MOST_INSTANCES:
            self.wiring.collector.tell("N123", self.wiring.span(bounds.at), most=MOST_INSTANCES)
            return None
        return range(left, right + 1) if left <= right else range(left, right - 1, -1)

    def by_pin(self, instance: tree.Instance, interface: Interface) -> list[tree.Connection | None] | None:
        """Return the connection of each pin, None for one that is not mentioned; None after telling."""
        found: list[tree.Connection | None] = [None] * len(interface.pins)
        named = [c for c in instance.connections if c.pin]
        if named and len(named) < len(instance.connections):
            span = self.wiring.span(instance.at, len(instance.name))
            self.wiring.collector.tell("N163", span, what="connections")
            return None
        if not named:
            if len(instance.connections) > len(found):
                self.wiring.collector.tell(
                    "N161", self.wiring.span(instance.at, len(instance.name)), module=interface.name,
                    given=len(instance.connections), pins=len(found),
                )  # fmt: skip
                return None
            found[: len(instance.connections)] = instance.connections
            return found
        for connection in named:
            at = interface.find(connection.pin)
            if at < 0:
                span = self.wiring.span(connection.at, len(connection.pin))
                interface.tell_unknown(connection.pin, span, self.wiring.collector)
                return None
            before = found[at]
            if before is not None:
                span = self.wiring.span(connection.at, len(connection.pin))
                first = Related(self.wiring.span(before.at, len(before.pin)), "first connected here")
                self.wiring.collector.tell("N162", span, pin=connection.pin, related=(first,))
                return None
            found[at] = connection
        return found

    def bits(
        self,
        connection: tree.Connection | None,
        pin: InterfacePin,
        copies: int,
        scalar: bool = False,
        pulled: int | None = None,
    ) -> list[list[int]] | None:
        """Return the nets of a pin for each copy, most significant bit first; None after telling.

        A net as wide as the pin goes to every copy, one as wide as all of them is dealt out, the last copy
        getting the least significant bits. With `scalar` (gates) other widths are refused, else they are told
        and filled up (N164). An open input is on the net `pulled`, if that is given (clause 19.9).
        """
        if connection is None or connection.net is None:
            nowhere = OPEN if pulled is None or pin.way != Way.INPUT else pulled
            return [[nowhere] * pin.width] * copies
        net = connection.net
        if pin.way != Way.INPUT and not is_target(net):
            self.wiring.collector.tell("N165", self.wiring.span(net.at), pin=pin.name)
            return None
        if pin.way != Way.INPUT and not self.wiring.may_drive(net):
            return None
        constant = isinstance(net, tree.Number) and net.width is None
        self.wiring.driving = pin.way != Way.INPUT
        nets = self.expressions.nets(net, pin.width if constant else None)
        self.wiring.driving = False
        if not nets:
            return None
        if len(nets) == pin.width:
            return [nets[::-1]] * copies
        if copies > 1 and len(nets) == copies * pin.width:
            return [nets[i * pin.width : (i + 1) * pin.width][::-1] for i in range(copies - 1, -1, -1)]
        refused = copies > 1 or scalar
        self.wiring.collector.tell(
            "N166" if refused else "N164", self.wiring.span(net.at),
            pin=pin.name or "terminal", width=pin.width, given=len(nets),
        )  # fmt: skip
        if refused:
            return None
        fill = 0 if pin.way == Way.INPUT else OPEN
        nets = nets[: pin.width] + [fill] * (pin.width - len(nets))
        return [nets[::-1]] * copies


def is_target(expression: tree.Expression) -> bool:
    """Tell whether an expression is a net, a selection of one, or a concatenation of such."""
    work = [expression]
    while work:
        node = work.pop()
        if isinstance(node, tree.Concatenation):
            work.extend(node.parts)
        elif not isinstance(node, tree.Reference):
            return False
    return True
