"""The flat design as canonical text: the language of tests.

Takes the flat design, gives one line a port and part instance, by name and in order of names, so that two
designs are equal exactly when their texts are.
"""

from __future__ import annotations

from tardigate.netlist.flat import OPEN, Flat
from tardigate.netlist.names import Names
from tardigate.parts.kind import Way


def dump(flat: Flat, *, places: bool = False) -> str:
    """Return the text; with `places` each instance tells the line it is written in."""
    names = Names(flat)
    ports = [f"{Way(port.way).name.lower()} {port.name} = {names.net(port.net)}" for port in flat.ports]
    lines = []
    for inst in range(flat.instances):
        kind = flat.kinds[flat.inst_kind[inst]]
        nets = flat.pin_net[flat.pin_start[inst] : flat.pin_start[inst + 1]].tolist()
        pins = ", ".join(
            f"{pin}={'-' if net == OPEN else names.net(net)}"
            for pin, net in zip(kind.pins, nets, strict=True)
        )
        where = f" @{names.place(inst).line}" if places else ""
        lines.append(f"{kind.name} {names.instance(inst)}: {pins}{where}")
    return "\n".join([*ports, *sorted(lines)]) + "\n"
