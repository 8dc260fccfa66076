"""Random hierarchical designs that use the whole structural language, and faults of known kinds.

Takes a seed and a size, gives text: the same for the same; the top is `top`. Every net has one driver at most,
unless its type allows more, and every name that is used exists, so the text is legal unless a fault of the
table `FAULTS` is asked for. Clause numbers are of IEEE 1364-2005.
"""

# ruff: noqa: E501 - a case of a table stands on one line
from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, field, replace
from random import Random

GATES = ("and", "nand", "or", "nor", "xor", "xnor", "buf", "not", "bufif0", "bufif1", "notif0", "notif1")
ONE_DRIVER = ("wire", "wire", "wire", "tri", "tri0", "tri1", "trireg (small)", "trireg (large)", "trireg")
WIRED = ("wand", "wor", "triand", "trior")
STRENGTHS = (
    "(strong0, strong1)",
    "(pull1, weak0)",
    "(supply0, supply1)",
    "(highz0, strong1)",
    "(weak0, highz1)",
)
DELAYS = ("#3", "#(1, 2)", "#(1:2:3, 4)", "#1.5", "#(2)", "#(1:1:1)")
ATTRIBUTES = ("(* keep *)", '(* note = "a;b", n = 2 *)', "(* a = 1 + 1, b *)", "(* full *) (* soft = 0 *)")
DIRECTIVES = ("`resetall", "`celldefine", "`endcelldefine", '`line 40 "other.v" 0', "`nounconnected_drive", "`default_nettype tri",
    "`unconnected_drive pull1\n`nounconnected_drive")  # fmt: skip
STRINGS = ("fast", "slow", "a b")
TREE = """module tree #(parameter N = 1, parameter [3:0] LEVEL = 0) (input wire [N-1:0] a, output wire y);
  wire hook;
  generate
    if (N == 1) begin : leaf
      buf b (y, a[0]);
    end else begin : fork_
      localparam L = N / 2;
      wire p, q;
      tree #(.N(L), .LEVEL(LEVEL + 1)) low (a[L-1:0], p);
      tree #(N - L, LEVEL + 1) high (.a(a[N-1:L]), .y(q));
      nand g (y, p, q);
    end
  endgenerate
endmodule
"""

Width = int | str
"""A number of bits, or the name of a parameter."""


@dataclass(frozen=True)
class Net:
    """A net as a scope names it; `left` is None for a scalar, bounds of a width by parameter are text."""

    name: str
    width: Width = 1
    left: int | str | None = None
    right: int | str = 0

    @property
    def range(self) -> str:
        """The range as declared."""
        return "" if self.left is None else f"[{self.left}:{self.right}]"

    def has(self, low: int, high: int) -> bool:
        """Tell whether all indices from `low` to `high` are within the range."""
        if isinstance(self.left, int) and isinstance(self.right, int):
            return min(self.left, self.right) <= low <= high <= max(self.left, self.right)
        return False


@dataclass(frozen=True)
class Port:
    """A port as an instance sees it: without a name it is connected by order only."""

    name: str
    way: str
    width: Width
    joined: bool = False


@dataclass(frozen=True)
class Module:
    """What an instance needs to know of a module: `inner` may be read from outside, `hooks` driven."""

    name: str
    ports: tuple[Port, ...]
    parameters: tuple[str, ...]
    defaults: dict[str, int | str]
    inner: tuple[Net, ...]
    hooks: tuple[Net, ...]


@dataclass
class Scope:
    """A module or a generate block while it is written."""

    nets: list[Net] = field(default_factory=list)
    indices: list[tuple[str, int, int]] = field(default_factory=list)
    lines: list[str] = field(default_factory=list)
    inner: list[Net] = field(default_factory=list)
    hooks: list[Net] = field(default_factory=list)
    named: set[str] = field(default_factory=set)
    constructs: int = 0
    looped: bool = False


def under(net: Net, path: str, values: dict[str, int | str] | None = None) -> Net:
    """Return a net as seen from outside of `path`, its parameters put in."""
    if isinstance(net.width, int):
        return replace(net, name=f"{path}.{net.name}")
    width = int((values or {})[net.width])
    known = {"W-1": width - 1, "W": width, "0": 0, "1": 1}
    return Net(f"{path}.{net.name}", width, known[str(net.left)], known[str(net.right)])


