"""Whether a sequential table is a register, a latch, or set and cleared by levels.

Takes a primitive's tree, gives the clock, what is stored and what sets and clears it as arrays over the other
variables, or why there is no such thing. Makes no nodes.
"""

from __future__ import annotations

from functools import lru_cache
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from tardigate.parts.kind import Edge
from tardigate.parts.udp_table import NONE, ONE, ZERO, Steps, Values, X, flipped, half, sequential
from tardigate.syntax.tree import Primitive


class Held(NamedTuple):
    """How a table stores (see `udp.Stored`); the arrays are over the inputs but the clock, then the state."""

    latch: bool
    edge: Edge
    clock: int
    data: Values
    clear: Values
    set: Values


class Unclear(NamedTuple):
    """Why a table is nothing of the kind, in words that follow the primitive's name."""

    reason: str


class _View(NamedTuple):
    """A table seen with certain states taken as forced.

    `forced`: for each state of inputs and output the value that the inputs force, or `NONE`. `moves[i]`:
    where a change of input `i` moves the output, to a value that is not forced, from a state that can be.
    """

    steps: Steps
    forced: Values
    moves: NDArray[np.bool_]


@lru_cache(64)
def recognise(primitive: Primitive) -> Held | Unclear:
    """Return how a sequential primitive stores, or why it is not understood."""
    steps = sequential(primitive)
    found = _judge(primitive, _view(steps, _forced_by_rows(steps)))
    if isinstance(found, Held):
        return found
    other = _judge(primitive, _view(steps, _forced_in_effect(steps)))
    return other if isinstance(other, Held) else found


