"""Modules that contain themselves.

Takes modules and what each has right below it, finds and tells of a ring among them (N106). A module may
instantiate itself with other parameters as long as that ends (IEEE 1364-2005 clause 12.4.2): among templates
the ring is sought among modules with their parameters. Iterative.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from typing import TypeVar

from tardigate.netlist.template import Template
from tardigate.source.collector import Collector
from tardigate.source.diagnostic import Related
from tardigate.source.span import Span

_SHOWN = 12

T = TypeVar("T", int, str)


def ring_below(starts: Iterable[T], below: Callable[[T], Iterable[T]]) -> list[T]:
    """Return the first ring that is found, depth first from the starts; empty when there is none."""
    done: set[T] = set()
    path: list[T] = []
    on_path: set[T] = set()
    for start in starts:
        stack = [(start, True)]
        while stack:
            at, enter = stack.pop()
            if not enter:
                on_path.discard(path.pop())
                done.add(at)
            elif at in on_path:
                return path[path.index(at) :]
            elif at not in done:
                path.append(at)
                on_path.add(at)
                stack.append((at, False))
                stack += [(each, True) for each in below(at)]
    return []


def tell_ring(templates: Sequence[Template], collector: Collector) -> bool:
    """Tell of a ring among templates below the first; return whether there is one."""
    found = ring_below([0], lambda at: dict.fromkeys(child.template for child in templates[at].children))
    ring = [templates[number] for number in found]
    tell_names([(each.module, _span(each)) for each in ring], collector)
    return bool(ring)


def tell_names(ring: Sequence[tuple[str, Span]], collector: Collector) -> None:
    """Tell of a ring, if there is one: the names and places of its modules."""
    if ring:
        related = tuple(Related(span, f"`{name}`") for name, span in ring[:_SHOWN])
        names = " > ".join(name for name, _ in [*ring, ring[0]])
        collector.tell("N106", ring[0][1], ring=names, related=related)


def _span(template: Template) -> Span:
    return template.text.span(template.place, template.place + len(template.module))
