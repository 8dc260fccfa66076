"""Carries generate constructs out (IEEE 1364-2005 clause 12.4): a module's items to scopes.

Takes a module's tree and its parameters' values, gives its scopes with the items that stand in each. Nets and
instances are not declared here. Iterative; loops and blocks are counted.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence

from tardigate.netlist.block_names import block_names, declared_names, tell_same_names
from tardigate.netlist.constants import NotConstantError, Value, evaluate, whole
from tardigate.netlist.declare import Declarer
from tardigate.netlist.parameters import parameter_values
from tardigate.netlist.plain_tree import trees_of
from tardigate.netlist.rounds import Round
from tardigate.netlist.scopes import CHOICES, GENERATE, Scope
from tardigate.syntax import tree

MOST_BLOCKS = 1 << 16
"""Generate blocks that one module may become."""


def expand(module: tree.Module, values: Mapping[str, Value], declarer: Declarer) -> list[Scope]:
    """Return the scopes of a module, each after the one around it; tells N110, N116 to N119, N120."""
    root = Scope(0, -1, "", "", values, module.at)
    return _Expansion(declarer).run(root, module.items)


class _Expansion:
    """The scopes of one module under work."""

    def __init__(self, declarer: Declarer) -> None:
        self.declarer, self.collector, self.text = declarer, declarer.collector, declarer.text
        self.scopes: list[Scope] = []
        self._waiting: list[tuple[tree.Item, ...]] = []
        self._runs: dict[tree.Run, list[tree.Declaration | tree.Gates | tree.Instances]] = {}

    def run(self, root: Scope, items: Iterable[tree.Item]) -> list[Scope]:
        """Fill the module's scope, then the blocks that this makes, and so on."""
        self.scopes, self._waiting = [root], [tuple(items)]
        at = 0
        while at < len(self.scopes):
            self._fill(self.scopes[at], self._waiting[at])
            at += 1
        return self.scopes

    def _fill(self, scope: Scope, items: Sequence[tree.Item]) -> None:
        names = [named for item in items if isinstance(item, tree.Genvars) for named in item.names]
        scope.genvars |= frozenset(named.name for named in names)
        if scope.number:
            self._own_constants(scope, items)
        constructs = [item for item in items if isinstance(item, GENERATE)]
        taken = declared_names(self.declarer.unit, items) if constructs else frozenset()
        named = block_names(constructs, taken)
        tell_same_names(self.declarer, items, constructs)
        for item in items:
            if isinstance(item, tree.GenerateFor):
                self._loop(scope, item, named[id(item)])
            elif isinstance(item, CHOICES):
                block = self._chosen(scope, item)
                if block is not None:
                    self._add(scope, block, block.name or named[id(item)], scope.values, scope.looping)
            elif isinstance(item, tree.Run) and scope.number:
                if item not in self._runs:
                    self._runs[item] = list(trees_of(self.declarer.unit, item))
                scope.items += self._runs[item]
            elif not isinstance(item, tree.Genvars):
                scope.items.append(item)

    def _own_constants(self, scope: Scope, items: Sequence[tree.Item]) -> None:
        """Take the constants of the block itself, and hide those of outside that a net of it hides."""
        local = [item for item in items if isinstance(item, tree.Parameter)]
        hidden = {named.name for item in items if isinstance(item, tree.Declaration) for named in item.names}
        if not local and not hidden & scope.values.keys():
            return
        values = {name: value for name, value in scope.values.items() if name not in hidden}
        scope.values = {**values, **parameter_values(local, {}, self.declarer, values)}

    def _add(
        self, scope: Scope, block: tree.Block, name: str, values: Mapping[str, Value], looping: frozenset[str]
    ) -> None:
        if len(self.scopes) > MOST_BLOCKS:
            reason = f"the module has more than {MOST_BLOCKS} blocks"
            self.collector.tell("N118", self.text.span(block.at), reason=reason)
            self.collector.refuse()
        below = Scope(
            len(self.scopes), scope.number, name, f"{scope.prefix}{name}.", values, block.at, scope.genvars,
            looping,
        )  # fmt: skip
        scope.blocks.setdefault(name, below.number)
        self.scopes.append(below)
        self._waiting.append(block.items)

    # Loops (clause 12.4.1)

    def _loop(self, scope: Scope, loop: tree.GenerateFor, name: str) -> None:
        if not self._may_count(scope, loop):
            return
        looping = scope.looping | {loop.variable}
        values = {**scope.values}
        seen: set[int] = set()
        try:
            holds = Round(loop.condition, loop.variable, values)
            following = Round(loop.following, loop.variable, values)
            index = whole(evaluate(loop.first, values), loop.first.at)
            while True:
                values[loop.variable] = Value(index, 32)
                if not holds.value(values):
                    return
                if index in seen or abs(index) >> 31:
                    reason = f"`{loop.variable}` comes to {index} again" if index in seen else "it overflows"
                    self.collector.tell("N118", self.text.span(loop.at), reason=reason)
                    return
                seen.add(index)
                self._add(scope, loop.block, f"{loop.block.name or name}[{index}]", dict(values), looping)
                index = following.value(values)
        except NotConstantError as error:
            self.collector.tell("N120", self.text.span(error.at), reason=error.reason)

    def _may_count(self, scope: Scope, loop: tree.GenerateFor) -> bool:
        """Tell of a loop whose counter is no genvar, another in its step, or that of a loop around."""
        span = self.text.span(loop.at, loop.at + len(loop.variable))
        if loop.variable not in scope.genvars:
            self.collector.tell("N116", span, name=loop.variable)
        elif loop.stepped != loop.variable:
            reason = f"the loop counts `{loop.variable}` and steps `{loop.stepped}`"
            self.collector.tell("N117", span, reason=reason)
        elif loop.variable in scope.looping:
            self.collector.tell("N117", span, reason=f"a loop around counts with `{loop.variable}` as well")
        else:
            return True
        return False

    # Choices (clause 12.4.2)

    def _chosen(self, scope: Scope, choice: tree.GenerateIf | tree.GenerateCase) -> tree.Block | None:
        """Return the block that is chosen; one that holds but another choice belongs to this one."""
        while True:
            if isinstance(choice, tree.GenerateIf):
                block = choice.yes if self._holds(choice.condition, scope) else choice.no
            else:
                block = self._case(scope, choice)
            nested = None if block is None or block.begun else block.items[0]
            if not isinstance(nested, CHOICES):
                return block
            choice = nested

    def _holds(self, condition: tree.Expression, scope: Scope) -> bool:
        """Tell whether a condition is true; one that is not known to be is false (clause 9.4)."""
        if isinstance(condition, tree.Number) and condition.unknown | condition.floating:
            return bool(condition.value)
        return bool(self.declarer.constant(condition, scope.values).value)

    def _case(self, scope: Scope, item: tree.GenerateCase) -> tree.Block | None:
        defaults = [arm for arm in item.arms if not arm.labels]
        if len(defaults) > 1:
            self.collector.tell("N119", self.text.span(item.at))
        for arm in item.arms:
            if any(self._same(scope, item.subject, label) for label in arm.labels):
                return arm.block
        return defaults[0].block if defaults else None

    def _same(self, scope: Scope, subject: tree.Expression, label: tree.Expression) -> bool:
        """Tell whether two expressions are equal, x and z being values of their own (clause 9.5)."""
        odd = [isinstance(each, tree.Number) and each.unknown | each.floating for each in (subject, label)]
        if any(odd):
            return all(odd) and _digits(subject) == _digits(label)
        same = tree.Binary("===", subject, label, label.at)
        return bool(self.declarer.constant(same, scope.values).value)


def _digits(number: tree.Expression) -> tuple[int, int, int]:
    assert isinstance(number, tree.Number)
    return number.value, number.unknown, number.floating
