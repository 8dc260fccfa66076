"""Times keep their value and take one unit."""

from __future__ import annotations

from fractions import Fraction

import pytest
from hypothesis import given, strategies as st

from tardigate.parts.units import FEMTOSECONDS, LONGEST
from tardigate.report.numbers import MOST_DECIMALS, scale_of

whole_times = st.integers(-int(LONGEST), int(LONGEST)).map(float)
times = st.floats(-LONGEST, LONGEST)


@pytest.mark.parametrize(
    ("given_fs", "unit", "texts"),
    [
        ([48.6e6, 9.5e6], "ns", ["48.6", "9.5"]),
        ([215e3, 60e3], "ps", ["215", "60"]),
        ([6.4e6, 192.31e3], "ns", ["6.400", "0.192"]),
        ([999.0], "fs", ["999"]),
        ([9.9e10], "ns", ["99000"]),
        ([1.5e11], "us", ["150"]),
        ([0.0], "ns", ["0"]),
    ],
)
def test_a_report_has_one_unit_and_as_many_decimals_as_its_times_need(
    given_fs: list[float], unit: str, texts: list[str]
) -> None:
    scale = scale_of(given_fs)
    assert (scale.unit, [scale.text(time) for time in given_fs]) == (unit, texts)


def test_what_never_changes_has_no_say_in_the_unit() -> None:
    assert scale_of([float("-inf"), 2e6, float("inf")]) == scale_of([2e6])


@given(st.lists(times, min_size=1, max_size=5))
def test_text_is_off_by_half_a_step_at_most_and_rounds_the_way_it_is_asked_to(given_fs: list[float]) -> None:
    scale = scale_of(given_fs)
    per_unit = FEMTOSECONDS[scale.unit]
    step = Fraction(per_unit, 10**scale.decimals)
    for time in given_fs:
        near, up, down = (Fraction(scale.text(time, way)) * per_unit for way in ("near", "up", "down"))
        assert abs(near - Fraction(time)) <= step / 2
        assert Fraction(time) <= up < Fraction(time) + step
        assert Fraction(time) - step < down <= Fraction(time)


@given(st.lists(whole_times, min_size=1, max_size=5))
def test_texts_are_exact_unless_the_decimals_run_out(given_fs: list[float]) -> None:
    scale = scale_of(given_fs)
    exact = all(Fraction(scale.text(time)) * FEMTOSECONDS[scale.unit] == Fraction(time) for time in given_fs)
    assert exact or scale.decimals == MOST_DECIMALS


@given(st.lists(times, min_size=1, max_size=5))
def test_all_times_of_a_report_have_their_point_in_the_same_place(given_fs: list[float]) -> None:
    scale = scale_of(given_fs)
    assert {len(scale.text(time).partition(".")[2]) for time in given_fs} == {scale.decimals}
