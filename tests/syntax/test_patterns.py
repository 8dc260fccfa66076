"""Patterns with possessive repeats mean the same without them, for Pythons that cannot be relied on there."""

from __future__ import annotations

from pathlib import Path

import pytest
from hypothesis import given, strategies as st

from tardigate.syntax import marks, scan
from tardigate.syntax.grammar import Reader
from tardigate.syntax.patterns import backtracking, compiled

PIECES = ['"', "\\", "\n", "(*", "*)", "(", ")", "*", "/", "//", "/*", "*/", "`", "a", " ", "1'b0", "\\x "]
TEXTS = st.lists(st.sampled_from(PIECES), max_size=25).map("".join)


@pytest.mark.parametrize("name", ["verilog", "udp", "parts"])
def test_the_lexers_of_the_grammars(name: str) -> None:
    pattern = Reader(name, object()).scout._scan.pattern
    quick, slow = compiled(pattern, loses=False), compiled(pattern, loses=True)

    @given(TEXTS)
    def law(text: str) -> None:
        for at in range(len(text)):
            one, other = quick.match(text, at), slow.match(text, at)
            assert (one and one.span()) == (other and other.span())

    law()


@given(TEXTS)
def test_strings(text: str) -> None:
    for pattern in (marks.STRING, scan._STRING.pattern):
        quick, slow = compiled(pattern, loses=False), compiled(pattern, loses=True)
        data = text.encode()
        assert [m.span() for m in quick.finditer(data)] == [m.span() for m in slow.finditer(data)]


def test_only_the_sign_behind_a_group_is_left_out() -> None:
    assert backtracking(rb'"(?:[^"]++|\\.)*+"(?:a){0,4}+\)*+') == rb'"(?:[^"]++|\\.)*"(?:a){0,4}\)*+'


def test_no_pattern_with_such_a_repeat_is_compiled_by_other_means() -> None:
    for file in (Path(marks.__file__).parent).glob("*.py"):
        for line in file.read_text().splitlines():
            if "re.compile(" in line and file.name != "patterns.py":
                assert backtracking(line) == line, (file.name, line)
