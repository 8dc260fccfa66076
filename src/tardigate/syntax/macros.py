"""Macros: their definitions and the arguments of their uses (IEEE 1364-2005, 19.3.1).

Takes text after `` `define `` or after a macro's name, gives a macro or raw arguments. Does not expand.
"""

from __future__ import annotations

import re
from typing import NamedTuple

from tardigate.syntax.marks import NAME, STRING, comment_end, late, plain_name
from tardigate.syntax.placing import Use

ARGUMENT = re.compile(rb"\x01(\d+)\x01")
"""Stands in a macro's body for the argument of that number; no source text can hold the byte 0x01 there."""

_GAP = rb"(?:[ \t\f]|\\\r?\n)*+"
_FORMAL = rb"(?:[A-Za-z_][A-Za-z0-9_$]*)"
_FORMALS = late(
    rb"\(" + _GAP + rb"(?:(" + _FORMAL + rb"(?:" + _GAP + rb"," + _GAP + _FORMAL + rb")*)" + _GAP + rb")?\)"
)
_ESCAPED = rb"\\(?:[^\s\\]|\\(?!\r?\n))++"
_COMMENT = rb"//(?:[^\\\n]++|\\(?!\r?\n))*+|/\*(?:[^*]++|\*(?!/))*+\*/"
_BODY = late(
    rb'(?:[^\\"/\n]++|\\\r?\n|' + _ESCAPED + rb"|\\|" + STRING + rb"|" + _COMMENT + rb"|/(?![/*]))*+"
)
_TOKEN = late(
    rb"(?P<keep>" + STRING + rb"|" + _ESCAPED + rb"|\d[\w$]*|'[sS]?[bodhBODH]\s*[\w?]+|\$[\w$]+)"
    rb"|(?P<comment>" + _COMMENT + rb")|(?P<joint>\\\r?\n)|(?P<name>[A-Za-z_][\w$]*)"
)
_CONTROL = late(rb"[\x00-\x08\x0b\x0e-\x1f\x7f]")
_CALM = late(rb'(?:[^"\\/()\[\]{},]++|' + STRING + rb"|\\[^\s]*+|/(?![/*]))*+")


class Macro(NamedTuple):
    """A macro: `formals` is None when it takes no arguments; `body` is free of comments and joined lines.

    `calm` says that nothing in the body is left to expand. `defined` is where its name was defined.
    """

    name: bytes
    formals: tuple[bytes, ...] | None
    body: bytes
    calm: bool
    defined: Use


class Definition(NamedTuple):
    """What stands after `` `define ``: the macro or the reason why there is none; where its text ends."""

    macro: Macro | None
    reason: str
    end: int


class Arguments(NamedTuple):
    """The raw arguments of a use, comments blanked; `steps` counts the brackets and commas passed."""

    raw: tuple[bytes, ...]
    end: int
    steps: int


def read_definition(data: bytes, pos: int, place: Use) -> Definition:
    """Read a definition from behind the word `define`; a line that ends in a backslash goes on in the next.

    `place` is the directive, for a text that is itself an expansion; in a file the name's own place is told.
    """
    while data[pos : pos + 1] in (b" ", b"\t"):
        pos += 1
    name = NAME.match(data, pos)
    body = _BODY().match(data, name.end() if name else pos)
    assert body is not None
    if not name:
        return Definition(None, "a name must follow", body.end())
    formals: tuple[bytes, ...] | None = None
    start = name.end()
    if data[start : start + 1] == b"(":
        listed = _FORMALS().match(data, start)
        if not listed:
            return Definition(None, "the list of arguments is not names between commas", body.end())
        formals = tuple(re.findall(_FORMAL, listed[1] or b""))
        start = listed.end()
        if len(set(formals)) < len(formals):
            return Definition(None, "an argument is named twice", body.end())
        body = _BODY().match(data, start)
        assert body is not None
    if _holds_control(body[0]):
        return Definition(None, "a control character stands in its text", body.end())
    text = _template(body[0], formals or ())
    if place.file.data is data:
        place = Use(place.file, name.start(), name.end())
    return Definition(Macro(plain_name(name[0]), formals, text, b"`" not in text, place), "", body.end())


def _template(text: bytes, formals: tuple[bytes, ...]) -> bytes:
    """Return a macro's text with markers for its arguments, without comments and joints of lines."""
    numbers = {name: b"\x01%d\x01" % number for number, name in enumerate(formals)}

    def replace(token: re.Match[bytes]) -> bytes:
        if token.lastgroup == "name":
            return numbers.get(token[0], token[0])
        if token.lastgroup == "keep":
            return token[0]
        return b" " if token.lastgroup == "comment" else b"\n"

    return trim(_TOKEN().sub(replace, text))


def _holds_control(text: bytes) -> bool:
    """Return whether a control character stands outside comments; 0x01 would be taken for a marker."""
    if not _CONTROL().search(text):
        return False
    bare = _TOKEN().sub(lambda token: b" " if token["comment"] else token[0], text)
    return bool(_CONTROL().search(bare))


def trim(text: bytes) -> bytes:
    """Return a text without blanks around it; a space stays behind an escaped identifier, which it ends."""
    bare = text.strip()
    return bare + b" " if b"\\" in bare and b"\\" in bare.rsplit(None, 1)[-1] else bare


def arguments_begin(data: bytes, pos: int) -> int:
    """Return the offset past the bracket that opens the arguments of a use, 0 when there is none."""
    while data[pos : pos + 1] in (b" ", b"\t", b"\n", b"\r", b"\f"):
        pos += 1
    return pos + 1 if data[pos : pos + 1] == b"(" else 0


def read_arguments(data: bytes, pos: int) -> Arguments | None:
    """Read the arguments of a use from behind the opening bracket; None when they do not end.

    A comma inside brackets of any kind, a string or an escaped identifier does not part arguments.
    """
    raw: list[bytes] = []
    chunks: list[bytes] = []
    round_, other, steps = 0, 0, 0
    while True:
        calm = _CALM().match(data, pos)
        assert calm is not None
        chunks.append(calm[0])
        pos = calm.end()
        mark = data[pos : pos + 1]
        steps += 1
        if mark in (b"", b'"'):
            return None
        if mark == b"/":
            pos = comment_end(data, pos)
            if pos < 0:
                return None
            chunks.append(b" ")
            continue
        pos += 1
        if not round_ and (mark == b")" or (mark == b"," and other <= 0)):
            raw.append(trim(b"".join(chunks)))
            chunks = []
            if mark == b")":
                return Arguments(tuple(raw), pos, steps)
            continue
        chunks.append(mark)
        round_ += (mark == b"(") - (mark == b")")
        other += (mark in b"[{") - (mark in b"]}")
