"""Gate primitives (IEEE 1364-2005 clause 7) and operators of assignments (clause 5.1) as kinds.

Takes a name, numbers of inputs and outputs, and what gives a delay for each transition of the output. Does
not look delays up.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping

import numpy as np

from tardigate.parts.function import NEGATIVE, POSITIVE
from tardigate.parts.kind import Edge, Kind, Origin, Way
from tardigate.parts.kind_maker import Delay, KindHop, make_kind
from tardigate.parts.source_delay import SourceDelay, Triple

DelayOf = Callable[[str], Delay]
"""The delay of a transition of the output: `LH HL ZH ZL HZ LZ`."""

BOTH = POSITIVE | NEGATIVE

GATES: Mapping[str, int] = {
    "and": POSITIVE, "nand": NEGATIVE, "or": POSITIVE, "nor": NEGATIVE, "xor": BOTH, "xnor": BOTH,
    "buf": POSITIVE, "not": NEGATIVE,
    "bufif0": POSITIVE, "bufif1": POSITIVE, "notif0": NEGATIVE, "notif1": NEGATIVE,
}  # fmt: skip
"""Gates and their polarity from (data) input to output."""

BUFFERS = frozenset({"buf", "not"})
"""One input, any number of outputs (clause 7.3)."""

THREE_STATE: Mapping[str, Edge] = {
    "bufif0": Edge.FALL, "bufif1": Edge.RISE, "notif0": Edge.FALL, "notif1": Edge.RISE,
}  # fmt: skip
"""Gates with a control input (clause 7.4), and the edge of it that lets them drive."""

OPERATORS: Mapping[str, int] = {
    "~": NEGATIVE, "&": POSITIVE, "|": POSITIVE, "^": BOTH, "~^": BOTH,
    "reduce &": POSITIVE, "reduce |": POSITIVE, "reduce ^": BOTH,
    "reduce ~&": NEGATIVE, "reduce ~|": NEGATIVE, "reduce ~^": BOTH,
    "!": NEGATIVE, "&&": POSITIVE, "||": POSITIVE, "==": BOTH, "!=": BOTH,
    "?:": BOTH, "copy": POSITIVE,
}  # fmt: skip
"""Operators and their polarity. Of `?:`, that of the condition: the two data inputs, last, do not invert."""

ONE_INPUT: Mapping[str, int] = {
    "xor": POSITIVE, "xnor": NEGATIVE, "^": POSITIVE, "~^": NEGATIVE,
    "reduce ^": POSITIVE, "reduce ~^": NEGATIVE,
}  # fmt: skip
"""Polarity of what is both ways for several inputs, with one."""

NET, THREE_STATE_NET = "wire", "wire z"
"""Operators that stand for a delay of a net (clause 7.14), the second where its drivers may let go of it."""

_PASS_Z = ("copy", "?:")

OPPOSITE = {Edge.RISE: Edge.FALL, Edge.FALL: Edge.RISE}


def hops_between(tail: int, head: int, polarity: int, delay_of: DelayOf) -> list[KindHop]:
    """Return the hops from a pin to another with a polarity."""
    hops = []
    for edge in Edge:
        delay = delay_of("LH" if edge == Edge.RISE else "HL")
        if polarity & POSITIVE:
            hops.append(KindHop(tail, head, edge, edge, delay))
        if polarity & NEGATIVE:
            hops.append(KindHop(tail, head, OPPOSITE[edge], edge, delay))
    return hops


def control_hops(tail: int, head: int, enables: Edge, delay_of: DelayOf) -> list[KindHop]:
    """Return the hops from a control pin to a three-state output, which `enables` lets drive.

    The output leaves its high level with tPHZ and its low level with tPLZ, to wherever its net is pulled.
    """
    disables = OPPOSITE[enables]
    return [
        KindHop(tail, head, enables, Edge.RISE, delay_of("ZH")),
        KindHop(tail, head, enables, Edge.FALL, delay_of("ZL")),
        KindHop(tail, head, disables, Edge.FALL, delay_of("HZ")),
        KindHop(tail, head, disables, Edge.RISE, delay_of("LZ")),
    ]


def gate(name: str, inputs: int, outputs: int, delay_of: DelayOf) -> Kind:
    """Make the kind of a gate; its pins as in Verilog, outputs first. Raises KeyError for an unknown gate."""
    outs = ["out"] if outputs == 1 else [f"out{i + 1}" for i in range(outputs)]
    if name in THREE_STATE:
        hops = hops_between(1, 0, GATES[name], delay_of) + control_hops(2, 0, THREE_STATE[name], delay_of)
        ways = [Way.OUTPUT, Way.INPUT, Way.INPUT]
        return make_kind(name, "gate", ("out", "in", "control"), ways, hops, three_state=True)
    polarity = ONE_INPUT.get(name, GATES[name]) if inputs == 1 else GATES[name]
    ins = ["in"] if name in BUFFERS else [f"in{i + 1}" for i in range(inputs)]
    hops = []
    for tail in range(outputs, outputs + inputs):
        for head in range(outputs):
            hops += hops_between(tail, head, polarity, delay_of)
    ways = [Way.OUTPUT] * outputs + [Way.INPUT] * inputs
    return make_kind(name, "gate", outs + ins, ways, hops)


def operator(name: str, inputs: int, delay_of: DelayOf, turns_off: bool = False) -> Kind:
    """Make the kind of an operator: pins `out`, `in1`, ... Raises KeyError for an unknown operator.

    `turns_off`: the source gives a delay to z of its own. It counts where a z may pass: in an assignment of a
    net or of `?:`, and before a net whose drivers may let go.
    """
    if name == NET:
        return make_kind(
            NET, "operator", ("out", "in"), [Way.OUTPUT, Way.INPUT], hops_between(1, 0, POSITIVE, delay_of)
        )
    if name == THREE_STATE_NET:
        hops = _with_turn_off(hops_between(1, 0, POSITIVE, delay_of), delay_of)
        return make_kind(NET, "operator", ("out", "in"), [Way.OUTPUT, Way.INPUT], hops)
    polarity = ONE_INPUT.get(name, OPERATORS[name]) if inputs == 1 else OPERATORS[name]
    hops = []
    for tail in range(1, inputs + 1):
        data = name == "?:" and tail > inputs - 2
        hops += hops_between(tail, 0, POSITIVE if data else polarity, delay_of)
    if turns_off and name in _PASS_Z:
        hops = _with_turn_off(hops, delay_of)
    ways = [Way.OUTPUT] + [Way.INPUT] * inputs
    pins = ["out", *(f"in{i + 1}" for i in range(inputs))]
    return make_kind("assign" if name == "copy" else f"assign {name}", "operator", pins, ways, hops)


def operator_of(kind: Kind) -> str:
    """Return the name that `operator` made a kind of; of a net's delay, however it floats, `NET`."""
    return kind.name.removeprefix("assign").strip() or "copy"


