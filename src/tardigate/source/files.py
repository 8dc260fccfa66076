"""Files as they were read.

Takes paths, gives bytes with their paths. Does not look at what is written in them.
"""

from __future__ import annotations

from pathlib import Path
from typing import NamedTuple

from tardigate.source.diagnostic import Diagnostic
from tardigate.source.faults import InputRefusedError
from tardigate.source.span import Span, span_in

LARGEST_FILE = 1 << 30
"""Bytes; offsets are kept in 32 bits further on."""

LOOKED_AT = 4096
"""Bytes that tell whether a file is a text."""

_CONTROL = bytes(byte for byte in range(32) if byte not in b"\t\n\v\f\r")


class SourceFile(NamedTuple):
    """One file: its path as the user wrote it, and its bytes."""

    path: str
    data: bytes

    def span(self, start: int, stop: int) -> Span:
        """Return the span of the bytes from `start` to before `stop`."""
        return span_in(self.path, self.data, start, stop)


def read_file(path: str | Path, asked_at: Span | None = None) -> SourceFile:
    """Read a file; `asked_at` is the place that asks for it, where one does.

    Raises InputRefusedError (U101: cannot be read, U102: too large, U110: no text).
    """
    try:
        size = Path(path).stat().st_size
        if size > LARGEST_FILE:
            raise InputRefusedError((Diagnostic.of("U102", asked_at, path=str(path), size=size),))
        data = Path(path).read_bytes()
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or str(error)
        raise InputRefusedError((Diagnostic.of("U101", asked_at, path=str(path), reason=reason),)) from None
    foreign = no_text(data)
    if foreign:
        raise InputRefusedError((Diagnostic.of("U110", asked_at, path=str(path), reason=foreign),))
    return SourceFile(str(path), data)


def no_text(data: bytes) -> str:
    """Return why some bytes are no text of one byte a character; empty when they may be one."""
    if data[:2] in (b"\xff\xfe", b"\xfe\xff"):
        return "it is UTF-16"
    begin = data[:LOOKED_AT]
    odd = len(begin) - len(begin.translate(None, _CONTROL))
    many = odd > 4 + len(begin) // 20
    return f"{odd} of its first {len(begin)} bytes are control characters" if many else ""
