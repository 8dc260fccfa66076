"""Constant expressions: parameters, ranges, counts, conditions (IEEE 1364-2005 clause 5).

Takes a tree and the parameters' values, gives a value. Widths, signs and reals as clauses 5.4 and 5.5 say;
unsized numbers grow without limit. What has no value (x, 1/0) is refused only where it is needed. Iterative.
"""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction
from typing import NamedTuple

from tardigate.netlist import constant_operators as operators
from tardigate.netlist.constant_operators import BIT, REAL, Shape, fitted, joined, shape_of
from tardigate.netlist.constant_value import (
    LARGEST as LARGEST,
    NotConstantError as NotConstantError,
    Value as Value,
    assigned,
    decimal,
    real,
    rounded as rounded,
    text_value,
    whole as whole,
    words_of as words_of,
)
from tardigate.syntax import tree

MIN, TYP, MAX = range(3)


class Fault(NamedTuple):
    """Why an operand has no value: harmless where nobody needs it, as in `N == 0 ? 0 : 8 / N`."""

    reason: str
    at: int


Result = Value | Fault
TOO_LARGE = "the value is too large"
_NO_FUNCTION = "`{}` is no function that a constant may use"


def evaluate(
    expression: tree.Expression,
    parameters: Mapping[str, Value],
    width: int | None = 0,
    signed: bool = True,
    grade: int = TYP,
) -> Value:
    """Return the value of a constant expression. Raises NotConstantError.

    `width` is what the context asks for, as an assignment does: 0 nothing, None unsized (clause 5.4.1);
    `signed` False: so is the context. Of a `min:typ:max` the one of the `grade` counts.
    """
    flat = _Flat(expression, parameters, grade)
    for at in range(len(flat.nodes) - 1, -1, -1):
        _measure(flat, at)
    shape = flat.shape[0]
    if width != 0 and not shape.real:
        shape = joined(shape, Shape(width, signed))
    result = _settle(flat, 0, shape)
    if isinstance(result, Fault):
        raise NotConstantError(result.reason, result.at)
    if result.width == 0:
        raise NotConstantError("a value of no bit at all", expression.at)
    return result


def evaluate_whole(expression: tree.Expression, parameters: Mapping[str, Value]) -> int:
    """Return the value of an expression that must be a whole number. Raises NotConstantError."""
    return whole(evaluate(expression, parameters), expression.at)


class _Flat:
    """An expression laid flat, parents before children.

    `shape` is each node's own type, `result` its value as soon as it does not depend on what is around it.
    """

    def __init__(self, root: tree.Expression, parameters: Mapping[str, Value], grade: int) -> None:
        self.parameters = parameters
        self.nodes: list[tree.Expression] = [root]
        self.below: list[range] = []
        at = 0
        while at < len(self.nodes):
            children = self._children(self.nodes[at], grade)
            self.below.append(range(len(self.nodes), len(self.nodes) + len(children)))
            self.nodes.extend(children)
            at += 1
        self.shape = [BIT] * len(self.nodes)
        self.result: list[Result | None] = [None] * len(self.nodes)

    def _children(self, node: tree.Expression, grade: int) -> tuple[tree.Expression, ...]:
        if isinstance(node, tree.Reference):
            if len(node.path) > 1 or node.path[0] not in self.parameters:
                raise NotConstantError(f"`{'.'.join(node.path)}` is no parameter", node.at)
            if len(node.selections) > 1:
                raise NotConstantError("a parameter is selected from once", node.at)
            return tuple(bound for s in node.selections for bound in (s.high, s.low) if bound is not None)
        if isinstance(node, tree.Triplet):
            return ((node.minimum, node.typical, node.maximum)[grade],)
        below = tree.operands(node)
        return (node.times, *below) if isinstance(node, tree.Replication) else below


# From the leaves: types, and values of what its context does not touch


