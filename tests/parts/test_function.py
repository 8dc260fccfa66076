"""Functions of pins: truth tables and polarities against evaluation state by state."""

from itertools import product

from hypothesis import given, strategies as st

from tardigate.parts.function import EXACT, NEGATIVE, POSITIVE, Network

BITS = 4
Value = tuple[int, ...]


@st.composite
def networks(draw: st.DrawFn) -> tuple[Network, int]:
    network = Network()
    made = [network.add("bit", bit) for bit in range(BITS)] + [
        network.add("const", 0),
        network.add("const", 1),
    ]
    for _ in range(draw(st.integers(1, 12))):
        operand = st.sampled_from(made)
        form = draw(st.sampled_from(["not", "and", "or", "xor", "mux"]))
        count = {"not": 1, "mux": 3}.get(form, 2)
        made.append(network.add(form, *(draw(operand) for _ in range(count))))
    return network, made[-1]


def evaluate(network: Network, root: int, state: Value) -> int:
    """Evaluate by the definition of each form, node by node."""
    of: list[int] = []
    for form, a, b, c in network.nodes:
        if form in ("const", "bit"):
            of.append(a if form == "const" else state[a])
        elif form == "not":
            of.append(1 - of[a])
        elif form == "mux":
            of.append(of[b] if of[a] else of[c])
        else:
            of.append({"and": min(of[a], of[b]), "or": max(of[a], of[b]), "xor": (of[a] + of[b]) % 2}[form])
    return of[root]


def polarity_by_hand(network: Network, root: int, bit: int) -> int:
    found = 0
    for state in product((0, 1), repeat=BITS):
        if state[bit]:
            continue
        raised = (*state[:bit], 1, *state[bit + 1 :])
        step = evaluate(network, root, raised) - evaluate(network, root, state)
        found |= {1: POSITIVE, -1: NEGATIVE, 0: 0}[step]
    return found


@given(networks())
def test_polarity_is_what_trying_every_state_shows(case: tuple[Network, int]) -> None:
    network, root = case
    polarities = network.polarities(root, {})
    assert {bit: polarities.get(bit, 0) for bit in range(BITS)} == {
        bit: polarity_by_hand(network, root, bit) for bit in range(BITS)
    }


@given(networks())
def test_the_structure_allows_whatever_can_happen(case: tuple[Network, int]) -> None:
    network, root = case
    structural = network._structural(root, {})
    for bit in range(BITS):
        happens = polarity_by_hand(network, root, bit)
        assert structural.get(bit, 0) | happens == structural.get(bit, 0)


@given(networks(), networks())
def test_under_a_condition_no_polarity_is_new(one: tuple[Network, int], other: tuple[Network, int]) -> None:
    network, root = one
    when = network.add("bit", 0)
    free, bound = network.polarities(root, {}), network.polarities(root, {}, when)
    assert all(free[bit] | polarity == free[bit] for bit, polarity in bound.items())
    assert other[0].polarities(other[1], {}, other[0].add("const", 0)) == {}


@given(networks())
def test_a_known_value_is_no_input(case: tuple[Network, int]) -> None:
    network, root = case
    for value in (0, 1):
        known = network.polarities(root, {0: value})
        assert 0 not in known
        sensitive = {
            bit
            for bit in range(1, BITS)
            for rest in product((0, 1), repeat=BITS - 1)
            if evaluate(network, root, (value, *rest))
            != evaluate(network, root, (value, *(r ^ (i + 1 == bit) for i, r in enumerate(rest))))
        }
        assert set(known) == sensitive


def test_a_wide_function_is_taken_by_its_structure() -> None:
    network = Network()
    total = network.add("bit", 0)
    for bit in range(1, EXACT + 4):
        total = network.add("and", total, network.add("not", network.add("bit", bit)))
    assert network.polarities(total, {}) == {0: POSITIVE} | dict.fromkeys(range(1, EXACT + 4), NEGATIVE)


def test_a_deep_function_needs_no_recursion() -> None:
    network = Network()
    node = network.add("bit", 0)
    for _ in range(50_001):
        node = network.add("xor", node, network.add("const", 1))
    assert network.polarities(node, {}) == {0: NEGATIVE}
