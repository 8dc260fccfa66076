"""Published counts and formulas of adders and multipliers, each against a netlist that is wired for it."""

from collections.abc import Callable
from typing import Any

import pytest

Fixture = Callable[..., Any]


def lookahead(unit: str, carry: str, p: list[str], g: list[str]) -> str:
    """A lookahead unit of ANDs and ORs over blocks: carries `unit_k1` on, the group's `unit_p`, `unit_g`."""
    lines = [f"and {unit}_gp({unit}_p, {', '.join(p)});"]
    for n in range(1, len(p) + 1):
        inside = [[*p[n - i : n], g[n - 1 - i]] for i in range(1, n)]
        for out, terms in ((f"{unit}_k{n}", [*inside, [*p[:n], carry]]), (f"{unit}_g", inside)):
            if (out == f"{unit}_g") == (n < len(p)):
                continue
            ands = [f"{out}_t{i}" for i in range(len(terms))]
            lines += [f"and ({net}, {', '.join(term)});" for net, term in zip(ands, terms, strict=True)]
            lines.append(f"or ({out}, {', '.join([g[n - 1], *ands])});")
    return "".join(lines)


def test_hierarchical_lookahead_of_64_and_32_bits(figures: Fixture) -> None:
    """Katz, Contemporary Logic Design, solution of problem 5.13b, unit gate delays: 64 bits at 15, 32 at 11.

    The solution tells the wiring in words only: P of a 4-bit block at 3, G at 5, the sum of a block four
    after its carry. Blocks are described parts here, lookahead units are gates; 32 bits are eight blocks
    under one unit, our reading. The solution's other wiring (13 and 12) was not to be rebuilt from its words.
    """
    parts = """part BITS { input AB; outputs P, G; times ns { tpd AB => P 3; tpd AB => G 5; } }
      part SUM { inputs C, AB; output S; times ns { tpd C, AB => S 4; } } default ns { tpd 1; }"""
    p, g = [f"p{n}" for n in range(16)], [f"g{n}" for n in range(16)]
    bits = "".join(f"BITS b{n}(ab[{n}], p{n}, g{n});" for n in range(16))
    head = f"module m(input [15:0] ab, input cin, output s); {bits}"
    found = figures(
        f"{head} {lookahead('all', 'cin', p[:8], g[:8])} SUM last(all_k7, ab[7], s); endmodule", parts
    )
    assert [found.settles(net) for net in ("p0", "g0", "all_k2", "all_k7", "s")] == [3, 5, 7, 7, 11]
    top = lookahead("top", "cin", [f"u{u}_p" for u in range(4)], [f"u{u}_g" for u in range(4)])
    units = "".join(
        lookahead(f"u{u}", f"top_k{u}" if u else "cin", p[4 * u : 4 * u + 4], g[4 * u : 4 * u + 4])
        for u in range(4)
    )
    found = figures(f"{head} {top} {units} SUM last(u3_k3, ab[15], s); endmodule", parts)
    assert [found.settles(net) for net in ("u0_k2", "u3_g", "top_k3", "u3_k3", "s")] == [7, 7, 9, 11, 15]


def array_multiplier(rows: int, columns: int) -> str:
    """A ripple carry array: one row of adders for each further partial product, wired cell by cell."""
    lines = [
        f"and a{r}_{c}(pp{r}_{c}, x[{c}], y[{r}]);" for r in range(rows) for c in range(columns)
    ]  # fmt: skip
    above = [f"pp0_{c}" for c in range(1, columns)] + ["1'b0"]
    for r in range(1, rows):
        carry = "1'b0"
        for c in range(columns):
            lines.append(f"FA f{r}_{c}(pp{r}_{c}, {above[c]}, {carry}, s{r}_{c}, c{r}_{c});")
            carry = f"c{r}_{c}"
        above = [f"s{r}_{c}" for c in range(1, columns)] + [carry]
    return f"module m(input [{columns - 1}:0] x, input [{rows - 1}:0] y); {''.join(lines)} endmodule"


def full_adder(carry: float, total: float) -> str:
    rows = f"tpd A, B, C => CO {carry}; tpd A, B, C => S {total};"
    outputs = "S = A ^ B ^ C, CO = A & B | C & (A | B)"
    return f"part FA {{ inputs A, B, C; outputs {outputs}; times ns {{ {rows} }} }}"


@pytest.mark.parametrize(("bits", "published"), [(4, 17), (8, 41), (5, 23)])
def test_array_multiplier_in_gate_delays(figures: Fixture, bits: int, published: int) -> None:
    """Hamacher, Computer Organization: AND 1, full adder 2 gate delays: 6(n - 1) - 1.

    With adders of two exclusive ors each n = 4 gives 18: the figure rests on two delays for every output.
    """
    found = figures(array_multiplier(bits, bits), full_adder(2, 2) + "gates ns { tpd and 1; }")
    slowest = max(found.settles(f"{out}{bits - 1}_{bits - 1}") for out in "sc")
    assert slowest == 6 * (bits - 1) - 1 == published


