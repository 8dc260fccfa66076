"""Parts files to trees: places of words, and what is told of a text outside the grammar."""

import pytest

from tardigate.source.collector import Collector
from tardigate.source.diagnostic import Diagnostic
from tardigate.source.files import SourceFile
from tardigate.syntax import parts_tree as tree
from tardigate.syntax.parts_reader import read_families, reserved_words


def read(text: str) -> list[tree.Family]:
    collector = Collector()
    families = read_families(SourceFile("a.parts", text.encode()), collector)
    collector.refuse()
    assert families is not None
    return list(families)


def fault(text: str | bytes) -> Diagnostic:
    collector = Collector()
    data = text.encode() if isinstance(text, str) else text
    assert read_families(SourceFile("a.parts", data), collector) is None
    (diagnostic,) = collector.all()
    assert diagnostic.code == "P001"
    return diagnostic


def test_words_keep_their_bytes() -> None:
    text = 'family \\x.y "é – 5 V" { alias high = load; }'
    (family,) = read(text)
    assert family.name.text == "x.y"
    assert family.text is not None
    assert family.text.text == "é – 5 V"
    (alias,) = family.items
    assert isinstance(alias, tree.Alias)
    assert (alias.names[0].text, alias.part.text) == ("high", "load")
    data = text.encode()
    assert data[alias.part.start : alias.part.stop] == b"load"
    assert data[family.text.start : family.text.stop].decode() == '"é – 5 V"'


def test_numbers_and_cells() -> None:
    (family,) = read("family F { default ns { tpd -:-1.5:2e3 | -; } }")
    (table,) = family.items
    assert isinstance(table, tree.KindTable)
    first, second = table.rows[0].cells
    assert [word and word.text for word in first.numbers] == [None, "-1.5", "2e3"]
    assert second.numbers == (None,)


def test_operators_bind_as_in_verilog() -> None:
    (family,) = read("family F { part P { output Y = A | B ^ C & ~D ~^ E ? F : G ? H : I; } }")
    (part,) = family.items
    assert isinstance(part, tree.Part)
    (pins,) = part.items
    assert isinstance(pins, tree.Pins)

    def text(expr: tree.Expr | None) -> str:
        assert expr is not None
        inside = " ".join(text(arg) for arg in expr.args)
        return f"({expr.word.text if expr.form != 'choose' else '?:'} {inside})" if inside else expr.word.text

    assert text(pins.pins[0].function) == "(?: (| A (~^ (^ B (& C (~ D))) E)) F (?: G H I))"


@pytest.mark.parametrize(
    ("text", "line", "column", "hint"),
    [
        ("family F {\n  prat P { }\n}", 2, 3, "Did you mean `part`?"),
        ("family F {\n  part P {\n    inputs A\n    outputs Y;\n } }", 4, 5, "Perhaps a `;` is missing"),
        ("family F {\n  part P { times ns { tpdd A => Y 1; } } }", 2, 23, "Did you mean `tpd`?"),
        ("family F {", 1, 10, ""),
        ("", 1, 1, ""),
        ("family F { \x01 }", 1, 12, ""),
        ("family F {\n é }", 2, 2, ""),
        ('family F { provenance "no end; }', 1, 23, ""),
    ],
)
def test_the_place_and_the_hint(text: str, line: int, column: int, hint: str) -> None:
    if not text:
        assert read(text) == []
        return
    diagnostic = fault(text)
    assert diagnostic.span is not None
    assert (diagnostic.span.line, diagnostic.span.column) == (line, column)
    assert diagnostic.hint.startswith(hint)


def test_the_words_are_the_readers() -> None:
    assert "the end of the file cannot stand here: " in fault("family F { // x\n  ").message
    assert "`é` cannot" in fault("family F { é }").message
    assert fault("family F { alias 3 = P; }").message == "`3` cannot stand here: a name could"
    assert "_" not in fault("family F { part P { times ns { tpd A ? B; } } }").message


def test_any_bytes_are_told_of() -> None:
    for data in (b"\xff\xfe", b"\x00", b"family \xc3(", b'family F "\xff" {'):
        assert fault(data).span is not None


def test_reserved_words_are_those_of_the_language() -> None:
    assert {"family", "tpd", "tPLH", "inputs", "clear"} <= reserved_words()
    assert not {"=>", "~^", "A"} & reserved_words()
