"""Reads the text of one module of cell models into ports, nets and items; expressions stay tokens.

What has no bearing on the function is passed over: delays, strengths, parameters, ``initial``, timing checks except
for the late copies of nets that they drive.
"""

import re
from bisect import bisect_right
from itertools import accumulate
from typing import Literal

from auditor.cells.compose import NotUnderstood
from auditor.cells.model import Assign, Gate, Module, ModuleText, Part, Process, Token, Tokens
from auditor.cells.model_expression import bare, is_name

_WORD = re.compile(r"\w+")
GATES = frozenset(
    _WORD.findall(
        "and nand or nor xor xnor buf not bufif0 bufif1 notif0 notif1 pullup pulldown "
        "nmos pmos rnmos rpmos cmos rcmos tran rtran tranif0 tranif1 rtranif0 rtranif1"
    )
)
_NETS = frozenset(_WORD.findall("wire tri uwire supply0 supply1 reg logic wand wor tri0 tri1 triand trior trireg"))
_VARIABLES = frozenset(_WORD.findall("integer real realtime time event genvar"))
_DIRECTIONS: dict[str, Literal["input", "output", "inout"]] = {
    "input": "input",
    "output": "output",
    "inout": "inout",
}
_STRENGTHS = frozenset(
    f"{force}{level}" for force in ("supply", "strong", "pull", "weak", "highz") for level in "01"
) | {"small", "medium", "large"}
_UNREAD = frozenset(
    _WORD.findall(
        "function task generate for while repeat forever case casex casez fork force deassign "
        "always_comb always_ff always_latch interface package class assert property sequence"
    )
)
_BRACKETS = {"(": 1, "{": 1, "[": 1, ")": -1, "}": -1, "]": -1}

_TOKEN = re.compile(
    r"""\s*+(
        [A-Za-z_$][\w$]*+ | \\\S++
      | (?:\d++\s*+)?'\s*+[sS]?[bBoOdDhH]\s*+[0-9a-fA-FxXzZ?_]++
      | \d[\w.]*+(?:(?<=[eE])[-+]\d++)?
      | "(?:[^"\\\n]|\\.)*+"
      | ===|!==|==|!=|<=|>=|&&&|&&|\|\||~&|~\||~\^|\^~|<<|>>|[^\s]
    )""",
    re.VERBOSE,
)
_SPECIFY = re.compile(r'\\\S++|"(?:[^"\\\n]|\\.)*+"|\bspecify\b(?P<body>(?s:.*?))(?P<end>\bendspecify\b|\Z)')
_CHECK = re.compile(r"\$(?:setuphold|recrem)\s*+\(([^;]*+);")
_EDGE_WORD = re.compile(r"(?:posedge|negedge|edge)\b(?:\s*+\[[^\]]*+\])?")


def read_module(source: ModuleText) -> Module:
    """Return the module of a text, up to the first thing that cannot be read; see ``Module.unread``."""
    module = Module(source.name, source.place)
    text = _SPECIFY.sub(lambda found: _without_specify(found, module), source.text)
    try:
        _Reader(module, list(_tokens(text, source))).read()
    except NotUnderstood as reason:
        module.unread = str(reason)
    return module


def _without_specify(found: re.Match[str], module: Module) -> str:
    """Note the late copies of nets that a specify block drives, and return blanks for it."""
    if found["body"] is None:
        return found[0]
    for check in _CHECK.finditer(found["body"]):
        arguments = [argument.strip() for argument in check[1].rpartition(")")[0].split(",")]
        for event, copy in zip(arguments[:2], arguments[7:9], strict=False):
            net = _EDGE_WORD.sub("", event.partition("&&&")[0]).strip()
            if copy and net:
                module.delayed.setdefault(_one_net(copy), _one_net(net))
    return " " + "\n" * found[0].count("\n")


def _one_net(text: str) -> str:
    """Return a net or a bit of one without blanks."""
    return bare("".join(text.split()))


def _tokens(text: str, source: ModuleText) -> list[Token]:
    """Return the words of a text with their places."""
    ends = list(accumulate(len(line) + 1 for line in text.split("\n")))
    return [Token(found[1], source.places[bisect_right(ends, found.start(1))]) for found in _TOKEN.finditer(text)]


