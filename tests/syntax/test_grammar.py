"""The grammar reader: tables run as lark does, are kept between runs, and are not believed when in doubt."""

import json
import os
import stat
from pathlib import Path
from zlib import crc32

import pytest
from hypothesis import given, settings, strategies as st
from lark import Token, Tree
from lark.exceptions import UnexpectedInput

from tardigate.syntax import grammar_cache
from tardigate.syntax.grammar import Reader
from tardigate.syntax.lalr import NotInGrammarError
from tardigate.syntax.parts_advice import LANGUAGE
from tardigate.syntax.recovery import troubles

SAMPLE = """// all kinds of statement
family F "text" {
  provenance "p"; conditions { v5 "5 V" 4.5..5.5 V, -40..85 C; v3; }
  part P "t" {
    package 2; inputs A, B[3:0] 2 pF each 3 pF; outputs Y = ~(A & B[0]) ^ 1 | {A, B}[1:0] when A ? 0 : 4'b1;
    parameter I[3:0] = 4'h8; parameter J; state S, T[1:0];
    register posedge A { Q = I[{A, B[2:1]}]; clear ~A; set B[0]; } latch low A { Y = 1; }
    times ns { tpd A, B[3:2] => Y 1:2:3 | -; tPLH negedge A -*> Y when A & B[0] -:2:3 | 1; }
    checks ns { tsu posedge D before CK 1 | -2; th D after negedge CK when A 1; tw A high 1; period A 2; }
    load Y 50 pF, more 0.1 ns/pF; load 3 pF;
  }
  alias A, \\b.c = P; equivalent A, P;
  gates ns { tpd nand(2), nor(3..5), not 1; } operators ns { ten "&"(2), "?:" 1; } default ns { tpd 1; }
  wires ns { fanout(1) 1; each more 2; net "x" 3; net "y*" 3 cm at 0.1 ns/cm; load 3 pF each fanout; }
}
""".replace("{A, B}[1:0]", "{A, B}")
WORDS = sorted(set(SAMPLE.split()) | set("{}[]();,:|=>*~&^?+-.."))


@pytest.fixture(scope="module")
def reader() -> Reader:
    return Reader("parts", object())


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    monkeypatch.setenv("XDG_CACHE_HOME", str(tmp_path))
    monkeypatch.delenv(grammar_cache.SWITCH, raising=False)
    return tmp_path / "tardigate"


def plain(tree: object) -> object:
    """Return lark's tree in the form that the machine gives rules without a method."""
    if not isinstance(tree, Tree):
        return None if tree is None else str(tree)
    return [str(tree.data), *(plain(child) for child in tree.children)]


def both(reader: Reader, text: str) -> tuple[object, object]:
    try:
        by_lark: object = plain(reader.lark.parse(text))
    except UnexpectedInput:
        by_lark = "refused"
    assert reader._machine is not None
    try:
        by_tables = reader._machine.run(text)
    except NotInGrammarError:
        by_tables = "refused"
    return by_tables, by_lark


def test_tables_give_the_tree_that_lark_gives(reader: Reader) -> None:
    by_tables, by_lark = both(reader, SAMPLE)
    assert by_tables == by_lark
    assert by_lark != "refused"


@settings(deadline=None)
@given(st.data())
def test_tables_accept_what_lark_accepts_after_small_changes(reader: Reader, data: st.DataObject) -> None:
    pieces = SAMPLE.split(" ")
    for _ in range(data.draw(st.integers(1, 2))):
        place = data.draw(st.integers(0, len(pieces) - 1))
        pieces[place] = data.draw(st.sampled_from([*WORDS, "", "\x01", "é"]))
    by_tables, by_lark = both(reader, " ".join(pieces))
    assert by_tables == by_lark


@given(st.text(max_size=30) | st.lists(st.sampled_from(WORDS), max_size=12).map(" ".join))
def test_tables_accept_what_lark_accepts_of_anything(reader: Reader, text: str) -> None:
    by_tables, by_lark = both(reader, text)
    assert by_tables == by_lark


@pytest.mark.usefixtures("folder")
def test_a_refused_text_is_told_apart_without_lark(monkeypatch: pytest.MonkeyPatch) -> None:
    Reader("parts", object())  # makes the tables
    monkeypatch.setattr(Reader, "lark", property(lambda _: pytest.fail("lark was asked")))
    with pytest.raises(NotInGrammarError):
        Reader("parts", object()).read("family {")


