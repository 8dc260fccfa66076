"""Constant expressions: parameters, ranges, counts (IEEE 1364-2005 clause 5).

Takes a tree and the parameters' values, gives an integer. Iterative. Unsized values are integers without
limit (the standard asks for at least 32 bits); sized ones wrap at their width.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import NamedTuple

from tardigate.syntax import tree

LARGEST = 1 << 13
"""Bits of the largest value that a constant expression may reach; its digits can still be told."""


class NotConstantError(Exception):
    """An expression is no constant: `reason` in words, `at` where."""

    def __init__(self, reason: str, at: int) -> None:
        super().__init__(reason)
        self.reason = reason
        self.at = at


class Value(NamedTuple):
    """A constant: `width` None when unsized."""

    value: int
    width: int | None = None
    signed: bool = True


def _divide(a: int, b: int) -> int:
    quotient = abs(a) // abs(b)
    return quotient if (a < 0) == (b < 0) else -quotient


def _power(a: int, b: int) -> int:
    if b < 0:
        return 0 if abs(a) != 1 else a if b % 2 else 1
    if abs(a) > 1 and b * max(1, abs(a).bit_length()) > LARGEST:
        raise OverflowError
    return int(a**b)


def _shift_left(a: int, b: int) -> int:
    if b < 0 or b + a.bit_length() > LARGEST:
        raise OverflowError
    return a << b


_BINARY: Mapping[str, Callable[[int, int], int]] = {
    "+": lambda a, b: a + b, "-": lambda a, b: a - b, "*": lambda a, b: a * b, "/": _divide,
    "%": lambda a, b: a - b * _divide(a, b), "**": _power,
    "&": lambda a, b: a & b, "|": lambda a, b: a | b, "^": lambda a, b: a ^ b,
    "~^": lambda a, b: ~(a ^ b), "^~": lambda a, b: ~(a ^ b),
    "<<": _shift_left, "<<<": _shift_left, ">>": lambda a, b: a >> max(0, min(b, LARGEST)),
    ">>>": lambda a, b: a >> max(0, min(b, LARGEST)),
}  # fmt: skip
_COMPARE: Mapping[str, Callable[[int, int], bool]] = {
    "==": lambda a, b: a == b, "!=": lambda a, b: a != b, "===": lambda a, b: a == b,
    "!==": lambda a, b: a != b, "<": lambda a, b: a < b, "<=": lambda a, b: a <= b, ">": lambda a, b: a > b,
    ">=": lambda a, b: a >= b, "&&": lambda a, b: bool(a) and bool(b), "||": lambda a, b: bool(a) or bool(b),
}  # fmt: skip


def evaluate(expression: tree.Expression, parameters: Mapping[str, Value]) -> Value:
    """Return the value of a constant expression. Raises NotConstantError."""
    values: list[Value] = []
    work: list[tuple[tree.Expression, bool]] = [(expression, False)]
    while work:
        node, ready = work.pop()
        if ready:
            _apply(node, values, parameters)
            continue
        if isinstance(node, tree.Reference):
            _check_parameter(node, parameters)
        below = _children(node)
        if below:
            work.append((node, True))
            work += [(child, False) for child in reversed(below)]
        else:
            values.append(_leaf(node, parameters))
    return values[0]


def _children(node: tree.Expression) -> tuple[tree.Expression, ...]:
    if isinstance(node, tree.Reference):
        return tuple(bound for s in node.selections for bound in (s.high, s.low) if bound is not None)
    below = tree.operands(node)
    return (node.times, *below) if isinstance(node, tree.Replication) else below


def _check_parameter(node: tree.Reference, parameters: Mapping[str, Value]) -> None:
    if len(node.path) > 1 or node.path[0] not in parameters:
        raise NotConstantError(f"`{'.'.join(node.path)}` is no parameter", node.at)
    if len(node.selections) > 1:
        raise NotConstantError("a parameter is selected from once", node.at)


def _leaf(node: tree.Expression, parameters: Mapping[str, Value]) -> Value:
    if isinstance(node, tree.Number):
        if node.unknown or node.floating:
            raise NotConstantError("x and z have no value", node.at)
        if node.value.bit_length() > LARGEST:
            raise NotConstantError("the value is too large", node.at)
        return Value(node.value, node.width, node.signed)
    if isinstance(node, tree.Reference):
        return parameters[node.path[0]]
    if isinstance(node, tree.String):
        raise NotConstantError("a text is no number", node.at)
    raise NotConstantError("this is no whole number", node.at)


def _selected(node: tree.Reference, value: Value, bounds: list[Value]) -> Value:
    """Return bits of a parameter, whose bit 0 is its least significant (clause 5.2.1)."""
    chosen = node.selections[0]
    high, *low = (bound.value for bound in bounds)
    bottom = {"bit": high, "part": low[0] if low else high, "up": high}.get(chosen.mode)
    width = {"bit": 1, "part": high - (low[0] if low else high) + 1}.get(chosen.mode, low[0] if low else 1)
    if bottom is None:
        bottom = high - width + 1
    if bottom < 0 or not 0 < width <= LARGEST or bottom > LARGEST:
        raise NotConstantError("this selection is out of range", node.at)
    return Value((value.value >> bottom) & ((1 << width) - 1), width, False)


def _apply(node: tree.Expression, values: list[Value], parameters: Mapping[str, Value]) -> None:
    """Replace the values of a node's operands by its own."""
    count = len(_children(node))
    operands = values[-count:]
    del values[-count:]
    try:
        if isinstance(node, tree.Reference):
            result = _selected(node, parameters[node.path[0]], operands)
        else:
            result = _result(node, operands)
    except ZeroDivisionError:
        raise NotConstantError("division by zero", node.at) from None
    except OverflowError:
        raise NotConstantError("the value is too large", node.at) from None
    if result.value.bit_length() > LARGEST:
        raise NotConstantError("the value is too large", node.at)
    values.append(result)


