"""What a specify block's items need to know of the module that they stand in. An interface, no code.

The netlist house answers: it knows names, constants and what the module's body does. Bits are those of the
part under work (see `model`), nodes those of its network.
"""

from __future__ import annotations

from typing import Protocol

from tardigate.parts.function import Network
from tardigate.parts.kind import Way
from tardigate.parts.model import Place
from tardigate.parts.source_delay import Triple
from tardigate.syntax import tree

INNER = -1
"""Stands for a bit of a net that is no port."""


class CellDesk(Protocol):
    """Answers for one module; what it cannot answer it tells."""

    network: Network

    def terminal(self, reference: tree.Reference) -> tuple[int, ...]:
        """Return the bits of a terminal, least significant first, `INNER` for each that is no port's.

        Empty after telling that the name or the index is not there.
        """

    def way(self, bit: int) -> Way:
        """Return the way of a port's bit."""

    def node(self, condition: tree.Expression) -> int:
        """Return the node of a condition's least significant bit (14.2.4.1), a free one when unknown."""

    def triple(self, value: tree.Expression, negative: bool = False) -> Triple | None:
        """Return a time in fs, None after telling what is wrong with it; `negative`: it may be so."""

    def place(self, at: int, length: int = 1) -> Place:
        """Return a place in the module's text."""

    def tell(self, code: str, at: int, length: int = 1, **words: object) -> None:
        """Tell a fault."""
