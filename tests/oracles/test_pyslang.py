"""Connectivity against pyslang, a front end of IEEE 1800: same instances, same pins on the same nets.

Nets have different names on the two sides where ports join them, so partitions are compared: two pins are on
one net here exactly when they are there. Operators of assignments are left out of the comparison.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from itertools import chain
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given, settings, strategies as st
from pyslang.ast import (
    Compilation,
    ExpressionKind,
    InstanceArraySymbol,
    InstanceSymbol,
    PrimitiveInstanceSymbol,
    RangeSelectionKind,
)
from pyslang.syntax import SyntaxTree

from tardigate.netlist.flat import OPEN, Flat
from tardigate.netlist.names import Names
from tardigate.pipeline import Request, load

FAMILY = Path(__file__).parents[1] / "data" / "circuits.parts"
STUBS = "".join(f"module {name}(input CK, D, output Q); endmodule\n" for name in ("ff", "fflopd"))
CELLS = ("ff", "fflopd")

Bit = tuple[str, object]
Pins = dict[tuple[str, str], object]
"""(hierarchical name, terminal) of each pin of a leaf → what stands for its net, None when open."""


class Other:
    """The connectivity that pyslang sees."""

    def __init__(self, text: str) -> None:
        compilation = Compilation()
        compilation.addSyntaxTree(SyntaxTree.fromText(text))
        self.pins: Pins = {}
        self._above: dict[Bit, Bit] = {}
        for top in compilation.getRoot().topInstances:
            if top.name not in CELLS:
                self._modules(top)
        errors = [str(d.code) for d in compilation.getAllDiagnostics() if d.isError()]
        assert not errors
        self.pins = {
            pin: self._find(bit) if isinstance(bit, tuple) else bit for pin, bit in self.pins.items()
        }

    def _find(self, bit: Bit) -> Bit:
        while bit in self._above:
            bit = self._above[bit]
        return bit

    def _join(self, inside: Bit, outside: Bit | None) -> None:
        if outside is not None and self._find(inside) != self._find(outside):
            self._above[self._find(inside)] = self._find(outside)

    def _modules(self, top: Any) -> None:
        work = [("", top)]
        while work:
            path, scope = work.pop()
            for name, symbol in _leaves(path, scope.body):
                if isinstance(symbol, PrimitiveInstanceSymbol):
                    for at, expression in enumerate(symbol.portConnections):
                        self.pins[name, str(at)] = next(iter(_bits(path, expression)))
                    continue
                for connection in symbol.portConnections:
                    outside = list(_bits(path, connection.expression))
                    inside = list(_net_bits(f"{name}.", connection.port.internalSymbol))
                    if symbol.definition.name in CELLS:
                        self.pins[name, connection.port.name] = outside[0] if outside else None
                    for one, other in zip(inside, outside, strict=bool(outside)):
                        self._join(one, other)
                if symbol.definition.name not in CELLS:
                    work.append((f"{name}.", symbol))


def _leaves(path: str, scope: Any) -> Iterator[tuple[str, Any]]:
    """Yield the instances of a scope with their full names, arrays taken apart."""
    for symbol in scope:
        if isinstance(symbol, InstanceArraySymbol):
            for at, element in enumerate(symbol.elements, min(symbol.range.left, symbol.range.right)):
                yield f"{path}{symbol.name}[{at}]", element
        elif isinstance(symbol, InstanceSymbol | PrimitiveInstanceSymbol):
            yield path + symbol.name, symbol


def _net_bits(path: str, symbol: Any) -> list[Bit]:
    """Return the bits of a net, most significant first."""
    name, kind = path + symbol.name, symbol.type
    if kind.isScalar:
        return [(name, None)]
    left, right = kind.fixedRange.left, kind.fixedRange.right
    return [(name, at) for at in (range(left, right - 1, -1) if left >= right else range(left, right + 1))]


def _constant(expression: Any) -> int:
    """Return the value of a constant expression of the forms that the generator writes."""
    while expression.kind == ExpressionKind.Conversion:
        expression = expression.operand
    if expression.kind == ExpressionKind.UnaryOp:
        return -_constant(expression.operand)
    return int(
        expression.value if expression.kind == ExpressionKind.IntegerLiteral else expression.constant.value
    )


def _bits(path: str, expression: Any) -> list[Any]:
    """Return the bits of a connection, most significant first; constants as text."""
    if expression is None:
        return []
    kind = expression.kind
    if kind == ExpressionKind.Assignment:
        return _bits(path, expression.left)
    if kind == ExpressionKind.Conversion:
        return _bits(path, expression.operand)
    if kind == ExpressionKind.NamedValue:
        return _net_bits(path, expression.symbol)
    if kind == ExpressionKind.Concatenation:
        return list(chain.from_iterable(_bits(path, part) for part in expression.operands))
    if kind == ExpressionKind.Replication:
        return _bits(path, expression.concat) * _constant(expression.count)
    if kind == ExpressionKind.IntegerLiteral:
        width = expression.type.bitWidth
        return list(f"{int(expression.value):0{width}b}"[-width:])
    whole = _bits(path, expression.value)
    if kind == ExpressionKind.ElementSelect:
        return [_one(expression.value.type, whole, _constant(expression.selector))]
    assert kind == ExpressionKind.RangeSelect, kind
    first, second = _constant(expression.left), _constant(expression.right)
    if expression.selectionKind == RangeSelectionKind.IndexedUp:
        picked = [_one(expression.value.type, whole, first + i) for i in range(second)]
        return sorted(picked, key=whole.index)
    step = 1 if first <= second else -1
    return [_one(expression.value.type, whole, i) for i in range(first, second + step, step)]


def _one(kind: Any, whole: list[Any], index: int) -> Any:
    return whole[abs(index - kind.fixedRange.left)]


def _ours(flat: Flat) -> Pins:
    names, pins = Names(flat), Pins()
    for inst in range(flat.instances):
        kind = flat.kinds[flat.inst_kind[inst]]
        if kind.group == "operator":
            continue
        nets = flat.pin_net[flat.pin_start[inst] : flat.pin_start[inst + 1]].tolist()
        for at, (pin, net) in enumerate(zip(kind.pins, nets, strict=True)):
            terminal = pin if kind.name in CELLS else str(at)
            value: object = None if net == OPEN else "01"[net] if net < 2 else net
            pins[names.instance(inst), terminal] = value
    return pins


def _compare(ours: Pins, other: Pins) -> None:
    assert set(ours) == set(other)
    there: dict[object, object] = {}
    back: dict[object, object] = {}
    for pin, net in ours.items():
        assert there.setdefault(net, other[pin]) == other[pin], pin
        assert back.setdefault(other[pin], net) == net, pin
    for constant in ("0", "1", None):
        assert there.get(constant, constant) == constant


def test_circuits(circuit_folder: Path) -> None:
    paths = [path for path in sorted(circuit_folder.glob("*.v")) if path.stat().st_size < 100_000]
    paths += [circuit_folder / name for name in ("s38417.v", "b20_Cg.v")]
    assert len(paths) > 30
    for path in paths:
        flat = load(Request((str(path),), (str(FAMILY),))).flat
        _compare(_ours(flat), Other(path.read_text() + STUBS).pins)


@pytest.mark.parametrize("part", range(4))
def test_random_hierarchies(part: int, random_verilog: Callable[..., str], tmp_path: Path) -> None:
    path = tmp_path / "board.v"

    @settings(max_examples=100, deadline=None, derandomize=True)
    @given(st.integers(0, 2**32 - 1), st.integers(1, 16))
    def law(seed: int, size: int) -> None:
        path.write_text(random_verilog(4 * seed + part, size))
        flat = load(Request((str(path),), (str(FAMILY),))).flat
        assert flat.instances
        _compare(_ours(flat), Other(path.read_text()).pins)

    law()


def test_the_comparison_sees_a_swap(tmp_path: Path) -> None:
    path = tmp_path / "board.v"
    text = "module top(input a, b, output y);\nwire w;\nbuf g (w, {});\nand h (y, w, b);\nendmodule\n"
    path.write_text(text.format("a"))
    flat = load(Request((str(path),), ())).flat
    _compare(_ours(flat), Other(text.format("a")).pins)
    with pytest.raises(AssertionError):
        _compare(_ours(flat), Other(text.format("b")).pins)