def _present(steps: Steps) -> Values:
    return np.repeat(np.array((ZERO, ONE), np.uint8), len(steps.levels) // 2)


def _forced_by_rows(steps: Steps) -> Values:
    """Return the values that rows without an edge give whatever the output was."""
    low, high = steps.levels.reshape(2, -1)
    return np.tile(np.where((low == high) & (low < X), low, NONE).astype(np.uint8), 2)


def _forced_in_effect(steps: Steps) -> Values:
    """Return the values that the output has or gets by whatever change leads to a state of the inputs.

    So says a table that sets by an edge and then holds. Begins with all states that any change moves the
    output to one value in, and takes those out which something leads to with the other value.
    """
    present = _present(steps)
    known = steps.after < X
    gets = [(known & (steps.after != present) & (steps.after == value)).any(0) for value in (ZERO, ONE)]
    zero, one = (_either(some) for some in gets)
    forced = np.where(zero & ~one, ZERO, np.where(one & ~zero, ONE, NONE)).astype(np.uint8)
    while True:
        wrong = known & _possible(forced, present, len(steps.after)) & (steps.after != forced)
        out = _either(wrong.any(0)) & (forced != NONE)
        if not out.any():
            return forced
        forced = np.where(out, NONE, forced).astype(np.uint8)


def _either(states: NDArray[np.bool_]) -> NDArray[np.bool_]:
    """Return the states that are marked with either value of the output."""
    return np.tile(states.reshape(2, -1).any(0), 2)


def _possible(forced: Values, present: Values, inputs: int) -> NDArray[np.bool_]:
    """Say for a change of each input whether the output can have had its value: was the other forced?"""
    before = np.stack([flipped(forced, i) for i in range(inputs)])
    possible: NDArray[np.bool_] = (before == NONE) | (before == present)
    return possible


def _view(steps: Steps, forced: Values) -> _View:
    present = _present(steps)
    possible = _possible(forced, present, len(steps.after))
    moves = possible & (forced == NONE) & (steps.after < X) & (steps.after != present)
    return _View(steps, forced, moves)


def _judge(primitive: Primitive, view: _View) -> Held | Unclear:
    names = primitive.ports[1:]
    edges = [
        (i, edge)
        for i in range(len(names))
        for edge, end in ((Edge.RISE, 1), (Edge.FALL, 0))
        if half(view.moves[i], i, end).any()
    ]
    if not edges:
        return _latch(view) or _unclocked(view)
    clocks = sorted({i for i, _ in edges})
    if len(clocks) > 1:
        return Unclear(f"changes of {_listed([names[i] for i in clocks])} all store")
    if len(edges) > 1:
        return Unclear(f"both edges of {_listed([names[clocks[0]]])} store")
    clock, edge = edges[0]
    if (flipped(view.forced, clock) != view.forced).any():
        return Unclear(f"an edge of {_listed([names[clock]])} stores, and its level sets or clears as well")
    end = 1 if edge == Edge.RISE else 0
    return _held(view, clock, end, latch=False)


def _listed(names: list[str]) -> str:
    return " and ".join(f"`{name}`" for name in names)


def _latch(view: _View) -> Held | None:
    """Return the latch that a table is, opened by the input that leaves the fewest states held."""
    best: tuple[int, int, int] | None = None
    for clock in range(len(view.steps.after)):
        for level in (1, 0):
            held = _held_while_open(view, clock, level)
            if held >= 0 and (best is None or held < best[0]):
                best = held, clock, level
    return _held(view, best[1], best[2], latch=True) if best else None


def _held_while_open(view: _View, clock: int, level: int) -> int:
    """Return in how many states an input at a level leaves the output as it is; -1 if it opens no latch.

    It does where the other inputs force both values then, and while it is at the other level at most what
    they force then as well; and where another input moves the output.
    """
    shut, opened = half(view.forced, clock, 1 - level), half(view.forced, clock, level)
    silent = half(_silent(view.steps), clock, level)
    if ((shut != NONE) & (opened != shut) & ~silent).any():
        return -1
    through = opened[shut == NONE]
    if not ((through == ZERO).any() and (through == ONE).any()):
        return -1
    moved = any(
        (half(_moved(view, i), clock, level) & (shut == NONE)).any()
        for i in range(len(view.steps.after))
        if i != clock
    )
    return int((through == NONE)[~silent[shut == NONE]].sum()) if moved else -1


def _moved(view: _View, i: int) -> NDArray[np.bool_]:
    """Return where a change of input `i` moves the output from one forced value to the other."""
    before, present = flipped(view.forced, i), _present(view.steps)
    moved: NDArray[np.bool_] = (before == present) & (view.forced == ONE - present)
    moved &= view.steps.after[i] == view.forced
    return moved


def _while_open(view: _View, clock: int, level: int) -> Values:
    """Return what a latch's output is while its clock is at a level: forced, or as it opens, or else kept."""
    opened, after = half(view.forced, clock, level), half(view.steps.after[clock], clock, level)
    kept = (after == X) & ~half(_silent(view.steps), clock, level)
    after = np.where(kept, half(_present(view.steps), clock, level), after)
    return np.where(opened == NONE, after, opened)


def _silent(steps: Steps) -> NDArray[np.bool_]:
    """Return the states of the inputs that whatever leads to gives x."""
    return ~_either((steps.after != X).any(0))


def _held(view: _View, clock: int, end: int, latch: bool) -> Held:
    """Return what is stored when the clock is at `end`, and what sets and clears whatever the clock does."""
    shut = half(view.forced, clock, 1 - end)
    silent = _silent(view.steps)
    silent = half(silent & flipped(silent, clock), clock, end)
    clear, set_ = (
        _filled(_without(np.where(shut == value, ONE, np.where(silent, X, ZERO)).astype(np.uint8)))
        for value in (ZERO, ONE)
    )
    data = half(view.steps.after[clock], clock, end)
    if latch:
        data = _while_open(view, clock, end)
    data = np.where(shut == NONE, data, X).astype(np.uint8)
    for variable in range(len(data).bit_length() - 1):
        if _matters(clear, variable) or _matters(set_, variable):
            merged = _merged(data, variable)
            data = data if merged is None else merged
    return Held(latch, Edge.RISE if end else Edge.FALL, clock, _without(data), clear, set_)


def _unclocked(view: _View) -> Held | Unclear:
    """Return the table as a function that is unknown where the output is held."""
    values = view.forced
    if not ((values == ZERO).any() and (values == ONE).any()):
        return Unclear("no change of an input gives the output both values")
    for i, after in enumerate(view.steps.after):
        before = flipped(values, i)
        if ((before < X) & (values < X) & (before != values) & (after != values)).any():
            return Unclear("what its inputs give depends on which of them changed")
    nothing = np.zeros_like(values)
    function = np.where(values == NONE, X, values).astype(np.uint8)
    return Held(True, Edge.RISE, -1, function, nothing, nothing)


def _matters(values: Values, variable: int) -> bool:
    return bool((flipped(values, variable) != values).any())


def _merged(values: Values, variable: int) -> Values | None:
    """Return values that no longer depend on a variable, or None where it decides between 0 and 1."""
    other = flipped(values, variable)
    if ((values != other) & (values < X) & (other < X)).any():
        return None
    return np.minimum(values, other)  # X is the largest


def _without(values: Values) -> Values:
    """Return values without the variables that decide at most between a value and x.

    Where those could not all be left out at once, all stay.
    """
    merged = values
    for variable in range(len(values).bit_length() - 1):
        if _merged(values, variable) is not None:
            found = _merged(merged, variable)
            if found is None:
                return values
            merged = found
    return merged


def _filled(values: Values) -> Values:
    return np.where(values == X, ZERO, values).astype(np.uint8)
