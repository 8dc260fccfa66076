"""The registers of a part's body: those that its instances are, and those that its specify block implies.

Takes a body's functions, gives registers whose clock is a pin of the part. Where a body hides its registers
(procedural code, a gated clock), edge-sensitive paths and checks say which pins are clocks and what they
store.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import NamedTuple

from tardigate.netlist.body import Inner
from tardigate.netlist.cell_function import UNKNOWN, Driver, Functions
from tardigate.parts.cell_desk import CellDesk
from tardigate.parts.gates import OPPOSITE
from tardigate.parts.kind import Edge, Way
from tardigate.parts.model import Check, Place, Register, Row
from tardigate.parts.paths import EDGES
from tardigate.syntax import tree

Clock = tuple[int, Edge]
"""A bit of a pin, and the edge that stores, or of a latch the one that opens it."""

_CONTROL = ("trec", "trem")
_DATA = ("tsu", "th")


# Those of the body


class _Held(NamedTuple):
    """A register of an instance, and what of the part clocks it."""

    inst: int
    inner: Inner
    register: Register
    clock: Clock | None


def body_registers(functions: Functions, place: Place) -> list[Register]:
    """Return the registers of a body; what cannot be told as such becomes `lost` to `functions`."""
    held: list[_Held] = []
    for inst in dict.fromkeys(driver.instance for driver in functions.states):
        inner = functions.inner(inst)
        for register in inner.part.registers if inner is not None else ():
            assert inner is not None
            held.append(_Held(inst, inner, register, _clock(functions, inst, register)))
    functions.lost = frozenset(each.inst for each in held if each.clock is None)
    functions.forget()
    return [_register(functions, each, place) for each in held if each.inst not in functions.lost]


def _clock(functions: Functions, inst: int, register: Register) -> Clock | None:
    """Return the clock when it is a pin of the part, inverted or not."""
    node = functions.node(functions.net(inst, register.clock))
    form, operand, *_ = functions.network.nodes[node] if node != UNKNOWN else ("", 0)
    edge = register.edge
    if form == "not":
        edge = OPPOSITE[edge]
        form, operand, *_ = functions.network.nodes[operand]
    return (operand, edge) if form == "bit" and 0 <= operand < len(functions.flat.ports) else None


def _register(functions: Functions, held: _Held, place: Place) -> Register:
    inst, inner, register, clock = held
    assert clock is not None

    def node(root: int) -> int:
        made = functions.embedded(inner, inst, root)
        return made if made != UNKNOWN else smeared(functions, functions.read(inner, inst, root))

    stores = {functions.states[Driver(inst, bit)]: node(root) for bit, root in register.stores.items()}
    clear, forced = (node(root) if root >= 0 else -1 for root in (register.clear, register.set))
    return Register(register.latch, clock[1], clock[0], stores, clear, forced, place)


def smeared(functions: Functions, nets: Iterable[int]) -> int:
    """Return a node that may follow and go against every input that nets come from, whatever they compute."""
    ports = functions.flat.ports
    inputs = {port.net: bit for bit, port in enumerate(ports) if port.way != Way.OUTPUT}
    work, seen = list(nets), set[int]()
    while work:
        net = work.pop()
        if net not in seen:
            seen.add(net)
            work += functions.sources(net) if net not in inputs else []
    return _either_way(functions, {inputs[net] for net in seen if net in inputs})


def _either_way(functions: Functions, bits: Iterable[int]) -> int:
    nodes = [functions.network.add("bit", bit) for bit in sorted(bits)]
    return functions.maker.joined("xor", [functions.maker.constants[0], *nodes])


# Those that the specify block implies


def edge_sources(paths: Sequence[tree.Path], desk: CellDesk) -> set[Clock]:
    """Return where edge-sensitive paths begin; those with a constant for data are set and clear."""
    found: set[Clock] = set()
    for path in paths:
        if path.edge in EDGES and not (path.data is not None and _is_constant(path.data)):
            for reference in path.inputs:
                found.update((bit, EDGES[path.edge]) for bit in desk.terminal(reference))
    return found


def _is_constant(expression: tree.Expression) -> bool:
    return not any(isinstance(node, tree.Reference) for node in tree.walk(expression))


def implied_registers(
    functions: Functions, sources: set[Clock], rows: Sequence[Row], checks: Sequence[Check], first: int,
    place: Place,
) -> list[Register]:  # fmt: skip
    """Return a register for each clock that paths and checks speak of; its hidden states begin at `first`.

    What it stores depends on every data bit that is checked against the clock, its clear on every control.
    It is a latch when a simple path leads from such a data bit to an output. `sources`: see `edge_sources`.
    """
    controls = {bit for check in checks if check.symbol in _CONTROL for bit in check.bits}
    plain = {tail for row in rows if row.edge is None for tail, _ in row.pairs}
    clocks: dict[int, set[Edge]] = {}
    for bit, edge in sources:
        if bit not in controls:
            clocks.setdefault(bit, set()).add(edge)
    closing: dict[int, set[Edge]] = {}
    for check in checks:
        if check.symbol in _DATA + _CONTROL:
            edges = set(Edge) if check.reference_edge is None else {check.reference_edge}
            closing.setdefault(check.reference, set()).update(edges)
    found: list[Register] = []
    for bit in sorted(clocks.keys() | closing.keys()):
        if functions.flat.ports[bit].way == Way.OUTPUT:
            continue
        data = _checked(checks, bit, _DATA)
        latch = not plain.isdisjoint(data - controls)
        edges = closing.get(bit, set())
        edges = clocks.get(bit) or ({OPPOSITE[edge] for edge in edges} if latch else edges)
        forcing = _checked(checks, bit, _CONTROL)
        stored, clear = _either_way(functions, data), _either_way(functions, forcing) if forcing else -1
        for edge in sorted(edges):
            found.append(Register(latch, edge, bit, {first + len(found): stored}, clear, -1, place))
    return found


def _checked(checks: Sequence[Check], reference: int, symbols: Sequence[str]) -> set[int]:
    return {
        bit
        for check in checks
        if check.reference == reference and check.symbol in symbols
        for bit in check.bits
        if bit != reference
    }
