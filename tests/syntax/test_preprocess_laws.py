"""Laws of the preprocessor on random texts, against small slow twins."""

from __future__ import annotations

from contextlib import suppress
from pathlib import Path

import pytest
from hypothesis import given, settings, strategies as st

from tardigate.source.collector import Collector
from tardigate.source.faults import InputRefusedError
from tardigate.source.files import SourceFile, read_file
from tardigate.syntax.preprocess import Preprocessed, PreprocessOptions, preprocess

COMMENT = st.one_of(
    st.text("ab \"\\`/*'", max_size=8).map(lambda text: f"//{text}\n"),
    st.text('ab "\\`/*\n', max_size=8).filter(lambda t: "*/" not in t).map(lambda text: f"/* {text} */"),
)
CODE = st.one_of(
    st.sampled_from(["nand", "g1", "(", ")", ",", "/", "*", "8'hF", "\n", "\t", "\r\n", "'"]),
    st.text('a`/*"\\,([', min_size=1, max_size=6).map(lambda text: f"\\{text}"),
    st.text("a`/*,(' ", max_size=6).map(lambda text: f'"{text}\\""'),
)
PARTS = st.lists(st.one_of(CODE.map(lambda t: (False, t)), COMMENT.map(lambda t: (True, t))), max_size=20)
SIGNS = ["`", '"', "\\", "//", "/*", "*/", " ", "(", ")", ",", "[", "}", "\n", "\\\n", "\r\n", "\x01", "é"]
WORDS = [
    "a",
    "M",
    "x",
    "`M",
    "`x",
    "`M(",
    "0\x01",
    "\x00",
    "1ns/1ps",
    '"board.v"',
    "`include ",
    "`timescale ",
]
TURNS = [
    "`define M",
    "`define M(x) ",
    "`ifdef M",
    "`ifndef M",
    "`elsif M",
    "`else",
    "`endif",
    "`undef M",
    "`resetall",
]


def run(data: bytes) -> Preprocessed:
    """Preprocess a text that must have no fault."""
    collector = Collector()
    done = preprocess(SourceFile("board.v", data), PreprocessOptions(), collector)
    assert [str(fault) for fault in collector.all()] == []
    return done


@given(PARTS)
def test_comments_alone_become_spaces_of_their_length(parts: list[tuple[bool, str]]) -> None:
    text = "".join(part + " " for _, part in parts)
    blanked = "".join(
        ("".join(c if c in "\r\n" else " " for c in part) if comment else part) + " "
        for comment, part in parts
    )
    done = run(text.encode())
    assert done.text.data.decode() == blanked
    assert len(done.text.pieces) == 1


@given(st.lists(CODE, max_size=30))
def test_a_text_without_comments_and_directives_is_the_very_same_bytes(code: list[str]) -> None:
    data = " ".join(code).encode()
    assert run(data).text.data is data


@st.composite
def definitions(draw: st.DrawFn) -> list[tuple[int, list[str]]]:
    """Draw macros M0, M1, …: how many arguments, and a body of words and uses of the macros before."""
    macros: list[tuple[int, list[str]]] = []
    for _ in range(draw(st.integers(1, 4))):
        formals = draw(st.integers(0, 2))
        body = draw(st.lists(pieces(macros, [f"p{n}" for n in range(formals)]), min_size=1, max_size=4))
        macros.append((formals, body))
    return macros


def pieces(macros: list[tuple[int, list[str]]], words: list[str]) -> st.SearchStrategy[str]:
    """Return the strategy of a word or a use; a use is written with its arguments as words in brackets."""
    plain = st.sampled_from(["a", "b", "+", *words])

    def use(number: int) -> st.SearchStrategy[str]:
        count = macros[number][0]
        args = st.lists(
            plain if number == 0 else st.one_of(plain, use(number - 1)), min_size=count, max_size=count
        )
        return args.map(lambda given: f"`M{number}" + (f"( {' , '.join(given)} )" if count else ""))

    return st.one_of(plain, *(use(number) for number in range(len(macros))))


def twin(text: str, macros: list[tuple[int, list[str]]], bound: dict[str, str]) -> str:
    """Expand words from left to right by plain recursion; words are parted by spaces."""
    tokens, out, at = text.replace("(", " ( ").split(), [], 0
    while at < len(tokens):
        token = tokens[at]
        at += 1
        if not token.startswith("`M"):
            out.append(bound.get(token, token))
            continue
        count, body = macros[int(token[2:])]
        args: list[list[str]] = [[]]
        if count:
            depth = 1
            while depth:
                at += 1
                depth += {"(": 1, ")": -1}.get(tokens[at], 0)
                if depth == 1 and tokens[at] == ",":
                    args.append([])
                elif depth:
                    args[-1].append(tokens[at])
            at += 1
        values = {f"p{n}": twin(" ".join(arg), macros, bound) for n, arg in enumerate(args)}
        out.append(twin(" ".join(body), macros, values if count else {}))
    return " ".join(" ".join(out).split())


