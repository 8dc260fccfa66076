"""Parse tables kept between runs as JSON in the user's cache folder.

Takes a key and gives the tables kept under it, or None; takes tables and keeps them. A file that somebody
else could have written is not believed. Does not know what the tables mean.
"""

from __future__ import annotations

import json
import os
import stat
import sys
from contextlib import suppress
from pathlib import Path
from typing import Any
from zlib import crc32

SWITCH = "TARDIGATE_CACHE"
"""Environment variable; `off` keeps tardigate from reading and writing kept tables."""

VERSIONS = 4
"""Versions of a grammar whose tables are kept side by side."""


def folder() -> Path | None:
    """Return the folder of kept tables (XDG Base Directory specification), None where none is wanted."""
    if os.environ.get(SWITCH, "").lower() == "off":
        return None
    base = os.environ.get("XDG_CACHE_HOME", "")
    if os.path.isabs(base):
        return Path(base, "tardigate")
    home = os.path.expanduser("~")
    return Path(home, ".cache", "tardigate") if os.path.isabs(home) else None


def fetch(name: str, key: str) -> Any | None:
    """Return what was kept under `key`, or None when there is nothing that can be believed."""
    place = folder()
    if place is None:
        return None
    try:
        if not _ours(os.lstat(place), stat.S_ISDIR):
            return None
        handle = os.open(place / _file(name, key), os.O_RDONLY | getattr(os, "O_NOFOLLOW", 0))
        with os.fdopen(handle, "rb") as file:
            if not _ours(os.fstat(handle), stat.S_ISREG):
                return None
            text = file.read()
        kept = json.loads(text)
    except (OSError, ValueError, RecursionError):
        return None
    return kept["tables"] if isinstance(kept, dict) and kept.get("key") == key else None


def keep(name: str, key: str, tables: Any) -> None:
    """Keep tables under `key`; say nothing where that is not possible."""
    place = folder()
    if place is None:
        return
    part = place / f"{_file(name, key)}.{os.getpid()}.part"
    try:
        place.mkdir(mode=0o700, parents=True, exist_ok=True)
        if not _ours(os.lstat(place), stat.S_ISDIR):
            return
        text = json.dumps({"key": key, "tables": tables}, separators=(",", ":"))
        handle = os.open(part, os.O_WRONLY | os.O_CREAT | os.O_EXCL, 0o600)
        with os.fdopen(handle, "w", encoding="ascii") as file:
            file.write(text)
        os.replace(part, place / _file(name, key))
        _forget_oldest(place, name)
    except OSError:
        with suppress(OSError):
            part.unlink(missing_ok=True)


def _file(name: str, key: str) -> str:
    return f"{name}-{crc32(key.encode()):08x}.json"  # the key itself is compared, in the file


def _forget_oldest(place: Path, name: str) -> None:
    """Remove the oldest tables of other versions, so that the folder does not grow for ever."""
    files = sorted(place.glob(f"{name}-*.json"), key=lambda file: file.stat().st_mtime)
    for old in files[:-VERSIONS]:
        old.unlink(missing_ok=True)


def _ours(status: os.stat_result, form: Any) -> bool:
    if not form(status.st_mode):
        return False
    if sys.platform == "win32":  # no owner and mode bits to ask there
        return True
    return status.st_uid == os.geteuid() and not status.st_mode & (stat.S_IWGRP | stat.S_IWOTH)
