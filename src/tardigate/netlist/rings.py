"""Modules that contain themselves.

Takes elaborated templates, tells of a ring among them (N106). A module may instantiate itself with other
parameters as long as that ends (IEEE 1364-2005 clause 12.4.2): the ring is sought among modules with their
parameters. Iterative.
"""

from __future__ import annotations

from collections.abc import Sequence

from tardigate.netlist.template import Template
from tardigate.source.collector import Collector
from tardigate.source.diagnostic import Related
from tardigate.source.span import Span

_SHOWN = 12


def tell_ring(templates: Sequence[Template], collector: Collector) -> bool:
    """Tell of the first ring that is found, depth first from the top; return whether there is one."""
    path: list[int] = []
    on_path: set[int] = set()
    done: set[int] = set()
    stack: list[tuple[int, bool]] = [(0, True)]
    while stack:
        at, enter = stack.pop()
        if not enter:
            on_path.discard(path.pop())
            done.add(at)
        elif at in on_path:
            _tell([templates[number] for number in path[path.index(at) :]], collector)
            return True
        elif at not in done:
            path.append(at)
            on_path.add(at)
            stack.append((at, False))
            below = dict.fromkeys(child.template for child in templates[at].children)
            stack += [(child, True) for child in below if child not in done]
    return False


def _tell(ring: Sequence[Template], collector: Collector) -> None:
    names = [template.module for template in ring]
    related = tuple(Related(_span(template), f"`{template.module}`") for template in ring[:_SHOWN])
    collector.tell("N106", _span(ring[0]), ring=" > ".join([*names, names[0]]), related=related)


def _span(template: Template) -> Span:
    return template.text.span(template.place, template.place + len(template.module))
