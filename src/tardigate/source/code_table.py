"""The one table of diagnostic codes.

Takes a code, gives its entry, read from the TOML file of its letter in `codes/` when it is first asked for.
Each entry has a headline (a format string), a severity, a hint, a long text, and a faulty and a mended
sample that the tests run.
"""

from __future__ import annotations

from collections.abc import Mapping
from functools import cache
from types import MappingProxyType
from typing import NamedTuple

FILES = {"U": "use", "V": "verilog", "P": "parts", "N": "netlist", "G": "graph"}
"""First letter of a code → the file of its entry: use of the tool, Verilog, parts file, netlist, graph."""


class Entry(NamedTuple):
    """One code. `text` is what `explain` prints; samples map file names to texts, `arguments` to words."""

    code: str
    severity: str
    headline: str
    hint: str
    text: str
    faulty: Mapping[str, str] = MappingProxyType({})
    mended: Mapping[str, str] = MappingProxyType({})


@cache
def _read(letter: str) -> Mapping[str, Entry]:
    import tomllib  # only when something is told, and so the next
    from importlib import resources

    source = resources.files("tardigate.source.codes").joinpath(f"{FILES[letter]}.toml").read_text("utf-8")
    return {
        code: Entry(
            code,
            entry.get("severity", "error"),
            entry["headline"],
            entry.get("hint", ""),
            entry["text"].strip(),
            entry.get("faulty", {}),
            entry.get("mended", {}),
        )
        for code, entry in tomllib.loads(source).items()
    }


def look_up(code: str) -> Entry:
    """Return the entry of a code. Raises KeyError when there is none."""
    if code[:1] not in FILES:
        raise KeyError(code)
    return _read(code[:1])[code]


def every_code() -> list[str]:
    """Return all codes, sorted."""
    return sorted(code for letter in FILES for code in _read(letter))