@settings(deadline=None)
@given(st.data())
def test_what_could_stand_there_is_what_lark_says(reader: Reader, data: st.DataObject) -> None:
    pieces = SAMPLE.split(" ")
    pieces[data.draw(st.integers(0, len(pieces) - 1))] = data.draw(st.sampled_from(WORDS))
    found, _ = troubles(reader.scout, " ".join(pieces), LANGUAGE, 1)
    if not found:
        return
    parser = reader.lark.parse_interactive()
    for token in reader.scout.tokens(" ".join(pieces)):
        if token.start == found[0].found.start:
            could = parser.accepts()  # type: ignore[no-untyped-call]
            assert found[0].accepted == could
            assert token.kind not in could
            break
        parser.feed_token(Token(token.kind, token.text))


def test_tokens_know_their_places() -> None:
    class Maker:
        @staticmethod
        def NUMBER(token: object) -> tuple[object, ...]:  # noqa: N802
            return str(token), token.start_pos, token.end_pos, token.type  # type: ignore[attr-defined]

    read = Reader("parts", Maker()).read("family \\a.b { default ns { tpd 12; } }")
    assert ["cell", ("12", 31, 33, "NUMBER")] in read[1][-1][-1][-1]
    assert read[1][1] == ["name", "\\a.b"]


def test_kept_tables_are_used_and_are_the_same(folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    first = Reader("parts", object()).read(SAMPLE)
    (kept,) = folder.iterdir()
    assert stat.S_IMODE(folder.stat().st_mode) == 0o700
    assert stat.S_IMODE(kept.stat().st_mode) == 0o600
    monkeypatch.setattr(Reader, "lark", property(lambda _: pytest.fail("built again")))
    assert Reader("parts", object()).read(SAMPLE) == first


def test_switched_off_nothing_is_read_or_written(folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv(grammar_cache.SWITCH, "off")
    grammar_cache.keep("x", "k", [1])
    assert not folder.exists()
    monkeypatch.delenv(grammar_cache.SWITCH)
    grammar_cache.keep("x", "k", [1])
    assert grammar_cache.fetch("x", "k") == [1]
    monkeypatch.setenv(grammar_cache.SWITCH, "off")
    assert grammar_cache.fetch("x", "k") is None


@pytest.mark.parametrize(
    "text", ["", "{", "[]", "null", '{"key": "other", "tables": 1}', '{"key": "k"', "[" * 100_000, "\udcff"]
)
def test_a_damaged_file_is_not_there(folder: Path, text: str) -> None:
    grammar_cache.keep("x", "k", [1])
    (kept,) = folder.iterdir()
    kept.write_bytes(text.encode("utf-8", "surrogateescape"))
    assert grammar_cache.fetch("x", "k") is None


@pytest.mark.parametrize("tables", [None, [], {}, {"states": []}, 7])
def test_tables_of_another_form_are_built_again(folder: Path, tables: object) -> None:
    Reader("parts", object())
    (kept,) = folder.iterdir()
    content = json.loads(kept.read_text())
    kept.write_text(json.dumps({**content, "tables": tables}))
    assert Reader("parts", object()).read("family F { }")
    assert json.loads(kept.read_text())["tables"].keys() == content["tables"].keys()


@pytest.mark.skipif(os.name != "posix", reason="owner and mode bits are POSIX's")
def test_what_others_could_have_written_is_not_believed(folder: Path, tmp_path: Path) -> None:
    grammar_cache.keep("x", "k", [1])
    (kept,) = folder.iterdir()
    for place, mode in ((kept, 0o620), (kept, 0o602), (folder, 0o770), (folder, 0o707)):
        before = stat.S_IMODE(place.stat().st_mode)
        place.chmod(mode)
        assert grammar_cache.fetch("x", "k") is None
        place.chmod(before)
    assert grammar_cache.fetch("x", "k") == [1]
    elsewhere = tmp_path / "elsewhere"
    folder.rename(elsewhere)
    folder.symlink_to(elsewhere)
    assert grammar_cache.fetch("x", "k") is None


def test_a_folder_that_cannot_be_written_is_no_fault(folder: Path) -> None:
    folder.parent.joinpath("tardigate").write_text("a file stands there")
    grammar_cache.keep("x", "k", [1])
    assert grammar_cache.fetch("x", "k") is None


def test_only_the_newest_versions_are_kept(folder: Path) -> None:
    for number in range(grammar_cache.VERSIONS + 3):
        grammar_cache.keep("x", f"{number}", number)
        os.utime(next(folder.glob(f"x-{crc32(str(number).encode()):08x}.json")), (number, number))
    assert len(list(folder.iterdir())) == grammar_cache.VERSIONS
    assert grammar_cache.fetch("x", f"{grammar_cache.VERSIONS + 2}") == grammar_cache.VERSIONS + 2
