"""The only file that opens a grammar.

Takes a language's name and a maker, gives its reader: LALR, one lexer for the whole text, the maker called as
each rule is reduced, so that no tree is walked. Does not know any language.
"""

from __future__ import annotations

import os
import sys
from functools import cached_property
from importlib.util import find_spec
from typing import TYPE_CHECKING, Any

from tardigate.source.faults import InternalFaultError
from tardigate.syntax import grammar_cache

if TYPE_CHECKING:
    from lark import Lark

    from tardigate.syntax.recovery import Scout

FORM = 2
"""Raised whenever `grammar_tables` writes something else for the same grammar."""


class Reader:
    """A language's grammar bound to a maker: `read` gives what the maker makes of the rule `start`.

    Tables run without lark (importing it takes longer than reading a usual file); lark builds them when they
    are not kept from a run before.
    """

    def __init__(self, name: str, maker: object) -> None:
        from tardigate.syntax.lalr import Machine

        self._text = _package_file("tardigate.grammars", f"{name}.lark")
        self._lark: Lark | None = None
        self._machine: Machine | None = None
        key = _key("tables\n" + self._text)
        kept = grammar_cache.fetch(name, key)
        if kept is not None:
            try:
                self._machine = Machine(kept, maker)
            except (KeyError, TypeError, ValueError, AttributeError):
                kept = None  # damaged: made again
        if self._machine is None:
            from tardigate.syntax.grammar_tables import tables_of

            tables = tables_of(self.lark)
            grammar_cache.keep(name, key, tables)
            self._machine = Machine(tables, maker)

    @property
    def lark(self) -> Lark:
        """The same grammar in lark, without the maker."""
        if self._lark is None:
            from lark import Lark

            self._lark = Lark(self._text, parser="lalr", lexer="basic", maybe_placeholders=True)
        return self._lark

    @property
    def words(self) -> frozenset[str]:
        """The fixed words of the language, signs left out."""
        assert self._machine is not None
        return self._machine.words

    def accepts(self, text: str) -> bool:
        """Tell whether a text follows the grammar."""
        from tardigate.syntax.lalr import NotInGrammarError

        assert self._machine is not None
        try:
            self._machine.run(text)
        except NotInGrammarError:
            return False
        return True

    def read(self, text: str) -> Any:
        """Return what the maker makes of a text. Raises NotInGrammarError when it is refused."""
        assert self._machine is not None
        return self._machine.run(text)

    @cached_property
    def scout(self) -> Scout:
        """The same tables, for telling what is wrong with a text that they refuse."""
        from tardigate.syntax.recovery import Scout

        assert self._machine is not None
        return Scout(self._machine.tables)


def _key(text: str) -> str:
    """Return what the tables of a grammar depend on; lark's version stands in its first module."""
    return "\n".join((str(FORM), sys.version, _package_file("lark", "__init__.py"), text))


def _package_file(package: str, name: str) -> str:
    """Return the text of a file in a package that is not imported for that (importlib.resources would be)."""
    spec = find_spec(package)
    places = (spec.submodule_search_locations if spec else None) or ()
    for place in places:
        data: bytes = spec.loader.get_data(os.path.join(place, name))  # type: ignore[union-attr]
        return data.decode("utf-8")
    raise InternalFaultError(f"the package {package} is not installed")
