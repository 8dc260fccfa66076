"""Gates and operators as nodes of a network: what each makes of its inputs.

Takes the name of a kind and the nodes of its input pins in order, gives the node of its output, None where it
cannot be told. Constants are folded in; pin conventions are those of `parts.gates` and `expression`.
"""

from __future__ import annotations

from collections.abc import Sequence
from functools import reduce

from tardigate.parts.function import Network
from tardigate.parts.gates import BUFFERS, NET, THREE_STATE
from tardigate.parts.kind import Edge

_BY_GATE = {"and": "and", "nand": "and", "or": "or", "nor": "or", "xor": "xor", "xnor": "xor"}
_BY_OPERATOR = {
    "&": "and", "|": "or", "^": "xor", "~^": "xor", "||": "or",
    "reduce &": "and", "reduce |": "or", "reduce ^": "xor",
    "reduce ~&": "and", "reduce ~|": "or", "reduce ~^": "xor", "!": "or",
}  # fmt: skip
_INVERTED = ("nand", "nor", "xnor", "not", "~^", "~", "!", "reduce ~&", "reduce ~|", "reduce ~^", "!=")


class Maker:
    """Makes nodes, constants and double negations folded."""

    def __init__(self, network: Network) -> None:
        self.network = network
        self.constants = (network.add("const", 0), network.add("const", 1))
        self._free = 0

    def free(self) -> int:
        """Return the node of a bit that may be either and does not change: a parameter's, as it were."""
        self._free -= 1
        return self.network.add("bit", self._free)

    def inverted(self, node: int) -> int:
        """Return the inverse of a node."""
        form, operand, *_ = self.network.nodes[node]
        if form == "not":
            return operand
        return self.constants[1 - operand] if form == "const" else self.network.add("not", node)

    def joined(self, form: str, nodes: Sequence[int]) -> int:
        """Return `and`, `or` or `xor` of some nodes."""
        return reduce(lambda a, b: self.pair(form, a, b), nodes)

    def pair(self, form: str, a: int, b: int) -> int:
        """Return `and`, `or` or `xor` of two nodes."""
        zero, one = self.constants
        if b in self.constants:
            a, b = b, a
        if a in self.constants:
            if form == "xor":
                return b if a == zero else self.inverted(b)
            return b if (a == one) == (form == "and") else a
        if a == b:
            return zero if form == "xor" else a
        return self.network.add(form, *sorted((a, b)))

    def mux(self, condition: int, yes: int, no: int) -> int:
        """Return a choice."""
        if condition in self.constants:
            return yes if condition == self.constants[1] else no
        return yes if yes == no else self.network.add("mux", condition, yes, no)

    def gate(self, name: str, inputs: Sequence[int]) -> int | None:
        """Return the node of a gate's data output; of a three-state gate while it drives."""
        if name in THREE_STATE:
            return self.inverted(inputs[0]) if name.startswith("not") else inputs[0]
        if name in BUFFERS:
            made = inputs[0]
        elif name in _BY_GATE:
            made = self.joined(_BY_GATE[name], inputs)
        else:
            return None
        return self.inverted(made) if name in _INVERTED else made

    def enable(self, gate: str, control: int) -> int:
        """Return what makes a three-state gate drive."""
        return control if THREE_STATE[gate] == Edge.RISE else self.inverted(control)

    def operator(self, name: str, inputs: Sequence[int]) -> int | None:
        """Return the node of an operator; of a `&&` of more than two bits the split is not known."""
        if name in ("copy", NET, "~"):
            made = inputs[0]
        elif name in ("==", "!="):
            half = len(inputs) // 2
            pairs = zip(inputs[:half], inputs[half:], strict=True)
            made = self.joined("and", [self.inverted(self.pair("xor", a, b)) for a, b in pairs])
        elif name == "?:":
            made = self.mux(self.joined("or", inputs[:-2]), inputs[-2], inputs[-1])
        elif name == "&&" and len(inputs) == 2:
            made = self.joined("and", inputs)
        elif name in _BY_OPERATOR:
            made = self.joined(_BY_OPERATOR[name], inputs)
        else:
            return None
        return self.inverted(made) if name in _INVERTED else made
