"""Expressions over pins to nodes, one for each bit.

Takes a tree and the names of its part, gives nodes, most significant bit first; tells what may not be read
and widths that differ. Iterative: an expression may be as deep as it likes.
"""

from __future__ import annotations

from tardigate.parts.function import Network
from tardigate.parts.scope import Scope
from tardigate.syntax.parts_tree import Expr, PinRef, Range

Bits = list[int]
"""Nodes, most significant first."""

BINARY = {"&": "and", "|": "or", "^": "xor", "~^": "xor", "^~": "xor"}
INDEX_BITS = 12
"""Bits of an index that may not be a plain number."""


class _Refused(Exception):  # noqa: N818  # never leaves this file
    """The expression was told to be faulty."""


def compile_expression(expr: Expr, scope: Scope, network: Network, readable: frozenset[int]) -> Bits | None:
    """Return the bits of an expression, or None when it is told to be faulty.

    `readable` are the output bits that may be read: those that a register stores.
    """
    compiler = _Compiler(scope, network, readable)
    try:
        return compiler.run(expr)
    except _Refused:
        return None


class _Compiler:
    def __init__(self, scope: Scope, network: Network, readable: frozenset[int]) -> None:
        self.scope, self.network, self.readable = scope, network, readable

    def run(self, expr: Expr) -> Bits:
        """Walk the tree with a stack of its own: operands first, then what joins them."""
        todo: list[tuple[Expr, bool]] = [(expr, False)]
        done: list[Bits] = []
        while todo:
            node, ready = todo.pop()
            if ready:
                operands = done[len(done) - len(node.args) :]
                del done[len(done) - len(node.args) :]
                done.append(self.join(node, operands))
            elif (
                node.form == "read_bit" and node.args[0].form == "number" and node.args[0].word.text.isdigit()
            ):
                done.append(self.leaf(Expr("read", node.word, (), Range(node.args[0].word, None))))
            elif node.args:
                todo.append((node, True))
                todo += [(arg, False) for arg in reversed(node.args)]
            else:
                done.append(self.leaf(node))
        return done[0]

    def refuse(self, code: str, at: Expr, **words: object) -> _Refused:
        self.scope.desk.tell(code, at, **words)  # type: ignore[arg-type]  # words of the headline only
        return _Refused()

    def leaf(self, node: Expr) -> Bits:
        if node.form == "number":
            return self.number(node)
        picked = self.scope.pick(PinRef(node.word, node.select))
        if picked is None:
            raise _Refused
        signal, bits = picked
        self.may_read(node, signal.way, bits)
        return [self.network.add("bit", bit) for bit in bits]

    def may_read(self, node: Expr, way: str, bits: tuple[int, ...]) -> None:
        if way == "output" and not self.readable.issuperset(bits):
            raise self.refuse("P006", node, name=node.word.text, fact="an output that no register stores",
                              wanted="a function reads inputs, states and stored outputs")  # fmt: skip

    def number(self, node: Expr) -> Bits:
        if (bits := number_bits(node.word.text)) is None:
            raise self.refuse("P025", node, name=node.word.text)
        return [self.network.add("const", bit) for bit in bits]

    def join(self, node: Expr, operands: list[Bits]) -> Bits:
        if node.form == "concat":
            return [bit for operand in operands for bit in operand]
        if node.form == "read_bit":
            return self.lookup(node, operands[0])
        if node.form == "prefix":
            return self.prefix(node, operands[0])
        if node.form == "choose":
            condition, *choices = operands
            if len(condition) != 1:
                raise self.refuse("P007", node, left=len(condition), right=1, what="the condition of `?:`")
            self.same_width(node, *choices)
            return [self.network.add("mux", condition[0], a, b) for a, b in zip(*choices, strict=True)]
        self.same_width(node, *operands)
        made = [
            self.network.add(BINARY[node.word.text], *sorted(pair)) for pair in zip(*operands, strict=True)
        ]
        return made if node.word.text in "&|^" else self.inverted(made)

    def inverted(self, bits: Bits) -> Bits:
        return [self.network.add("not", bit) for bit in bits]

    def same_width(self, node: Expr, left: Bits, right: Bits) -> None:
        if len(left) != len(right):
            what = (
                f"the two sides of `{node.word.text}`" if node.form == "binary" else "the two choices of `?:`"
            )
            raise self.refuse("P007", node, left=len(left), right=len(right), what=what)

    def prefix(self, node: Expr, operand: Bits) -> Bits:
        """Invert every bit, or reduce to one (IEEE 1364-2005 clause 5.1.11)."""
        operator = node.word.text
        if operator == "~":
            return self.inverted(operand)
        made = operand[0]
        for bit in operand[1:]:
            made = self.network.add(BINARY[operator], *sorted((made, bit)))
        return [made] if operator in "&|^" else self.inverted([made])

    def lookup(self, node: Expr, index: Bits) -> Bits:
        """Pick one bit by an index; beyond the ends a 0 is read."""
        if node.args[0].form == "number" and node.args[0].word.text.isdigit():
            return self.leaf(Expr("read", node.word, (), Range(node.args[0].word, None)))
        signal = self.scope.find(node.word)
        if signal is None:
            raise _Refused
        if len(index) > INDEX_BITS:
            raise self.refuse("P027", node, name="index", width=len(index), widest=INDEX_BITS)
        self.may_read(node, signal.way, signal.bits)
        zero = self.network.add("const", 0)
        level = []
        for number in range(1 << len(index)):
            bits = signal.picked(number, number) or ()
            level.append(self.network.add("bit", bits[0]) if bits else zero)
        for bit in reversed(index):  # the least significant bit of the index tells neighbours apart
            level = [self._mux(bit, level[i + 1], level[i]) for i in range(0, len(level), 2)]
        return level

    def _mux(self, condition: int, high: int, low: int) -> int:
        return high if high == low else self.network.add("mux", condition, high, low)


def number_bits(text: str) -> list[int] | None:
    """Return the bits of `0`, `1` or a sized number, most significant first; None for any other number.

    IEEE 1364-2005 clause 3.5.1; the size must be given and be as wide as the value.
    """
    size, tick, rest = text.replace("_", "").partition("'")
    if not tick:
        return [int(text)] if text in ("0", "1") else None
    rest = rest.lower().removeprefix("s")
    base = {"b": 2, "o": 8, "d": 10, "h": 16}.get(rest[:1])
    if base is None or not size or len(size) > 5 or len(rest) > 5000:
        return None
    try:
        value = int(rest[1:], base)
    except ValueError:
        return None
    width = int(size)
    if width == 0 or value >> width:
        return None
    return [value >> place & 1 for place in reversed(range(width))]