class Writer:
    """Writes one module."""

    def __init__(self, random: Random, below: Sequence[Module], strict: bool) -> None:
        self.random, self.below, self.strict = random, below, strict
        self.count = 0
        self.defaults: dict[str, int | str] = {}
        self.known: dict[str, int] = {}
        self.scope = Scope()

    def maybe(self, chance: float) -> bool:
        return self.random.random() < chance

    def name(self, stem: str) -> str:
        self.count += 1
        name = f"{stem}{self.count}"
        if self.maybe(0.04):
            return f"\\{name}.+; "
        clash = f"genblk{self.scope.constructs + 1}"
        if stem == "n" and self.maybe(0.05) and clash not in self.scope.named:
            name = clash  # an unnamed block evades it
        self.scope.named.add(name)
        return name

    def line(self, text: str) -> None:
        attribute = (
            self.random.choice(ATTRIBUTES) + " " if self.maybe(0.06) and text[:9] != "generate\n" else ""
        )
        self.scope.lines.append(attribute + text)

    # Nets

    def bounds(self, width: Width) -> Net:
        if isinstance(width, str):
            return Net("", width, *self.random.choice(((f"{width}-1", 0), (0, f"{width}-1"), (width, 1))))
        if width == 1 and self.maybe(0.8):
            return Net("")
        low = self.random.choice((0, 0, 1, 5, -2))
        ends = (low + width - 1, low) if self.maybe(0.7) else (low, low + width - 1)
        return Net("", width, *ends)

    def net(self, width: Width, types: Sequence[str] = ONE_DRIVER) -> Net:
        """Declare a new net."""
        shape, kind = self.bounds(width), self.random.choice(types)
        net = replace(shape, name=self.name("n"))
        implicit = shape.left is None and kind == "wire" and not self.strict
        if not (implicit and self.maybe(0.2)):
            how = (
                self.random.choice(("scalared", "signed"))
                if shape.width not in (1, "W") and self.maybe(0.1)
                else ""
            )
            delay = self.random.choice(DELAYS) if self.maybe(0.08) else ""
            self.line(f"{kind} {how} {shape.range} {delay} {net.name};")
        self.scope.inner.append(net)
        return net

    def hide(self) -> None:
        """Declare a net whose name an outer one has (12.7)."""
        outer = [net for net in self.scope.nets if not {".", "["} & set(net.name) and net.width == 1]
        if not outer:
            return
        name = self.random.choice(outer).name
        width = self.random.choice((1, 2))
        self.scope.nets = [net for net in self.scope.nets if net.name != name]
        self.scope.named.add(name)
        net = Net(name, width, *((1, 0) if width == 2 else (None, 0)))
        self.line(f"wire {net.range} {name};")
        self.scope.nets.append(net)
        self.scope.inner.append(net)
        self.gate_on(net)

    def memory(self) -> None:
        """Declare an array of nets (4.9); its words are nets."""
        name, width = self.name("m"), self.random.choice((1, 3))
        shape = Net("", 3, 2, 0) if width == 3 else Net("")
        self.line(f"wire {shape.range} {name} [0:2];")
        words = [replace(shape, name=f"{name}[{at}]") for at in range(3)]
        for word in words:
            if self.maybe(0.7):
                self.gate_on(word)
        self.scope.nets += words

    # Expressions

    def reading(self, width: Width, depth: int = 0) -> str:
        """Return an expression of `width` bits."""
        random = self.random
        if isinstance(width, str):
            whole = [net.name for net in self.scope.nets if net.width == width]
            if whole and self.maybe(0.7):
                return random.choice(whole)
            return f"{{{width}{{{self.reading(1, depth + 1)}}}}}"
        shape = random.random()
        if shape < 0.06:
            return f"{width}'b" + "".join(random.choice("01") for _ in range(width))
        if shape < 0.09 and width == 2 and "Q" in self.defaults:
            return "{Q[2], Q[0]}"
        if shape < 0.2 and depth < 3 and width > 1:
            cut = random.randrange(1, width)
            return f"{{{self.reading(width - cut, depth + 1)}, {self.reading(cut, depth + 1)}}}"
        if shape < 0.26 and depth < 3:
            times = random.choice([n for n in (1, 2, 3, width) if width % n == 0])
            return f"{{{times}{{{self.reading(width // times, depth + 1)}}}}}"
        return self.piece(width)

    def piece(self, width: int) -> str:
        """Return a net or a part of one."""
        random = self.random
        fit = [net for net in self.scope.nets if isinstance(net.width, int) and net.width >= width]
        if width == 1 and self.maybe(0.2):
            fit = [net for net in self.scope.nets if isinstance(net.width, str)] or fit
        if not fit:
            return f"{width}'b" + "01"[random.randrange(2)] * width
        net = random.choice(fit)
        if net.left is None or (net.width == width and self.maybe(0.5)):
            return net.name
        if isinstance(net.width, str):
            ends = (str(net.left), str(net.right), *(() if net.right == 1 else (f"{net.width}/2",)))
            return f"{net.name}[{random.choice(ends)}]"
        index = [text for text, low, high in self.scope.indices if net.has(low, high + width - 1)]
        if index and self.maybe(0.6):
            return f"{net.name}[{random.choice(index)}" + ("]" if width == 1 else f" +: {width}]")
        return self.part(net, width)

    def part(self, net: Net, width: int) -> str:
        assert isinstance(net.left, int)
        assert isinstance(net.right, int)
        assert isinstance(net.width, int)
        low = min(net.left, net.right) + self.random.randrange(net.width - width + 1)
        high = low + width - 1
        down = net.left >= net.right
        if width == 1:
            return f"{net.name}[{self.random.choice((str(low), f'{low + 1} - 1', f'({low})'))}]"
        return self.random.choice(
            (
                f"{net.name}[{low} +: {width}]",
                f"{net.name}[{high} -: {width}]",
                f"{net.name}[{(high if down else low)}:{(low if down else high)}]",
            )
        )

    def value(self, width: Width, depth: int = 0) -> str:
        """Return an expression with operators."""
        left, right = self.reading(width), self.reading(width)
        attribute = self.random.choice(ATTRIBUTES) if self.maybe(0.05) else ""
        shape = self.random.randrange(8 if depth < 2 else 1)
        if shape == 0:
            return left
        if shape == 1:
            return f"({self.reading(1)} ? {attribute} {left} : {self.value(width, depth + 1)})"
        if shape == 2:
            return f"({left} {self.random.choice(['<<', '>>', '>>>', '<<<'])} {self.random.randrange(3)})"
        if shape == 3 and width == 1:
            return f"({self.random.choice(['&', '~|', '^', '!', '~^'])} {attribute} {self.reading(3)})"
        if shape == 4 and width == 1:
            return f"({left} {self.random.choice(['==', '!=', '&&', '||'])} {attribute} {right})"
        if shape == 5:
            return f"(~ {attribute} {self.value(width, depth + 1)})"
        return (
            f"({left} {self.random.choice(['&', '|', '^', '~^'])} {attribute} {self.value(width, depth + 1)})"
        )

    def driving(self, width: Width) -> str:
        """Return a new net or a concatenation of new nets."""
        if isinstance(width, int) and width > 1 and self.maybe(0.2):
            cut = self.random.randrange(1, width)
            return f"{{{self.driving(width - cut)}, {self.driving(cut)}}}"
        net = self.net(width)
        self.scope.nets.append(net)
        if isinstance(net.left, int) and self.maybe(0.3):
            return f"{net.name}[{net.left}:{net.right}]" if net.width != 1 else f"{net.name}[{net.right}]"
        return net.name

    # Gates and assignments

    def before(self) -> str:
        strength = self.random.choice(STRENGTHS) if self.maybe(0.12) else ""
        delay = self.random.choice(DELAYS) if self.maybe(0.15) else ""
        if delay == "#(2)" and "K" in self.defaults:
            delay = "#(K, 2)"
        return f"{strength} {delay}"

    def gate(self) -> None:
        copies: Width = (
            self.random.choice((2, 3, "W" if "W" in self.defaults else 2)) if self.maybe(0.2) else 1
        )
        self.gate_on(replace(Net(self.driving(copies)), width=copies))

    def gate_on(self, net: Net, kinds: Sequence[str] = GATES) -> None:
        """Write a gate, or an array of them, that drives a net."""
        random = self.random
        kind = random.choice(kinds)
        inputs = 2 if "if" in kind else 1 if kind in ("buf", "not") else random.choice((1, 2, 2, 2, 3, 5))
        drives = [net.name]
        if kind in ("buf", "not") and self.maybe(0.2):
            drives.append(self.driving(net.width))
        reads = [self.reading(net.width if self.maybe(0.7) else 1) for _ in range(inputs)]
        high = f"{net.width}-1" if isinstance(net.width, str) else str(net.width - 1)
        bounds = (
            ""
            if net.width == 1 and net.left is None
            else random.choice((f"[{high}:0]", f"[0:{high}]", f"[{high}+2:2]"))
        )
        if net.width == 1 and net.left is None:
            reads = [self.reading(1) for _ in reads]
        self.line(f"{kind} {self.before()} {self.name('g')} {bounds} ({', '.join([*drives, *reads])});")

    def assign(self) -> None:
        width: Width = self.random.choice((1, 2, 4, "W" if "W" in self.defaults else 3))
        if self.maybe(0.3):
            value, net = self.value(width), replace(self.bounds(width), name=self.name("n"))
            strength = self.random.choice(("", *STRENGTHS))
            delay = self.random.choice(("", *DELAYS))
            self.line(f"wire {strength} {net.range} {delay} {net.name} = {value};")
            self.scope.nets.append(net)
            self.scope.inner.append(net)
            return
        value = self.value(width)
        self.line(f"assign {self.before()} {self.driving(width)} = {value};")

    def several(self) -> None:
        """Write a net that several drive: by its type, or three-state."""
        width = self.random.choice((1, 2))
        if self.maybe(0.5):
            net = self.net(width, WIRED)
            gates = ["buf", "and"]
        else:
            net = self.net(width, ("tri", "wire", "tri0"))
            gates = ["bufif0", "notif1"]
        bounds = "" if width == 1 and net.left is None else f"[{width}:1]"
        for gate in gates:
            ends = [net.name, self.reading(1), self.reading(1)][: 2 if gate == "buf" else 3]
            self.line(f"{gate} {self.name('g')} {bounds} ({', '.join(ends)});")
        self.scope.nets.append(net)
        if self.maybe(0.3):
            pull = self.random.choice(("pullup", "pulldown (weak0)", "pullup (pull1)"))
            self.line(f"{pull} {self.name('p')} {bounds} ({net.name});")

    def constants(self) -> None:
        """Write localparams, whose values this writer knows."""
        name = self.name("L")
        value = self.random.randrange(1, 9)
        local: dict[str, tuple[str, int]] = {
            "plain": (f"{name} = {value}", value),
            "logarithm": (f"{name} = $clog2({value})", (value - 1).bit_length()),
            "ranged": (f"[2:0] {name} = {value}", value % 8),
            "signed": (f"signed [1:0] {name} = {value}", (value + 2) % 4 - 2),
            "typed": (f"integer {name} = {value} * 2 - 3", value * 2 - 3),
            "chosen": (
                f"{name} = {value} > 4 ? {value} << 1 : -{value}",
                value << 1 if value > 4 else -value,
            ),
            "rounded": (f"integer {name} = 1.5 * {value}", int(1.5 * value + 0.5)),
        }
        text, known = local[self.random.choice(list(local))]
        self.line(f"localparam {text};")
        self.known[name] = known

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
                net = self.net(width, ("tri", "wire", "tri1"))
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
        random = self.random
        parameters: list[tuple[str, bool | None]] = [
            ("K > 1", None),
            ("W != 2 && K", None),
            ('S == "fast"', None),
            ("Q[0]", None),
        ]
        found = [
            pair
            for pair in parameters
            if pair[0][0] in self.defaults and ("K" not in pair[0] or "K" in self.defaults)
        ]
        for text, low, _ in self.scope.indices[:1]:
            if text.isalnum() and low >= 0:
                found.append((f"{text} % 2 == 0", None))
        for name, value in self.known.items():
            found.append((f"{name} > 3", value > 3))
        found += [("1", True), ("2 < 1", False)]
        return random.choice(found)

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
        plain: list[Callable[[], None]] = [
            self.gate,
            self.gate,
            self.assign,
            self.several,
            self.constants,
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
    wrapped = (
        f"{random.choice(DIRECTIVES)}\n{text}`resetall\n" if random.random() < 0.2 else text for text in texts
    )
    return "\n".join(wrapped)
