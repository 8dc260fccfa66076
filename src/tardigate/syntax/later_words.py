"""Words that IEEE 1364-2005 leaves free and IEEE 1800 reserves, as far as they tell a text of the latter.

Data only: each word, and what to write in IEEE 1364-2005 in its place.
"""

from __future__ import annotations

_NET = "Leave `{word}` out: a net is declared with `wire` or by its direction alone."
_ALWAYS = "Write `always @(...)`; as a register only a clocked one with non-blocking assignments is read."
_TYPE = "There are no types but vectors of bits: write `wire` with a range."
_FILE = "Write the modules and their ports out in full; there is nothing like it in IEEE 1364-2005."
_CHECK = "Leave it out: it says nothing about structure."

LATER = {
    "logic": _NET.format(word="logic"), "bit": _NET.format(word="bit"), "var": _NET.format(word="var"),
    "always_ff": _ALWAYS, "always_comb": "Write `assign`, or gates.",
    "always_latch": "Write a latch as a part, and describe it in a parts file.",
    "byte": _TYPE, "int": _TYPE, "shortint": _TYPE, "longint": _TYPE, "typedef": _TYPE, "enum": _TYPE,
    "struct": _TYPE, "union": _TYPE, "packed": _TYPE, "string": _TYPE,
    "interface": _FILE, "modport": _FILE, "package": _FILE, "import": _FILE, "export": _FILE, "class": _FILE,
    "program": _FILE, "bind": _FILE, "checker": _FILE, "clocking": _CHECK, "property": _CHECK,
    "sequence": _CHECK, "assert": _CHECK, "assume": _CHECK, "cover": _CHECK, "final": _CHECK,
    "timeunit": "Write `timescale with the unit and the precision.",
    "timeprecision": "Write `timescale with the unit and the precision.",
    "unique": "Leave it out.", "priority": "Leave it out.", "return": _ALWAYS,
}  # fmt: skip
"""Word → what to write instead."""
