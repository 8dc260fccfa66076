"""Compiles regular expressions that repeat groups possessively, on every Python that is supported.

Before 3.11.5 such a repeat could lose a match when something inside the group was tried twice (cpython issue
106052). There the sign behind the group is left out: the patterns here match the same without it, and only
take longer over what does not match.
"""

from __future__ import annotations

import re
import sys
from typing import AnyStr

_LOSES = sys.version_info < (3, 11, 5)
_POSSESSIVE = re.compile(r"(?<!\\)(\)(?:[*+?]|\{\d*,?\d*\}))\+")


def compiled(pattern: AnyStr, flags: int = 0, loses: bool = _LOSES) -> re.Pattern[AnyStr]:
    """Return a compiled pattern; `loses` says that possessive repeats of groups are not to be relied on."""
    return re.compile(backtracking(pattern) if loses else pattern, flags)


def backtracking(pattern: AnyStr) -> AnyStr:
    """Return a pattern without possessive repeats of groups."""
    if isinstance(pattern, bytes):
        return _POSSESSIVE.sub(r"\1", pattern.decode("latin-1")).encode("latin-1")
    return _POSSESSIVE.sub(r"\1", pattern)
