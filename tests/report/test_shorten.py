"""Names that are shortened fit, keep both ends and say that something is missing."""

from __future__ import annotations

from hypothesis import given, strategies as st
from rich.cells import cell_len
from rich.text import Text

from tardigate.report.shorten import cells, shorten, take, take_end, wrap

segments = st.text(st.sampled_from("abcXYZ019_[]漢é"), min_size=1, max_size=12)
names = st.lists(segments, min_size=1, max_size=6).map(".".join)
marks = st.sampled_from(["…", ".."])
prose = st.lists(st.text(st.sampled_from("ab漢`"), min_size=1, max_size=30), max_size=20)


@given(names, st.integers(1, 80), marks)
def test_a_name_fits_and_is_left_alone_when_it_fits_anyway(name: str, room: int, cut: str) -> None:
    short = shorten(name, room, cut)
    assert cell_len(short) <= room
    assert (short == name) == (cell_len(name) <= room) or cut in short


@given(names, st.integers(3, 80))
def test_what_is_left_is_a_beginning_a_mark_and_an_end(name: str, room: int) -> None:
    short = shorten(name, room)
    if short != name:
        before, _, after = short.partition("…")
        assert name.startswith(before) or name.rpartition(".")[2].startswith(before)
        assert name.endswith(after)


@given(names, st.integers(1, 80))
def test_the_last_segment_stays_whole_when_it_can(name: str, room: int) -> None:
    last = name[name.rfind(".") :] if "." in name else name
    if cell_len(last) + 1 <= room:
        assert shorten(name, room).endswith(last)


def test_a_long_last_segment_keeps_its_index() -> None:
    assert shorten("cpu.result_of_everything[31]", 16) == "result_…hing[31]"
    assert shorten("cpu.alu.carry_chain.u3", 12) == "cpu.alu.….u3"


@given(st.text(st.sampled_from("ab.漢é"), max_size=20), st.integers(-2, 30))
def test_both_ends_fit_and_belong_to_the_text(text: str, room: int) -> None:
    assert text.startswith(take(text, room))
    assert text.endswith(take_end(text, room))
    assert max(cells(take(text, room)), cells(take_end(text, room))) <= max(0, room)


@given(prose, st.integers(10, 60), st.integers(0, 6))
def test_prose_keeps_its_words_and_breaks_only_between_them(
    words: list[str], width: int, indent: int
) -> None:
    lines = [line.plain for line in wrap(Text(" ".join(words)), width, indent)]
    assert " ".join(lines).split() == words
    for line in lines:
        assert cells(line) <= width or len(line.split()) == 1


def test_prose_keeps_its_styles() -> None:
    text = Text().append("plain ").append("loud words here", "bold")
    lines = wrap(text, 10, 2)
    assert [[(span.start, span.end, span.style) for span in line.spans] for line in lines] == [
        [(6, 10, "bold")],
        [(2, 7, "bold")],
        [(2, 6, "bold")],
    ]