@pytest.mark.parametrize(("rows", "columns"), [(3, 3), (4, 6), (5, 4), (7, 7)])
def test_array_multiplier_formula(figures: Fixture, rows: int, columns: int) -> None:
    """Rabaey, Digital Integrated Circuits, ch. 11 (from memory): [(M-1)+(N-2)] tcarry + (N-1) tsum + tand."""
    carry, total, product = 0.7, 0.9, 0.3
    parts = full_adder(carry, total) + f"gates ns {{ tpd and {product}; }}"
    found = figures(array_multiplier(rows, columns), parts)
    expected = (columns - 1 + rows - 2) * carry + (rows - 1) * total + product
    assert found.settles(f"s{rows - 1}_{columns - 1}") == pytest.approx(expected, abs=1e-9)


@pytest.mark.parametrize("bits", [1, 2, 4, 16, 64])
def test_ripple_adder_formula(figures: Fixture, bits: int) -> None:
    """Rabaey, ch. 11 (from memory): (N - 1) tcarry + tsum."""
    adders = "".join(f"FA fa{n}(a[{n}], b[{n}], c{n}, s{n}, c{n + 1});" for n in range(bits))
    verilog = f"module m(input [{bits - 1}:0] a, b, input c0); {adders} endmodule"
    found = figures(verilog, full_adder(0.7, 0.9))
    assert found.settles(f"s{bits - 1}") == pytest.approx((bits - 1) * 0.7 + 0.9, abs=1e-9)


@pytest.mark.parametrize("bits", [3, 4, 8])
def test_carry_save_multiplier_formula(figures: Fixture, block: Fixture, bits: int) -> None:
    """Rabaey, ch. 11 (from memory): tand + (N - 1) tcarry + tmerge, sum and carry equally slow."""
    lines = [f"and a{r}_{c}(pp{r}_{c}, x[{c}], y[{r}]);" for r in range(bits) for c in range(bits)]
    sums, carries = [f"pp0_{c}" for c in range(bits)], ["1'b0"] * bits
    for r in range(1, bits):
        high = [*sums[1:], "1'b0"]
        lines += [
            f"FA f{r}_{c}(pp{r}_{c}, {high[c]}, {carries[c]}, s{r}_{c}, c{r}_{c});" for c in range(bits)
        ]
        sums, carries = [f"s{r}_{c}" for c in range(bits)], [f"c{r}_{c}" for c in range(bits)]
    lines.append(f"MERGE v({sums[1]}, {carries[0]}, z);")
    verilog = f"module m(input [{bits - 1}:0] x, y, output z); {''.join(lines)} endmodule"
    parts = full_adder(0.7, 0.7) + block("MERGE", "A, B", "Y", 2.5) + "gates ns { tpd and 0.3; }"
    assert figures(verilog, parts).settles("z") == pytest.approx(0.3 + (bits - 1) * 0.7 + 2.5, abs=1e-9)


@pytest.mark.parametrize(("bits", "group"), [(8, 4), (16, 4), (12, 3)])
def test_carry_select_formula(figures: Fixture, block: Fixture, bits: int, group: int) -> None:
    """Rabaey, ch. 11 (from memory), linear carry select: tsetup + M tcarry + (N/M) tmux + tsum."""
    lines = [f"SETUP p{n}(a[{n}], b[{n}], pg{n});" for n in range(bits)]
    for n in range(bits):
        first = n - n % group
        for guess in (0, 1):
            before = f"r{guess}_{n}" if n > first else f"1'b{guess}"
            lines.append(f"CARRY c{guess}_{n}(pg{n}, {before}, r{guess}_{n + 1});")
        lines.append(f"MUX m{n}(r0_{n + 1}, r1_{n + 1}, {f'k{first}' if first else 'cin'}, k{n + 1});")
        lines.append(f"SUM x{n}(pg{n}, {f'k{n}' if n else 'cin'}, s{n});")
    verilog = f"module m(input [{bits - 1}:0] a, b, input cin); {''.join(lines)} endmodule"
    parts = (
        block("SETUP", "A, B", "PG", 0.4) + block("CARRY", "PG, C", "CO", 0.7)
        + block("MUX", "A, B, S", "Y", 0.5) + block("SUM", "PG, C", "S", 0.9)
    )  # fmt: skip
    expected = 0.4 + group * 0.7 + bits // group * 0.5 + 0.9
    assert figures(verilog, parts).settles(f"s{bits - 1}") == pytest.approx(expected, abs=1e-9)


def test_carry_skip_formula_as_a_way(figures: Fixture) -> None:
    """Weste and Harris, CMOS VLSI Design, the carry skip formula with an instance of it: 34.3 ns. Recomputed.

    tpg + 2(n-1) tAO + (K-1) tmux + txor, tpg 8.01, n 2, tAO 2.05, K 7, tmux 3.45, txor 1.49. That way alone
    is built: the longest way of the whole adder ripples through each group and is longer, and false.
    """
    delays = [8.01, 2.05, *[3.45] * 6, 2.05, 1.49]
    chain = "".join(f"buf #{delay} g{n}(n{n + 1}, n{n});" for n, delay in enumerate(delays))
    found = figures(f"`timescale 1ns/1ps\nmodule m(input n0); {chain} endmodule")
    assert found.settles(f"n{len(delays)}") == 34.3
