"""Rows of operands and operators to trees (clause 5.1.2, table 5-4)."""

from __future__ import annotations

import pytest
from hypothesis import given, strategies as st

from tardigate.syntax.precedence import LEVELS, resolve
from tardigate.syntax.tree import Binary, Expression, Reference


def _text(node: Expression) -> str:
    assert isinstance(node, Binary | Reference)
    return (
        node.path[0]
        if isinstance(node, Reference)
        else f"({_text(node.left)}{node.operator}{_text(node.right)})"
    )


def _row(words: list[str]) -> str:
    row: list[Expression | str] = [
        word if at % 2 else Reference((word,), (), at) for at, word in enumerate(words)
    ]
    return _text(resolve(row, list(range(1, len(words), 2))))


@pytest.mark.parametrize(
    ("words", "tree"),
    [
        ("a", "a"),
        ("a - b - c", "((a-b)-c)"),
        ("a | b & c", "(a|(b&c))"),
        ("a & b | c", "((a&b)|c)"),
        (
            "a || b && c | d ^ e & f == g < h << i + j * k ** l",
            "(a||(b&&(c|(d^(e&(f==(g<(h<<(i+(j*(k**l)))))))))))",
        ),
        ("a ** b ** c", "((a**b)**c)"),
        ("a ^ b ~^ c", "((a^b)~^c)"),
        ("a << b + c", "(a<<(b+c))"),
        ("a == b & c == d", "((a==b)&(c==d))"),
    ],
)
def test_order_of_precedence(words: str, tree: str) -> None:
    assert _row(words.split()) == tree


@given(st.lists(st.sampled_from(sorted(LEVELS)), max_size=9))
def test_weakest_operator_farthest_right_is_the_root(operators: list[str]) -> None:
    words = [word for at, operator in enumerate(operators) for word in (f"n{at}", operator)]
    words.append("last")

    def slow(row: list[str]) -> str:
        if len(row) == 1:
            return row[0]
        levels = [LEVELS[operator] for operator in row[1::2]]
        at = max(i for i, level in enumerate(levels) if level == min(levels))
        return f"({slow(row[: 2 * at + 1])}{row[2 * at + 1]}{slow(row[2 * at + 2 :])})"

    assert _row(words) == slow(words)


def test_a_row_of_a_hundred_thousand() -> None:
    row: list[Expression | str] = [Reference(("a",), (), 0)]
    for _ in range(100_000):
        row += ["|", Reference(("b",), (), 0)]
    root = resolve(row, [0] * 100_000)
    depth = 0
    while isinstance(root, Binary):
        root, depth = root.left, depth + 1
    assert depth == 100_000
