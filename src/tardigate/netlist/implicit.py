"""Nets that nobody declared but a connection names (IEEE 1364-2005 clause 4.5).

Takes a module's tree, gives the names that connections, gate terminals and targets of assignments use, in
order of place. Iterative.
"""

from __future__ import annotations

from collections.abc import Iterator

from tardigate.syntax import tree


def connection_names(module: tree.Module) -> Iterator[tuple[str, int]]:
    """Yield names and offsets of all nets in statements that are not plain and may declare a net by use."""
    for item in module.items:
        roots: list[tree.Expression] = []
        if isinstance(item, tree.Gates):
            roots = [terminal for gate in item.gates for terminal in gate.terminals]
        elif isinstance(item, tree.Instances):
            roots = [c.net for instance in item.instances for c in instance.connections if c.net is not None]
        elif isinstance(item, tree.Continuous):
            roots = [assign.target for assign in item.assigns]
        for root in roots:
            work = [root]
            while work:
                node = work.pop()
                if isinstance(node, tree.Reference):
                    if len(node.path) == 1:
                        yield node.path[0], node.at
                else:
                    work.extend(reversed(tree.operands(node)))
