"""A register against the meaning of the statements that made it, for all values of all nets."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from itertools import product
from typing import Any

from hypothesis import given, settings, strategies as st

from tardigate.parts.kind import Edge

INPUTS = ("a", "b", "c", "e", "f")
REGS = ("p", "q[0]", "q[1]")
CONTROLS = ("r", "s")
NETS = (*INPUTS, *REGS, *CONTROLS)
"""Bit `i` of a state is the value of net `i`; the clock, behind its edge, is none of them."""


@dataclass(frozen=True)
class Move:
    targets: tuple[str, ...]
    values: tuple[str, ...]


@dataclass(frozen=True)
class If:
    net: str
    level: int
    form: int
    yes: Statement | None
    no: Statement | None


Layer = tuple[str, int, int, list[str], list[str]]
"""An asynchronous branch: net, level, form of its condition, targets and constants."""

Statement = Move | If | tuple["Statement", ...]

CONDITIONS = {
    1: ("{}", "{} == 1'b1", "{} != 0", "!(!{})", "1 === {}"),
    0: ("!{}", "~{}", "{} == 0", "1'b0 == {}", "!({} == 1)", "~({} != 1'b0)"),
}


def written(statement: Statement | None) -> str:
    if statement is None:
        return ";"
    if isinstance(statement, Move):
        return f"{{{', '.join(statement.targets)}}} <= {{{', '.join(statement.values)}}};"
    if isinstance(statement, If):
        forms = CONDITIONS[statement.level]
        condition = forms[statement.form % len(forms)].format(statement.net)
        return f"if ({condition}) begin {written(statement.yes)} end else {written(statement.no)}"
    return f"begin {' '.join(map(written, statement))} end"


def carried_out(statement: Statement | None, state: int) -> int:
    """Return the state behind a statement: values are read before any reg changes (clause 9.2.2)."""
    after, work = state, [statement]
    while work:
        step = work.pop()
        if isinstance(step, Move):
            for target, value in zip(step.targets, step.values, strict=True):
                bit = 1 << NETS.index(target)
                high = value == "1'b1" or (value in NETS and state >> NETS.index(value) & 1)
                after = after | bit if high else after & ~bit
        elif isinstance(step, If):
            work.append(step.yes if (state >> NETS.index(step.net) & 1) == step.level else step.no)
        elif step is not None:
            work.extend(reversed(step))
    return after


def _move(targets: list[str], values: list[str]) -> Move:
    return Move(tuple(targets), tuple(values[: len(targets)]))


TARGETS = st.lists(st.sampled_from(REGS), min_size=1, max_size=3, unique=True)
VALUES = st.lists(st.sampled_from([*INPUTS, *NETS, "1'b0", "1'b1"]), min_size=3, max_size=3)
MOVES = st.builds(_move, TARGETS, VALUES)


def _compound(inner: st.SearchStrategy[Statement]) -> st.SearchStrategy[Statement]:
    branch = inner | st.none()
    conditions = st.builds(If, st.sampled_from(NETS), st.integers(0, 1), st.integers(0, 9), branch, branch)
    return conditions | st.lists(inner, max_size=3).map(tuple)


BODIES: st.SearchStrategy[Statement] = st.recursive(MOVES, _compound, max_leaves=8)
LAYERS = st.lists(
    st.tuples(
        st.sampled_from(CONTROLS), st.integers(0, 1), st.integers(0, 9), TARGETS,
        st.lists(st.sampled_from(["1'b0", "1'b1"]), min_size=3, max_size=3),
    ),
    max_size=2, unique_by=lambda layer: layer[0],
)  # fmt: skip


def _whole(body: Statement, layers: list[Layer]) -> Statement:
    for net, level, form, targets, values in reversed(layers):
        body = If(net, level, form, _move(targets, values), body)
    return body


def _differing(table: list[int], bit: int, states: list[int]) -> set[str]:
    """Return the nets that change a bit of what the table gives, in some of the states."""
    wanted = set(states)
    return {
        net
        for at, net in enumerate(NETS)
        if any((table[s] ^ table[s ^ 1 << at]) >> bit & 1 for s in states if s ^ 1 << at in wanted)
    }


@settings(max_examples=60, deadline=None)
@given(BODIES, LAYERS, st.sampled_from(["posedge", "negedge"]), st.integers(0, 2))
def test_a_register_depends_on_just_what_the_statements_do(
    registers: Callable[[str], list[Any]],
    body: Statement,
    layers: list[Layer],
    edge: str,
    place: int,
) -> None:
    whole = _whole(body, layers)
    events = [f"{'posedge' if level else 'negedge'} {net}" for net, level, *_ in layers]
    events.insert(min(place, len(events)), f"{edge} ck")
    declared = "module m(input ck, a, b, c, e, f, r, s);\nreg p; reg [1:0] q;\n"
    text = f"{declared}always @({' or '.join(events)}) {written(whole)}\nendmodule\n"
    found = {each.q: each for each in registers(text)}
    table = [carried_out(whole, state) for state in range(1 << len(NETS))]
    levels = {net: level for net, level, *_ in layers}
    for name in REGS:
        _compare(name, found.get(name), edge, table, levels)


def _compare(name: str, found: Any, edge: str, table: list[int], levels: dict[str, int]) -> None:
    """Compare a register with the states behind each state, at the clock and at the edges of controls."""
    bit = NETS.index(name)
    moved = [state for state, after in enumerate(table) if (state ^ after) >> bit & 1]
    if found is None:
        assert not moved
        return
    assert (found.clock, found.edge) == ("ck", Edge.RISE if edge == "posedge" else Edge.FALL)
    controls = {net: (level, sets) for net, level, sets in found.controls}
    assert {net: level for net, (level, _) in controls.items()}.items() <= levels.items()

    def at(state: int, net: str) -> int:
        return state >> NETS.index(net) & 1

    for net, level in levels.items():  # an edge of a control, the others being inactive
        alone = [
            state
            for state in range(len(table))
            if at(state, net) == level and all(at(state, n) != v for n, v in levels.items() if n != net)
        ]
        after = {table[state] >> bit & 1 for state in alone}
        if net in controls:
            assert after == {int(controls[net][1])}
        else:
            assert not any((state ^ table[state]) >> bit & 1 for state in alone)
    free = [state for state in range(len(table)) if all(at(state, n) != v for n, (v, _) in controls.items())]
    exact = _differing(table, bit, free) - {name}
    assert exact <= set(found.data)
    if name not in found.data:  # or else what it holds counts as one more net
        assert set(found.data) == exact


def test_the_interpreter_reads_before_it_moves() -> None:
    swap = Move(("p", "q[0]"), ("q[0]", "p"))
    for p, q in product((0, 1), repeat=2):
        state = p << NETS.index("p") | q << NETS.index("q[0]")
        assert carried_out(swap, state) == q << NETS.index("p") | p << NETS.index("q[0]")
