"""Random hierarchical designs that use the whole structural language.

Takes a seed and a size, gives text: the same for the same; the top is `top`. Every net has one driver at most,
unless its type allows more, and every name that is used exists, so the text is legal unless a fault is put in. Clause numbers are of IEEE 1364-2005.
"""

# ruff: noqa: E501 - a case of a table stands on one line
from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from random import Random
from typing import TYPE_CHECKING

# isort: off
# fmt: off
if TYPE_CHECKING:
    from tests.random_pieces import ATTRIBUTES, DIRECTIVES, STRINGS, TREE, Module, Net, Pieces, Port, Scope, Width, under
else:  # loaded under this name by conftest.py
    from random_pieces import ATTRIBUTES, DIRECTIVES, STRINGS, TREE, Module, Net, Pieces, Port, Scope, Width, under
# fmt: on
# isort: on


class Writer(Pieces):
    """Writes one module."""

    def __init__(self, random: Random, below: Sequence[Module], strict: bool) -> None:
        super().__init__(random, strict)
        self.below = below

    # Instances

    def instance(self) -> None:
        if not self.below:
            return self.gate()
        module = self.random.choice(self.below)
        name = self.name("u")
        joined = any(port.joined for port in module.ports)  # pyslang gives each element the same bits there
        copies = 2 if not joined and self.maybe(0.15) else 1
        low = self.random.choice((0, 3))
        bounds = "" if copies == 1 else self.random.choice((f"[{low}:{low + 1}]", f"[{low + 1}:{low}]"))
        paths = [name] if copies == 1 else [f"{name}[{low}]", f"{name}[{low + 1}]"]
        values, overrides = self.overrides(module, paths)
        connections = self.connections(module, values, copies)
        self.line(f"{module.name} {overrides} {name} {bounds} ({connections});")
        for path in paths:
            seen = [under(net, path, values) for net in module.inner]
            self.scope.nets += self.random.sample(seen, min(3, len(seen)))
            for hook in module.hooks:
                if self.maybe(0.3):
                    self.gate_on(under(hook, path, values))
        return None

    def overrides(self, module: Module, paths: list[str]) -> tuple[dict[str, int | str], str]:
        """Return the values of the parameters that widths hang on, and the text behind the module's name."""
        random = self.random
        new: dict[str, int | str] = {}
        for name in module.parameters:
            new[name] = random.choice(STRINGS) if name == "S" else random.randrange(1, 4)
        texts = {
            n: f'"{v}"' if isinstance(v, str) else random.choice((str(v), f"{v + 1} - 1", f"3'd{v}"))
            for n, v in new.items()
        }
        for name, value in self.known.items():
            texts = {n: name if new[n] == value and self.maybe(0.5) else text for n, text in texts.items()}
        style = random.choice(("none", "order", "name", "defparam", "both"))
        if style == "order":
            first = random.randrange(len(texts) + 1)
            given = dict(list(new.items())[:first])
            text = ", ".join(list(texts.values())[:first])
            return {**module.defaults, **given}, f"#({text})" if first else ""
        picked = [n for n in new if self.maybe(0.6)]
        if style == "none" or not picked:
            return module.defaults, ""
        given = {**module.defaults, **{n: new[n] for n in picked}}
        if style == "name":
            random.shuffle(picked)
            return given, "#(" + ", ".join(f".{n}({texts[n]})" for n in picked) + ")"
        assigns = [f"{path}.{n} = {texts[n]}" for n in picked for path in paths]
        self.line(f"defparam {', '.join(assigns)};")
        return given, f"#(.{picked[0]}(2))" if style == "both" and picked[0] != "S" else ""

    def connections(self, module: Module, values: dict[str, int | str], copies: int) -> str:
        random = self.random
        ends = []
        for port in module.ports:
            width = port.width if isinstance(port.width, int) else int(values[port.width])
            if port.way == "none":
                ends.append((port.name, ""))
            elif port.way == "input":
                ends.append((port.name, self.reading(width * random.choice((1, copies)))))
            elif port.way == "inout":
                net = self.net(width, ("tri", "wire", "tri1"), delayed=0)
                self.scope.nets.append(net)
                ends.append((port.name, net.name))
            else:
                ends.append((port.name, "" if self.maybe(0.1) else self.driving(width * copies)))
        if any(not port.name for port in module.ports) or self.maybe(0.5):
            return ", ".join(net for _, net in ends)
        random.shuffle(ends)
        return ", ".join(
            f"{random.choice(ATTRIBUTES) if self.maybe(0.04) else ''} .{pin}({net})" for pin, net in ends
        )

    def tree(self) -> None:
        """Write an instance of a module that contains itself."""
        width = self.random.randrange(1, 6)
        name = self.name("t")
        overrides = self.random.choice((f"#({width})", f"#(.N({width}))", ""))
        if not overrides:
            self.line(f"defparam {name}.N = {width};")
        value, target = self.reading(width), self.driving(1)
        self.line(f"tree {overrides} {name} ({value}, {target});")
        self.gate_on(Net(f"{name}.hook"))
        if width > 1:
            self.scope.nets += [Net(f"{name}.fork_.p"), Net(f"{name}.fork_.low.hook")]

    # Generate

    def block(
        self, size: int, name: str, indices: list[tuple[str, int, int]], drive: str = ""
    ) -> tuple[str, Scope]:
        """Return the text of a block and what it holds."""
        outer = self.scope
        inner = self.scope = Scope(
            [net for net in outer.nets if "genblk" not in net.name], [*outer.indices, *indices], looped=True
        )
        known = dict(self.known)
        if drive:
            self.line(f"buf {self.name('g')} ({drive}, {self.reading(1)});")
        elif self.maybe(0.15):
            self.hide()
        hook = self.name("h")
        self.line(f"wire {hook};")
        inner.hooks.append(Net(hook))
        for _ in range(self.random.randrange(1, size + 1)):
            self.item(size // 2)
        self.scope, self.known = outer, known
        text = "\n".join(inner.lines).replace("\n", "\n  ")
        return f"begin{f' : {name}' if name else ''}\n  {text}\nend", inner

    def seen(self, block: Scope, path: str, drive: bool = True) -> None:
        """Let the rest of this scope read and drive nets of a block; one without a name stays closed (12.4.3)."""
        if not path:
            return
        nets = [under(net, path) for net in block.inner if isinstance(net.width, int)]
        nets = self.random.sample(nets, min(2, len(nets)))
        self.scope.nets += nets
        if self.maybe(0.5):
            self.scope.inner += nets
        for hook in block.hooks:
            if drive and self.maybe(0.4):
                self.gate_on(under(hook, path))

    def region(self, text: str) -> None:
        self.line(f"generate\n{text}\nendgenerate" if not self.scope.looped and self.maybe(0.6) else text)

    def loop(self, size: int) -> None:
        random, genvar, name = self.random, self.name("i"), self.name("b") if self.maybe(0.7) else ""
        values = random.choice(
            (range(3), range(1, 4), range(2, -1, -1), range(0, 4, 2), range(1, 2), range(0))
        )
        step, ends = values.step, (min(values, default=0), max(values, default=0))
        bound = f"{genvar} {'<' if step > 0 else '>'} {values.stop}"
        if step == 1 and self.maybe(0.3):
            bound = f"{genvar} <= {values.stop - 1} && 1"
        indices = [
            (genvar, *ends),
            (f"{ends[1]} - {genvar} + {ends[0]}", *ends),
            (f"{genvar} * 2 - {genvar}", *ends),
        ]
        drive = ""
        if len(values) and self.maybe(0.6):
            target = Net(self.name("x"), ends[1] - ends[0] + 1, ends[1], ends[0])
            self.line(f"wire {target.range} {target.name};")
            self.scope.nets.append(target)
            drive = f"{target.name}[{random.choice(indices)[0]}]"
        self.scope.constructs += 1
        text, block = self.block(size, name, indices, drive)
        self.line(f"genvar {genvar};")
        self.region(
            f"for ({genvar} = {values.start}; {bound}; {genvar} = {genvar} {'+' if step > 0 else '-'} {abs(step)})\n{text}"
        )
        if len(values) and name:
            self.seen(block, f"{name}[{random.choice(values)}]")

    def loop_of_width(self, size: int) -> None:
        """Write a loop over the bits of a net whose width is a parameter."""
        genvar, name = self.name("i"), self.name("b")
        target = Net(self.name("x"), "W", "W-1", 0)
        self.line(f"wire {target.range} {target.name};")
        self.scope.constructs += 1
        drive = f"{target.name}[{self.random.choice((genvar, f'W - 1 - {genvar}'))}]"
        text, _ = self.block(size, name, [], drive)
        self.scope.nets.append(target)
        self.line(f"genvar {genvar};")
        self.region(f"for ({genvar} = 0; {genvar} < W; {genvar} = {genvar} + 1)\n{text}")

    def condition(self) -> tuple[str, bool | None]:
        """Return a condition and what it comes to, as far as known."""
        forms = {"K > 1": "K", "W != 2 && K": "WK", 'S == "fast"': "S", "Q[0]": "Q"}
        found: list[tuple[str, bool | None]] = []
        found += [(text, None) for text, names in forms.items() if set(names) <= self.defaults.keys()]
        for text, low, _ in self.scope.indices[:1]:
            if text.isalnum() and low >= 0:
                found.append((f"{text} % 2 == 0", None))
        for name, value in self.known.items():
            found.append((f"{name} > 3", value > 3))
        found += [("1", True), ("2 < 1", False)]
        return self.random.choice(found)

    def choice(self, size: int) -> None:
        """Write an `if`, with `else` and `else if`."""
        names = [self.name("b"), self.name("b")] if self.maybe(0.6) else ["", ""]
        condition, comes_to = self.condition()
        self.scope.constructs += 1
        yes, no = self.block(size, names[0], []), self.block(size, names[1], [])
        chain = f"if ({self.condition()[0]}) ; else " if self.maybe(0.2) else ""
        text = f"if ({condition}) {yes[0]}" + (f" else {chain}{no[0]}" if self.maybe(0.7) else "")
        self.region(text)
        if comes_to:
            self.seen(yes[1], names[0])
        elif comes_to is False and text.endswith(no[0]) and not chain:
            self.seen(no[1], names[1])

    def case(self, size: int) -> None:
        subjects = [("K", None), *((name, value) for name, value in self.known.items())]
        subject, value = self.random.choice(
            [pair for pair in subjects if pair[0] in {**self.defaults, **self.known}] or [("1 + 1", 2)]
        )
        self.scope.constructs += 1
        name = self.name("b") if self.maybe(0.6) else ""
        blocks = [self.block(size, name, []) for _ in range(3)]
        labels = ("1, 2", "3 - 0", "default :" if self.maybe(0.5) else "default")
        arms = "\n".join(
            f"{label}{'' if 'default' in label else ' :'} {block[0]}"
            for label, block in zip(labels, blocks, strict=True)
        )
        self.region(f"case ({subject})\n{arms}\nendcase")
        if value is not None:
            self.seen(blocks[0 if value in (1, 2) else 1 if value == 3 else 2][1], name)

    def item(self, size: int) -> None:
        """Write one item of a module or block."""
        nested = [self.loop, self.choice, self.case, *([self.loop_of_width] if "W" in self.defaults else [])]
        if size and self.maybe(0.45):
            return self.random.choice(nested)(size)
        plain = [
            self.gate,
            self.gate,
            self.assign,
            self.several,
            self.constants,
            self.rail,
            self.memory,
            self.tree,
        ]
        plain += [self.instance] * (2 if self.scope.looped else 3)
        self.random.choice(plain)()
        return None


def _parameters(writer: Writer) -> tuple[list[str], list[str]]:
    """Return the parameters of a module as declared, and their names in order."""
    random = writer.random
    forms = {
        "W": ("W = {}", "integer W = {}", "[3:0] W = {}", "W = 2 + {} - 2"),
        "K": ("K = {}", "signed [3:0] K = {}", "integer K = {}"),
        "Q": ("[2:0] Q = {}", "[0:2] Q = {}", "Q = 3'd{}", "signed [2:0] Q = {}"),
        "S": ('S = "{}"', 'S = "{}"'),
    }
    names = [name for name in forms if writer.maybe(0.6)]
    random.shuffle(names)
    for name in names:
        writer.defaults[name] = random.choice(STRINGS) if name == "S" else random.randrange(1, 4)
    return [random.choice(forms[name]).format(writer.defaults[name]) for name in names], names


def _port(writer: Writer, way: str, header: list[str], declared: list[str], listed: bool) -> list[Port]:
    """Write a port and return how it looks from outside; with `listed` in one of the forms of clause 12.3.2."""
    random = writer.random
    width: Width = "W" if "W" in writer.defaults and writer.maybe(0.3) else random.choice((1, 1, 2, 4))
    form = random.choice(("plain", "plain", "renamed", "joined", "part")) if listed else "plain"
    net = replace(writer.bounds(width), name=writer.name("p"))
    if form == "part":
        net = Net(net.name, 4, 3, 0)
    attribute = random.choice(ATTRIBUTES) + " " if writer.maybe(0.05) else ""
    kind = random.choice(("", "wire ")) if not writer.strict else "wire "
    declared.append(f"{attribute}{way} {kind}{net.range} {net.name}")
    writer.scope.nets.append(net)
    outer = writer.name("x").rstrip("; .+").lstrip("\\")
    if form == "plain":
        header.append(net.name)
        return [Port(net.name, way, width)]
    if form == "renamed":
        header.append(f".{outer}({net.name})")
        return [Port(outer, way, width)]
    if form == "part":
        header.append(f".{outer}({net.name}[3:1])")
        header.append(f".{outer}_({net.name}[0])")
        return [Port(outer, way, 3), Port(f"{outer}_", way, 1)]
    other = Net(writer.name("p"))
    declared.append(f"{way} {kind}{other.name}")
    writer.scope.nets.append(other)
    total: Width = width + 1 if isinstance(width, int) else 0
    if not total:
        header.extend((net.name, other.name))
        return [Port(net.name, way, width), Port(other.name, way, 1)]
    header.append(f".{outer}({{{other.name}, {net.name}}})")
    return [Port(outer, way, total, joined=True)]


def _module(
    random: Random, name: str, below: Sequence[Module], size: int, strict: bool, fault: str = ""
) -> tuple[Module, str]:
    writer = Writer(random, below, strict)
    parameters, order = _parameters(writer) if name != "top" else ([], [])
    listed = writer.maybe(0.5)
    header: list[str] = []
    declared: list[str] = []
    ports: list[Port] = []
    for _ in range(random.randrange(1, 4)):
        ports += _port(writer, "input", header, declared, listed)
    readable = len(writer.scope.nets)
    for _ in range(random.randrange(1, 3)):
        ports += _port(writer, "output", header, declared, listed)
    outputs = writer.scope.nets[readable:]
    if listed and writer.maybe(0.1):
        header.append(".nothing()")
        ports.append(Port("nothing", "none", 0))
    hook = replace(writer.bounds(random.choice((1, 2))), name=writer.name("h"))
    writer.line(f"wire {hook.range} {hook.name};")
    writer.scope.hooks.append(hook)
    if writer.maybe(0.3):
        ports += _port(writer, "inout", header, declared, listed)
        drives = writer.scope.nets[readable + len(outputs) :]
    else:
        drives = []
    for _ in range(random.randrange(1, size + 1) if name != "top" else size):
        writer.item(size // 2 if size > 1 else 1)
    for net in outputs:
        writer.gate_on(net)
    for net in drives:
        writer.gate_on(net, ("bufif0", "notif1"))
    lines = writer.scope.lines
    if fault:
        lines.insert(random.randrange(len(lines) + 1), fault)
    inner = [net for net in [*writer.scope.inner, *outputs] if "genblk" not in net.name]
    module = Module(
        name, tuple(ports), tuple(order), writer.defaults, tuple(inner), tuple(writer.scope.hooks)
    )
    return module, _text(writer, name, parameters, header, declared, listed)


def _text(
    writer: Writer, name: str, parameters: list[str], header: list[str], declared: list[str], listed: bool
) -> str:
    lines, behind = writer.scope.lines, ""
    if parameters and listed and writer.maybe(0.5):
        declared = [*(f"parameter {one}" for one in parameters), *declared]
    elif parameters:
        behind = f" #(parameter {', parameter '.join(parameters)})"
    if listed:
        lines = [f"{one};" for one in declared] + lines
    before = writer.random.choice(ATTRIBUTES) + " " if writer.maybe(0.1) else ""
    ports = header if listed else declared
    return f"{before}module {name}{behind} ({', '.join(ports)});\n" + "\n".join(lines) + "\nendmodule\n"


def structure(seed: int, size: int = 5, fault: str = "", modules: str = "") -> str:
    """Return the text of a design whose top is `top`; `fault` goes into its body, `modules` beside it."""
    random = Random(seed)
    strict = not fault and random.random() < 0.2
    below: list[Module] = []
    texts = [TREE, modules]
    for number in range(random.randrange(1, 4)):
        module, text = _module(random, f"m{number}", below[-2:], size, strict)
        below.append(module)
        texts.append(text)
    texts.append(_module(random, "top", below[-2:], size, strict, fault)[1])
    random.shuffle(texts)
    if strict:
        return "`default_nettype none\n" + "\n".join(texts)
    for at, text in enumerate(texts):
        if random.random() < 0.2:
            texts[at] = f"{random.choice(DIRECTIVES)}\n{text}`resetall\n"
    return "\n".join(texts)
