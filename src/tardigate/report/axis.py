"""The common time axis of a report: where a time stands among the columns of a bar.

Takes femtoseconds and a number of cells, gives bars, ticks and labels as text of just that many cells.
"""

from __future__ import annotations

import math
from itertools import pairwise
from typing import NamedTuple

from rich.text import Text

from tardigate.parts.units import FEMTOSECONDS
from tardigate.report.looks import STYLES, Look
from tardigate.report.numbers import Scale


class Axis(NamedTuple):
    """An axis of `cells` cells (1 or more) from time 0 to `last` (fs, 0 or more), written in `unit`."""

    last: float
    cells: int
    unit: str
    look: Look

    def half(self, time: float) -> int:
        """Return the half cell (0 to 2 * cells) in which a time stands."""
        return round(2 * self.cells * min(max(time / self.last, 0.0), 1.0)) if self.last > 0 else 0

    def bar(self, begins: float, over: float, kind: str) -> Text:
        """Return the bar from one time to another: never without width, so that every hop is seen."""
        first = min(self.half(begins), 2 * self.cells - 1)
        stop = max(self.half(over), first + 1)
        left, right, both = self.look.halves(kind)
        bar = (right if first % 2 else "") + both * (stop // 2 - (first + 1) // 2)
        bar += left if stop % 2 else ""
        return Text(" " * (first // 2)).append(bar, STYLES[kind])

    def ticks(self) -> list[tuple[int, str]]:
        """Return the cell and label of each tick: the closest 1-2-5 steps whose labels stay apart."""
        per_unit = FEMTOSECONDS[self.unit]
        last = self.last / per_unit
        if last <= 0:
            return [(0, f"0 {self.unit_text()}")]
        power = math.floor(math.log10(3 * last / self.cells))  # a label and its gap take 3 cells or more
        while True:
            for factor in (1, 2, 5):
                ticks = self._ticks(factor, power, last)
                if _apart(ticks):
                    return ticks
            power += 1

    def _ticks(self, factor: int, power: int, last: float) -> list[tuple[int, str]]:
        ticks = []
        for i in range(int(last / (factor * 10.0**power)) + 1):
            steps = i * factor
            label = f"{steps * 10**power}" if power >= 0 else f"{steps / 10**-power:.{-power}f}"
            cell = self.half(steps * 10.0**power * FEMTOSECONDS[self.unit]) // 2
            ticks.append((cell, label if i else f"0 {self.unit_text()}"))
        return [(cell, label) for cell, label in ticks if cell == 0 or cell + len(label) <= self.cells]

    def unit_text(self) -> str:
        """Return the unit as it is written."""
        return unit_text(self.unit, self.look)

    def labels(self) -> Text:
        """Return the line of labels."""
        line = ""
        for cell, label in self.ticks():
            line = line.ljust(cell) + label
        return Text(line, STYLES["quiet"])

    def rule(self) -> Text:
        """Return the rule with its ticks."""
        line = [self.look.glyph("rule")] * self.cells
        for cell, _ in self.ticks():
            line[cell] = self.look.glyph("tick")
        return Text("".join(line), STYLES["quiet"])


def unit_text(unit: str, look: Look) -> str:
    """Return a unit of time as it is written."""
    return look.glyph("micro") if unit == "us" else unit


def with_unit(time: float, scale: Scale, look: Look) -> str:
    """Return a time with its unit, for prose: without zeros at the end."""
    text = scale.text(time)
    return f"{text.rstrip('0').rstrip('.') if '.' in text else text} {unit_text(scale.unit, look)}"


def _apart(ticks: list[tuple[int, str]]) -> bool:
    return all(a + len(label) + 2 <= b for (a, label), (b, _) in pairwise(ticks))
