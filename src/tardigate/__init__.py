"""Tardigate: when every net of a gate-level design settles, and which chain of gates sets the limit.

The public names; each is imported when it is first used, so that the command line starts at once.
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from tardigate.design import Design, Hop, Settled, SinkTimes, Trail, read, read_text
    from tardigate.source.diagnostic import Diagnostic
    from tardigate.source.faults import InputRefusedError, InternalFaultError
    from tardigate.source.span import Span

__version__ = "0.1.0"

__all__ = [
    "Design", "Diagnostic", "Hop", "InputRefusedError", "InternalFaultError", "Settled", "SinkTimes", "Span",
    "Trail", "__version__", "read", "read_text",
]  # fmt: skip

_HOMES = {
    "Diagnostic": "source.diagnostic",
    "InputRefusedError": "source.faults",
    "InternalFaultError": "source.faults",
    "Span": "source.span",
}


def __getattr__(name: str) -> Any:
    if name not in __all__:
        raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
    return getattr(import_module(f"tardigate.{_HOMES.get(name, 'design')}"), name)
