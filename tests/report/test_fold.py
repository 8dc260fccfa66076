"""A folded trail tells its longest hops and covers all others."""

from __future__ import annotations

import numpy as np
from hypothesis import given, strategies as st
from numpy.typing import NDArray

from tardigate.report.fold import fold

Floats = NDArray[np.float64]

delays = st.lists(st.integers(0, 9).map(float), max_size=40).map(np.array)


@given(delays, st.one_of(st.none(), st.integers(2, 50)))
def test_runs_cover_the_hops_once_in_order(hops: np.ndarray, most: int | None) -> None:
    runs = fold(hops, most)
    assert [hop for first, stop, _ in runs for hop in range(first, stop)] == list(range(len(hops)))
    assert all(folded == (stop - first > 1) for first, stop, folded in runs)


@given(delays, st.integers(2, 50))
def test_the_ends_are_told_and_no_folded_hop_is_longer_than_one_between_them(
    hops: np.ndarray,
    most: int,
) -> None:
    runs = fold(hops, most)
    folded = [hop for first, stop, away in runs if away for hop in range(first, stop)]
    told = [first for first, _, away in runs if not away]
    if folded:
        assert {0, len(hops) - 1} <= set(told)
        chosen = sorted(hops[1:-1], reverse=True)[: most - 2]
        assert max(hops[folded]) <= min(chosen, default=np.inf)


def test_a_lone_hop_between_two_long_ones_is_told() -> None:
    assert fold(np.array([1.0, 9.0, 1.0, 8.0, 1.0, 1.0, 1.0, 1.0, 2.0]), 4) == [
        (0, 1, False),
        (1, 2, False),
        (2, 3, False),
        (3, 4, False),
        (4, 8, True),
        (8, 9, False),
    ]


def test_a_trail_is_told_whole_where_folding_would_save_next_to_nothing() -> None:
    assert fold(np.array([1.0, 9.0, 1.0, 1.0, 1.0, 2.0]), 3) == [(i, i + 1, False) for i in range(6)]
    assert len(fold(np.array([1.0, 9.0, 1.0, 1.0, 1.0, 1.0, 2.0]), 3)) == 4
