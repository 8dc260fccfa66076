"""Random hierarchical Verilog, and random changes to texts.

Takes a seed and a size, gives text: the same for the same. With `wild`, also what only this program's two ways
are compared on: operators, delays, attributes, double declarations, and now and then a fault. Every gate has a
name, every input is driven. Loaded by the fixtures `random_verilog` and `mutated`.
"""

# ruff: noqa: E501 - a case of a table stands on one line
from __future__ import annotations

import re
from dataclasses import dataclass, field
from random import Random

VERILOG_WORDS = b"""module endmodule input output inout wire reg assign nand bufif1 ff supply0 parameter localparam signed #( ) ( [ ]
{ } , ; . : ? = == & && ~ ^ + - * ** << >>> 1'b0 4'bx 2'sd1 0 1 3 99999999999 1.5 1e9 'h \\x " /* */ // (* *) ` `define `include
`ifdef `endif `timescale always initial generate specify $clog2 @ [3:0] [a] #1 #(1:2:3) \n \x00 \xff""".split(
    b" "
)
PARTS_WORDS = b"""family part inputs output outputs inout times ns ps checks register latch posedge negedge when tpd tPLH tPZH tsu th
gates operators default alias equivalent conditions provenance package parameter state load wires fanout { } ( ) [ ] , ; : = ~ & | ^
? + - => *> .. 1 2:3:4 - 1e9 99999999999999999999 8'hff "x" " // \\x \n \x00 \xff family{ -1 1.5 pF V""".split(
    b" "
)
PIECES = re.compile(rb"\w+|\s+|[^\w\s]")
GATES = ("and", "nand", "or", "nor", "xor", "xnor", "buf", "not", "bufif0", "bufif1", "notif0", "notif1")
GAPS = (" ", "  ", "\n", "\t ", " /* ; ( */ ", " // it's\n", "\r\n")


@dataclass(frozen=True)
class Net:
    """A declared net; `left` None for a scalar."""

    name: str
    left: int | None = None
    right: int = 0

    @property
    def width(self) -> int:
        """Number of bits."""
        return 1 if self.left is None else abs(self.left - self.right) + 1

    @property
    def range(self) -> str:
        """The range as declared."""
        return "" if self.left is None else f"[{self.left}:{self.right}]"


@dataclass(frozen=True)
class Module:
    """What an instance needs to know of a module."""

    name: str
    inputs: tuple[Net, ...]
    outputs: tuple[Net, ...]
    parameters: bool


