"""Whatever a parts file says, it is read or told of, and never ends in another error."""

import re
from importlib import resources

from hypothesis import given, settings, strategies as st

from tardigate.parts.kind import Kind
from tardigate.parts.library import Library
from tardigate.source.collector import Collector
from tardigate.source.files import SourceFile

REFERENCE = resources.files("tardigate.grammars").joinpath("parts.md").read_text("utf-8")
TEXT = "".join(re.findall(r"```parts\n(.*?)```", REFERENCE, re.DOTALL))
TOKENS = re.findall(r"\s+|//[^\n]*|\w+|\"[^\"]*\"|.", TEXT)
WORDS = sorted({token for token in TOKENS if not token.isspace() and not token.startswith("//")})


@settings(deadline=None, max_examples=150)
@given(st.data())
def test_a_reference_with_words_changed(data: st.DataObject) -> None:
    tokens = list(TOKENS)
    for _ in range(data.draw(st.integers(1, 4))):
        place = data.draw(st.integers(0, len(tokens) - 1))
        tokens[place] = data.draw(st.sampled_from([*WORDS, "", "99999999999999", "-", "1e999"]))
    collector = Collector()
    text = "".join(tokens).encode()
    library = Library.read([SourceFile("a.parts", text)], None, collector)
    if all(diagnostic.severity == "warning" for diagnostic in collector.all()):
        for name in library.part_names():
            assert isinstance(library.part_kind(name), Kind)


@given(st.binary(max_size=60))
def test_any_bytes(data: bytes) -> None:
    collector = Collector()
    Library.read([SourceFile("a.parts", data)], None, collector)
    assert all(diagnostic.span is not None for diagnostic in collector.all())
