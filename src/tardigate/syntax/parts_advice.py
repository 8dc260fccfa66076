"""What the parts language knows about a text that its grammar refuses.

Takes what stands there and the tokens before it, gives a hint and better words for what could stand there.
Does not decide whether the text is refused.
"""

from __future__ import annotations

from collections.abc import Mapping

from tardigate.syntax.recovery import END, Language, Token
from tardigate.syntax.trouble import Advice, Scene

FRIENDLY: Mapping[str, str] = {
    "NAME": "a name", "ESCAPED": "a name", "NUMBER": "a number", "SIZED": "a sized number",
    "STRING": "a text in quotes", "AND": "`&`", "OR": "`|`", "XNOR": "`~^`", END: "the end of the file",
}  # fmt: skip
"""What the grammar's terminals are called that are no fixed word or sign."""

OF_FAMILY = frozenset({
    "family", "provenance", "conditions", "part", "alias", "equivalent", "gates", "operators", "default",
    "wires",
})  # fmt: skip
"""Words that begin what no part holds."""

OF_PART = frozenset({
    "package", "inputs", "input", "outputs", "output", "inouts", "inout", "state", "parameter", "register",
    "latch", "times", "checks", "load",
})  # fmt: skip
"""Words that begin what no table holds."""

TIMED = frozenset({"TIMES", "CHECKS", "GATES", "OPERATORS", "DEFAULT", "WIRES", "MORE", "AT"})
"""Terminals behind which a unit is one of time."""

BLOCKS = frozenset({
    "FAMILY", "CONDITIONS", "PART", "GATES", "OPERATORS", "DEFAULT", "WIRES", "REGISTER", "LATCH", "TIMES",
    "CHECKS",
})  # fmt: skip
"""Terminals that begin a block; other braces join bits."""

LANGUAGE = Language(
    over=frozenset(";{}"),
    wholes=frozenset("{"),
    starters=OF_FAMILY.union(OF_PART) - {"state", "latch", "load", "family"},
    closers=frozenset("}"),
    blocks={"{": "}"},
    signs=(";", ",", "}", ")", "=", "]", ":"),
    name="NAME",
)
"""How statements begin and end; words that may be names as well begin none here."""

VERILOG = ("module", "macromodule", "primitive", "`")


def advise(scene: Scene) -> Advice:
    """Return what there is to say beyond what stands there and what could."""
    names = {"NAME": f"a unit such as `{_unit(scene.before)}`"} if _wants_unit(scene) else {}
    closes = _closes(scene)
    sign, hint = _sign(scene)
    if closes and hint is None:
        hint = "A `}` is missing before it."
    return Advice(hint or _slip(scene), names, closes, f"`{sign}`" if sign else None)


def _sign(scene: Scene) -> tuple[str, str | None]:
    """Return a sign of another language, as far as it is one, and what to write for it."""
    data, start = scene.data, scene.start
    here = data[start : start + 2].decode("latin-1")
    if not scene.before and scene.found in VERILOG:
        return "", "This looks like Verilog: give it without --parts."
    if here[:1] == "#" or here in ("/*", "--"):
        return here if here in ("/*", "--") else "", "Comments begin with `//`."
    if here[:1] == ">" and data[start - 1 : start] == b"-":
        return "->", "Write `=>`."
    if scene.found == '"':
        return "", "A text in quotes ends on the line on which it begins."
    if here in ("&&", "||") or here[:1] == "!":
        return here if here in ("&&", "||") else "", "Functions are of bits: write `~`, `&` and `|`."
    return "", None


def _slip(scene: Scene) -> str | None:
    """Return the hint for a `;` too many, a decimal comma, or two numbers of three."""
    before = scene.before
    last = before[-1] if before else None
    touching = last is not None and last.start + len(last.text) == scene.start
    if scene.found == ";" and last is not None and last.kind == "RBRACE":
        return "No `;` stands after a `}` that closes a block."
    if scene.found == "," and last is not None and last.kind == "NUMBER" and touching:
        digits = scene.data[scene.start + 1 : scene.start + 9].decode("latin-1")
        decimals = digits[: len(digits) - len(digits.lstrip("0123456789"))]
        return f"Write {last.text}.{decimals}: a point, no comma." if decimals else None
    two = len(before) > 2 and before[-2].kind == "COLON" and scene.accepted <= {"COLON", "NUMBER"}
    if two and "COLON" in scene.accepted:
        return "Write min:typ:max, a `-` for what is missing."
    return None


def _wants_unit(scene: Scene) -> bool:
    """Say whether a unit could stand there: a name that cannot be an escaped one."""
    return "NAME" in scene.accepted and "ESCAPED" not in scene.accepted


def _unit(before: list[Token]) -> str:
    """Return a unit that would do behind these tokens."""
    blocks, statement = _open_blocks(before)
    kinds = {token.kind for token in statement}
    if before[-1].kind == "SLASH":
        return "cm" if "AT" in kinds else "pF"
    if kinds & TIMED:
        return "ns"
    if blocks and blocks[-1].kind == "CONDITIONS":
        return "V"
    return "cm" if kinds >= {"NET", "STRING"} else "pF"


def _closes(scene: Scene) -> str | None:
    """Name the block that a missing `}` would close, when what stands there belongs outside of it."""
    blocks, _ = _open_blocks(scene.before)
    if not blocks or "RBRACE" not in scene.accepted:
        return None
    block = blocks[-1]
    outside = {"FAMILY": frozenset({"family"}), "PART": OF_FAMILY}.get(block.kind, OF_FAMILY | OF_PART)
    if scene.found and scene.found not in outside:
        return None
    line = scene.data.count(b"\n", 0, block.start) + 1
    return f"`}}` that closes `{block.text}` (line {line})"


def _open_blocks(before: list[Token]) -> tuple[list[Token], list[Token]]:
    """Return the blocks that are open, each a token of all that stands before its `{`, and the statement."""
    blocks: list[Token] = []
    statement: list[Token] = []
    for token in before:
        if token.kind == "LBRACE":
            blocks.append(_block(token, statement))
            if blocks[-1].kind in BLOCKS:
                statement = []
        elif token.kind == "RBRACE":
            if not blocks or blocks.pop().kind in BLOCKS:  # one too many was told before
                statement = []
        elif token.kind == "SEMICOLON":
            statement = []
        else:
            statement.append(token)
    return blocks, statement


def _block(brace: Token, statement: list[Token]) -> Token:
    """Return what a `{` opens: the block that begins there, or the brace where it joins bits."""
    if not statement or any(word.kind == "EQUAL" for word in statement):
        return brace
    text = " ".join(word.text for word in statement if word.kind != "STRING")
    return statement[0]._replace(text=text)
