"""Bytes that no Verilog text may hold (IEEE 1364-2005, 3.1 to 3.7).

Takes placed text without comments, tells control characters anywhere and bytes beyond ASCII outside
strings. Does not look at what the text says.
"""

from __future__ import annotations

from tardigate.source.collector import MOST, Collector
from tardigate.source.placed import PlacedText
from tardigate.syntax.marks import STRING, late

_LEGAL_CONTROL = b"\t\n\f\r"
_FOREIGN = bytes(int(c > 0x7E or (c < 0x20 and c not in _LEGAL_CONTROL)) for c in range(256))
_WALK = late(STRING + rb"|\\[^\s\x00-\x1f\x7f-\xff]+|([\x00-\x08\x0b\x0e-\x1f\x7f])|([\x80-\xff]+)")
_CONTROL = late(rb"[\x00-\x08\x0b\x0e-\x1f\x7f]")


def check_bytes(text: PlacedText, collector: Collector) -> None:
    """Tell each illegal byte (V113, V114) with its place; one reading of the text when there is none."""
    if b"\x01" not in text.data.translate(_FOREIGN):
        return
    left = MOST + 1
    for token in _WALK().finditer(text.data):
        control = _CONTROL().search(token[0])
        if control:
            at = token.start() + control.start()
            collector.tell("V113", text.span(at), byte=f"{text.data[at]:02X}")
        elif token[2]:
            shown = token[2].decode("utf-8", "replace")
            collector.tell("V114", text.span(token.start(), token.end()), text=shown)
        else:
            continue
        left -= 1
        if not left:
            return
