"""Random pieces of a scope: nets, expressions, gates, assignments, constants.

A `Pieces` writes statements into its scope and keeps what may be read and driven there. It knows nothing of
modules and generate constructs: see `random_structure`.
"""

# ruff: noqa: E501 - a case of a table stands on one line
from __future__ import annotations

from collections.abc import Sequence
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


def under(net: Net, path: str, values: dict[str, int | str] | None = None) -> Net:
    """Return a net as seen from outside of `path`, its parameters put in."""
    if isinstance(net.width, int):
        return replace(net, name=f"{path}.{net.name}")
    width = int((values or {})[net.width])
    known = {"W-1": width - 1, "W": width, "0": 0, "1": 1}
    return Net(f"{path}.{net.name}", width, known[str(net.left)], known[str(net.right)])


class Pieces:
    """Writes the statements of one module."""

    def __init__(self, random: Random, strict: bool) -> None:
        self.random, self.strict = random, strict
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

    def net(self, width: Width, types: Sequence[str] = ONE_DRIVER, delayed: float = 0.08) -> Net:
        """Declare a new net."""
        shape, kind = self.bounds(width), self.random.choice(types)
        net = replace(shape, name=self.name("n"))
        implicit = shape.left is None and kind == "wire" and not self.strict and "genblk" not in net.name
        if not (implicit and self.maybe(0.2)):
            how = (
                self.random.choice(("scalared", "signed"))
                if shape.width not in (1, "W") and self.maybe(0.1)
                else ""
            )
            delay = self.random.choice(DELAYS) if self.maybe(delayed) else ""
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

    def rail(self) -> None:
        """Declare a net that is always 0 or 1 (4.6.5)."""
        net = replace(self.bounds(self.random.choice((1, 2))), name=self.name("r"))
        self.line(f"{self.random.choice(('supply0', 'supply1'))} {net.range} {net.name};")
        self.scope.nets.append(net)
        self.scope.inner.append(net)

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
