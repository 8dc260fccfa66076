"""The whole structural language against pyslang, a front end of IEEE 1800: the same design, the same verdict.

Compared: scopes with their modules and the values of their parameters, gates, net bits by hierarchical name
(so the names of generate blocks too), and which pins are on one net. `wanted_differences.toml` lists where
the two may differ, `structure_faults.toml` what neither may let pass.
"""

from __future__ import annotations

import re
import tomllib
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any, NamedTuple

import pytest
from hypothesis import given, settings, strategies as st
from pyslang import Bag
from pyslang.ast import (
    Compilation,
    CompilationOptions,
    EvalContext,
    ExpressionKind,
    GenerateBlockArraySymbol,
    GenerateBlockSymbol,
    InstanceArraySymbol,
    InstanceSymbol,
    NetSymbol,
    ParameterSymbol,
    PrimitiveInstanceSymbol,
    RangeSelectionKind,
)
from pyslang.syntax import SyntaxTree

from tardigate.netlist.flat import CONSTANTS, OPEN, Flat
from tardigate.netlist.names import Names
from tardigate.parts.gates import NET, THREE_STATE_NET
from tardigate.pipeline import Request, load
from tardigate.source.faults import InputRefusedError
from tardigate.source.files import SourceFile

HERE = Path(__file__).parent
FAULTS: dict[str, dict[str, str]] = tomllib.loads((HERE / "structure_faults.toml").read_text())
DIFFERENCES: dict[str, dict[str, str]] = tomllib.loads((HERE / "wanted_differences.toml").read_text())
VERILOG_2005 = '`begin_keywords "1364-2005"\n'
BAD_SUB = (
    "module bad_sub(input wire a, output wire y);\nparameter P = 1;\nlocalparam L = 2;\nwire [P:0] w;\n"
    "buf g (y, a);\nendmodule\n"
)
PULLS = ("pullup", "pulldown")
ERRORS = {
    "CannotIndexScalar", "DuplicateDefinition", "IndexOOB", "InitializerRequired", "MixedVarAssigns",
    "MultipleContAssigns", "ParameterDoesNotExist", "RangeOOB", "RangeSelectReversed", "RangeWidthOOB",
    "Redefinition", "RedefinitionDifferentType", "UnknownSystemName",
}  # fmt: skip
"""What the other side takes as errors unless told otherwise, beside those that always are."""

ITSELF = -1
"""In place of a terminal: the net of that name."""

Bit = str | None
Pins = dict[tuple[str, int], Bit]


class Seen(NamedTuple):
    """A design: `scopes` name → module and parameters, names of net bits, `pins` → a net's stand-in."""

    scopes: dict[str, tuple[str, dict[str, object]]]
    nets: set[str]
    pins: Pins