class _Reader:
    """Goes through the tokens of a module; ``at`` is the position of the next one."""

    def __init__(self, module: Module, tokens: Tokens) -> None:
        self.module, self.tokens, self.at = module, tokens, 0

    def read(self) -> None:
        """Read the header and every item."""
        self._skip_parameters()
        if self._word() == "(":
            self._header(self._bracketed())
        self._expect(";")
        while self.at < len(self.tokens):
            self._item()

    def _word(self, ahead: int = 0) -> str:
        return self.tokens[self.at + ahead].text if self.at + ahead < len(self.tokens) else ""

    def _refuse(self, what: str = "") -> NotUnderstood:
        place = self.tokens[min(self.at, len(self.tokens) - 1)].place if self.tokens else self.module.place
        word = self._word() or "its end"
        return NotUnderstood(f"its model is not read at {place}: {what or f'{word} is not expected there'}")

    def _expect(self, word: str) -> None:
        if self._word() != word:
            raise self._refuse(f"{word} is missing")
        self.at += 1

    def _name(self) -> str:
        word = self._word()
        if not word or not is_name(word):
            raise self._refuse("a name is missing")
        self.at += 1
        return bare(word)

    def _bracketed(self) -> Tokens:
        """Return what stands in the brackets that open here, and pass over them."""
        start = self.at + 1
        depth = 0
        while self.at < len(self.tokens):
            depth += _BRACKETS.get(self._word(), 0)
            self.at += 1
            if depth == 0:
                return self.tokens[start : self.at - 1]
        raise self._refuse("a bracket is not closed")

    def _until(self, *ends: str) -> Tokens:
        """Return the tokens up to one of these words outside brackets; it is not passed over."""
        start, depth = self.at, 0
        while self.at < len(self.tokens):
            word = self._word()
            if depth == 0 and word in ends:
                return self.tokens[start : self.at]
            depth += _BRACKETS.get(word, 0)
            self.at += 1
        raise self._refuse(f"{' or '.join(ends)} is missing")

    def _skip_parameters(self) -> None:
        """Pass over a delay or parameters behind ``#``."""
        while self._word() == "#":
            self.at += 1
            if self._word() == "(":
                self._bracketed()
            else:
                self.at += 1

    def _skip_strength(self) -> None:
        if self._word() == "(" and self._word(1) in _STRENGTHS:
            self._bracketed()

    def _range(self) -> tuple[int, int] | None:
        """Return the bounds that stand here, None if none do."""
        if self._word() != "[":
            return None
        words = [token.text for token in self._bracketed()]
        bounds = "".join(words).split(":")
        if len(bounds) != 2 or not all(re.fullmatch(r"-?\d+", bound) for bound in bounds):
            raise self._refuse(f"the range [{' '.join(words)}] is not made of numbers")
        return int(bounds[0]), int(bounds[1])

    def _header(self, tokens: Tokens) -> None:
        """Read the ports, mere names or whole declarations."""
        inner = _Reader(self.module, tokens)
        direction: Literal["input", "output", "inout"] | None = None
        kind, bounds = "wire", None
        while inner.at < len(tokens):
            if inner._word() in _DIRECTIONS:
                direction = _DIRECTIONS[inner._word()]
                kind, bounds = "wire", None
                inner.at += 1
            while inner._word() in _NETS or inner._word() == "signed":
                kind = inner._word() if inner._word() != "signed" else kind
                inner.at += 1
            bounds = inner._range() or bounds
            name = inner._name()
            self.module.ports.append(name)
            if direction:
                self.module.directions[name] = direction
                self._declare(name, kind, bounds)
            if inner._word() == "=":
                inner.at += 1
                inner._until_comma_or_end()
            if inner.at < len(tokens):
                inner._expect(",")

    def _until_comma_or_end(self) -> None:
        while self.at < len(self.tokens) and self._word() != ",":
            self.at += 1

    def _declare(self, name: str, kind: str, bounds: tuple[int, int] | None) -> None:
        if kind != "wire" or name not in self.module.kinds:
            self.module.kinds[name] = kind
        if bounds:
            self.module.ranges[name] = bounds

    def _item(self) -> None:
        word = self._word()
        if word == ";":
            self.at += 1
        elif word in _DIRECTIONS or word in _NETS:
            self._declaration()
        elif word in GATES:
            self._gates()
        elif word == "assign":
            self._assigns()
        elif word in ("always", "initial"):
            self.at += 1
            place = self.tokens[self.at - 1].place
            tokens = self._statement()
            if word == "always":
                self.module.items.append(Process(tokens, place))
        elif word in ("parameter", "localparam", "specparam", "defparam") or word in _VARIABLES:
            self._until(";")
        elif word in _UNREAD or not is_name(word):
            raise self._refuse(f"{word} is not read in cell models")
        else:
            self._parts()

    def _declaration(self) -> None:
        direction = _DIRECTIONS.get(self._word())
        kind = "wire"
        while self._word() in _DIRECTIONS or self._word() in _NETS or self._word() == "signed":
            kind = self._word() if self._word() in _NETS else kind
            self.at += 1
        self._skip_strength()
        bounds = self._range()
        self._skip_parameters()
        while True:
            place = self.tokens[self.at : self.at + 1]
            name = self._name()
            if direction:
                self.module.directions[name] = direction
            self._declare(name, kind, bounds)
            if self._word() == "=":
                self.at += 1
                value = self._until(",", ";")
                if kind not in ("reg", "logic"):
                    self.module.items.append(Assign(place, value, place[0].place))
            if self._word() != ",":
                break
            self.at += 1
        self._expect(";")

    def _assigns(self) -> None:
        self.at += 1
        self._skip_strength()
        self._skip_parameters()
        while True:
            place = self.tokens[min(self.at, len(self.tokens) - 1)].place
            left = self._until("=")
            self.at += 1
            self.module.items.append(Assign(left, self._until(",", ";"), place))
            self.at += 1
            if self.tokens[self.at - 1].text == ";":
                return

    def _gates(self) -> None:
        kind = self._word()
        self.at += 1
        self._skip_strength()
        self._skip_parameters()
        while True:
            place = self.tokens[min(self.at, len(self.tokens) - 1)].place
            if self._word() != "(":
                self._name()
            if self._word() == "[":
                raise self._refuse("an array of gates is not read in cell models")
            if self._word() != "(":
                raise self._refuse()
            self.module.items.append(Gate(kind, _split(self._bracketed()), place))
            if self._word() != ",":
                break
            self.at += 1
        self._expect(";")

    def _parts(self) -> None:
        cell = self._name()
        self._skip_strength()
        self._skip_parameters()
        while True:
            place = self.tokens[min(self.at, len(self.tokens) - 1)].place
            name = self._name() if self._word() != "(" else f"instance{len(self.module.items)}"
            if self._word() != "(":
                raise self._refuse()
            connections = [_connection(tokens) for tokens in _split(self._bracketed())]
            self.module.items.append(Part(cell, name, connections, place))
            if self._word() != ",":
                break
            self.at += 1
        self._expect(";")

    def _statement(self) -> Tokens:
        """Return one procedural statement with what belongs to it: to a ``;`` or ``end`` that no ``else`` follows."""
        start, depth = self.at, 0
        while self.at < len(self.tokens):
            word = self._word()
            self.at += 1
            if word in ("begin", "case", "casex", "casez", "fork"):
                depth += 1
            elif word in ("end", "endcase", "join"):
                depth -= 1
            if depth == 0 and word in (";", "end", "endcase", "join") and self._word() != "else":
                return self.tokens[start : self.at]
        raise self._refuse("a statement is not ended")


def _split(tokens: Tokens) -> list[Tokens]:
    """Return the parts of a list between its commas; an empty list has none."""
    parts: list[Tokens] = [[]]
    depth = 0
    for token in tokens:
        depth += _BRACKETS.get(token.text, 0)
        if token.text == "," and depth == 0:
            parts.append([])
        else:
            parts[-1].append(token)
    return parts if tokens else []


def _connection(tokens: Tokens) -> tuple[str | None, Tokens]:
    """Return the pin and the expression of ``.pin(expression)`` or of an expression alone."""
    if len(tokens) < 4 or tokens[0].text != ".":
        if tokens and tokens[0].text == ".":
            raise NotUnderstood(f"its model is not read at {tokens[0].place}: a pin is connected without parentheses")
        return None, tokens
    return bare(tokens[1].text), tokens[3:-1]
