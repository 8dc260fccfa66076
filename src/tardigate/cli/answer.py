"""What a command answers, before anything is printed. Data only."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any, NamedTuple

from rich.text import Text

from tardigate.source.diagnostic import Diagnostic


class Answer(NamedTuple):
    """Makes the lines of the view (or gives text to be printed as it is) and the body of the JSON object.

    `remark` is a line for standard error, which JSON leaves out.
    """

    view: Callable[[], list[Text] | str]
    body: Callable[[], dict[str, Any]]
    warnings: tuple[Diagnostic, ...] = ()
    remark: str | None = None
