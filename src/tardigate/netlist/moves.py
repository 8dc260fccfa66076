"""Statements of an `always` that only move nets into regs (IEEE 1364-2005 clause 9): what each bit gets.

Takes a statement's tree, gives a node of a `Network` for each bit that it moves; iterative. Refuses what is
more than moves under conditions on single nets. Does not know clocks.
"""

from __future__ import annotations

from typing import NamedTuple

from tardigate.netlist.connect import is_target
from tardigate.netlist.constants import NotConstantError, evaluate
from tardigate.netlist.delays import Delays
from tardigate.netlist.expression import Expressions
from tardigate.netlist.flat import CONSTANTS, FLOATING
from tardigate.netlist.variables import REGISTER
from tardigate.netlist.wiring import Wiring
from tardigate.parts.function import Network
from tardigate.parts.source_delay import SourceDelay
from tardigate.syntax import tree

HOLD, UNKNOWN = -1, -2
"""Bits of the network that are no nets: what the reg itself holds, and x."""

MOST_MOVES = 1 << 20
"""Bits that the statements of one `always` may move, joined by their conditions and all their inputs."""

_COMPARED = {"==": True, "===": True, "!=": False, "!==": False}


class NoRegisterError(Exception):
    """An `always` is no register: `reason` in words, `at` where; no reason where it has been told already."""

    def __init__(self, reason: str = "", at: int = 0) -> None:
        super().__init__(reason)
        self.reason, self.at = reason, at


class Level(NamedTuple):
    """A condition on one net: it holds while the net is at `level` (1 high)."""

    net: int
    level: int


class Moved(NamedTuple):
    """What statements move, each by local net: its node, its delay, and the offset of its first move."""

    nodes: dict[int, int]
    delays: dict[int, SourceDelay | None]
    places: dict[int, int]


class _Turn(NamedTuple):
    """To do after the first branch of an `if`: `mark` is how much could be undone before it."""

    condition: Level
    no: tree.Statement | None
    mark: int


class _Join(NamedTuple):
    """To do after both branches: `yes` is what the first one moved."""

    condition: Level
    yes: dict[int, int]
    mark: int


_Step = tree.Statement | _Turn | _Join | None