def _measure(flat: _Flat, at: int) -> None:
    """Set a node's type (table 5-22), and its value where that is self-determined."""
    node, below = flat.nodes[at], flat.below[at]
    shapes = [flat.shape[child] for child in below]
    if not below:
        unknown = isinstance(node, tree.Number) and node.unknown | node.floating
        shape = Shape(node.width, node.signed) if isinstance(node, tree.Number) and unknown else None
        _done(flat, at, _leaf(node, flat.parameters), shape)
    elif isinstance(node, tree.Binary):
        _measure_binary(flat, at, node, shapes)
    elif isinstance(node, tree.Unary):
        _allow(node.operator, node.at, shapes)
        if node.operator in ("+", "-", "~"):
            flat.shape[at] = shapes[0]
        else:
            operand = _settle(flat, below[0], shapes[0])
            done = operand if isinstance(operand, Fault) else operators.reduced(node.operator, operand)
            _done(flat, at, done, BIT)
    elif isinstance(node, tree.Conditional):
        _settle(flat, below[0], shapes[0])
        flat.shape[at] = joined(shapes[1], shapes[2])
    elif isinstance(node, tree.Triplet):
        flat.shape[at] = shapes[0]
    else:
        operands = [_settle(flat, child, shape) for child, shape in zip(below, shapes, strict=True)]
        fault = next((operand for operand in operands if isinstance(operand, Fault)), None)
        values = [operand for operand in operands if not isinstance(operand, Fault)]
        _measure_closed(flat, at, values, fault)


def _measure_binary(flat: _Flat, at: int, node: tree.Binary, shapes: list[Shape]) -> None:
    _allow(node.operator, node.at, shapes)
    left, right = flat.below[at]
    if node.operator in operators.COMPARISONS:
        shape = joined(*shapes)
        values = [
            _settle(flat, child, own if shape.real else shape)
            for child, own in zip((left, right), shapes, strict=True)
        ]
        one, other = values
        if isinstance(one, Fault) or isinstance(other, Fault):
            _done(flat, at, one if isinstance(one, Fault) else other, BIT)
        else:
            _done(flat, at, operators.compared(node.operator, one, other), BIT)
    elif node.operator in ("&&", "||"):
        either = [_settle(flat, child, own) for child, own in zip((left, right), shapes, strict=True)]
        _done(flat, at, _logical(node.operator == "||", either), BIT)
    elif node.operator in operators.SHIFTS or node.operator == "**":
        _settle(flat, right, shapes[1])
        flat.shape[at] = REAL if shapes[1].real else shapes[0]
    else:
        flat.shape[at] = joined(*shapes)


def _logical(decides: bool, operands: list[Result]) -> Result:
    """Return `||` (decided by a 1) or `&&` (by a 0): either operand may decide (clause 5.1.9)."""
    for operand in operands:
        if isinstance(operand, Value) and bool(operand.value) == decides:
            return Value(int(decides), 1, False)
    fault = next((operand for operand in operands if isinstance(operand, Fault)), None)
    return fault or Value(int(not decides), 1, False)


def _measure_closed(flat: _Flat, at: int, values: list[Value], fault: Fault | None) -> None:
    """Measure what takes its operands by themselves: selections, concatenations, functions."""
    node = flat.nodes[at]
    shapes = [flat.shape[child] for child in flat.below[at]]
    if isinstance(node, tree.Call):
        function = operators.FUNCTIONS.get(node.name)
        if function is None:
            raise NotConstantError(_NO_FUNCTION.format(node.name), node.at)
        if len(shapes) != 1:
            raise NotConstantError(f"`{node.name}` takes one argument", node.at)
        if shapes[0].real and node.name in operators.WHOLE_ONLY:
            raise NotConstantError("this is no whole number", flat.nodes[flat.below[at][0]].at)
        _done(flat, at, fault or function(values[0]), operators.call_shape(node.name, shapes[0]))
        return
    for child, shape in zip(flat.below[at], shapes, strict=True):
        if shape.real:
            raise NotConstantError("this is no whole number", flat.nodes[child].at)
    if isinstance(node, tree.Reference):
        _done(flat, at, fault or _selected(node, flat.parameters[node.path[0]], values))
        return
    for child in flat.below[at][isinstance(node, tree.Replication) :]:
        leaf = flat.nodes[child]
        if isinstance(leaf, tree.Number) and leaf.width is None:
            raise NotConstantError("only sized numbers may be joined", leaf.at)
    _done(flat, at, fault or _joined(node, values))


def _joined(node: tree.Expression, values: list[Value]) -> Result:
    times = 1
    if isinstance(node, tree.Replication):
        times = rounded(values[0])
        values = values[1:]
    try:
        return operators.concatenated(values, times)
    except OverflowError:
        return Fault(TOO_LARGE if times >= 0 else "a negative count", node.at)


