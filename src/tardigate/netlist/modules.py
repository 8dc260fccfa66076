"""The modules of all files by name, and what a design needs of them.

Takes units, gives the modules under a top, each parsed once; tells of doubles, of a missing or doubtful top
and of a hierarchy that contains itself. Does not elaborate.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass, field

from tardigate.netlist.parameters import declarations_of
from tardigate.netlist.rings import ring_below, tell_names
from tardigate.source.collector import Collector
from tardigate.source.diagnostic import Diagnostic, Related, did_you_mean
from tardigate.source.faults import InputRefusedError
from tardigate.source.span import Span
from tardigate.syntax.outline import ModuleText
from tardigate.syntax.placing import in_force
from tardigate.syntax.tree import Always, Module, Parameter, Path, Specify, TimingCheck
from tardigate.syntax.verilog_reader import Unit, parse_module

_PROCEDURAL = ("V004", "V010")


@dataclass(slots=True)
class Modules:
    """The modules that may be elaborated; `bulk` says whether plain statements go past the grammar.

    `primitives` are the user-defined primitives, `cells` the modules that a part of a library looks like:
    with a specify block, or between `celldefine` and `endcelldefine`. Those of the latter that hold
    procedural code are taken as undescribed; `behavioural` says why.
    """

    described: Callable[[str], bool]
    bulk: bool = True
    primitives: dict[str, tuple[Unit, ModuleText]] = field(default_factory=dict)
    cells: set[str] = field(default_factory=set)
    behavioural: dict[str, tuple[Diagnostic, ...]] = field(default_factory=dict)
    _broken: set[str] = field(default_factory=set)
    _texts: dict[str, tuple[Unit, ModuleText]] = field(default_factory=dict)
    _trees: dict[str, Module] = field(default_factory=dict)
    _uses: dict[int, dict[str, list[str]]] = field(default_factory=dict)

    def __contains__(self, name: str) -> bool:
        return name in self._texts

    def __len__(self) -> int:
        return len(self._texts)

    def names(self) -> list[str]:
        """Return the names of all modules, in order of the files."""
        return list(self._texts)

    def unit(self, name: str) -> Unit:
        """Return the file that a module stands in."""
        return self._texts[name][0]

    def text(self, name: str) -> ModuleText:
        """Return where a module stands in its file."""
        return self._texts[name][1]

    def span(self, name: str) -> Span:
        """Return the place of a module's name."""
        unit, text = self._texts[name]
        return unit.text.span(text.at, text.at + len(name))

    def tree(self, name: str) -> Module:
        """Return a module's tree. Raises InputRefusedError when it is not in the subset."""
        if name not in self._trees:
            self._trees[name] = parse_module(*self._texts[name], bulk=self.bulk)
        return self._trees[name]

    def readable(self, name: str, collector: Collector) -> bool:
        """Tell whether a module can be parsed; the first time that it cannot, what is wrong is told."""
        if name in self._broken:
            return False
        try:
            module = self.tree(name)
            if name in self.cells and not self.has_specify(name):
                self._refuse_unclocked(module)
        except InputRefusedError as refused:
            self._broken.add(name)
            if name in self.cells and all(told.code in _PROCEDURAL for told in refused.diagnostics):
                self.behavioural[name] = refused.diagnostics
                return False
            for diagnostic in refused.diagnostics:
                collector.add(diagnostic)
            return False
        return True

    @property
    def has_broken(self) -> bool:
        """Tell whether a module that was asked for could not be parsed."""
        return bool(self._broken - self.behavioural.keys())

    def declarations(self, name: str) -> list[Parameter]:
        """Return the parameter declarations of a module that can be parsed, in order."""
        return declarations_of(self.tree(name))

    def _refuse_unclocked(self, module: Module) -> None:
        """Refuse a cell with an `always` that waits for no edge alone (V010): it is no register."""
        text = self.unit(module.name).text
        for item in module.items:
            if isinstance(item, Always) and not (item.events and all(event.edge for event in item.events)):
                reason = "it does not wait for edges alone"
                span = text.span(item.at)
                told = Diagnostic.of("V010", span, reason=reason, module=module.name)
                raise InputRefusedError((told,))

    def says_times(self, name: str) -> bool:
        """Tell whether a module that can be parsed has a specify block with paths or checks."""
        blocks = [item for item in self.tree(name).items if isinstance(item, Specify)]
        return any(isinstance(item, Path | TimingCheck) for block in blocks for item in block.items)

    def has_specify(self, name: str) -> bool:
        """Tell whether a module has a specify block."""
        return name in self._texts and name in self._texts[name][0].cells

    def uses(self, name: str) -> list[str]:
        """Return the modules, none of them a described part, that a module uses."""
        unit, _ = self._texts[name]
        if id(unit) not in self._uses:
            known = [below for below in self._texts if not self.described(below)]
            self._uses[id(unit)] = unit.uses(known)
        return self._uses[id(unit)].get(name, [])


def collect(
    units: Iterable[Unit], described: Callable[[str], bool], collector: Collector, bulk: bool
) -> Modules:
    """Put the modules of all files together; tells of doubles (N101) and of configurations (V006)."""
    modules = Modules(described, bulk)
    for unit in units:
        for text in unit.modules:
            known = modules._texts.get(text.name) or modules.primitives.get(text.name)
            if text.word == "config":
                collector.tell("V006", _span(unit, text), word=text.word, name=text.name)
            elif not text.name:
                collector.tell("V007", _span(unit, text))
            elif known is not None and not described(text.name):
                first = (Related(_span(*known), "first one here"),)
                collector.tell("N101", _span(unit, text), name=text.name, related=first)
            elif text.word == "primitive":
                modules.primitives[text.name] = (unit, text)
            else:
                modules._texts[text.name] = (unit, text)
                if text.name in unit.cells or in_force(unit.source.cells, text.start):
                    modules.cells.add(text.name)
    return modules


def _span(unit: Unit, text: ModuleText) -> Span:
    """Return the place of a module's name, or of the word where it should be."""
    return unit.text.span(text.at, text.at + max(1, len(text.name)))


def find_top(modules: Modules, wanted: str | None, collector: Collector) -> str | None:
    """Return the top module: the wanted one, or the only one that no other uses. Tells N102 to N105.

    A module that looks like a part of a library is the top only if nothing else could be.
    """
    names = [name for name in modules.names() if not modules.described(name)]
    if wanted is not None:
        if wanted in names:
            return wanted
        if modules.described(wanted):
            collector.tell("N105", name=wanted)
        else:
            collector.tell("N102", name=wanted, hint=did_you_mean(wanted, names) or _listed(names))
        return None
    if not names:
        collector.tell("N104")
        return None
    used = {below for name in names for below in modules.uses(name) if below != name}
    tops = [name for name in names if name not in used]
    tops = [name for name in tops if name not in modules.cells] or tops
    if len(tops) == 1:
        return tops[0]
    if tops:
        related = tuple(Related(modules.span(name), f"`{name}`") for name in tops[:8])
        collector.tell("N103", count=len(tops), names=_some(tops), related=related)
    else:
        ring = ring_below(names, modules.uses)
        tell_names([(name, modules.span(name)) for name in ring], collector)
    return None


def _some(names: Sequence[str]) -> str:
    shown = ", ".join(f"`{name}`" for name in names[:6])
    return shown if len(names) <= 6 else f"{shown} and {len(names) - 6} more"


def _listed(names: Sequence[str]) -> str:
    return f"The modules are {_some(names)}." if names else "No module was read."