@given(definitions(), st.data())
def test_macros_expand_as_plain_recursion_says_19_3_1(
    macros: list[tuple[int, list[str]]], data: st.DataObject
) -> None:
    uses = data.draw(st.lists(pieces(macros, []), max_size=6))
    lines = [
        f"`define M{n}"
        + (f"({', '.join(f'p{k}' for k in range(count))})" if count else "")
        + " "
        + " ".join(body)
        for n, (count, body) in enumerate(macros)
    ]
    done = run("\n".join([*lines, " ".join(uses)]).encode())
    assert " ".join(done.text.data.decode().split()) == twin(" ".join(uses), macros, {})


TREES = st.recursive(
    st.sampled_from(["a", "b", "def A", "undef A", "def B"]).map(lambda word: [word]),
    lambda inner: st.lists(
        st.one_of(inner, st.tuples(st.sampled_from(["A", "B"]), st.booleans(), inner, inner)), max_size=4
    ),
    max_leaves=12,
)
Tree = list[object]


def written(tree: Tree) -> str:
    """Write words and conditions as Verilog."""
    out = []
    for node in tree:
        if isinstance(node, tuple):
            name, wanted, yes, no = node
            out.append(f"`if{'' if wanted else 'n'}def {name}\n{written(yes)} `else {written(no)} `endif\n")
        elif isinstance(node, list):
            out.append(written(node))
        else:
            out.append(
                str(node).replace("undef", "`UNDEF").replace("def", "`define").replace("`UNDEF", "`undef")
                + "\n"
            )
    return "".join(out)


def kept(tree: Tree, known: set[str]) -> list[str]:
    """Return the words that conditions leave, by plain recursion."""
    out: list[str] = []
    for node in tree:
        if isinstance(node, tuple):
            name, wanted, yes, no = node
            out += kept(yes if (name in known) == wanted else no, known)
        elif isinstance(node, list):
            out += kept(node, known)
        elif " " in str(node):
            word, name = str(node).split()
            known.add(name) if word == "def" else known.discard(name)
        else:
            out.append(str(node))
    return out


@given(TREES)
def test_conditions_keep_what_plain_recursion_keeps_19_4(tree: Tree) -> None:
    done = run(written(tree).encode())
    assert done.text.data.decode().split() == kept(tree, set())
    assert len(done.text.data) == len(written(tree))


@pytest.fixture(scope="module")
def folder(tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("included")
    (folder / "one.vh").write_text("wire one; // c\n`ifdef two wire two; `endif\n")
    (folder / "two.vh").write_text('`include "one.vh"\nwire `long, /* c */ three;')
    return folder


STRETCHES = [
    *("a ", "// c\n", '"//"', "`long ", "`s ", "`f(b, c)", "`f(`s, 1)", "`ifdef none x `endif "),
    *('`include "one.vh"\n', '`include "two.vh" /* c */\n', "`timescale 1ns/1ps\n"),
]


@given(st.lists(st.sampled_from(STRETCHES), max_size=12))
def test_every_byte_stands_where_its_span_says(folder: Path, parts: list[str]) -> None:
    start = "`define long longer_than_its_use\n`define s 1\n`define f(x, y) y+x+y\n"
    file = SourceFile(str(folder / "board.v"), (start + "".join(parts)).encode())
    collector = Collector()
    text = preprocess(file, PreprocessOptions(), collector).text
    assert collector.all() == ()
    files = {file.path: file.data} | {str(path): read_file(path).data for path in folder.glob("*.vh")}
    for at in range(len(text.data)):
        span = text.span(at)
        there = files[span.path][span.start : span.stop]
        byte = text.data[at : at + 1]
        assert byte in (there, b" ") or there[:1] == b"`"


@given(st.lists(st.sampled_from(SIGNS + WORDS + TURNS), max_size=40))
@settings(max_examples=300)
def test_no_text_breaks_it_and_none_lets_a_foreign_byte_through(parts: list[str]) -> None:
    collector = Collector()
    with suppress(InputRefusedError):
        done = preprocess(SourceFile("board.v", "".join(parts).encode()), PreprocessOptions(), collector)
        for at in range(len(done.text.data)):
            done.text.span(at)
        foreign = b"\x01" in done.text.data or b"\x00" in done.text.data
        assert not foreign or "V113" in {fault.code for fault in collector.all()}
