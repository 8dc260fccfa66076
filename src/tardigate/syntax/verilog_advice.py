"""What Verilog knows about a text that its grammar refuses: the usual slips, each with its own words.

Takes a fault as `recovery` found it, gives its diagnostic. Does not decide whether the text is refused.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Mapping
from functools import cache
from typing import NamedTuple

from tardigate.source.diagnostic import Diagnostic, Related, did_you_mean
from tardigate.source.placed import PlacedText
from tardigate.source.span import Span
from tardigate.syntax.later_words import LATER
from tardigate.syntax.recovery import END, Language, Scout, Token, Trouble, troubles
from tardigate.syntax.trouble import listed, near, opens_line
from tardigate.syntax.words import GATES, PROCEDURAL, RESERVED

FRIENDLY: Mapping[str, str] = {
    "IDENT": "a name", "NUMBER": "a number", "STRING": "a text in quotes", "SYSTEM": "a system function",
    "GATE": "a gate", "PULL": "a gate", "DIRECTION": "`input`, `output` or `inout`",
    "NET_TYPE": "a type of net", "VARIABLE": "a type of variable", "REG": "`reg`",
    "TRIREG": "a type of net", "SUPPLY0": "`supply0`", "SUPPLY1": "`supply1`", "STRENGTH0": "a strength",
    "STRENGTH1": "a strength", "HIGHZ0": "a strength", "HIGHZ1": "a strength",
    "CHARGE": "a size of charge", "EDGE": "an edge", "EDGE_LIST": "an edge",
    "PULSE_STYLE": "a style of pulses",
    "ARROW": "`=>` or `*>`", "OR": "`or`", "UNARY": "an operator", "AND_OR": "an operator",
    "SIGN": "an operator", "STAR": "an operator", "BINARY": "an operator", "LESS_EQUAL": "`<=`",
    "EVENT_AND": "`&&&`", "PLUS_COLON": "`+:`", "MINUS_COLON": "`-:`", "PLAIN_RUN": "an instance",
    "PLAIN_PORTS": "`(`", "OPAQUE": "an instance", END: "the end of the module",
}  # fmt: skip
"""What the grammar's terminals are called in messages."""

CLOSERS = frozenset({
    "else", "end", "endcase", "endconfig", "endfunction", "endgenerate", "endmodule", "endprimitive",
    "endspecify", "endtable", "endtask", "join", "default",
})  # fmt: skip
"""Words that end a block, or go on with what came before."""

STARTERS = frozenset({
    *GATES, *PROCEDURAL, "input", "output", "inout", "wire", "uwire", "tri", "tri0", "tri1", "wand", "wor",
    "triand", "trior", "trireg", "reg", "integer", "real", "realtime", "time", "event", "genvar", "parameter",
    "localparam", "defparam", "specparam", "assign", "pullup", "pulldown", "generate", "specify", "for", "if",
    "ifnone", "case", "casex", "casez", "\x01", "\x03",
}) - {"or"}  # fmt: skip
"""Words that begin a statement and stand nowhere else in a body; `or` parts events as well."""

LANGUAGE = Language(
    over=frozenset({
        ";", "begin", "end", "else", "generate", "endgenerate", "specify", "endspecify", "endcase", "\x01",
        "\x03",
    }),
    wholes=frozenset({"\x01", "\x03"}),
    starters=STARTERS,
    closers=CLOSERS,
    blocks={
        "begin": "end", "fork": "join", "case": "endcase", "generate": "endgenerate", "specify": "endspecify"
    },
    signs=(";", ",", ")", "]", "}", "(", "=", ":", "end", "endcase", "endgenerate", "endspecify"),
    name="IDENT",
    header="module m;",
)  # fmt: skip
"""How statements begin and end."""

BRACKETS = {")": "(", "]": "[", "}": "{"}

EXPRESSION = frozenset({"IDENT", "NUMBER", "STRING", "SYSTEM", "UNARY", "AND_OR", "SIGN", "(", "{"})
INFIX = frozenset({
    "BINARY", "AND_OR", "SIGN", "STAR", "LESS_EQUAL", "EVENT_AND", "PLUS_COLON", "MINUS_COLON", "ARROW",
    "?", "[", ".", "#",
})  # fmt: skip
"""What may begin an operand, and what may follow one; a list of all that helps nobody."""

