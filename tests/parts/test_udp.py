"""Primitives as parts, against a slow simulator of their tables over 0, 1 and x straight from clause 8."""

from itertools import product

from hypothesis import assume, given, strategies as st

from tardigate.parts.by_kind import ByKind, Choice
from tardigate.parts.function import NEGATIVE, POSITIVE, Network
from tardigate.parts.kind import Edge
from tardigate.parts.model import Place
from tardigate.parts.part_kind import part_kind
from tardigate.parts.udp import Stored, function_node, stored, udp_part
from tardigate.source.faults import InputRefusedError
from tardigate.source.files import SourceFile
from tardigate.source.placed import PlacedText
from tardigate.syntax.tree import Primitive
from tardigate.syntax.udp_reader import read_primitive

FILE = SourceFile("a.v", b"primitive")
PLACE = Place(FILE, 0, 9)
Levels = tuple[str, ...]


def read(names: str, rows: list[str], sequential: bool) -> Primitive:
    """Read a primitive with output `q` and inputs of one letter."""
    head = f"output {'reg ' if sequential else ''}q, input {', '.join(names)}"
    text = f"primitive u({head}); table\n{chr(10).join(rows)}\nendtable endprimitive"
    return read_primitive(PlacedText.whole(SourceFile("a.v", text.encode())), 0, len(text))


# The slow twin: clause 8 row by row


SETS = {"0": "0", "1": "1", "x": "x", "?": "01x", "b": "01"}
EDGES = {
    "*": [a + b for a, b in product("01x", repeat=2)], "r": ["01"], "f": ["10"],
    "p": ["01", "0x", "x1"], "n": ["10", "1x", "x0"],
}  # fmt: skip


def fits(symbol: str, before: str, after: str) -> bool:
    """Table 8-1."""
    if symbol in SETS:
        return after in SETS[symbol]
    pairs = EDGES.get(symbol) or [a + b for a in SETS[symbol[0]] for b in SETS[symbol[1]]]
    return before != after and before + after in pairs


def simulate(primitive: Primitive, before: Levels, after: Levels, state: str) -> str:
    """Return the output when one input has changed (of a combinational table nothing need have)."""
    found: dict[bool, list[str]] = {True: [], False: []}
    for row in primitive.rows:
        if primitive.sequential and state not in SETS[row.state]:
            continue
        if all(map(fits, row.inputs, before, after)):
            edge = any(symbol not in SETS for symbol in row.inputs)
            found[edge].append(row.output)
    outputs = found[False] or found[True] or ["x"]  # 8.8; what no row gives is x (8.1.4)
    values = {output for output in outputs if output != "-"}
    assert len(values) <= 1, "the reader lets no contradiction pass"
    return values.pop() if values else state


def evaluate(network: Network, root: int, bits: dict[int, int]) -> int:
    of: dict[int, int] = {}
    for number in network.cone(root):
        form, a, b, c = network.nodes[number]
        if form in ("const", "bit"):
            of[number] = a if form == "const" else bits[a]
        elif form == "not":
            of[number] = 1 - of[a]
        elif form == "mux":
            of[number] = of[b] if of[a] else of[c]
        else:
            of[number] = {"and": of[a] & of[b], "or": of[a] | of[b], "xor": of[a] ^ of[b]}[form]
    return of[root]


def flipped(levels: Levels, place: int) -> Levels:
    return (*levels[:place], "10"[int(levels[place])], *levels[place + 1 :])


# Combinational tables


def legal_part(names: str, rows: list[str], sequential: bool) -> Primitive:
    """Read a primitive without those of its rows that contradict earlier ones."""
    try:
        return read(names, rows, sequential)
    except InputRefusedError as refusal:
        lines = {fault.span.line - 2 for fault in refusal.diagnostics if fault.code == "V149" and fault.span}
        return read(names, [row for number, row in enumerate(rows) if number not in lines], sequential)


@st.composite
def combinational(draw: st.DrawFn) -> Primitive:
    count = draw(st.integers(1, 4))
    symbols = st.lists(st.sampled_from("01?b"), min_size=count, max_size=count)
    rows = draw(st.lists(st.tuples(symbols, st.sampled_from("001x1")), min_size=1, max_size=8))
    return legal_part("abcd"[:count], [f"{''.join(given)}:{output};" for given, output in rows], False)


@given(combinational())
def test_a_function_has_the_value_of_the_table(primitive: Primitive) -> None:
    network = Network()
    inputs = [network.add("bit", 10 + i) for i in range(len(primitive.ports) - 1)]
    root = function_node(network, primitive, inputs, -7)
    for levels in product("01", repeat=len(inputs)):
        bits = {10 + i: int(level) for i, level in enumerate(levels)}
        both = "".join(str(evaluate(network, root, {**bits, -7: unknown})) for unknown in (0, 1))
        assert both == {"0": "00", "1": "11", "x": "01"}[simulate(primitive, levels, levels, "x")]


