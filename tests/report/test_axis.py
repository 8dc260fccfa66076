"""Bars stand where their times stand, and never without width; labels stay apart."""

from __future__ import annotations

from hypothesis import given, strategies as st

from tardigate.report.axis import Axis, with_unit
from tardigate.report.looks import BARS, Look
from tardigate.report.numbers import scale_of

UNICODE, PLAIN = Look(80), Look(80, plain=True)
axes = st.builds(
    Axis,
    st.floats(1, 9e15),
    st.integers(1, 120),
    st.sampled_from(["ps", "ns", "us"]),
    st.sampled_from([UNICODE, PLAIN]),
)
parts = st.floats(0, 1)


def _halves(bar: str) -> set[int]:
    """Return the half cells that a bar covers."""
    left, right, both = BARS["bar"][0]
    covered = set()
    for cell, glyph in enumerate(bar):
        covered |= {left: {2 * cell}, right: {2 * cell + 1}, both: {2 * cell, 2 * cell + 1}}.get(glyph, set())
    return covered


@given(st.integers(1, 120), parts, parts)
def test_a_bar_covers_the_half_cells_from_its_first_time_to_its_last(count: int, a: float, b: float) -> None:
    axis = Axis(1e6, count, "ns", UNICODE)
    begins, over = sorted((a * 1e6, b * 1e6))
    first = min(round(2 * count * begins / 1e6), 2 * count - 1)
    stop = max(round(2 * count * over / 1e6), first + 1)
    assert _halves(axis.bar(begins, over, "bar").plain) == set(range(first, stop))


@given(axes, parts, parts, st.sampled_from(sorted(BARS)))
def test_a_bar_is_seen_and_stays_inside(axis: Axis, a: float, b: float, kind: str) -> None:
    bar = axis.bar(min(a, b) * axis.last, max(a, b) * axis.last, kind).plain
    assert bar.strip()
    assert len(bar) <= axis.cells


@given(axes)
def test_labels_stay_apart_and_stand_above_their_ticks(axis: Axis) -> None:
    labels, rule = axis.labels().plain, axis.rule().plain
    assert len(rule) == axis.cells
    ticks = [cell for cell, glyph in enumerate(rule) if glyph in "┬+"]
    assert [cell for cell, _ in axis.ticks()] == ticks
    for cell, label in axis.ticks():
        assert labels[cell:].startswith(label)
        assert labels[:cell].endswith("  ") or not cell


@given(axes)
def test_labels_tell_the_time_of_their_cell(axis: Axis) -> None:
    for cell, label in axis.ticks()[1:]:
        time = float(label) * {"ps": 1e3, "ns": 1e6, "us": 1e9}[axis.unit]
        assert abs(time / axis.last * axis.cells - cell) <= 1


def test_an_axis_without_length_has_a_zero() -> None:
    axis = Axis(0.0, 20, "ns", UNICODE)
    assert axis.labels().plain == "0 ns"
    assert axis.bar(0.0, 0.0, "bar").plain == "╸"


def test_a_time_in_prose_has_its_unit_and_no_zeros_at_the_end() -> None:
    assert with_unit(48.6e6, scale_of([48.6e6, 1.25e6]), UNICODE) == "48.6 ns"
    assert with_unit(2e11, scale_of([2e11]), UNICODE) == "200 µs"
    assert with_unit(2e11, scale_of([2e11]), PLAIN) == "200 us"
