"""Kinds and parts as canonical text, for tests and for looking at.

Takes what the house has made, gives lines that are equal when it is. Times stand in ns; `-` where there is no
number.
"""

from __future__ import annotations

from collections.abc import Sequence

from tardigate.parts.kind import Edge, Kind
from tardigate.parts.model import Check, Columns, Part
from tardigate.parts.source_delay import Triple
from tardigate.parts.units import FEMTOSECONDS

NANOSECOND = FEMTOSECONDS["ns"]
EDGES = {Edge.RISE: "rise", Edge.FALL: "fall"}


def triple_text(triple: Triple, per: float = float(NANOSECOND)) -> str:
    """Return min:typ:max."""
    return ":".join(f"{number / per:g}" if number == number else "-" for number in triple)  # NaN differs


def dump_kind(kind: Kind) -> str:
    """Return a kind: a line for it, one for each hop in order, one for its sinks."""
    marks = (" register" if kind.register else "") + (" three-state" if kind.three_state else "")
    lines = [f"{kind.group} {kind.name} {kind.origin.name}{marks}"]
    for i in range(kind.hops):
        tail, head = kind.pins[kind.hop_from[i]], kind.pins[kind.hop_to[i]]
        edges = EDGES[Edge(int(kind.from_edge[i]))], EDGES[Edge(int(kind.to_edge[i]))]
        low, mid, high = (float(number) for number in kind.delays[i])
        launch = " launches" if kind.launches[i] else ""
        lines.append(f"  {tail} {edges[0]} -> {head} {edges[1]} {triple_text((low, mid, high))}{launch}")
    lines += ["  sinks " + " ".join(kind.pins[pin] for pin in kind.sinks)] if len(kind.sinks) else []
    return "\n".join(lines)


def dump_part(part: Part) -> str:
    """Return a part: pins, functions as nodes, registers, rows and checks bit by bit."""
    names = part.bit_names
    lines = [f"part {part.name} package {part.package}"]
    lines += [f"  {pin.way.name.lower()} {' '.join(pin.bits)}" for pin in part.pins]
    lines += [f"  state {' '.join(pin.bits)}" for pin in part.states]
    lines += [f"  parameter {p.name}[{p.msb}:{p.lsb}] = {p.default}" for p in part.parameters]
    for i, (form, *operands) in enumerate(part.network.nodes):
        told = [str(operand) for operand in operands if operand >= 0]
        if form == "bit":  # a parameter's bits have negative numbers
            told = [names[operands[0]] if operands[0] >= 0 else str(operands[0])]
        lines.append(f"  node {i} {form} {' '.join(told)}")
    lines += [f"  function {names[bit]} {node}" for bit, node in sorted(part.functions.items())]
    lines += [f"  enable {names[bit]} {node}" for bit, node in sorted(part.enables.items())]
    for register in part.registers:
        form = "latch" if register.latch else "register"
        stores = " ".join(f"{names[bit]}={node}" for bit, node in sorted(register.stores.items()))
        forced = f"clear {register.clear} set {register.set}"
        lines.append(f"  {form} {EDGES[register.edge]} {names[register.clock]} {stores} {forced}")
    for row in part.rows:
        edge = f" {EDGES[row.edge]}" if row.edge is not None else ""
        for tail, head in row.pairs:
            arrow = f"{names[tail]}{edge} {row.polarity}=> {names[head]} when {row.when}"
            lines.append(f"  {row.symbol} {arrow} {_columns(row.columns)}")
    for check in part.checks:
        lines.append(f"  {_check(check, names)} {_columns(check.columns)}")
    for load in part.loads:
        ends = " ".join(names[bit] for bit in load.bits)
        lines.append(f"  load {ends} {load.rated:g} fF {_columns(load.more)}")
    return "\n".join(lines)


def _check(check: Check, names: Sequence[str]) -> str:
    words = [check.symbol, *(names[bit] for bit in check.bits)]
    words += [EDGES[check.edge]] if check.edge is not None else []
    words += [f"at {names[check.reference]}"] if check.reference >= 0 else []
    words += [EDGES[check.reference_edge]] if check.reference_edge is not None else []
    words += [check.level] if check.level else []
    words += [f"when {check.when}"] if check.when >= 0 else []
    return " ".join(words)


def _columns(columns: Columns) -> str:
    return " | ".join(triple_text(triple) for triple in columns)
