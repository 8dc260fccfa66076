"""Words and marks of a text, and numbers for its names (clauses 3.1, 3.6, 3.7)."""

from __future__ import annotations

import re

import pytest
from hypothesis import example, given, strategies as st

from tardigate.syntax.scan import SPACE, WORD, Scan, scan

PIECES = [
    "a",
    "b1",
    "_x$",
    "\\",
    "\\a+b ",
    "\\a ",
    "\\q\\r ",
    "1'b0",
    "4 'hf",
    '"',
    '"s\\"t"',
    "(",
    ")",
    ",",
    ";",
]
PIECES += [".", "[", "]", " ", "\n", "\t", "+", "{", "}", "#", "*"]
TOKENS = re.compile(rb'\\[^ \t\r\n\f\v]*|"(?:\\.|[^"\\\n])*"?|[\w$\']+|[^ \t\r\n\f\v]', re.DOTALL | re.ASCII)
texts = st.lists(st.sampled_from(PIECES), max_size=30).map("".join).map(str.encode)


def _words(found: Scan) -> list[tuple[int, str, bool]]:
    return [
        (
            int(found.word_stop[at]),
            found.names.text(int(name)),
            bool(found.escaped is not None and found.escaped[at]),
        )
        for at, name in enumerate(found.word)
    ]


@pytest.mark.parametrize(
    ("text", "names"),
    [
        (b"and g1(y,a);", ["and", "g1", "y", "a"]),
        (b"1'b0 4 'hf", ["1'b0", "4", "'hf"]),
        (b"\\bus+index \\{a,b} x", ["bus+index", "{a,b}", "x"]),
        (b"a$b _c", ["a$b", "_c"]),
        (b'x "a b ; c" y', ["x", "y"]),
        (b'\\a"b c"d', ['a"b', "c"]),
        (b"\\a\\b c", ["a\\b", "c"]),
        (b"g\\a ", ["g", "a"]),
        (b"", []),
        (b"   ", []),
    ],
)
def test_words(text: bytes, names: list[str]) -> None:
    assert [name for _, name, _ in _words(scan(text))] == names


def test_an_escaped_name_and_a_plain_one_are_the_same_name() -> None:
    found = scan(b"cpu3 \\cpu3 ")
    assert found.word[0] == found.word[1]
    assert found.escaped is not None
    assert found.escaped.tolist() == [False, True]


@given(texts)
@example(b"a\\")
@example(b"\\\\ a")
@example(b'"\\')
def test_marks_are_those_of_a_plain_lexer(text: bytes) -> None:
    found = scan(text)
    words, marks = [], []
    for token in TOKENS.finditer(text):
        first, piece = token.start(), token.group()
        if piece[:1] == b'"' and (len(piece) > 1 or text[first : first + 1] == b'"'):
            marks += list(range(first, token.end()))
        elif piece == b"\\":
            marks.append(first)  # no escaped identifier: left to the grammar
        else:
            marks.append(first)
            if piece[:1] == b"\\" or re.fullmatch(rb"[\w$']+", piece):
                words.append(
                    (token.end(), piece.lstrip(b"\\").decode() if piece[:1] != b"\\" else piece[1:].decode())
                )
    assert found.at.tolist() == marks
    assert [(stop, name) for stop, name, _ in _words(found)] == words
    assert (found.kind != SPACE).all()
    is_word = found.kind == WORD
    assert is_word.sum() == len(found.word)
    assert found.word_of.tolist() == [int(is_word[:at].sum()) for at in range(len(found.kind))]


@given(st.lists(st.text("ab", min_size=1, max_size=20), min_size=1, max_size=40))
def test_equal_names_have_equal_numbers(names: list[str]) -> None:
    found = scan(" ".join(names).encode())
    of = dict(zip(names, found.word.tolist(), strict=True))
    assert len(set(of.values())) == len(of) == len(found.names)
    assert [of[name] for name in names] == found.word.tolist()
    assert found.names.find_all([*of, "none"]).tolist() == [*of.values(), -1]
