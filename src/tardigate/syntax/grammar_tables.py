"""A parser that lark has built, as plain data that `lalr` runs and JSON keeps.

Takes lark's parser (LALR, basic lexer), gives its tables and the shape of its rules; how children are kept
follows lark's documented tree building (filtered tokens, `_` rules inlined, `?` rules, `[]` giving None).
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from lark import Lark
    from lark.grammar import Rule, Symbol


def tables_of(built: Lark) -> dict[str, Any]:
    """Return the tables: `states`: terminal or rule → next state, or -1 - rule to reduce."""
    from lark.parsers.lalr_analysis import Shift

    table = built.parser.parser._parse_table
    rules = list(built.rules)
    number = {rule: i for i, rule in enumerate(rules)}
    states = [
        {
            name: (arg if action is Shift else -1 - number[arg])
            for name, (action, arg) in table.states[state].items()
        }
        for state in range(len(table.states))
    ]
    kept = {
        symbol.name
        for rule in rules
        for symbol in rule.expansion
        if symbol.is_term and (rule.options.keep_all_tokens or not _filtered(symbol))
    }
    pattern, words = _lexer(built)
    names = [terminal.name for terminal in built.terminals]
    return {
        "states": states,
        "start": table.start_states["start"],
        "end": table.end_states["start"],
        "rules": [_rule(rule, built.options.maybe_placeholders) for rule in rules],
        "pattern": pattern,
        "words": words,
        "ignored": list(built.ignore_tokens),
        "terminals": names,
        "fixed": {t.name: t.pattern.value for t in built.terminals if t.pattern.type == "str"},
        "unseen": sorted(set(names) - kept),
    }


def _lexer(built: Lark) -> tuple[str, dict[str, dict[str, str]]]:
    """Return one pattern for all terminals, and for those that fixed words match too, the words."""
    from lark.lexer import BasicLexer

    lexer = built.parser.lexer
    assert isinstance(lexer, BasicLexer)
    scanner = lexer.scanner
    pattern = "|".join(f"(?P<{t.name}>{t.pattern.to_regexp()})" for t in scanner.terminals)
    words: dict[str, dict[str, str]] = {}
    for name, callback in lexer.callback.items():
        inner = getattr(callback, "scanner", None)
        assert inner is not None  # no other callbacks: none are given to lark
        words[name] = {t.pattern.value: t.name for t in inner.terminals}
    return pattern, words


def _rule(rule: Rule, placeholders: bool) -> dict[str, Any]:
    name = str(rule.origin.name)
    return {
        "name": name,
        "size": len(rule.expansion),
        "calls": str(rule.alias or rule.options.template_source or name),
        "inlined": name.startswith("_") and not rule.alias,
        "lone": bool(rule.options.expand1 and not rule.alias),
        "takes": _takes(rule, placeholders),
    }


def _takes(rule: Rule, placeholders: bool) -> list[int | None] | None:
    """Return which children are kept and where None stands; None when all are kept as they are."""
    gaps = list(rule.options.empty_indices) if placeholders and rule.options.empty_indices else []
    takes: list[int | None] = []
    place = 0
    for gap in gaps or [False] * len(rule.expansion):
        if gap:
            takes.append(None)
            continue
        symbol = rule.expansion[place]
        if not symbol.is_term and symbol.name.startswith("_"):
            takes.append(-1 - place)
        elif rule.options.keep_all_tokens or not _filtered(symbol):
            takes.append(place)
        place += 1
    return None if takes == list(range(len(rule.expansion))) else takes


def _filtered(symbol: Symbol) -> bool:
    """Say whether a symbol is a token that stands in the rule as a plain text, and so is not kept."""
    return bool(symbol.is_term and getattr(symbol, "filter_out", False))