def _selected(node: tree.Reference, value: Value, bounds: list[Value]) -> Result:
    if isinstance(value.value, Fraction):
        raise NotConstantError("a real has no bits to select", node.at)
    high = rounded(bounds[0])
    found = operators.selected(value, node.selections[0].mode, high, rounded(bounds[-1]))
    return Fault("this selection is out of range", node.at) if found is None else found


def _allow(operator: str, at: int, shapes: list[Shape]) -> None:
    """Refuse reals where table 5-3 does not list an operator."""
    if operator not in operators.FOR_REALS and any(shape.real for shape in shapes):
        raise NotConstantError(f"`{operator}` takes no real number", at)


def _leaf(node: tree.Expression, parameters: Mapping[str, Value]) -> Result:
    if isinstance(node, tree.Number):
        if node.unknown or node.floating:
            return Fault("x and z have no value", node.at)
        return assigned(Value(node.value, None, node.signed), node.width, node.signed)
    if isinstance(node, tree.Reference):
        value = parameters[node.path[0]]
        return value if value.bounds is None else value._replace(bounds=None)
    if isinstance(node, tree.String):
        return text_value(node.text)
    if isinstance(node, tree.Decimal):
        try:
            return real(decimal(node.text))
        except ValueError:
            raise NotConstantError(TOO_LARGE, node.at) from None
    if isinstance(node, tree.Call):
        raise NotConstantError(_NO_FUNCTION.format(node.name), node.at)
    raise NotConstantError("this is no constant", node.at)


# From the root: values in their context


def _done(flat: _Flat, at: int, result: Result, shape: Shape | None = None) -> None:
    """Keep a value that no context changes the inside of."""
    flat.result[at] = result = _bounded(result, flat.nodes[at].at)
    flat.shape[at] = shape or (BIT if isinstance(result, Fault) else shape_of(result))


def _bounded(result: Result, at: int) -> Result:
    if isinstance(result, Fault):
        return result
    number = result.value
    whole_bits = number.bit_length() if isinstance(number, int) else number.numerator.bit_length()
    if max(whole_bits, number.denominator.bit_length()) > LARGEST:
        return Fault(TOO_LARGE, at)
    return result


def _settle(flat: _Flat, root: int, shape: Shape) -> Result:
    """Return the value of a node in a context of its own: its type goes down to the leaves (5.5.2)."""
    order: list[tuple[int, Shape]] = []
    work = [(root, shape)]
    while work:
        at, wanted = work.pop()
        order.append((at, wanted))
        if flat.result[at] is None:
            for child in _in_context(flat.nodes[at], flat.below[at]):
                own = flat.shape[child]
                work.append((child, own if wanted.real and not own.real else wanted))
    for at, wanted in reversed(order):
        own_result = flat.result[at]
        if own_result is None:
            below = [flat.result[child] for child in flat.below[at]]
            flat.result[at] = _bounded(_applied(flat.nodes[at], below, wanted), flat.nodes[at].at)
        elif isinstance(own_result, Value):
            flat.result[at] = fitted(own_result, wanted)
    result = flat.result[root]
    assert result is not None
    return result


def _in_context(node: tree.Expression, below: range) -> range:
    """Return the operands that have the type of their context (table 5-22)."""
    if isinstance(node, tree.Conditional):
        return below[1:]
    alone = isinstance(node, tree.Binary) and (node.operator in operators.SHIFTS or node.operator == "**")
    return below[:1] if alone else below


def _applied(node: tree.Expression, below: list[Result | None], shape: Shape) -> Result:
    """Return the value of a node whose operands have theirs."""
    operands = [operand for operand in below if operand is not None]
    if isinstance(node, tree.Conditional):
        condition, yes, no = operands
        chosen = condition if isinstance(condition, Fault) else yes if condition.value else no
        return real(chosen.value) if shape.real and isinstance(chosen, Value) else chosen
    values = []
    for operand in operands:
        if isinstance(operand, Fault):
            return operand
        values.append(operand)
    try:
        if isinstance(node, tree.Binary):
            return operators.binary(node.operator, values[0], values[1], shape)
        if isinstance(node, tree.Unary):
            return operators.unary(node.operator, values[0], shape)
    except ZeroDivisionError:
        return Fault("division by zero", node.at)
    except OverflowError:
        return Fault(TOO_LARGE, node.at)
    return values[0]
