"""What clause 8 of IEEE 1364-2005 asks of a user-defined primitive.

Takes a draft, gives the tree and tells what is not allowed: ports, first value, symbols of each row. Whether
rows contradict one another is for `udp_conflict`.
"""

from __future__ import annotations

from tardigate.source.collector import Collector
from tardigate.source.placed import PlacedText
from tardigate.syntax.tree import Primitive, Row
from tardigate.syntax.udp_conflict import check_rows
from tardigate.syntax.udp_draft import Declared, Draft, DraftRow, Word

MOST_INPUTS = 16
"""At least 9 of a sequential and 10 of a combinational primitive have to be taken (8.1.2)."""

LEVELS = frozenset("01x?b")
EDGES = frozenset("*rfpn")
FIRST_VALUES = {"1'b0": "0", "1'b1": "1", "1'bx": "x", "0": "0", "1": "1"}
"""What an initial statement may give (A.5.3); capitals count alike."""


class Checker:
    """Makes the tree of one draft. What is told stands in the collector: then the tree is of no use."""

    def __init__(self, draft: Draft, text: PlacedText, collector: Collector) -> None:
        self._draft, self._text, self._collector = draft, text, collector
        self._sound = True

    def _tell(self, code: str, at: Word | DraftRow, **words: str | int) -> None:
        self._sound = False
        span = self._text.span(at.at, at.stop)
        self._collector.tell(code, span, hint=None, related=(), primitive=self._draft.name.text, **words)

    def primitive(self) -> Primitive:
        """Return the tree."""
        name = self._draft.name
        ports, declared = self._declarations()
        self._ports(ports, declared)
        output = next((each for each in declared if each.direction == "output"), None)
        sequential = self._stored(declared)
        initial = self._initial(output, sequential)
        if not self._draft.rows:
            self._tell("V138", name)
        if not self._sound:  # the number of inputs, or what a row may hold, is not known
            return Primitive(name.text, (), False, "", (), name.at)
        rows = tuple(self._row(row, len(ports) - 1, sequential) for row in self._draft.rows)
        if self._sound:
            check_rows(self._draft, rows, self._text, self._collector)
        return Primitive(name.text, tuple(port.text for port in ports), sequential, initial, rows, name.at)

    # Ports: 8.1.1, 8.1.2

    def _declarations(self) -> tuple[list[Word], list[Declared]]:
        """Return the ports in order and all declarations; a bare name after a declared port is like that."""
        ports: list[Word] = []
        declared: list[Declared] = []
        for port in self._draft.ports:
            if isinstance(port, Declared):
                declared.append(port)
                ports.append(port.names[0])
                continue
            ports.append(port)
            if declared:
                declared.append(declared[-1]._replace(names=(port,), value=None))
        return ports, [*declared, *self._draft.declarations]

    def _ports(self, ports: list[Word], declared: list[Declared]) -> None:
        names = [port.text for port in ports]
        for i, port in enumerate(ports):
            if port.text in names[:i]:
                self._tell("V130", port, name=port.text, fact="stands twice in the list of ports")
        directions: dict[str, str] = {}
        for each in declared:
            for word in each.names:
                self._declared(each, word, names, directions)
        for port in ports:
            if port.text not in directions:
                self._tell("V130", port, name=port.text, fact="is not declared")
        if self._sound:
            self._outputs(ports, directions)

    def _declared(self, each: Declared, word: Word, names: list[str], directions: dict[str, str]) -> None:
        fact = ""
        if word.text not in names:
            self._tell("V130", word, name=word.text, fact="is not in the list of ports")
            return
        if each.vector:
            fact = "a vector"
        elif each.direction == "inout":
            fact = "an inout"
        elif each.direction == "input" and each.stored:
            fact = "an input and a `reg`"
        if fact:
            self._tell("V136", word, name=word.text, fact=fact)
        if each.direction:
            if word.text in directions:
                self._tell("V130", word, name=word.text, fact="is declared twice")
            directions[word.text] = each.direction

    def _outputs(self, ports: list[Word], directions: dict[str, str]) -> None:
        outputs = [port for port in ports if directions[port.text] == "output"]
        inputs = len(ports) - len(outputs)
        if len(outputs) != 1:
            at = outputs[1] if outputs else self._draft.name
            self._tell("V135", at, fact=f"has {len(outputs)} outputs" if outputs else "has no output")
        elif outputs[0] is not ports[0]:
            self._tell("V135", outputs[0], fact=f"does not name its output `{outputs[0].text}` first")
        if not 1 <= inputs <= MOST_INPUTS:
            self._tell("V137", self._draft.name, count=inputs, most=MOST_INPUTS)

    def _stored(self, declared: list[Declared]) -> bool:
        """Say whether the output is a `reg`, in its own declaration or one beside it (8.1.2)."""
        of = {word.text: each.direction for each in declared if each.direction for word in each.names}
        stored = False
        for each in declared:
            for word in each.names if each.stored and each.direction != "input" else ():
                if of.get(word.text) == "input":
                    self._tell("V136", word, name=word.text, fact="an input and a `reg`")
                elif stored:
                    self._tell("V130", word, name=word.text, fact="is a `reg` twice")
                stored = True
        return stored

    def _initial(self, output: Declared | None, sequential: bool) -> str:
        """Return the first value, empty for none (8.1.3, 8.5)."""
        given = self._draft.initial
        values = [(each.names[0], each.value) for each in self._draft.declarations if each.value]
        values += [(port.names[0], port.value) for port in self._draft.ports
                   if isinstance(port, Declared) and port.value]  # fmt: skip
        values += [given] if given else []
        for name, value in values:
            assert value is not None
            reason = ""
            if output is None or name.text != output.names[0].text:
                reason = "it is not the output"
            elif not sequential:
                reason = "the primitive is combinational, its output no `reg`"
            elif value.text.lower() not in FIRST_VALUES:
                reason = f"`{value.text}` is none of 1'b0, 1'b1, 1'bx, 0 and 1"
            elif len(values) > 1:
                reason = "it is given twice"
            if reason:
                self._tell("V148", value, name=name.text, reason=reason)
        return FIRST_VALUES.get(values[0][1].text.lower(), "") if values and values[0][1] else ""

    # Rows: 8.1.4 to 8.1.6

    def _row(self, row: DraftRow, inputs: int, sequential: bool) -> Row:
        given, *between, output = row.fields
        state = between[0] if between else ()
        texts = tuple(symbol.text for symbol in given)
        made = Row(texts, state[0].text if state else "", output[0].text, row.at)
        if not self._whole(row, inputs, sequential):
            return made
        edges = 0
        for symbol in given:
            edge = len(symbol.text) == 2 or symbol.text in EDGES
            edges += edge
            if edge and not sequential:
                self._tell("V145", symbol, symbol=_shown(symbol))
            elif edges == 2 and edge:
                self._tell("V140", symbol)
            self._legal(symbol, edge, "as an input")
        if output[0].text != "x" and all(symbol.text == "x" for symbol in given):
            shown, where = output[0].text, "as the output where all inputs are x"
            self._tell("V147", output[0], symbol=shown, where=where)
        for symbol in state:
            self._legal(symbol, False, "as the present state")
        for symbol in output:
            self._output(symbol, sequential)
        return made

    def _whole(self, row: DraftRow, inputs: int, sequential: bool) -> bool:
        """Say whether a row has as many symbols as it must; tell it if not."""
        given, *between, output = row.fields
        wanted = found = ""
        if len(given) != inputs:
            found, wanted = f"{len(given)} input symbol{'s' * (len(given) != 1)}", str(inputs)
        elif sequential != bool(between):
            found = "a present state" if between else "no present state"
            wanted = "input symbols and an output" if between else "input symbols, present and next state"
        elif between and len(between[0]) != 1:
            found, wanted = f"{len(between[0])} symbols of the present state", "1"
        elif len(output) != 1:
            found, wanted = f"{len(output)} symbols of the output", "1"
        if found:
            self._tell("V139", row, found=found, wanted=wanted)
        return not found

    def _legal(self, symbol: Word, edge: bool, where: str) -> None:
        wrong = [level for level in symbol.text if level not in LEVELS]
        if symbol.text in ("00", "11", "xx"):
            self._tell("V147", symbol, symbol=_shown(symbol), where="as an edge: nothing changes")
        elif wrong and not (edge and len(symbol.text) == 1):
            self._tell("V147", symbol, symbol=_shown(symbol), where=where)

    def _output(self, symbol: Word, sequential: bool) -> None:
        if symbol.text == "-" and not sequential:
            self._tell("V146", symbol)
        elif symbol.text not in ("0", "1", "x", "-"):
            self._tell("V147", symbol, symbol=_shown(symbol), where="as the output")


def _shown(symbol: Word) -> str:
    return f"({symbol.text})" if len(symbol.text) == 2 else symbol.text