@given(combinational())
def test_the_polarity_is_that_of_all_steps(primitive: Primitive) -> None:
    part, reason = udp_part(primitive, PLACE)
    assert not reason
    found = part.network.polarities(part.functions[0], {})
    for place in range(len(primitive.ports) - 1):
        polarity = 0
        for low in product("01", repeat=len(primitive.ports) - 1):
            if low[place] == "0":
                high = flipped(low, place)
                step = simulate(primitive, low, low, "x") + simulate(primitive, high, high, "x")
                polarity |= {"01": POSITIVE, "0x": POSITIVE, "x1": POSITIVE}.get(step, 0)
                polarity |= {"10": NEGATIVE, "1x": NEGATIVE, "x0": NEGATIVE}.get(step, 0)
        assert found.get(place + 1, 0) == polarity


# Sequential tables


class Model:
    """What `stored` says, run."""

    def __init__(self, primitive: Primitive) -> None:
        self.network = Network()
        self.count = len(primitive.ports) - 1
        inputs = [self.network.add("bit", i) for i in range(self.count)]
        self.how = stored(self.network, primitive, inputs, self.network.add("bit", 50), -3)

    def forced(self, levels: Levels, state: str, unknown: int) -> str:
        """Return the value that set, clear or an open latch force, empty for none."""
        assert isinstance(self.how, Stored)
        bits = {i: int(level) for i, level in enumerate(levels)} | {50: int(state), -3: unknown}
        for node, value in ((self.how.set, "1"), (self.how.clear, "0")):
            if node >= 0 and evaluate(self.network, node, bits):
                return value
        opened = self.how.clock < 0 or levels[self.how.clock] == ("1" if self.how.edge == Edge.RISE else "0")
        if self.how.latch and opened:
            return str(evaluate(self.network, self.how.data, bits))
        return ""

    def after(self, levels: Levels, place: int, state: str, unknown: int) -> str:
        """Return the output after input `place` has changed to its level."""
        assert isinstance(self.how, Stored)
        forced = self.forced(levels, state, unknown)
        if forced:
            return forced
        end = "1" if self.how.edge == Edge.RISE else "0"
        if not self.how.latch and place == self.how.clock and levels[place] == end:
            bits = {i: int(level) for i, level in enumerate(levels)} | {50: int(state), -3: unknown}
            return str(evaluate(self.network, self.how.data, bits))
        return state


def check(primitive: Primitive, model: Model) -> None:
    """Compare on every change of one input between 0 and 1, from every state that the table lets be."""
    assert isinstance(model.how, Stored)
    for before in product("01", repeat=model.count):
        forced = [model.forced(before, state, 0) for state in "01"]
        same = [model.forced(before, state, 1) for state in "01"] == forced
        for state, place in product("01", range(model.count)):
            if same and forced[0] == forced[1] and forced[0] not in ("", state):
                continue
            after = flipped(before, place)
            output = simulate(primitive, before, after, state)
            if output == "x":
                continue
            made = {model.after(after, place, state, unknown) for unknown in (0, 1)}
            if model.how.clock < 0 and len(made) == 2:  # held: either value may have been before
                assert output == state or output in made
            else:
                assert made == {output}, (before, after, state)


def spelt(symbols: list[str], state: str, output: str) -> str:
    return "".join(f"({s})" if len(s) == 2 else s for s in symbols) + f":{state}:{output};"


@st.composite
def noise(draw: st.DrawFn, names: str) -> str:
    """A row at random."""
    symbols = draw(st.lists(st.sampled_from("01??b"), min_size=len(names), max_size=len(names)))
    edge = draw(st.sampled_from(["", "*", "r", "f", "p", "n", "01", "?0", "b1", "1x"]))
    if edge:
        symbols[draw(st.integers(0, len(names) - 1))] = edge
    return spelt(symbols, draw(st.sampled_from("0??1b")), draw(st.sampled_from("01--x")))


