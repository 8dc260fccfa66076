"""The assumptions that end each report: what the figures rest on though nobody stated it.

Takes keys of `analysis/assumptions.py` with counts, gives lines. Does not count.
"""

from __future__ import annotations

from collections.abc import Sequence

from rich.text import Text

from tardigate.report.looks import Look
from tardigate.report.prose import title
from tardigate.report.shorten import wrap

WORDS = {
    "inputs_at_zero": ("input bit taken as changing at 0", "input bits taken as changing at 0"),
    "clock_pins_at_zero": (
        "register clock pin taken as clocked at 0",
        "register clock pins taken as clocked at 0, all together",
    ),
    "clocks_through_logic": (
        "register clock pin not clocked straight from an input port; the delay of its clock is not counted",
        "register clock pins not clocked straight from an input port; the delay of their clock is not"
        " counted",
    ),
    "wires_at_zero": ("net taken as a wire of 0 ns", "nets taken as wires of 0 ns"),
    "minima_at_zero": ("hop whose missing min is taken as 0", "hops whose missing min is taken as 0"),
    "parts_with_minima_at_zero": ("part instance with such a hop", "part instances with such a hop"),
    "on_family_default": (
        "part instance with the family's default delay",
        "part instances with the family's default delay",
    ),
    "unknown_functions": (
        "part instance without function: both edges pass both ways",
        "part instances without function: both edges pass both ways",
    ),
    "tied_inputs": (
        "input tied to a constant; trails through the other pins of its part are kept even where the"
        " constant stops them",
        "inputs tied to a constant; trails through the other pins of their parts are kept even where the"
        " constant stops them",
    ),
    "assigned_wires": (
        "assignment without operator taken as a wire",
        "assignments without operator taken as wires",
    ),
    "never_changing_nets": (
        "net that no source reaches: it never changes",
        "nets that no source reaches: they never change",
    ),
    "at_rated_load": (
        "part instance timed as at its rated load",
        "part instances timed as at their rated load",
    ),
    "wire_rows_left_out": (
        "statement about wires in the parts files, not counted",
        "statements about wires in the parts files, not counted",
    ),
    "units_assumed": (
        "delay in the source without a `timescale, taken as ns",
        "delays in the source without a `timescale, taken as ns",
    ),
}
"""Key → what is assumed of one, what of several."""


def assumption_words(key: str, count: int) -> str:
    """Return what an assumption says, to stand after its count."""
    one, several = WORDS.get(key, (key.replace("_", " "),) * 2)
    return one if count == 1 else several


def assumption_lines(assumptions: Sequence[tuple[str, int]], look: Look) -> list[Text]:
    """Return the heading and one line for each assumption that was made."""
    rows = [(str(count), assumption_words(key, count)) for key, count in assumptions if count]
    if not rows:
        return []
    room = max(len(count) for count, _ in rows)
    lines = title("assumptions")
    for count, words in rows:
        lines += wrap(Text(f"{count:>{room}}  {words}"), look.width, room + 2)
    return lines