def _with_turn_off(hops: list[KindHop], delay_of: DelayOf) -> list[KindHop]:
    """Return hops with others beside them that take the turn-off delay, where that is another one.

    A change to z leaves the high level like a fall and the low one like a rise.
    """
    off = {Edge.RISE: delay_of("LZ"), Edge.FALL: delay_of("HZ")}
    others = [hop._replace(delay=off[hop.head_edge]) for hop in hops]
    return hops + [o for hop, o in zip(hops, others, strict=True) if o.delay.triple != hop.delay.triple]


def with_turn_off(delay: SourceDelay) -> SourceDelay:
    """Return a delay with its turn-off value written out, where rise and fall differ (clause 7.14)."""
    if len(delay.values) != 2:
        return delay
    return delay._replace(values=(*delay.values, _smaller(*delay.values)))


def source_delays(delay: SourceDelay) -> DelayOf:
    """Return the delays of transitions that a delay written in the source stands for (clause 7.14).

    Rise is to 1, fall is to 0, turn-off to z: with two values the smaller of them, with one that one.
    """
    rise = delay.values[0]
    fall = delay.values[1] if len(delay.values) > 1 else rise
    off = delay.values[2] if len(delay.values) > 2 else _smaller(rise, fall)
    of = {"LH": rise, "ZH": rise, "HL": fall, "ZL": fall, "HZ": off, "LZ": off}
    made = {way: Delay(triple, Origin.SOURCE, delay.words) for way, triple in of.items()}
    return made.__getitem__


def _smaller(a: Triple, b: Triple) -> Triple:
    low = np.minimum(a, b)  # what is unknown in one of them stays unknown
    return float(low[0]), float(low[1]), float(low[2])


NO_DELAY = Delay((0.0, 0.0, 0.0), Origin.WIRE)
"""That of an assignment without operator: a wire."""
