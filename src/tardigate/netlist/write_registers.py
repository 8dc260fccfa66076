"""The textbook register as Verilog: a module of one bit for each kind of register.

Takes a kind that an `always` made (see `parts/register_kind.py`), gives the text of a module that makes the
same kind, ports by order of its pins. A kind knows on which nets the stored value depends, not how: several
of them are written as enables of the first, which gives every figure, but need not store the same.
"""

from __future__ import annotations

import numpy as np

from tardigate.netlist.flat import CONSTANT_NAMES
from tardigate.netlist.write_words import delay_words
from tardigate.parts.kind import Edge, Kind

_EDGES = {Edge.RISE: "posedge", Edge.FALL: "negedge"}
_LOW, _HIGH = CONSTANT_NAMES[:2]
_FIRST_CONTROL = 2
"""Pins 0 and 1 are `q` and `clock`."""


def register_module(kind: Kind, name: str, whole: bool) -> str:
    """Return the text of the module `name`; `whole` as for `delay_words`."""
    behind = _FIRST_CONTROL + len(kind.control_sources)
    clock = Edge(int(kind.from_edge[kind.launches][0]))
    events = [f"{_EDGES[clock]} clock"]
    branches = []
    for pin, source in enumerate(kind.control_sources, _FIRST_CONTROL):
        control = kind.pins[pin]
        row = int(np.flatnonzero(kind.hop_from == pin)[0])
        active, forced = Edge(int(kind.from_edge[row])), Edge(int(kind.to_edge[row]))
        events.append(f"{_EDGES[active]} {control}")
        asked = control if active == Edge.RISE else f"!{control}"
        value = _HIGH if forced == Edge.RISE else _LOW
        branches.append(f"if ({asked}) q <= {delay_words(source, whole)}{value};\n    else ")
    data = kind.pins[behind:]
    enables = "".join(f"if ({pin}) " for pin in reversed(data[1:]))
    stored = f"{enables}q <= {delay_words(kind.source, whole)}{data[0] if data else _LOW};"
    ports, inputs = ", ".join(kind.pins), ", ".join(kind.pins[1:])
    return (
        f"module {name} ({ports});\n  output q;\n  reg q;\n  input {inputs};\n"
        f"  always @({' or '.join(events)})\n    {''.join(branches)}{stored}\nendmodule\n"
    )
