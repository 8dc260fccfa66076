"""The numbers of clause 3.5.1, its own examples among them."""

from __future__ import annotations

import pytest
from hypothesis import given, strategies as st

from tardigate.syntax.numbers import BadNumberError, read_number
from tardigate.syntax.tree import Decimal, Number

EXAMPLES = {
    # text: value, width, unknown, floating, signed
    "659": (659, None, 0, 0, True),
    "'h 837FF": (0x837FF, None, 0, 0, False),
    "'o7460": (0o7460, None, 0, 0, False),
    "4'b1001": (9, 4, 0, 0, False),
    "5 'D 3": (3, 5, 0, 0, False),
    "3'b01x": (0b010, 3, 0b001, 0, False),
    "12'hx": (0, 12, 0xFFF, 0, False),
    "16'hz": (0, 16, 0, 0xFFFF, False),
    "4'shf": (15, 4, 0, 0, True),
    "16'sd?": (0, 16, 0, 0xFFFF, True),
    "12'h3x": (0x030, 12, 0x00F, 0, False),
    "12'hz3": (0x003, 12, 0, 0xFF0, False),
    "12'h0z3": (0x003, 12, 0, 0x0F0, False),
    "27_195_000": (27195000, None, 0, 0, True),
    "16'b0011_0101_0001_1111": (0x351F, 16, 0, 0, False),
    "32 'h 12ab_f001": (0x12ABF001, 32, 0, 0, False),
    "8'dx": (0, 8, 0xFF, 0, False),
    "8'dZ": (0, 8, 0, 0xFF, False),
    "4'h1F": (0xF, 4, 0, 0, False),  # cut on the left
    "3'o7": (7, 3, 0, 0, False),
    "4'o17": (15, 4, 0, 0, False),
    "1'bZ": (0, 1, 0, 1, False),
    "'bx": (0, None, 0xFFFFFFFF, 0, False),
    "300'h0": (0, 300, 0, 0, False),
    "5'sb1?x10": (0b10010, 5, 0b00100, 0b01000, True),
}


@pytest.mark.parametrize("text", EXAMPLES)
def test_based_and_plain_numbers(text: str) -> None:
    assert read_number(text, 7) == Number(*EXAMPLES[text], at=7)


@pytest.mark.parametrize("text", ["1.5", "0.1", "1e3", "23E10", "1_000.5_0", "29e-2"])
def test_what_is_not_whole_stays_text(text: str) -> None:
    assert read_number(text, 3) == Decimal(text.replace("_", ""), 3)


@pytest.mark.parametrize(
    "text", ["4'd3f", "2'b12", "3'o8", "4'dx1", "4'd1x", "0'b0", "4'h_", "'b_", "8'b0120"]
)
def test_a_digit_or_width_that_cannot_be(text: str) -> None:
    with pytest.raises(BadNumberError):
        read_number(text, 0)


def test_a_number_of_ten_million_digits_is_read_at_once() -> None:
    assert isinstance(read_number("9" * 10_000_000, 0), Number)
    huge = read_number("8'h" + "f" * 10_000_000, 0)
    assert isinstance(huge, Number)
    assert huge.value == 255


@given(st.integers(1, 200), st.sampled_from("bohd"), st.data())
def test_digits_are_what_they_say(width: int, base: str, data: st.DataObject) -> None:
    value = data.draw(st.integers(0, (1 << width) - 1))
    digits = {"b": f"{value:b}", "o": f"{value:o}", "h": f"{value:x}", "d": str(value)}[base]
    number = read_number(f"{width}'{base}{digits}", 0)
    assert number == Number(value, width, 0, 0, False, 0)


@given(st.integers(1, 70), st.text("01xz", min_size=1, max_size=80))
def test_binary_digits_and_their_masks(width: int, digits: str) -> None:
    fill = digits[0] if digits[0] in "xz" else "0"
    bits = digits[-width:].rjust(width, fill)
    masks = [int("".join("1" if bit == wanted else "0" for bit in bits), 2) for wanted in "1xz"]
    number = read_number(f"{width}'b{digits}", 0)
    assert number == Number(masks[0], width, masks[1], masks[2], False, 0)
