"""What a command answers, before anything is printed. Data only."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

from rich.text import Text

from tardigate.source.diagnostic import Diagnostic


@dataclass(frozen=True, slots=True)
class Answer:
    """Makes the lines of the view (or gives text to be printed as it is) and the body of the JSON object."""

    view: Callable[[], list[Text] | str]
    body: Callable[[], dict[str, Any]]
    warnings: tuple[Diagnostic, ...] = ()
