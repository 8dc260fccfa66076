"""Where a placed text came from behind its pieces: macros' definitions and `include` directives.

Takes notes while a text is put together, and answers when a place is shown. Knows of Verilog only how a use
of a macro is written.
"""

from __future__ import annotations

import re
from bisect import bisect_right
from collections.abc import Iterator, Mapping
from itertools import islice
from typing import NamedTuple, Protocol

from tardigate.source.files import SourceFile
from tardigate.source.span import Span

USE = re.compile(rb"`(\\[^\s]+|[A-Za-z_][\w$]*)")
"""A use of a macro; its name may be escaped."""

TOKEN = re.compile(rb"\\[^\s]+|[\w$']+|\S|\s")
MOST_MACROS = 50
"""Definitions that are searched for a text."""

MOST_INCLUDES = 8
"""Files in a chain of includes that are shown."""


class Stretch(Protocol):
    """Bytes `start` to before `stop` of a file."""

    @property
    def file(self) -> SourceFile:
        """The file."""

    @property
    def start(self) -> int:
        """Its first byte."""

    @property
    def stop(self) -> int:
        """Its end."""


class Named(Protocol):
    """A macro, as far as it is shown."""

    @property
    def defined(self) -> Stretch:
        """Its name, in its definition."""


class Written(NamedTuple):
    """A definition: its name, and what formal arguments it has, from `at` to `start`, then its text."""

    file: SourceFile
    name: bytes
    at: int
    start: int
    stop: int


class Traces:
    """Definitions and includes by the offset in the placed text from which they hold.

    `earlier` are the macros that hold at the text's beginning.
    """

    def __init__(self, earlier: Mapping[bytes, Named]) -> None:
        self._earlier = earlier
        self._definitions: dict[bytes, list[tuple[int, Stretch]]] = {}
        self._includes: dict[str, list[tuple[int, Stretch]]] = {}

    def define(self, at: int, name: bytes, place: Stretch) -> None:
        """Note a definition whose name stands at `place`."""
        self._definitions.setdefault(name, []).append((at, place))

    def include(self, at: int, path: str, place: Stretch) -> None:
        """Note the directive that includes a file."""
        self._includes.setdefault(path, []).append((at, place))

    @property
    def macros(self) -> bool:
        """Whether there can be uses of macros."""
        return bool(self._definitions or self._earlier)

    def written(self, at: int, use: bytes, word: bytes) -> tuple[tuple[Span, str], ...]:
        """Return where a word of what a use expands to is written: in its macro, or in one used there.

        Where it cannot be told, the definition of the macro used.
        """
        first: Written | None = None
        for macro in self._reached(at, use):
            first = first or macro
            hits = list(islice(alone(word).finditer(macro.file.data, macro.start, macro.stop), 2))
            if len(hits) > 1 and not word[:1].isalnum():
                break  # which of the signs is meant cannot be told
            for found in hits[:1]:
                name = macro.name.decode("utf-8", "replace")
                label = f"written here, in the definition of `{name}`"
                return ((macro.file.span(found.start(), found.end()), label),)
        if first is None:
            return ()
        label = f"`{first.name.decode('utf-8', 'replace')}` is defined here"
        own = TOKEN.match(first.file.data, first.at)
        return ((first.file.span(first.at, own.end() if own else first.start), label),)

    def _reached(self, at: int, use: bytes) -> Iterator[Written]:
        """Yield the definition behind a use, and those that it uses in turn, the nearest first."""
        waiting, seen = [use], set[bytes]()
        while waiting and len(seen) < MOST_MACROS:
            name = waiting.pop(0)
            macro = None if name in seen else self._definition(at, name)
            seen.add(name)
            if macro is not None:
                yield macro
                uses = USE.finditer(macro.file.data, macro.start, macro.stop)
                waiting += [found[1].removeprefix(b"\\") for found in uses]

    def _definition(self, at: int, name: bytes) -> Written | None:
        place = _last(self._definitions.get(name, []), at)
        if place is None and name in self._earlier:
            place = self._earlier[name].defined
        if place is None:
            return None
        data = place.file.data
        start = stop = _behind_formals(data, place.stop)
        while True:
            stop = data.find(b"\n", stop)
            if stop < 0:
                return Written(place.file, name, place.start, start, len(data))
            if not data[:stop].endswith((b"\\", b"\\\r")):
                return Written(place.file, name, place.start, start, stop)
            stop += 1

    def included(self, at: int, path: str) -> tuple[tuple[Span, str], ...]:
        """Return the directives that led to a file, the nearest first."""
        found: list[tuple[Span, str]] = []
        while len(found) < MOST_INCLUDES and (place := _last(self._includes.get(path, []), at)) is not None:
            found.append((place.file.span(place.start, place.stop), "included from here"))
            path = place.file.path
        return tuple(found)


def _behind_formals(data: bytes, at: int) -> int:
    """Return where a macro's text begins when its name ends at `at`: behind its formal arguments, if any."""
    close = data.find(b")", at) if data[at : at + 1] == b"(" else -1
    return close + 1 if close >= 0 else at


def alone(word: bytes) -> re.Pattern[bytes]:
    """Return the pattern of a token that is no part of a longer word."""
    inside = re.escape(word)
    return re.compile(rb"(?<![\w$])" + inside + rb"(?![\w$])" if re.match(rb"[\w$]", word) else inside)


def _last(noted: list[tuple[int, Stretch]], at: int) -> Stretch | None:
    """Return what was noted last up to an offset."""
    number = bisect_right(noted, at, key=lambda note: note[0])
    return noted[number - 1][1] if number else None