SLIPS = {
    "IEEE 1364-2005 has no block on its own: leave `begin` and `end` out, or write `if (1) begin`.": (
        "; generate begin",
    ),
    "A `parameter` cannot stand in a generate block: write `localparam`.": (
        "; if (1) begin parameter",
        "; if (1) begin : b parameter",
    ),
    "Write the net in brackets: `.pin(net)`.": (
        "; u u(.p n", "; u u(.p ,", "; u u(.p )", "; u u(a, .p n", "; u u(a, .p ,", "; u u(a, .p )",
    ),
    "A name begins with a letter or `_`, or is escaped with a backslash.": (
        "; nand 1", "; u 1", "; u #2 1", "; wire 1", "; wire a, 1", "; input 1", "(input 1", "(1",
    ),
    "Write the target before the `=`: a net, bits of one, or several in `{ }`.": ("; assign 1", "; assign ~"),
    "Write the range before the name: `input [1:0] a`.": ("(input a [", "(input a, output b ["),
}  # fmt: skip
"""Hints, with what may stand behind a module's name and show the slip; its last token cannot stand there."""


FIRST = re.compile(rb"\\?\w+|[\x00-\x7f]|[\xc0-\xff][\x80-\xbf]*|.", re.DOTALL)
"""The first word or character of a text."""


class Site(NamedTuple):
    """Where a fault is: the text, and the map from the parsed text to it; both count bytes."""

    scout: Scout
    text: PlacedText
    where: Callable[[int], int]

    def span(self, token: Token) -> Span:
        """Return the place of a token."""
        start = self.where(token.start)
        return self.text.span(start, start + max(1, len(self.shown(token))))

    def shown(self, token: Token) -> str:
        """Return a token as it is written; of a stretch behind a mark, its first word."""
        if token.kind == END:
            return "endmodule"
        if token.kind and token.text not in ("\x01", "\x02", "\x03"):
            return token.text
        start = self.where(token.start)
        found = FIRST.match(self.text.data, start)
        return found[0].decode("utf-8", "replace") if found else ""

    def end(self, token: Token) -> Span:
        """Return the place of a token after which something is missing: its last sign for a mark."""
        if token.text != "\x02":
            return self.span(token)
        stop = self.where(token.stop)
        return self.text.span(stop - 1, stop)


def explain_all(
    scout: Scout, source: str, text: PlacedText, where: Callable[[int], int], most: int
) -> list[Diagnostic]:
    """Return the diagnostics of the first `most` faults of a module's text, the last counting on.

    `where` maps an offset in `source` to one in `text`.
    """
    site = Site(scout, text, where)
    found, more = troubles(scout, source, LANGUAGE, most)
    told = [_explain(site, trouble) for trouble in found]
    return [*told[:-1], told[-1].counted(1 + more)] if more else told


def _explain(site: Site, trouble: Trouble) -> Diagnostic:
    for judge in (_later_word, _slip, _missing, _reserved, _too_many, _unclosed):
        told = judge(site, trouble)
        if told is not None:
            return told
    return _plain(site, trouble, None)


def _plain(site: Site, trouble: Trouble, hint: str | None) -> Diagnostic:
    """Return the diagnostic of a fault that has no better words."""
    found = site.shown(trouble.found)
    repair = trouble.repair
    wanted = expected(site.scout, trouble.accepted)
    if repair is not None and repair.how == "replace" and found[:1] in "([{)]}=<:,;#.":
        wanted = f"`{repair.sign}`"
    if hint is None and repair is None and trouble.before and trouble.found.text in (*STARTERS, *CLOSERS):
        return _after(site, trouble, wanted)
    if hint is None and trouble.found.text == "=" and len(trouble.before) == 2:  # `asign y = a;`
        hint = did_you_mean(trouble.before[0].text, [*STARTERS])
    if hint is None and trouble.found.kind:
        hint = near(found, trouble.accepted, site.scout)
    return Diagnostic.of("V001", site.span(trouble.found), hint=hint, found=f"`{found}`", wanted=wanted)


def _slip(site: Site, trouble: Trouble) -> Diagnostic | None:
    """Tell a fault that one of the samples shows: the parser is as far, and the same kind of token comes."""
    hint = _slips(site.scout).get((trouble.state, trouble.found.kind))
    return _plain(site, trouble, hint) if hint else None


@cache
def _slips(scout: Scout) -> Mapping[tuple[int, str], str]:
    """Return the hints by where the parser is and what it finds."""
    found: dict[tuple[int, str], str] = {}
    for hint, samples in SLIPS.items():
        for sample in samples:
            (shown,), _ = troubles(scout, f"module m{sample}", LANGUAGE, 1)
            found[shown.state, shown.found.kind] = hint
    return found


def _later_word(site: Site, trouble: Trouble) -> Diagnostic | None:
    """Tell of a word of a later language where it is used as one: it leads, or stands before another name."""
    line = (*trouble.before, trouble.found, *trouble.after[:1])
    for at, token in enumerate(line[:-1]):
        if token.kind != "IDENT" or token.text not in LATER:
            continue
        if at == 0 or line[at + 1].kind == "IDENT" or line[at + 1].text in ("[", "signed", "begin", "@"):
            return Diagnostic.of("V153", site.span(token), hint=LATER[token.text], word=token.text)
    return None