class Other:
    """The design that pyslang sees."""

    def __init__(self, text: str, top: str = "top") -> None:
        options = CompilationOptions()
        options.topModules = {top}
        self._held = Compilation(Bag([options]))
        self._held.addSyntaxTree(SyntaxTree.fromText(VERILOG_2005 + text))
        self.root = self._held.getRoot()
        told = ((d.isError(), str(d.code)) for d in self._held.getAllDiagnostics())
        self.errors = sorted({code for error, code in told if error or code[len("DiagCode(") : -1] in ERRORS})
        self._above: dict[str, str] = {}
        self._eval = EvalContext(self.root)

    def seen(self) -> Seen:
        """Return the design."""
        seen = Seen({}, set(), {})
        (top,) = self.root.topInstances
        work: list[tuple[str, Any]] = [("", top)]
        while work:
            path, scope = work.pop()
            if isinstance(scope, InstanceSymbol):
                seen.scopes[path] = (scope.definition.name, _parameters(scope.body))
                scope = scope.body
            for name, symbol in _members(scope):
                if isinstance(symbol, NetSymbol):
                    seen.nets.update(_net_bits(symbol))
                elif isinstance(symbol, PrimitiveInstanceSymbol):
                    self._gate(f"{path}{name}", symbol, seen.pins)
                else:
                    work.append((f"{path}{name}.", symbol))
                    if isinstance(symbol, InstanceSymbol):
                        self._ports(symbol)
        seen.pins.update({(bit, ITSELF): bit for bit in seen.nets})
        found = {pin: bit and self._find(bit) for pin, bit in seen.pins.items()}
        return seen._replace(pins=found)

    def _find(self, bit: str) -> str:
        while bit in self._above:
            bit = self._above[bit]
        return bit

    def _gate(self, name: str, symbol: Any, pins: Pins) -> None:
        if symbol.primitiveType.name in PULLS:
            return
        for at, expression in enumerate(symbol.portConnections):
            (pins[name, at],) = self._bits(expression)

    def _ports(self, symbol: Any) -> None:
        for connection in symbol.portConnections:
            port, outside = connection.port, self._bits(connection.expression)
            if port.internalSymbol is None or not outside:
                continue
            inside = self._bits(port.internalExpr) if port.internalExpr else _net_bits(port.internalSymbol)
            for one, other in zip(inside, outside, strict=True):
                if self._find(one) != self._find(other):
                    self._above[self._find(one)] = self._find(other)

    def _constant(self, expression: Any) -> int:
        return int(expression.eval(self._eval).value)

    def _bits(self, expression: Any) -> list[str]:
        """Return the bits of a connection, most significant first; constants as `0` and `1`."""
        if expression is None:
            return []
        match expression.kind:
            case ExpressionKind.Assignment:
                return self._bits(expression.left)
            case ExpressionKind.EmptyArgument:
                return []
            case ExpressionKind.Conversion if expression.operand.type.bitWidth == expression.type.bitWidth:
                return self._bits(expression.operand)
            case ExpressionKind.NamedValue | ExpressionKind.HierarchicalValue:
                if isinstance(expression.symbol, NetSymbol):
                    return _net_bits(expression.symbol)
            case ExpressionKind.Concatenation:
                return [bit for part in expression.operands for bit in self._bits(part)]
            case ExpressionKind.Replication:
                return self._bits(expression.concat) * self._constant(expression.count)
            case ExpressionKind.ElementSelect:
                return self._select(expression, [self._constant(expression.selector)])
            case ExpressionKind.RangeSelect:
                return self._select(expression, self._range(expression))
        width = expression.type.bitWidth
        return list(f"{self._constant(expression) % (1 << width):0{width}b}")

    def _range(self, expression: Any) -> list[int]:
        first, second = self._constant(expression.left), self._constant(expression.right)
        if expression.selectionKind == RangeSelectionKind.IndexedUp:
            return [first + at for at in range(second)]
        if expression.selectionKind == RangeSelectionKind.IndexedDown:
            return [first - at for at in range(second)]
        step = 1 if first <= second else -1
        return list(range(first, second + step, step))

    def _select(self, expression: Any, indices: list[int]) -> list[str]:
        whole, kind = self._bits(expression.value), expression.value.type
        bounds = kind.fixedRange
        size = len(whole) // bounds.width
        places = sorted(abs(index - bounds.left) for index in indices)
        return [bit for place in places for bit in whole[place * size : (place + 1) * size]]


def _members(scope: Any) -> Iterator[tuple[str, Any]]:
    """Yield what a scope holds by name, arrays and generate loops taken apart."""
    for symbol in scope:
        if isinstance(symbol, InstanceArraySymbol):
            for at, element in enumerate(symbol.elements, min(symbol.range.left, symbol.range.right)):
                yield f"{symbol.name}[{at}]", element
        elif isinstance(symbol, GenerateBlockArraySymbol):
            for block in symbol.entries:
                yield f"{_block_name(symbol)}[{int(block.arrayIndex)}]", block
        elif isinstance(symbol, GenerateBlockSymbol):
            if not symbol.isUninstantiated:
                yield _block_name(symbol), symbol
        elif isinstance(symbol, InstanceSymbol | PrimitiveInstanceSymbol | NetSymbol):
            yield symbol.name, symbol


def _block_name(symbol: Any) -> str:
    return str(symbol.name or symbol.externalName)


def _plain(path: str) -> str:
    """Return a path of pyslang's as it is written here: without the top, escapes and their spaces."""
    return re.sub(r"\\(\S+) ", r"\1", path).partition(".")[2]


def _net_bits(symbol: Any) -> list[str]:
    """Return the names of the bits of a net, most significant first."""
    names, kind = [_plain(symbol.hierarchicalPath)], symbol.type
    while kind.isUnpackedArray or not kind.isScalar:
        left, right = kind.fixedRange.left, kind.fixedRange.right
        indices = range(left, right - 1, -1) if left >= right else range(left, right + 1)
        names = [f"{name}[{at}]" for name in names for at in indices]
        if not kind.isUnpackedArray:
            break
        kind = kind.elementType
    return names


def _parameters(body: Any) -> dict[str, object]:
    found: dict[str, object] = {}
    for symbol in body.parameters:
        if isinstance(symbol, ParameterSymbol):
            value: Any = symbol.value.value
            found[symbol.name] = value if isinstance(value, float) else int(value)
    return found


def _text_number(text: str) -> object:
    if text.startswith('"'):
        return int.from_bytes(text[1:-1].encode() or b"\0", "big")
    return float(text) if "." in text else int(text)


def _delayed(flat: Flat) -> dict[int, int]:
    """Return the net behind each delay of a net: one net in the source, two here."""
    found = {}
    for inst in range(flat.instances):
        if flat.kinds[flat.inst_kind[inst]].name in (NET, THREE_STATE_NET):
            after, before = flat.pin_net[flat.pin_start[inst] : flat.pin_start[inst + 1]].tolist()[:2]
            found[before] = after
    return found


