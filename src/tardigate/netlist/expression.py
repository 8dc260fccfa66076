"""Expressions over nets: each operator becomes gates, bit by bit.

Takes a tree, gives local nets, least significant bit first, and the operators' instances. Widths and signs
follow IEEE 1364-2005 clauses 5.4 and 5.5; iterative, so that depth has no limit.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence

from tardigate.netlist.constants import NotConstantError, evaluate, evaluate_whole, whole
from tardigate.netlist.declare import WIDEST
from tardigate.netlist.wiring import Wiring
from tardigate.syntax import tree

Emit = Callable[[str, Sequence[int], int, int | None, bool], int]
"""Makes an operator's gate: operator, input nets, place, output net or None for a new one, whether it is the
last of its assignment; returns the output net."""

_BITWISE = {"&": "&", "|": "|", "^": "^", "~^": "~^", "^~": "~^"}
_EQUAL = {"==": "==", "===": "==", "!=": "!=", "!==": "!="}
_SHIFTS = ("<<", ">>", "<<<", ">>>")
_REDUCE = {op: f"reduce {op}" for op in ("&", "|", "^", "~&", "~|", "~^")} | {"^~": "reduce ~^"}
_SIGNS = ("$signed", "$unsigned")
"""Functions that say how an operand is meant and change no bit (clause 5.5)."""

MOST_RESULTS = 1 << 21
"""Gates that the operators of one module may become."""


class _Flat:
    """An expression laid flat, parents before children, with width, sign and whether it is constant."""

    def __init__(self, root: tree.Expression) -> None:
        self.nodes: list[tree.Expression] = [root]
        self.below: list[range] = []
        at = 0
        while at < len(self.nodes):
            children = tree.operands(self.nodes[at])
            self.below.append(range(len(self.nodes), len(self.nodes) + len(children)))
            self.nodes.extend(children)
            at += 1
        count = len(self.nodes)
        self.width, self.want = [0] * count, [0] * count
        self.signed, self.context_signed = [False] * count, [False] * count
        self.constant = [False] * count
        self.bits: list[list[int]] = [[] for _ in range(count)]


class Expressions:
    """Turns the expressions of one module into nets."""

    def __init__(self, wiring: Wiring, emit: Emit) -> None:
        self.wiring, self._emit = wiring, emit
        self._made = 0

    def emit(self, operator: str, inputs: Sequence[int], at: int, target: int | None, last: bool) -> int:
        """Make one gate of an operator; see `Emit`."""
        self._made += 1
        return self._emit(operator, inputs, at, target, last)

    def nets(
        self, root: tree.Expression, width: int | None = None, target: list[int] | None = None
    ) -> list[int]:
        """Return the nets of an expression, least significant bit first; empty after telling of a fault.

        `width` is the width of the context, if it has one (then so many bits come back). With `target` the
        last operator drives these nets, and what has no operator at its root is copied onto them.
        """
        if (
            isinstance(root, tree.Reference)
            and width is None
            and target is None
            and root.path[0] not in self.wiring.values
        ):
            return self.wiring.bits(root)  # the usual connection
        flat = _Flat(root)
        for at in range(len(flat.nodes) - 1, -1, -1):
            if not self._measure(flat, at):
                return []
        flat.want[0] = max(flat.width[0], width or 0)
        flat.context_signed[0] = flat.signed[0]
        for at in range(len(flat.nodes)):
            self._demand(flat, at)
        if max(flat.want) > WIDEST:
            self.wiring.collector.tell("N121", self.wiring.span(root.at), most=WIDEST)
            return []
        gates = sum(want for want, node in zip(flat.want, flat.nodes, strict=True) if _is_bit_by_bit(node))
        if self._made + gates > MOST_RESULTS:
            self.wiring.collector.tell("N122", self.wiring.span(root.at), most=MOST_RESULTS)
            return []
        inside_constant = [False] * len(flat.nodes)
        for at, below in enumerate(flat.below):
            for child in below:
                inside_constant[child] = flat.constant[at]
        for at in range(len(flat.nodes) - 1, 0, -1):
            if not inside_constant[at] and not self._build(flat, at, None):
                return []
        if not self._build(flat, 0, target):
            return []
        return flat.bits[0] if width is None else flat.bits[0][:width]

    # Widths, from the leaves (table 5-22)

    def _measure(self, flat: _Flat, at: int) -> bool:
        node, below = flat.nodes[at], flat.below[at]
        widths = [flat.width[child] for child in below]
        flat.constant[at] = bool(below) and all(flat.constant[child] for child in below)
        flat.signed[at] = bool(below) and all(flat.signed[child] for child in below)
        width = 1
        if 0 in widths and not isinstance(node, tree.Concatenation):
            return self._tell_width(node.at)
        if isinstance(node, tree.Number):
            width, flat.signed[at], flat.constant[at] = node.width or 32, node.signed, True
        elif isinstance(node, tree.String):
            width, flat.signed[at], flat.constant[at] = evaluate(node, {}).width or 8, False, True
        elif isinstance(node, tree.Reference):
            return self._measure_reference(flat, at, node)
        elif isinstance(node, tree.Concatenation | tree.Replication):
            return self._measure_joined(flat, at, node)
        elif isinstance(node, tree.Unary):
            width = widths[0] if node.operator in ("~", "+", "-") else 1
            flat.signed[at] &= node.operator in ("~", "+", "-")
        elif isinstance(node, tree.Binary):
            single = node.operator in _EQUAL or node.operator in ("&&", "||", "<", "<=", ">", ">=")
            width = 1 if single else widths[0] if node.operator in (*_SHIFTS, "**") else max(widths)
            flat.signed[at] = not single and flat.signed[below[0]] and (
                node.operator in _SHIFTS or flat.signed[below[1]]
            )  # fmt: skip
        elif isinstance(node, tree.Conditional):
            width, flat.signed[at] = max(widths[1:]), flat.signed[below[1]] and flat.signed[below[2]]
        elif isinstance(node, tree.Call):
            width, flat.signed[at] = 32, True
            if node.name in _SIGNS and len(widths) == 1:
                width, flat.signed[at] = widths[0], node.name == "$signed"
        else:
            self.wiring.collector.tell("N135", self.wiring.span(node.at))
            return False
        flat.width[at] = width
        return True

    def _measure_reference(self, flat: _Flat, at: int, node: tree.Reference) -> bool:
        flat.signed[at] = self.wiring.is_signed(node)
        if len(node.path) == 1 and node.path[0] in self.wiring.values:
            flat.constant[at] = True
            try:
                value = evaluate(node, self.wiring.values)
                whole(value, node.at)
                flat.width[at] = value.width or 32
            except NotConstantError as error:
                self.wiring.collector.tell("N120", self.wiring.span(error.at), reason=error.reason)
                return False
            return True
        flat.bits[at] = self.wiring.bits(node)
        flat.width[at] = len(flat.bits[at])
        return bool(flat.bits[at])

    def _measure_joined(self, flat: _Flat, at: int, node: tree.Concatenation | tree.Replication) -> bool:
        for child in flat.below[at]:
            leaf = flat.nodes[child]
            if isinstance(leaf, tree.Number) and leaf.width is None:
                self.wiring.collector.tell("N136", self.wiring.span(leaf.at))
                return False
        times = 1
        if isinstance(node, tree.Replication):
            try:
                times = evaluate_whole(node.times, self.wiring.values)
            except NotConstantError as error:
                self.wiring.collector.tell("N120", self.wiring.span(error.at), reason=error.reason)
                return False
        flat.signed[at] = False
        flat.constant[at] = False
        flat.width[at] = times * sum(flat.width[child] for child in flat.below[at])
        nothing = isinstance(node, tree.Replication) and not times and at  # beside others (clause 5.1.14)
        if not (0 < flat.width[at] <= WIDEST or nothing):
            return self._tell_width(node.at)
        return True

    def _tell_width(self, at: int) -> bool:
        self.wiring.collector.tell("N121", self.wiring.span(at), most=WIDEST)
        return False

    # Widths, from the root (clause 5.4.1)

    def _demand(self, flat: _Flat, at: int) -> None:
        node, below, want = flat.nodes[at], flat.below[at], flat.want[at]
        signed = flat.context_signed[at]
        for child in below:
            flat.want[child], flat.context_signed[child] = flat.width[child], flat.signed[child]

        def pass_on(children: Sequence[int], width: int, as_signed: bool) -> None:
            for child in children:
                flat.want[child], flat.context_signed[child] = width, as_signed

        if isinstance(node, tree.Unary) and node.operator in ("~", "+", "-"):
            pass_on(below, want, signed)
        elif isinstance(node, tree.Binary):
            if node.operator in _EQUAL:
                both = flat.signed[below[0]] and flat.signed[below[1]]
                pass_on(below, max(flat.width[child] for child in below), both)
            elif node.operator in _SHIFTS:
                pass_on(below[:1], want, signed)
            elif node.operator in _BITWISE:
                pass_on(below, want, signed)
        elif isinstance(node, tree.Conditional):
            pass_on(below[1:], want, signed)

    # Nets, from the leaves

    def _build(self, flat: _Flat, at: int, target: list[int] | None) -> bool:
        """Set the bits of a node; tells of an operator that is not in the subset (N140)."""
        node, below = flat.nodes[at], flat.below[at]
        root = target is not None
        operands = [flat.bits[child] for child in below]
        if flat.constant[at]:
            bits = self._constant(flat, at)
        elif isinstance(node, tree.Reference):
            bits = flat.bits[at]
        elif isinstance(node, tree.Concatenation | tree.Replication):
            joined = [bit for part in reversed(operands) for bit in part]
            bits = joined * (flat.width[at] // max(1, len(joined)))
        elif isinstance(node, tree.Binary | tree.Unary | tree.Call) and self._is_wiring(node):
            bits = self._wired(flat, at, node, operands[0])
        else:
            made = self._gates(flat, at, operands, target)
            if made is None:
                return False
            flat.bits[at] = self._extended(flat, at, made)
            if root and target is not None and len(made) < len(target):
                self._copy(flat.bits[at][len(made) :], target[len(made) :], node.at)
            return True
        if not bits and flat.width[at]:
            return False
        flat.bits[at] = self._extended(flat, at, bits)
        if target is not None:
            self._copy(flat.bits[at], target, node.at)
        return True

    def _copy(self, bits: list[int], target: list[int], at: int) -> None:
        for bit, net in zip(bits, target, strict=False):
            self.emit("copy", [bit], at, net, True)

    def _extended(self, flat: _Flat, at: int, bits: list[int]) -> list[int]:
        """Fill bits up to what the context wants: with the sign where all is signed, else with 0."""
        want = flat.want[at]
        if len(bits) >= want:
            return bits[:want]
        fill = bits[-1] if flat.context_signed[at] and flat.signed[at] else 0
        return bits + [fill] * (want - len(bits))

    def _constant(self, flat: _Flat, at: int) -> list[int]:
        node = flat.nodes[at]
        if isinstance(node, tree.Number):
            return _number_bits(node, flat.want[at])
        try:
            value = evaluate(node, self.wiring.values, flat.want[at], flat.context_signed[at])
            number = whole(value, node.at)
        except NotConstantError as error:
            self.wiring.collector.tell("N120", self.wiring.span(error.at), reason=error.reason)
            return []
        width = flat.want[at] if value.width is None else value.width
        return [number >> i & 1 for i in range(width)]

    def _is_wiring(self, node: tree.Binary | tree.Unary | tree.Call) -> bool:
        if isinstance(node, tree.Call):
            return node.name in _SIGNS and len(node.arguments) == 1
        return node.operator in _SHIFTS if isinstance(node, tree.Binary) else node.operator == "+"

    def _wired(
        self, flat: _Flat, at: int, node: tree.Binary | tree.Unary | tree.Call, operand: list[int]
    ) -> list[int]:
        if not isinstance(node, tree.Binary):
            return operand
        try:
            by = evaluate_whole(node.right, self.wiring.values)
        except NotConstantError as error:
            self.wiring.collector.tell("N141", self.wiring.span(error.at))
            return []
        want = flat.want[at]
        by = min(max(by, 0), want)
        if node.operator in ("<<", "<<<"):
            return ([0] * by + operand)[:want]
        fill = operand[-1] if node.operator == ">>>" and flat.context_signed[at] else 0
        return operand[by:] + [fill] * by

    def _gates(
        self, flat: _Flat, at: int, operands: list[list[int]], target: list[int] | None
    ) -> list[int] | None:
        node = flat.nodes[at]
        last = target is not None

        def each(operator: str, rows: Sequence[Sequence[int]]) -> list[int]:
            if target is not None:
                rows = rows[: len(target)]
            return [
                self.emit(operator, row, node.at, target[i] if target is not None else None, last)
                for i, row in enumerate(rows)
            ]

        if isinstance(node, tree.Unary):
            if node.operator == "~":
                return each("~", [[bit] for bit in operands[0]])
            if node.operator == "!":
                return each("!", [_truth(operands[0])])
            if node.operator in _REDUCE:
                return each(_REDUCE[node.operator], [operands[0]])
        elif isinstance(node, tree.Binary):
            if node.operator in _BITWISE:
                return each(_BITWISE[node.operator], list(zip(*operands, strict=True)))
            if node.operator in _EQUAL:
                return each(_EQUAL[node.operator], [_compared(*operands)])
            if node.operator in ("&&", "||"):
                return each(node.operator, [_truth(operands[0]) + _truth(operands[1])])
        elif isinstance(node, tree.Conditional):
            return each("?:", [[*operands[0], *pair] for pair in zip(*operands[1:], strict=True)])
        word = node.name if isinstance(node, tree.Call) else getattr(node, "operator", "")
        self.wiring.collector.tell("N140", self.wiring.span(node.at, len(word)), operator=word)
        return None


def _number_bits(node: tree.Number, want: int) -> list[int]:
    """Return the bits of a number; an unsized one is as wide as wanted, its leading x or z spread (3.5.1)."""
    top = 31 if node.width is None and (node.unknown | node.floating) >> 31 else want
    return [
        2 if node.unknown >> i & 1 else 3 if node.floating >> i & 1 else node.value >> i & 1
        for i in (min(bit, top) for bit in range(want if node.width is None else min(want, node.width)))
    ]


def _is_bit_by_bit(node: tree.Expression) -> bool:
    """Tell whether an operator becomes a gate for each bit of its context."""
    if isinstance(node, tree.Unary):
        return node.operator == "~"
    return isinstance(node, tree.Conditional) or (isinstance(node, tree.Binary) and node.operator in _BITWISE)


def _truth(bits: list[int]) -> list[int]:
    """Return the bits of a logical operand without those that are 0 anyhow."""
    return [bit for bit in bits if bit != 0] or [0]


def _compared(left: list[int], right: list[int]) -> list[int]:
    """Return the bits that an equality compares, each pair once and none of equal constants (fill)."""
    both = zip(left, right, strict=True)
    pairs = list(dict.fromkeys((a, b) for a, b in both if a != b or a > 1)) or [(0, 0)]
    return [a for a, _ in pairs] + [b for _, b in pairs]