@dataclass
class Writer:
    """Writes one module."""

    random: Random
    wild: bool
    lines: list[str] = field(default_factory=list)
    readable: list[Net] = field(default_factory=list)
    count: int = 0

    def name(self, stem: str) -> str:
        """Return a new name, now and then an escaped one."""
        self.count += 1
        if self.random.random() < 0.1:
            return f"\\{stem}.{self.count}+{self.random.choice('a;/([')} "
        return self.random.choice(
            (f"{stem}{self.count}", f"{stem}_{self.count}$", f"{stem.upper()}_long_name_{self.count}")
        )

    def net(self, width: int) -> Net:
        """Declare a new net."""
        if width == 1 and self.random.random() < 0.8:
            net = Net(self.name("w"))
        else:
            low = self.random.choice((0, 0, 1, 7, -2))
            bounds = (low + width - 1, low) if self.random.random() < 0.7 else (low, low + width - 1)
            net = Net(self.name("w"), *bounds)
        if net.left is not None or self.random.random() < 0.7:
            self.lines.append(f"wire {net.range} {net.name} ;")
        return net

    def reading(self, width: int, depth: int = 0) -> str:
        """Return an expression of `width` bits over nets that are driven."""
        random = self.random
        net = random.choice(self.readable)
        shape = random.random()
        if shape < 0.08:
            digits = "01xz" if self.wild else "01"
            return f"{width}'b" + "".join(random.choice(digits) for _ in range(width))
        if shape < 0.2 and depth < 3 and width > 1:
            cut = random.randrange(1, width)
            return f"{{{self.reading(width - cut, depth + 1)}, {self.reading(cut, depth + 1)}}}"
        if shape < 0.25 and depth < 3:
            times = random.choice([n for n in (1, 2, 3, width) if width % n == 0])
            return f"{{{times}{{{self.reading(width // times, depth + 1)}}}}}"
        if self.wild and shape < 0.3 and depth < 2:
            return self.operators(width, depth + 1)
        return self.piece(net, width)

    def piece(self, net: Net, width: int) -> str:
        """Return a part of a net, or an expression when the net is too narrow."""
        if net.width == width and (net.left is None or self.random.random() < 0.6):
            return net.name
        if net.left is None or net.width < width:
            fit = [one for one in self.readable if one.width >= width]
            if fit:
                return self.piece(self.random.choice(fit), width)
            return (
                "{" + ", ".join(self.piece(self.random.choice(self.readable), 1) for _ in range(width)) + "}"
            )
        step = 1 if net.left >= net.right else -1
        first = self.random.randrange(net.width - width + 1)
        low = net.right + step * first
        high = low + step * (width - 1)
        if width == 1:
            return f"{net.name}[{low}]"
        if self.random.random() < 0.3:
            return f"{net.name}[{min(low, high)}+:{width}]"
        return f"{net.name}[{high}:{low}]"

    def operators(self, width: int, depth: int) -> str:
        """Return an expression with an operator."""
        left, right = self.reading(width, depth), self.reading(width, depth)
        shape = self.random.randrange(7)
        if shape == 0:
            return f"(~{left})"
        if shape == 1:
            return f"({self.reading(1, depth)} ? {left} : {right})"
        if shape == 2:
            return f"({left} {self.random.choice(['<<', '>>', '>>>'])} {self.random.randrange(3)})"
        if shape == 3 and width == 1:
            return f"({self.random.choice(['&', '~|', '^', '!'])}{self.reading(3, depth)})"
        if shape == 4 and width == 1:
            return f"({left} {self.random.choice(['==', '!=', '&&', '||'])} {right})"
        return f"({left} {self.random.choice(['&', '|', '^', '~^'])} {right})"

    def driving(self, width: int) -> str:
        """Return a new net, a part of one, or a concatenation of new nets; they can be read from then on."""
        random = self.random
        if width > 1 and random.random() < 0.2:
            cut = random.randrange(1, width)
            return f"{{{self.driving(width - cut)}, {self.driving(cut)}}}"
        net = self.net(width)
        self.readable.append(net)
        if net.left is not None and random.random() < 0.3:
            return f"{net.name}[{net.left}:{net.right}]" if width > 1 else f"{net.name}[{net.right}]"
        return net.name

    def attribute(self) -> str:
        """Return an attribute, mostly none."""
        return (
            self.random.choice(("(* keep *)", '(* note = "a;b", n = 2 *)'))
            if self.wild and self.random.random() < 0.05
            else ""
        )

    def delay(self) -> str:
        """Return a delay, mostly none."""
        return (
            self.random.choice(("#3", "#(1, 2)", "#(1:2:3)", "#1.5"))
            if self.wild and self.random.random() < 0.1
            else ""
        )

    def gate(self) -> None:
        """Write a gate, or an array of them."""
        random = self.random
        kind = random.choice(GATES)
        copies = random.choice((2, 3)) if random.random() < 0.12 else 1
        inputs = 2 if "if" in kind else 1 if kind in ("buf", "not") else random.choice((2, 2, 2, 3, 5))
        outputs = random.choice((1, 1, 1, 2)) if kind in ("buf", "not") else 1
        reads = [self.reading(copies if random.random() < 0.7 else 1) for _ in range(inputs)]
        drives = [self.driving(copies) for _ in range(outputs)]
        base = random.choice((0, 4))
        bounds = (
            ""
            if copies == 1
            else f"[{base + copies - 1}:{base}]"
            if random.random() < 0.6
            else f"[{base}:{base + copies - 1}]"
        )
        words = f"{kind} {self.delay()} {self.name('g')} {bounds} ({', '.join([*drives, *reads])});"
        self.lines.append(f"{self.attribute()} {words}")

    def instance(self, module: Module) -> None:
        """Write an instance of a module."""
        random = self.random
        copies = 2 if random.random() < 0.1 else 1
        pins = [(net.name, self.reading(net.width * random.choice((1, copies)))) for net in module.inputs]
        pins += [
            (net.name, "" if random.random() < 0.1 else self.driving(net.width * copies))
            for net in module.outputs
        ]
        if random.random() < 0.5:
            words = ", ".join(net for _, net in pins)
        else:
            random.shuffle(pins)
            words = ", ".join(f".{pin}({net})" for pin, net in pins)
        values = (
            random.choice(("", f"#({random.randrange(4)})", f"#(.P({random.randrange(4)}))"))
            if module.parameters
            else ""
        )
        bounds = "[1:0]" if copies == 2 else ""
        self.lines.append(f"{self.attribute()} {module.name} {values} {self.name('u')} {bounds} ({words});")

    def fault(self) -> None:
        """Write a statement that is likely to be wrong."""
        self.lines.append(
            self.random.choice(
                ("wire w1;", "nand bad1 (nobody, a, b, c);", "and bad2 (y);", "m0 bad3 (.none(w1));", "m0 bad4 (w1, w1);",
                 "nowhere bad5 (.p(w1), .q());", "buf bad6 (w1[3], w1);", "not bad7 (1'b0, w1);", "input w1;", "assign w9 = nobody;",
                 "nand bad8 (w1, w1,);", "not bad9 (w1, w2[0]);")
            )
        )  # fmt: skip