def _ours(flat: Flat) -> Seen:
    names = Names(flat)
    scopes: dict[str, tuple[str, dict[str, object]]] = {}
    nets: set[str] = set()
    for scope, number in enumerate(flat.scope_template.tolist()):
        template, path = flat.templates[number], names.scope(scope)
        nets.update(path + name for name in template.net_names[CONSTANTS:] if ":" not in name)
        pairs = re.findall(r'([^\s=,]+)=("[^"]*"|[^,]*)', template.parameters)
        scopes[path] = (template.module, {name: _text_number(value) for name, value in pairs})
    pins, behind = Pins(), _delayed(flat)
    for inst in range(flat.instances):
        if flat.kinds[flat.inst_kind[inst]].group == "operator":
            continue
        for at, number in enumerate(flat.pin_net[flat.pin_start[inst] : flat.pin_start[inst + 1]].tolist()):
            net = behind.get(number, number)
            pins[names.instance(inst), at] = None if net == OPEN else str(net) if net < 2 else f"net {net}"
    named = ((names.net(net), net) for net in range(CONSTANTS, flat.nets))
    pins.update(
        {(name, ITSELF): f"net {net}" for name, net in named if ":" not in name and net not in behind}
    )
    return Seen(scopes, nets, pins)


def _compare(ours: Seen, other: Seen) -> None:
    assert ours.scopes == other.scopes
    assert ours.nets == other.nets
    assert ours.pins.keys() <= other.pins.keys()
    assert all(terminal == ITSELF for _, terminal in other.pins.keys() - ours.pins.keys())
    there: dict[Bit, Bit] = {bit: bit for bit in ("0", "1", None)}
    back = dict(there)
    for pin, net in ours.pins.items():
        assert there.setdefault(net, other.pins[pin]) == other.pins[pin], pin
        assert back.setdefault(other.pins[pin], net) == net, pin


def _codes(text: str, top: str = "top") -> list[str]:
    """Return the codes with which the text is refused here."""
    try:
        load(Request((SourceFile("board.v", text.encode()),), top=top))
    except InputRefusedError as refusal:
        return sorted({diagnostic.code for diagnostic in refusal.diagnostics})
    return []


def _flat(text: str) -> Flat:
    return load(Request((SourceFile("board.v", text.encode()),), top="top")).flat


@pytest.mark.parametrize("part", range(4))
def test_random_structures(part: int, random_structure: Callable[..., str]) -> None:
    @settings(max_examples=40, deadline=None, derandomize=True)
    @given(st.integers(0, 2**32 - 1), st.integers(1, 6))
    def law(seed: int, size: int) -> None:
        text = random_structure(4 * seed + part, size)
        other = Other(text)
        assert other.errors == []
        _compare(_ours(_flat(text)), other.seen())

    law()


@pytest.mark.parametrize("name", FAULTS)
def test_faults_are_refused_on_both_sides(name: str, random_structure: Callable[..., str]) -> None:
    fault = FAULTS[name]
    modules = fault.get("modules", "") + (BAD_SUB if "bad_sub" in fault["items"] else "")
    for seed in range(3):
        text = random_structure(seed, 2, fault["items"], modules)
        assert Other(text).errors
        found = _codes(text)
        assert fault["code"] in found, (found, seed)


@pytest.mark.parametrize("name", DIFFERENCES)
def test_wanted_differences_are_there(name: str) -> None:
    """A difference that no longer is must leave the list."""
    sample = DIFFERENCES[name]
    assert sample["clause"]
    assert sample["reason"]
    ours, theirs = _codes(sample["text"]), Other(sample["text"]).errors
    assert ("refused" if ours else "read") == sample["ours"], ours
    assert ("refused" if theirs else "read") == sample["theirs"], theirs
    assert bool(ours) != bool(theirs)


def test_the_comparison_sees_differences(random_structure: Callable[..., str]) -> None:
    """Each of the three things compared tells when it differs."""
    text = "module top(input a, b, output y);\nwire w;\nbuf g (w, a);\nsub #(2) u (w, y);\nendmodule\n"
    text += "module sub(input a, output y);\nparameter P = 1;\nbuf g (y, a);\nendmodule\n"
    ours = _ours(_flat(text))
    _compare(ours, Other(text).seen())
    changes = (("(w, a)", "(w, b)"), ("#(2)", "#(3)"), ("g (y", "h (y"), ("wire w;", "wire w; wire v;"))
    for before, after in changes:
        with pytest.raises(AssertionError):
            _compare(ours, Other(text.replace(before, after)).seen())
    assert random_structure(1, 3) == random_structure(1, 3) != random_structure(2, 3)
