"""Names and places of the flat design's nets and part instances, rebuilt when asked for.

Takes numbers, gives hierarchical names (`alu.u3.carry[2]`) and spans, and finds numbers by name.
"""

from __future__ import annotations

import re
from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from tardigate.netlist.flat import CONSTANT_NAMES, CONSTANTS, Flat
from tardigate.netlist.template import Template
from tardigate.source.diagnostic import did_you_mean
from tardigate.source.placed import PlacedText
from tardigate.source.span import Span

_DECLARES = re.compile(
    rb"\s*(?:wire|uwire|tri|tri0|tri1|triand|trior|trireg|wand|wor|reg|input|output|inout|module)\b"
)
"""A statement that declares nets."""

MOST_NEAR = 5000
"""Nets among which the nearest is looked for."""

_WORD = re.compile(rb"\\[^ \t\r\n\f\v]+|[A-Za-z0-9_$]+")


def positions(column: Sequence[str], text: str) -> list[int]:
    """Return where a column of names has `text`, or bits of it (`bus[3]` for `bus`)."""
    find = getattr(column, "positions", None)
    if find is not None:
        found: list[int] = find(text)
        return found
    return [
        at
        for at, name in enumerate(column)
        if name == text or (name.startswith(f"{text}[") and name[-1] == "]")
    ]


class Names:
    """The names of one flat design."""

    def __init__(self, flat: Flat) -> None:
        self._flat = flat
        self._paths: dict[int, str] = {0: ""}

    def scope(self, scope: int) -> str:
        """Return the path of a scope with a dot at its end; the top's is empty."""
        chain = []
        while scope not in self._paths:
            chain.append(scope)
            scope = int(self._flat.scope_parent[scope])
        path = self._paths[scope]
        for below in reversed(chain):
            path = self._paths[below] = f"{path}{self._flat.scope_name[below]}."
        return path

    def net(self, net: int) -> str:
        """Return a net's name, in the outermost scope that has it."""
        if net < CONSTANTS:
            return CONSTANT_NAMES[net]
        raw = int(self._flat.net_raw[net])
        scope = int(np.searchsorted(self._flat.scope_net, raw, "right")) - 1
        template = self._template(scope)
        return f"{self.scope(scope)}{template.net_names[raw - int(self._flat.scope_net[scope])]}"

    def net_place(self, net: int) -> Span | None:
        """Return where a net is declared; None for a constant."""
        if net < CONSTANTS:
            return None
        raw = int(self._flat.net_raw[net])
        scope = int(np.searchsorted(self._flat.scope_net, raw, "right")) - 1
        template = self._template(scope)
        local = raw - int(self._flat.scope_net[scope])
        return _word_span(template.text, int(template.net_place[local]))

    def meant(self, net: int, driven: NDArray[np.bool_]) -> str | None:
        """Return the hint that names the nearest driven net of the module in which a net is only used.

        `driven` bool[nets]. None for a net that is declared, where none is near, and for a constant.
        """
        raw = int(self._flat.net_raw[net])
        scope = int(np.searchsorted(self._flat.scope_net, raw, "right")) - 1
        template, first = self._template(scope), int(self._flat.scope_net[scope])
        data, at = template.text.data, int(template.net_place[raw - first])
        if net < CONSTANTS or _DECLARES.match(data, data.rfind(b";", 0, at) + 1):
            return None
        here = (self._flat.net_raw >= first) & (self._flat.net_raw < first + len(template.net_names))
        here[:CONSTANTS] = False
        beside = self._flat.net_raw[np.flatnonzero(here & driven)][:MOST_NEAR]
        return did_you_mean(template.net_names[raw - first], [template.net_names[i - first] for i in beside])

    def _template(self, scope: int) -> Template:
        return self._flat.templates[int(self._flat.scope_template[scope])]

    def _inst(self, inst: int) -> tuple[int, int]:
        scope = int(np.searchsorted(self._flat.scope_inst, inst, "right")) - 1
        return scope, inst - int(self._flat.scope_inst[scope])

    def instance(self, inst: int) -> str:
        """Return a part instance's name; one without a name is called by its kind and line, `and:12`."""
        scope, local = self._inst(inst)
        template = self._template(scope)
        name = template.inst_names[local]
        if not name:
            kind = self._flat.kinds[self._flat.inst_kind[inst]].name.replace(" ", ":")
            name = f"{kind}:{template.text.span(int(template.inst_place[local])).line}"
        return self.scope(scope) + name

    def place(self, inst: int) -> Span:
        """Return where a part instance is written."""
        scope, local = self._inst(inst)
        template = self._template(scope)
        return _word_span(template.text, int(template.inst_place[local]))


def _word_span(text: PlacedText, at: int) -> Span:
    """Return the span of the name that begins at an offset, or of the sign there."""
    found = _WORD.match(text.data, at)
    return text.span(at, found.end() if found else at + 1)