def _module(random: Random, name: str, below: list[Module], size: int, wild: bool) -> tuple[Module, str]:
    writer = Writer(random, wild)
    inputs = tuple(_port(writer, "i") for _ in range(random.randrange(1, 4)))
    outputs = tuple(_port(writer, "o") for _ in range(random.randrange(1, 4)))
    writer.readable += inputs
    for module in below if name == "top" else ():
        writer.instance(module)
    for _ in range(random.randrange(1, size + 1)):
        if below and random.random() < 0.3:
            writer.instance(random.choice(below))
        elif wild and random.random() < 0.15:
            value = writer.reading(width := random.randrange(1, 5))
            writer.lines.append(f"assign {writer.delay()} {writer.driving(width)} = {value};")
        else:
            writer.gate()
    for at, net in enumerate(outputs):
        bounds = "" if net.left is None else net.range
        writer.lines.append(f"buf last{at} {bounds} ({net.name}, {writer.reading(net.width)});")
    if wild and random.random() < 0.15:
        writer.fault()
    parameters = random.random() < 0.3
    return Module(name, inputs, outputs, parameters), _text(
        random, name, inputs, outputs, parameters, writer.lines
    )


def _port(writer: Writer, stem: str) -> Net:
    if writer.random.random() < 0.6:
        return Net(writer.name(stem))
    width = writer.random.randrange(1, 5)
    return (
        Net(writer.name(stem), width - 1, 0)
        if writer.random.random() < 0.8
        else Net(writer.name(stem), 0, width - 1)
    )


def _text(
    random: Random,
    name: str,
    inputs: tuple[Net, ...],
    outputs: tuple[Net, ...],
    parameters: bool,
    lines: list[str],
) -> str:
    header = "#(parameter P = 1)" if parameters else ""
    ports = [("input", net) for net in inputs] + [("output", net) for net in outputs]
    if random.random() < 0.5:
        listed = ", ".join(f"{way} {net.range} {net.name}" for way, net in ports)
        declared: list[str] = []
    else:
        listed = ", ".join(net.name for _, net in ports)
        declared = [f"{way} {net.range} {net.name} ;" for way, net in ports]
        declared += [f"wire {net.range} {net.name} ;" for _, net in ports if random.random() < 0.3]
    text = f"module {name} {header} ({listed});\n" + "\n".join([*declared, *lines]) + "\nendmodule\n"
    if random.random() < 0.5:
        text = "".join(
            random.choice(GAPS) if char == " " and random.random() < 0.1 else char for char in text
        )
    return text


def design(seed: int, size: int = 8, wild: bool = False) -> str:
    """Return the text of a design whose top is `top`."""
    random = Random(seed)
    below: list[Module] = []
    texts: list[str] = []
    for number in range(random.randrange(3)):
        module, text = _module(random, f"m{number}", below, size, wild)
        below.append(module)
        texts.append(text)
    texts.append(_module(random, "top", below, size, wild)[1])
    random.shuffle(texts)
    return "".join(texts)


def mutated(text: bytes, seed: int, parts: bool = False) -> bytes:
    """Return a text with one to four changes; with `parts` new words are those of a parts file."""
    words = PARTS_WORDS if parts else VERILOG_WORDS
    random = Random(seed)
    for _ in range(random.choice((1, 1, 2, 4))):
        pieces = PIECES.findall(text) or [b" "]
        at, other = random.randrange(len(pieces)), random.randrange(len(pieces))
        last = min(len(pieces), at + random.choice((1, 1, 2, 8, 40)))
        match random.randrange(8):
            case 0:
                del pieces[at:last]
            case 1:
                pieces[at:at] = pieces[at:last] * random.choice((1, 1, 3))
            case 2:
                pieces[at], pieces[other] = pieces[other], pieces[at]
            case 3:
                pieces[at] = pieces[other]
            case 4 | 5:
                pieces[at : at + random.randrange(2)] = [
                    random.choice((b" ", b"")),
                    random.choice(words),
                    random.choice((b" ", b"")),
                ]
            case 6:
                pieces = pieces[:at]
            case _:
                changed = bytearray(text)
                if changed:
                    changed[random.randrange(len(changed))] ^= 1 << random.randrange(8)
                text = bytes(changed)
                continue
        text = b"".join(pieces)
    return text