class Recipe:
    """A register or latch to be found again; `order` are the letters of the inputs as they are declared."""

    def __init__(self, draw: st.DrawFn) -> None:
        self.latch = draw(st.booleans())
        self.edge = draw(st.sampled_from(Edge))
        self.data = "de"[: draw(st.integers(1, 2))]
        self.controls = draw(st.sampled_from(["", "s", "c", "sc"]))
        self.active = {name: draw(st.sampled_from("01")) for name in self.controls}
        self.notifier = draw(st.sampled_from(["", "n"]))
        self.order = draw(st.permutations(f"g{self.data}{self.controls}{self.notifier}"))
        bits = 1 << len(self.data) + (not self.latch)
        self.table = draw(st.lists(st.sampled_from("01"), min_size=bits, max_size=bits))

    def row(self, state: str, output: str, **given: str) -> str:
        return spelt([given.get(name, "?") for name in self.order], state, output)

    def idle(self) -> dict[str, str]:
        return {name: "10"[int(level)] for name, level in self.active.items()}

    def rows(self) -> list[str]:
        rows = self.control_rows()
        opened, shut = ("1", "0") if self.edge == Edge.RISE else ("0", "1")
        storing = {"g": opened if self.latch else shut + opened}
        for number, levels in enumerate(product("01", repeat=len(self.data) + (not self.latch))):
            given = dict(zip(self.data, levels, strict=False))
            state = "?" if self.latch else levels[-1]
            rows.append(self.row(state, self.table[number], **storing, **given, **self.idle()))
        rows += [self.row("?", "-", **{"g": shut, name: "*"}) for name in self.data]
        rows.append(self.row("?", "-", g=opened + shut))
        if not self.latch:
            rows += [self.row("?", "-", **{name: "*"}) for name in self.data]
        if self.notifier:
            rows.append(self.row("?", "x", n="*"))
        return rows

    def control_rows(self) -> list[str]:
        """Set and clear, clear first; the end of each keeps the state while the latch is shut."""
        rows = []
        for name, output in (("c", "0"), ("s", "1")):
            if name in self.controls:
                others = {k: v for k, v in self.idle().items() if k == "c" != name}
                rows.append(self.row("?", output, **{name: self.active[name]}, **others))
                end = self.active[name] + self.idle()[name]
                shut = {"g": "0" if self.edge == Edge.RISE else "1"} if self.latch else {}
                rows.append(self.row("?", "-", **{name: end}, **shut, **others))
        return rows


@st.composite
def recipes(draw: st.DrawFn) -> Recipe:
    return Recipe(draw)


@st.composite
def spoilt(draw: st.DrawFn) -> Primitive:
    """Rows at random, mostly a register's or latch's with some of them lost."""
    names = "abc"[: draw(st.integers(1, 3))]
    rows = []
    if draw(st.integers(0, 3)):
        recipe = Recipe(draw)
        names = "".join(recipe.order)
        rows = recipe.rows()
        for _ in range(draw(st.integers(0, 3))):
            del rows[draw(st.integers(0, len(rows) - 1))]
    rows += draw(st.lists(noise(names), min_size=not rows, max_size=8 if not rows else 2))
    return legal_part(names, draw(st.permutations(rows)), True)


@given(spoilt())
def test_whatever_is_understood_behaves_so(primitive: Primitive) -> None:
    model = Model(primitive)
    if isinstance(model.how, Stored):
        check(primitive, model)


@given(recipes())
def test_registers_and_latches_are_found_again(recipe: Recipe) -> None:
    if recipe.latch:
        assume(len(set(recipe.table)) == 2)
    else:
        levels = product("01", repeat=len(recipe.data) + 1)
        assume(any(level[-1] != output for level, output in zip(levels, recipe.table, strict=True)))
    names = "".join(recipe.order)
    primitive = read(names, recipe.rows(), True)
    model = Model(primitive)
    assert isinstance(model.how, Stored), model.how
    assert (model.how.latch, model.how.edge, names[model.how.clock]) == (recipe.latch, recipe.edge, "g")
    assert (model.how.set >= 0, model.how.clear >= 0) == ("s" in recipe.controls, "c" in recipe.controls)
    check(primitive, model)
    nodes = [node for node in (model.how.data, model.how.set, model.how.clear) if node >= 0]
    read_bits = frozenset().union(*(model.network.support(node) for node in nodes))
    assert names.index("g") not in read_bits
    assert not recipe.notifier or names.index("n") not in read_bits
    assert {names[bit] for bit in model.network.support(model.how.data) if 0 <= bit < 50} <= set(recipe.data)


@given(recipes())
def test_a_part_has_the_hops_of_its_register(recipe: Recipe) -> None:
    assume(recipe.latch and len(set(recipe.table)) == 2)
    primitive = read("".join(recipe.order), recipe.rows(), True)
    part, reason = udp_part(primitive, PLACE)
    assert not reason
    kind = part_kind(part, 0, {}, Choice(ByKind(), ByKind(), ByKind()))
    launching = {primitive.ports[tail] for tail in kind.hop_from[kind.launches]}
    passing = {primitive.ports[tail] for tail in kind.hop_from[~kind.launches]}
    assert launching == {"g"}
    assert set(recipe.controls) <= passing <= set(recipe.data + recipe.controls)
    assert {primitive.ports[pin] for pin in kind.sinks} == passing