class Moves:
    """Carries out the statements of one `always` on nodes instead of values.

    `network` holds the nodes; its bits are local nets, HOLD and UNKNOWN. `read` has the nets that were read,
    `blocking` and `flowing` those moved by `=` and by `<=`; each with an offset.
    """

    def __init__(self, wiring: Wiring, expressions: Expressions, delays: Delays) -> None:
        self._wiring, self._expressions, self._delays = wiring, expressions, delays
        self.network = Network()
        self.hold = self.network.add("bit", HOLD)
        self.read: dict[int, int] = {}
        self.blocking: dict[int, int] = {}
        self.flowing: dict[int, int] = {}
        self._spent = 0

    def run(self, statement: tree.Statement | None, constants: bool = False) -> Moved:
        """Return what a statement moves; `constants`: it may move nothing else, and ask for nothing.

        Raises NoRegisterError.
        """
        moved = Moved({}, {}, {})
        undo: list[tuple[int, int | None]] = []
        work: list[_Step] = [statement]
        while work:
            step = work.pop()
            if isinstance(step, tree.Begin):
                work.extend(reversed(step.statements))
            elif isinstance(step, tree.Move):
                self._move(step, constants, moved, undo)
            elif isinstance(step, tree.If):
                chosen = self.constant(step.condition)
                if chosen is not None:
                    work.append(step.yes if chosen else step.no)
                elif constants:
                    raise NoRegisterError("an asynchronous branch asks for more", step.condition.at)
                else:
                    condition = self.level(step.condition)
                    work += [_Turn(condition, step.no, len(undo)), step.yes]
            elif isinstance(step, _Turn):
                yes = self._back(moved.nodes, undo, step.mark)
                work += [_Join(step.condition, yes, step.mark), step.no]
            elif isinstance(step, _Join):
                self._join(step, self._back(moved.nodes, undo, step.mark), moved.nodes, undo)
        return moved

    def _back(self, nodes: dict[int, int], undo: list[tuple[int, int | None]], mark: int) -> dict[int, int]:
        """Undo what was moved since a mark, and return it."""
        found = {net: nodes[net] for net, _ in undo[mark:]}
        while len(undo) > mark:
            net, before = undo.pop()
            if before is None:
                del nodes[net]
            else:
                nodes[net] = before
        return found

    def _join(
        self, step: _Join, no: dict[int, int], nodes: dict[int, int], undo: list[tuple[int, int | None]]
    ) -> None:
        for net in {**step.yes, **no}:
            before = nodes.get(net, self.hold)
            undo.append((net, nodes.get(net)))
            nodes[net] = self.choose(step.condition, step.yes.get(net, before), no.get(net, before))
            self.spend(self.read[step.condition.net], 1)

    def choose(self, condition: Level, yes: int, no: int) -> int:
        """Return the node of a choice between two."""
        if yes == no:
            return yes
        asked = self.network.add("bit", condition.net)
        pair = (yes, no) if condition.level else (no, yes)
        return self.network.add("mux", asked, *pair)

    def spend(self, at: int, count: int) -> None:
        """Count moved bits, their conditions and inputs. Raises NoRegisterError when they are too many."""
        self._spent += count
        if self._spent > MOST_MOVES:
            raise NoRegisterError(f"it moves more than {MOST_MOVES} bits", at)

    # Moves (clause 9.2)

    def _move(
        self, move: tree.Move, constants: bool, moved: Moved, undo: list[tuple[int, int | None]]
    ) -> None:
        targets, values = self._sides(move)
        delay = self._delay(move)
        for net, value in zip(targets, values, strict=True):
            if constants and value > 1:
                raise NoRegisterError("an asynchronous branch moves no constant of 0s and 1s", move.value.at)
            if value == FLOATING:
                raise NoRegisterError("it moves z, and a register never lets go", move.value.at)
            moved.places.setdefault(net, move.at)
            (self.blocking if move.blocking else self.flowing).setdefault(net, move.at)
            undo.append((net, moved.nodes.get(net)))
            moved.nodes[net] = self._node(net, value, move.value.at)
            if value != net and moved.delays.setdefault(net, delay) != delay:
                raise NoRegisterError("it moves one reg after different delays", move.at)

    def _is_variable(self, target: tree.Expression) -> bool:
        """Tell whether all of a target is declared as a variable (clause 9.2)."""
        variables = self._wiring.variables
        for node in tree.walk(target):
            if isinstance(node, tree.Reference) and len(node.path) == 1:
                variable = self._wiring.variable(node.path[0])
                if variable >= 0 and not variables.flags[variable] & REGISTER:
                    return False
        return True

    def _sides(self, move: tree.Move) -> tuple[list[int], list[int]]:
        """Return the nets of both sides, as many of each."""
        if not is_target(move.target):
            self._wiring.collector.tell("N165", self._wiring.span(move.target.at), pin="left side")
            raise NoRegisterError
        self._only_nets(move.value)
        if not self._is_variable(move.target):
            raise NoRegisterError("what it moves into is a net and no `reg`", move.target.at)
        targets = self._expressions.nets(move.target)
        values = self._expressions.nets(move.value, len(targets)) if targets else []
        if not values:
            raise NoRegisterError
        self.spend(move.at, len(targets))
        return targets, values

    def _only_nets(self, value: tree.Expression) -> None:
        """Refuse a right side with an operator: there a gate would have to stand before the register."""
        work = [value]
        while work:
            node = work.pop()
            if isinstance(node, tree.Concatenation | tree.Replication):
                work.extend(node.parts)
            elif not isinstance(node, tree.Reference | tree.Number) and self.constant(node) is None:
                raise NoRegisterError("a right side is more than nets and constants", node.at)

    def _delay(self, move: tree.Move) -> SourceDelay | None:
        if move.delay is not None and move.blocking:  # clause 9.7.7: nothing after it happens at the edge
            raise NoRegisterError("a delay behind `=` lets it wait inside; write `<=`", move.delay.at)
        return self._delays.read(move.delay, 1)

    def _node(self, net: int, value: int, at: int) -> int:
        if value == net:
            return self.hold
        if value >= CONSTANTS:
            self.read.setdefault(value, at)
            return self.network.add("bit", value)
        return self.network.add("bit", UNKNOWN) if value > 1 else self.network.add("const", value)

    # Conditions

    def constant(self, expression: tree.Expression) -> bool | None:
        """Return whether a constant expression holds, None for one that is no constant."""
        if isinstance(expression, tree.Reference) and expression.path[0] not in self._wiring.values:
            return None
        try:
            return evaluate(expression, self._wiring.values).value != 0
        except NotConstantError:
            return None

    def level(self, condition: tree.Expression) -> Level:
        """Return the net and level that a condition asks for. Raises NoRegisterError for more than that."""
        node, level = condition, 1
        while isinstance(node, tree.Unary) and node.operator in ("!", "~"):  # of one bit the same
            node, level = node.operand, 1 - level
        if isinstance(node, tree.Binary) and node.operator in _COMPARED:
            node, high = self._compared(node)
            level = level if high else 1 - level
            while isinstance(node, tree.Unary) and node.operator == "!":  # `~` would be as wide as the number
                node, level = node.operand, 1 - level
        if not isinstance(node, tree.Reference) or self.constant(node) is not None:
            raise NoRegisterError("a condition is more than the level of a net", node.at)
        nets = self._wiring.bits(node)
        if not nets:
            raise NoRegisterError
        if len(nets) > 1:
            raise NoRegisterError("a condition asks for more than one bit", node.at)
        self.read.setdefault(nets[0], node.at)
        return Level(nets[0], level)

    def _compared(self, node: tree.Binary) -> tuple[tree.Expression, bool]:
        """Return what is compared with 0 or 1, and whether it must be high."""
        for operand, other in ((node.left, node.right), (node.right, node.left)):
            try:
                value = evaluate(other, self._wiring.values).value
            except NotConstantError:
                continue
            signed = isinstance(operand, tree.Reference) and self._wiring.is_signed(operand)
            if value in (0, 1) and not signed:  # a signed bit is 0 or -1 (clause 5.5.2)
                return operand, (value == 1) == _COMPARED[node.operator]
        raise NoRegisterError("a condition compares with more than 0 and 1", node.at)
