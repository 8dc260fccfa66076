"""What a flat file calls each net, its declarations, and second names for nets.

Takes a flat design, gives the texts that statements are put together from. A second name is a net of its own
that an instance of a module with one net at two ports (IEEE 1364-2005 clause 12.3.3) makes one with the first
net, or with a constant.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from tardigate.netlist.flat import CONSTANTS, PULLS, Flat, Port
from tardigate.netlist.names import Names
from tardigate.netlist.write_ports import WAY_WORDS, Header, Vector, plan_header
from tardigate.netlist.write_words import instance_names, net_names, spelled, unlike


class Sheet:
    """The names of one flat file.

    `names` are those of the nets in the design. `net` holds a text for each net (object[nets + 1], the last,
    empty, for OPEN); in `alone` constants stand in braces, which keeps an operator of constants an operator.
    `instance` holds the part instances' names, a space behind each.
    """

    def __init__(self, flat: Flat) -> None:
        names = Names(flat)
        self.flat, self._types = flat, net_types(flat)
        self.names = net_names(flat, names)
        self.header: Header = plan_header(flat, self.names, self._types)
        self._vectors = [entry for entry in self.header.entries if isinstance(entry, Vector)]
        texts, identifiers = self._net_texts()
        self.net = np.array([*texts, ""], object)
        self.alone = self.net.copy()
        self.alone[:CONSTANTS] = [f"{{{text}}}" for text in texts[:CONSTANTS]]
        named = instance_names(flat, names)
        new = unlike([name for name in named if name], identifiers)
        self._taken = identifiers.union(new)
        fresh = iter(new)
        self.instance = np.array([_apart(next(fresh)) if name else "" for name in named], object)
        self._second: dict[tuple[int, int], str] = {}
        self._extra: list[tuple[str, str, str]] = []
        """Declaration, text and the text of what it is one with."""

    def _net_texts(self) -> tuple[list[str], set[str]]:
        """Return a text for each net, and the identifiers in use."""
        texts = list(self.names)
        in_vector = np.zeros(len(texts), np.bool_)
        for vector in self._vectors:
            in_vector[vector.first : vector.first + len(vector.bits)] = True
            word = spelled(vector.name)
            texts[vector.first : vector.first + len(vector.bits)] = [f"{word}[{i}]" for i in vector.bits]
        single = np.flatnonzero(~in_vector)[CONSTANTS:].tolist()
        stems = {vector.name for vector in self._vectors}
        new = unlike([self.names[net] for net in single], stems)
        for net, name in zip(single, new, strict=True):
            texts[net] = spelled(name)
        return texts, stems.union(new)

    def second(self, net: int, number: int) -> str:
        """Return the text of a net's second name of a number, counted from 1."""
        key = (net, number)
        if key not in self._second:
            self._second[key] = self.free(f"{self.names[net]}~{number}")
        return self._second[key]

    def free(self, name: str) -> str:
        """Return an identifier that nothing has yet, like `name`."""
        name = unlike([name], self._taken)[0]
        self._taken.add(name)
        return spelled(name)

    def ports(self) -> list[str]:
        """Return the entries of the header; a port that cannot be its net itself gets a second name of it."""
        return [
            spelled(entry.name) if isinstance(entry, Vector) else self._port(entry)
            for entry in self.header.entries
        ]

    def _port(self, port: Port) -> str:
        text = self.net[port.net]
        if self.header.ways.get(port.net) != port.way:
            first = text
            text = self.free(port.name)
            self._extra.append((f"{WAY_WORDS[port.way]} {text};", text, first))
        word = spelled(port.name)
        return word if word == text else f".{word}({text})"

    def declarations(self) -> list[str]:
        """Return the declarations of all nets, in order of their numbers, those of second names last."""
        lines = [f"wire {text};" for text in self.net[:-1].tolist()]
        for net, way in self.header.ways.items():
            lines[net] = f"{WAY_WORDS[way]} {self.net[net]};"
        for net, types in self._types.items():
            first = f"{types[0]} {self.net[net]};"
            lines[net] = f"{lines[net]}\n  {first}" if net in self.header.ways else first
            for other in types[1:]:
                text = self.free(self.names[net])
                self._extra.append((f"{other} {text};", text, self.net[net]))
        left = np.ones(len(lines), np.bool_)
        left[:CONSTANTS] = False
        for vector in self._vectors:
            left[vector.first + 1 : vector.first + len(vector.bits)] = False
            lines[vector.first] = self._vector_lines(vector)
        kept = [lines[net] for net in np.flatnonzero(left).tolist()]
        kept += [f"wire {self._second[key]};" for key in sorted(self._second)]
        return kept + [declaration for declaration, _, _ in self._extra]

    def _vector_lines(self, vector: Vector) -> str:
        word = f"[{vector.msb}:{vector.lsb}] {spelled(vector.name)};"
        types = self._types.get(vector.first, ())
        return "\n  ".join([f"{way} {word}" for way in (WAY_WORDS[vector.way], *types[:1])])

    def pulls(self) -> list[str]:
        """Return the statements that pull nets."""
        nets = [(net, word) for word in PULLS for net in self.flat.of_type((word,)).tolist()]
        return [f"{word} ({self.net[net]});" for net, word in sorted(nets) if net >= CONSTANTS]

    def same_nets(self) -> list[tuple[str, str]]:
        """Return the pairs of texts that stand for one net each."""
        pairs = [(self._second[key], str(self.net[key[0]])) for key in sorted(self._second)]
        return pairs + [(text, first) for _, text, first in self._extra]


def _apart(name: str) -> str:
    """Return an identifier with one space behind it."""
    return f"{spelled(name).rstrip(' ')} "


def net_types(flat: Flat) -> Mapping[int, Sequence[str]]:
    """Return the types of the nets that are no mere wires, in order of net."""
    types: dict[int, list[str]] = {}
    for word, nets in flat.typed.items():
        for net in nets.tolist() if word not in PULLS else ():
            if net >= CONSTANTS:
                types.setdefault(net, []).append(word)
    return dict(sorted(types.items()))
