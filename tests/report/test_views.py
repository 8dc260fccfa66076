"""Views fit every width, stand on their decimal point and look as they should on a pinned console."""

from __future__ import annotations

import io
from collections.abc import Callable
from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings, strategies as st
from rich.cells import cell_len
from rich.console import Console
from rich.text import Text

from tardigate.analysis.assumptions import Key
from tardigate.report.assumptions_view import WORDS, assumption_words
from tardigate.report.looks import GLYPHS, NARROWEST, STYLES, WIDEST, Look
from tardigate.report.model import HopRecord, PaceRecord, SinksRecord, SurveyRecord, TrailRecord, TrailsRecord
from tardigate.report.numbers import scale_of
from tardigate.report.pace_view import pace_view
from tardigate.report.survey_view import survey_view
from tardigate.report.trail_view import trail_view
from tardigate.report.waterfall import waterfalls

LONG = "processor.execute_stage.arithmetic_unit_of_the_second_pipe.carry_lookahead[17]."
EXPECTED = Path(__file__).with_name("expected")

prefixes = st.sampled_from(["", LONG, "漢字.", "\x1b[31m", "x" * 300])
same_fixtures = settings(suppress_health_check=[HealthCheck.function_scoped_fixture], deadline=None)


def _plain(lines: list[Text]) -> str:
    """Return what a console of fixed width without colour shows."""
    file = io.StringIO()
    console = Console(
        file=file, width=400, color_system=None, legacy_windows=False, markup=False, emoji=False
    )
    for line in lines:
        line.rstrip()
        console.print(line, soft_wrap=True, highlight=False)
    return file.getvalue()


def _with_pins(trail: TrailRecord, from_pin: str, to_pin: str) -> TrailRecord:
    hops = [hop for hop in trail.hops if isinstance(hop, HopRecord)]
    return trail._replace(hops=tuple(hop._replace(from_pin=from_pin, to_pin=to_pin) for hop in hops))


@same_fixtures
@given(st.integers(NARROWEST, WIDEST), prefixes, st.booleans())
def test_no_line_is_wider_than_the_terminal_and_no_control_character_comes_through(
    make_pace: Callable[..., PaceRecord],
    make_trails: Callable[..., TrailsRecord],
    make_survey: Callable[..., SurveyRecord],
    width: int,
    prefix: str,
    plain: bool,
) -> None:
    look = Look(width, plain)
    views = [
        pace_view(make_pace(prefix), look),
        trail_view(make_trails(prefix), look),
        survey_view(make_survey(prefix), look),
    ]
    for view in views:
        for line in view:
            assert cell_len(line.plain) <= width
            assert line.plain.isprintable()
            assert line.plain.isascii() or not plain


@pytest.mark.parametrize("width", [80, 120])
@pytest.mark.parametrize("name", ["pace", "trail", "survey"])
def test_the_views_look_as_they_did(
    make_pace: Callable[..., PaceRecord],
    make_trails: Callable[..., TrailsRecord],
    make_survey: Callable[..., SurveyRecord],
    name: str,
    width: int,
) -> None:
    look = Look(width)
    views = {
        "pace": pace_view(make_pace(), look),
        "trail": trail_view(make_trails(), look),
        "survey": survey_view(make_survey(), look),
    }
    assert _plain(views[name]) == (EXPECTED / f"{name}-{width}.txt").read_text("utf-8")


def test_numbers_stand_on_their_decimal_point(make_trails: Callable[..., TrailsRecord]) -> None:
    rows = [line.plain for line in trail_view(make_trails(), Look(80)) if "MS00" in line.plain]
    points = {tuple(at for at, glyph in enumerate(row[34:]) if glyph == ".") for row in rows}
    assert len(rows) == 13
    assert len(points) == 1


def test_the_long_hop_stands_out_with_and_without_colour(make_trail: Callable[..., TrailRecord]) -> None:
    trail = make_trail()
    for plain, glyph in ((False, "█"), (True, "#")):
        fall = waterfalls([trail], scale_of([1e6]), Look(80, plain))[0]
        assert [number for number, line in enumerate(fall) if glyph in line.plain] == [2 + 3]
        assert STYLES["longest"] in {str(span.style) for span in fall[5].spans}


