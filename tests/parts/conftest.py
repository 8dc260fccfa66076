"""Parts files in a line each: read them, or say what is told of them."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from tardigate.parts.library import Library
from tardigate.source.collector import Collector
from tardigate.source.files import SourceFile


def _library(*texts: str, condition: str | None = None) -> Library:
    collector = Collector()
    files = [SourceFile(f"{i}.parts", text.encode()) for i, text in enumerate(texts)]
    library = Library.read(files, condition, collector)
    collector.refuse()
    return library


def _told(*texts: str, condition: str | None = None) -> list[str]:
    collector = Collector()
    files = [SourceFile(f"{i}.parts", text.encode()) for i, text in enumerate(texts)]
    Library.read(files, condition, collector)
    return [f"{d.code} {d.span.path[0]}:{d.span.line}" if d.span else d.code for d in collector.all()]


@pytest.fixture(scope="session")
def library() -> Callable[..., Library]:
    """`library(text, …, condition="v5")`: the library; refuses what is told."""
    return _library


@pytest.fixture(scope="session")
def told() -> Callable[..., list[str]]:
    """`told(text, …)`: what is told, as `P008 0:3`: code, number of the file, line."""
    return _told
