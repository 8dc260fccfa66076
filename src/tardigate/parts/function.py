"""Functions of pins, bit by bit: a network of nodes, and what it says about polarity.

Takes nodes in order (operands before operators), gives truth tables and polarities. Polarity is exact up to
`EXACT` inputs; beyond that it is that of the structure, which may allow a change that never happens, but
never forbids one that does. Does not know names.
"""

from __future__ import annotations

from collections.abc import Mapping

EXACT = 12
"""Inputs up to which a function is tabulated."""

POSITIVE, NEGATIVE = 1, 2
"""Bits of a polarity: the output can follow the input; the output can go against it."""

Values = Mapping[int, int]
"""Known values (0 or 1) of parameter bits, by bit number; parameter bits are negative."""


class Network:
    """Nodes of one part. Equal nodes are one node, so equal expressions have equal numbers.

    A node is (`const`, 0 or 1), (`bit`, number), (`not`, node), (`and`, `or` or `xor`, node, node) or
    (`mux`, condition node, then node, else node).
    """

    def __init__(self) -> None:
        self.nodes: list[tuple[str, int, int, int]] = []
        self._known: dict[tuple[str, int, int, int], int] = {}
        self._supports: dict[int, frozenset[int]] = {}

    def add(self, form: str, a: int, b: int = -1, c: int = -1) -> int:
        """Return the number of a node, made when there is none like it."""
        node = (form, a, b, c)
        number = self._known.get(node)
        if number is None:
            number = self._known[node] = len(self.nodes)
            self.nodes.append(node)
        return number

    def cone(self, root: int) -> list[int]:
        """Return the nodes that `root` rests on, itself included, operands first."""
        seen = {root}
        stack = [root]
        while stack:
            form, *operands = self.nodes[stack.pop()]
            if form in ("const", "bit"):
                continue
            for operand in operands:
                if operand >= 0 and operand not in seen:
                    seen.add(operand)
                    stack.append(operand)
        return sorted(seen)

    def support(self, root: int) -> frozenset[int]:
        """Return the bits that the nodes below `root` read."""
        found = self._supports.get(root)
        if found is None:
            nodes = self.nodes
            found = frozenset(nodes[n][1] for n in self.cone(root) if nodes[n][0] == "bit")
            self._supports[root] = found
        return found

    def tables(self, roots: list[int], values: Values) -> Tables | None:
        """Return the truth tables of nodes over their common inputs, or None when those are too many."""
        inputs = sorted(frozenset().union(*(self.support(root) for root in roots)) - values.keys())
        return Tables(self, roots, inputs, values) if len(inputs) <= EXACT else None

    def polarities(self, root: int, values: Values, when: int = -1) -> dict[int, int]:
        """Return the polarity of each input bit that can change `root`, in states in which `when` holds."""
        tables = self.tables([root] if when < 0 else [root, when], values)
        if tables is None:
            return self._structural(root, values)
        states = None if when < 0 else tables.of[when]
        found = {bit: tables.polarity(root, bit, states) for bit in tables.inputs}
        return {bit: polarity for bit, polarity in found.items() if polarity}

    def _structural(self, root: int, values: Values) -> dict[int, int]:
        follows: dict[int, int] = {}
        against: dict[int, int] = {}
        for number in self.cone(root):
            form, a, b, c = self.nodes[number]
            if form in ("const", "bit"):
                free = form == "bit" and a not in values
                follows[number], against[number] = (1 << number if free else 0), 0
            elif form == "not":
                follows[number], against[number] = against[a], follows[a]
            elif form in ("and", "or"):
                follows[number], against[number] = follows[a] | follows[b], against[a] | against[b]
            else:  # in an xor, and from the condition of a choice, both ways
                both = follows[a] | against[a]
                both |= follows[b] | against[b] if form == "xor" else 0
                rest = (0, 0) if form == "xor" else (follows[b] | follows[c], against[b] | against[c])
                follows[number], against[number] = both | rest[0], both | rest[1]
        found = {}
        for number in self.cone(root):
            polarity = POSITIVE * (follows[root] >> number & 1) | NEGATIVE * (against[root] >> number & 1)
            if self.nodes[number][0] == "bit" and polarity:
                found[self.nodes[number][1]] = polarity
        return found


class Tables:
    """Truth tables of some nodes as integers.

    Bit `s` of a table is the value in state `s`; bit `i` of `s` is the value of input `i` of `inputs`.
    """

    def __init__(self, network: Network, roots: list[int], inputs: list[int], values: Values) -> None:
        self.inputs = inputs
        self.all = (1 << (1 << len(inputs))) - 1
        self._place = {bit: i for i, bit in enumerate(inputs)}
        self.of: dict[int, int] = {}
        for root in roots:
            for number in network.cone(root):
                if number not in self.of:
                    self.of[number] = self._value(network.nodes[number], values)

    def _value(self, node: tuple[str, int, int, int], values: Values) -> int:
        form, a, b, c = node
        of = self.of
        if form == "const":
            return self.all if a else 0
        if form == "bit":
            if a in values:
                return self.all if values[a] else 0
            return self.all & ~self.low(a)
        if form == "not":
            return self.all ^ of[a]
        if form == "and":
            return of[a] & of[b]
        if form == "or":
            return of[a] | of[b]
        if form == "xor":
            return of[a] ^ of[b]
        return of[a] & of[b] | (self.all ^ of[a]) & of[c]

    def low(self, bit: int) -> int:
        """Return the states in which an input is 0."""
        run = 1 << self._place[bit]
        mask = (1 << run) - 1
        width = 1 << len(self.inputs)
        while (run := run * 2) < width:
            mask |= mask << run
        return mask

    def step(self, bit: int) -> int:
        """Return how far apart the states are that differ in an input."""
        return 1 << self._place[bit]

    def changes(self, root: int, bit: int) -> tuple[int, int]:
        """Return the states, that input being 0, in which its rise makes `root` rise, and makes it fall."""
        low = self.low(bit)
        before = self.of[root] & low
        after = self.of[root] >> (1 << self._place[bit]) & low
        return ~before & after, before & ~after

    def polarity(self, root: int, bit: int, states: int | None = None) -> int:
        """Return how `root` can move with an input, in states of `states` (either value of the input)."""
        follow, against = self.changes(root, bit)
        if states is not None:
            either = states | states >> (1 << self._place[bit])
            follow, against = follow & either, against & either
        return (POSITIVE if follow else 0) | (NEGATIVE if against else 0)