def test_equally_long_hops_do_not_stand_out(make_trail: Callable[..., TrailRecord]) -> None:
    trail = make_trail()
    alike = tuple(hop._replace(delay=5e6) for hop in trail.hops)
    fall = waterfalls([trail._replace(hops=alike)], scale_of([1e6]), Look(80))[0]
    assert not any("█" in line.plain for line in fall)


def test_a_fold_is_told_with_its_count(folded_trail: TrailRecord) -> None:
    lines = [line.plain for line in waterfalls([folded_trail], scale_of([48.6e6, 1.25e6]), Look(80))[0]]
    row = next(line for line in lines if "other" in line)
    assert row.split()[:6] == ["·", "3", "other", "hops", "28.75", "43.25"]


def test_the_first_sentence_of_pace_answers_the_question(make_pace: Callable[..., PaceRecord]) -> None:
    first = pace_view(make_pace(), Look(160))[0].plain
    assert first == (
        "`sequencer` settles in 48.6 ns: the last to settle is `STROBE` (fall),"
        " through 7 hops from `START` (rise)."
    )


def test_pace_promises_no_frequency(make_pace: Callable[..., PaceRecord]) -> None:
    said = pace_view(make_pace(), Look(160))[1].plain
    assert said == "From register to register the slowest trail takes 36.75 ns, from `START` to `STROBE`."


@same_fixtures
@given(st.integers(NARROWEST, WIDEST), st.booleans())
def test_pins_keep_their_names_at_every_width(
    make_trail: Callable[..., TrailRecord], width: int, plain: bool
) -> None:
    look = Look(width, plain)
    trail = _with_pins(make_trail(LONG), "in1", "out")
    for number, line in enumerate(waterfalls([trail], scale_of([1e6]), look)[0][2:]):
        begin, end = f"in1{look.edge(number % 2)}", f"out{look.edge(1 - number % 2)}"
        assert f"{begin}{look.glyph('to')}{end}" in line.plain.replace(" ", "")


def test_the_bar_gives_way_before_the_pins_do(make_trail: Callable[..., TrailRecord]) -> None:
    record = _with_pins(make_trail(), "SELECT_LOW", "DATA_OUT")

    def first(width: int) -> str:
        return waterfalls([record], scale_of([1.25e6, 48.6e6]), Look(width))[0][2].plain

    assert "SELECT_LOW↑ → DATA_OUT↓" in first(80)
    assert "SELECT_LOW↑ → DATA_OUT↓" in first(68)
    assert "SEL…_LOW↑→DATA_OUT↓" in first(64)
    assert "S…OW↑→D…UT↓" in first(48)


def test_pace_says_when_nothing_ever_changes(make_pace: Callable[..., PaceRecord]) -> None:
    nothing = SinksRecord((), 0, None)
    record = make_pace()._replace(
        outputs=nothing,
        register_pins=nothing,
        limiting=None,
        between_registers=None,
        assumptions=(),
    )
    view = [line.plain for line in pace_view(record, Look(120))]
    assert view[0] == "Nothing in `sequencer` ever changes: no source reaches an output or a register."
    assert "assumptions" not in view


def test_a_trail_without_hops_and_no_trail_at_all_are_said(make_trails: Callable[..., TrailsRecord]) -> None:
    record = make_trails(count=1)
    bare = record.trails[0]._replace(total=0.0, length=0, hops=())
    assert "no hop: the source is itself the sink" in _plain(
        trail_view(record._replace(trails=(bare,)), Look(80))
    )
    none = trail_view(record._replace(trails=(), to_names=("x", "y")), Look(120))
    assert none[0].plain == "No trail leads from `START` to `x` or `y` in `sequencer`."


def test_every_assumption_has_words_for_one_and_for_several() -> None:
    assert set(WORDS) == set(Key.__args__)  # type: ignore[attr-defined]
    assert all(assumption_words(key, 1) != assumption_words(key, 2) for key in WORDS)


def test_every_glyph_has_a_plain_fallback() -> None:
    assert all(plain.isascii() for _, plain in GLYPHS.values())