def _result(node: tree.Expression, operands: list[Value]) -> Value:
    if isinstance(node, tree.Binary):
        return _binary(node.operator, *operands)
    if isinstance(node, tree.Unary):
        return _unary(node, operands[0])
    if isinstance(node, tree.Conditional):
        return operands[1] if operands[0].value else operands[2]
    if isinstance(node, tree.Call):
        if node.name != "$clog2" or len(operands) != 1:
            raise NotConstantError(f"`{node.name}` is not known here", node.at)
        return Value(max(0, operands[0].value - 1).bit_length())
    parts, times = (
        (operands, 1) if isinstance(node, tree.Concatenation) else (operands[1:], operands[0].value)
    )
    return _joined(node.at, parts, times)


def _joined(at: int, parts: list[Value], times: int) -> Value:
    value = width = 0
    for part in parts:
        if part.width is None:
            raise NotConstantError("only sized numbers may be joined", at)
        value = value << part.width | part.value & ((1 << part.width) - 1)
        width += part.width
    if times < 0 or width * times > LARGEST:
        raise NotConstantError("the value is too large", at)
    pattern = value
    for _ in range(times - 1):
        value = value << width | pattern
    return Value(value if times else 0, width * times, False)


def _binary(operator: str, left: Value, right: Value) -> Value:
    if operator in _COMPARE:
        return Value(int(_COMPARE[operator](left.value, right.value)), 1, False)
    value = _BINARY[operator](left.value, right.value)
    if operator in ("<<", ">>", "<<<", ">>>", "**"):
        width, signed = left.width, left.signed
    else:
        both = left.width is not None and right.width is not None
        width = max(left.width or 0, right.width or 0) if both else None
        signed = left.signed and right.signed
    return wrapped(value, width, signed)


def _unary(node: tree.Unary, operand: Value) -> Value:
    value, width = operand.value, operand.width
    plain = {"+": value, "-": -value, "~": ~value}.get(node.operator)
    if plain is not None:
        return wrapped(plain, width, operand.signed)
    if node.operator == "!":
        return Value(int(not value), 1, False)
    mask = (1 << (32 if width is None else width)) - 1
    reduced = {"&": value & mask == mask, "|": bool(value & mask), "^": bool((value & mask).bit_count() & 1)}
    return Value(int(reduced[node.operator.strip("~")] ^ ("~" in node.operator)), 1, False)


def wrapped(value: int, width: int | None, signed: bool) -> Value:
    """Return a value cut to its width (clause 5.4)."""
    if width is None:
        return Value(value, None, signed)
    value &= (1 << width) - 1
    if signed and width and value >> (width - 1):
        value -= 1 << width
    return Value(value, width, signed)