def _missing(site: Site, trouble: Trouble) -> Diagnostic | None:
    """Tell of a sign or a closing word that is missing."""
    repair, before = trouble.repair, trouble.before
    if repair is None or repair.how != "insert":
        return None
    if repair.sign[:1].isalpha():
        opener = next((t for t in reversed(trouble.opened) if LANGUAGE.blocks[t.text] == repair.sign), None)
        return _not_closed(site, opener, repair.sign, trouble.found) if opener else None
    if not before:
        return None
    related: tuple[Related, ...] = ()
    if repair.sign in BRACKETS:
        opener = _opener(before, BRACKETS[repair.sign])
        related = (Related(site.span(opener), f"closes this `{opener.text}`"),) if opener else ()
    return _after(site, trouble, f"`{repair.sign}`", related)


def _after(site: Site, trouble: Trouble, wanted: str, related: tuple[Related, ...] = ()) -> Diagnostic:
    """Tell of what is missing behind the last token before a fault."""
    before, found = _last(site, trouble.before[-1]), site.shown(trouble.found)
    place = site.end(trouble.before[-1])
    return Diagnostic.of("V151", place, related=related, wanted=wanted, before=before, found=found)


def _last(site: Site, token: Token) -> str:
    return ")" if token.text == "\x02" else site.shown(token)


def _opener(before: tuple[Token, ...], sign: str) -> Token | None:
    """Return the last bracket of a kind that is not closed."""
    depth = 0
    for token in reversed(before):
        depth += (token.text in BRACKETS and BRACKETS[token.text] == sign) - (token.text == sign)
        if depth < 0:
            return token
    return None


def _not_closed(site: Site, opener: Token, closing: str, found: Token) -> Diagnostic:
    related = (Related(site.span(found), "at the latest before this"),)
    return Diagnostic.of("V155", site.span(opener), related=related, sign=opener.text, closing=closing)


def _unclosed(site: Site, trouble: Trouble) -> Diagnostic | None:
    """Tell of a bracket that is open where another statement begins, or where this one ends."""
    if trouble.found.text not in (*STARTERS, *CLOSERS, ";"):
        return None
    for closing, sign in BRACKETS.items():
        if site.scout.kinds.get(closing) in trouble.accepted:
            opener = _opener(trouble.before, sign)
            if opener is not None:
                return _not_closed(site, opener, closing, trouble.found)
    return None


def _reserved(site: Site, trouble: Trouble) -> Diagnostic | None:
    """Tell of a reserved word that stands where a name would do, on the line of what is before it."""
    found, repair = trouble.found, trouble.repair
    named = repair is not None and repair.how == "replace" and repair.sign == LANGUAGE.name
    if not named or found.text not in RESERVED or opens_line(site.text.data, site.where(found.start)):
        return None
    return Diagnostic.of("V154", site.span(found), word=found.text)


def _too_many(site: Site, trouble: Trouble) -> Diagnostic | None:
    """Tell of a sign without which the statement is whole."""
    repair = trouble.repair
    if repair is None or repair.how not in ("drop", "drop before"):
        return None
    token = trouble.found if repair.how == "drop" else trouble.before[-1]
    if not token.kind or not (token.text in "()[]{},;:.=" or token.text in CLOSERS):
        return None
    return Diagnostic.of("V152", site.span(token), sign=token.text)


def expected(scout: Scout, accepted: frozenset[str]) -> str:
    """Return what could stand there in at most four words or signs, the likely ones first."""
    of_text = {kind: scout.fixed.get(kind, kind) for kind in accepted}
    texts = set(of_text.values())
    left = set(accepted)
    names = dict(FRIENDLY)
    if "PLAIN_RUN" in accepted or {"assign", "GATE"} <= texts:
        left = {kind for kind in accepted if of_text[kind] in CLOSERS} | {"IDENT"}
        names["IDENT"] = "a statement"
    elif "ifnone" in texts:
        left = {kind for kind in accepted if of_text[kind] in CLOSERS} | {"IDENT"}
        names["IDENT"] = "an entry of the specify block"
    elif {"IDENT", "NUMBER", "UNARY"} <= texts:
        left = {kind for kind in accepted if of_text[kind] not in EXPRESSION} | {"IDENT"}
        names["IDENT"] = "an expression"
    elif "BINARY" in accepted or "." in texts:
        left = {kind for kind in accepted if kind not in INFIX and of_text[kind] not in INFIX}
    return listed(left or accepted, scout, names, most=4)
