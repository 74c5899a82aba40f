"""Reads expressions of Verilog cell models into functions, one for each bit.

Read are names, bit- and part-selects, literals, ``{a, b}``, the bitwise, reducing, logical and equality operators and
``?:`` (IEEE 1364-2005, clause 5; ``===`` is ``==`` over 0 and 1). The parser keeps its own stack, as in ``expression``.
"""

import re
from collections.abc import Callable
from typing import TypeAlias

from auditor.cells.compose import LONGEST_PROGRAM, NotUnderstood
from auditor.cells.function import restrict, substitute
from auditor.cells.library import Function
from auditor.cells.model import Token, Tokens
from auditor.notation import SourcePlace

Value: TypeAlias = tuple[Function, ...]  # least significant bit first
Lookup: TypeAlias = Callable[
    [str, tuple[int, int] | None, Token], Value
]  # of a name, or of its bits from left to right

ZERO, ONE = Function((), ("0",)), Function((), ("1",))
_BINARY = {"||": 1, "&&": 2, "|": 3, "^": 4, "~^": 4, "^~": 4, "&": 5, "==": 6, "!=": 6, "===": 6, "!==": 6}
_UNARY = ("!", "~", "&", "|", "^", "~&", "~|", "~^", "^~")
_STRENGTH = {**_BINARY, "?": 0, "?:": 0, "(": -1, "{": -1}
_LITERAL = re.compile(r"(\d+)?\s*'\s*[sS]?([bBoOdDhH])\s*([0-9a-fA-FxXzZ?_]+)")
_BASE = {"b": 2, "o": 8, "d": 10, "h": 16}
_WIDEST = 4096  # bits of a literal
_LONGEST = 2000  # words of an expression


def is_name(text: str) -> bool:
    """Return whether a token is a name."""
    return text[0] == "\\" or text[0].isalpha() or text[0] == "_"


def bare(text: str) -> str:
    """Return a name without the backslash of an escaped one."""
    return text.removeprefix("\\")


def join(operator: str, a: Function, b: Function) -> Function:
    """Return ``a operator b`` with constants folded."""
    joined = restrict(substitute(Function(("a", "b"), ("$0", "$1", operator)), {"a": a, "b": b}), {})
    if len(joined.program) > LONGEST_PROGRAM:
        raise NotUnderstood(f"an expression of it has more than {LONGEST_PROGRAM} terms")
    return joined


def invert(a: Function) -> Function:
    """Return NOT a."""
    return restrict(Function(a.inputs, (*a.program, "!")), {})


def choose(condition: Function, a: Function, b: Function) -> Function:
    """Return ``condition ? a : b``."""
    if a == b:
        return a
    return join("|", join("&", condition, a), join("&", invert(condition), b))


def truth(value: Value) -> Function:
    """Return whether any bit of a value is 1."""
    return _reduced("|", value)


def select_of(tokens: Tokens, position: int) -> tuple[tuple[int, int] | None, int]:
    """Return the bounds in ``[left:right]`` or ``[bit]`` at ``position``, None where none stands, and what follows."""
    if position >= len(tokens) or tokens[position].text != "[":
        return None, position
    words = [token.text for token in tokens[position + 1 : position + 5]]
    if len(words) >= 2 and words[0].isdecimal() and words[1] == "]":
        return (int(words[0]), int(words[0])), position + 3
    if len(words) >= 4 and words[0].isdecimal() and words[1] == ":" and words[2].isdecimal() and words[3] == "]":
        return (int(words[0]), int(words[2])), position + 5
    raise NotUnderstood(f"a select at {tokens[position].place} is no constant")


def read_expression(tokens: Tokens, lookup: Lookup, place: SourcePlace) -> Value:
    """Return the value of an expression in what stands at ``place``. Raises ``NotUnderstood``."""
    if not tokens:
        raise NotUnderstood(f"an expression is missing at {place}")
    return _Parser(tokens, lookup).parse()


class _Parser:
    """Operands go to ``values`` at once, operators wait for a weaker one; ``counts`` are the parts of open braces."""

    def __init__(self, tokens: Tokens, lookup: Lookup) -> None:
        self.tokens, self.lookup = tokens, lookup
        self.values: list[Value] = []
        self.waiting: list[tuple[str, bool]] = []  # operator, whether it is unary
        self.counts: list[int] = []
        self.position = 0

    def parse(self) -> Value:
        if len(self.tokens) > _LONGEST:
            raise NotUnderstood(f"the expression at {self._place()} has more than {_LONGEST} words")
        operand_expected = True
        while self.position < len(self.tokens):
            word = self.tokens[self.position].text
            operand_expected = self._operand(word) if operand_expected else self._behind_operand(word)
        if operand_expected:
            raise self._error()
        self._reduce(0)
        if len(self.values) != 1 or self.waiting:
            raise self._error()
        return self.values[0]

    def _operand(self, word: str) -> bool:
        """Take what may begin an operand; return whether one is still expected."""
        token = self.tokens[self.position]
        self.position += 1
        if word in ("(", "{"):
            self.waiting.append((word, True))
            if word == "{":
                self.counts.append(1)
        elif word in _UNARY:
            self.waiting.append((word, True))
        elif is_name(word):
            select, self.position = select_of(self.tokens, self.position)
            self.values.append(self.lookup(bare(word), select, token))
            return False
        else:
            self.values.append(self._literal(word))
            return False
        return True

    def _behind_operand(self, word: str) -> bool:
        """Take what may follow an operand; return whether another is expected."""
        if word in _BINARY:
            self._reduce(_BINARY[word])
            self.waiting.append((word, False))
        elif word == "?":
            self._reduce(1)
            self.waiting.append((word, False))
        elif word == ":":
            self._reduce(0)
            if not self.waiting or self.waiting[-1][0] != "?":
                raise self._error()
            self.waiting[-1] = ("?:", False)
        elif word == ",":
            self._reduce(0)
            if not self.waiting or self.waiting[-1][0] != "{":
                raise self._error()
            self.counts[-1] += 1
        elif word in (")", "}"):
            self._reduce(0)
            if not self.waiting or self.waiting.pop()[0] != {")": "(", "}": "{"}[word]:
                raise self._error()
            if word == "}":
                count = self.counts.pop()
                parts = self.values[-count:]
                self.values[-count:] = [tuple(bit for part in reversed(parts) for bit in part)]
            self.position += 1
            return False
        else:
            raise self._error()
        self.position += 1
        return True

    def _reduce(self, strength: int) -> None:
        """Apply the operators that wait and bind at least so strongly."""
        while self.waiting:
            operator, unary = self.waiting[-1]
            if operator in ("(", "{", "?") or (not unary and _STRENGTH[operator] < strength):
                return
            self.waiting.pop()
            if unary:
                self.values.append(_unary(operator, self.values.pop()))
            elif operator == "?:":
                b, a, condition = self.values.pop(), self.values.pop(), truth(self.values.pop())
                self.values.append(tuple(choose(condition, x, y) for x, y in _same_width(a, b)))
            else:
                b, a = self.values.pop(), self.values.pop()
                self.values.append(_binary(operator, a, b))

    def _literal(self, word: str) -> Value:
        found = _LITERAL.fullmatch(word)
        if word.isdecimal() and len(word) < 10:
            value, width = int(word), 32
        elif found and (found[1] or "32").isdecimal() and int(found[1] or "32") <= _WIDEST:
            digits, base = found[3].replace("_", "").lower(), _BASE[found[2].lower()]
            try:
                value = int(digits, base)
            except ValueError:
                raise NotUnderstood(f"the literal {word} at {self._place()} is not made of 0 and 1") from None
            width = int(found[1] or "32")
        else:
            raise self._error()
        return tuple(ONE if value >> k & 1 else ZERO for k in range(width))

    def _error(self) -> NotUnderstood:
        return NotUnderstood(f"the expression at {self._place()} is not read")

    def _place(self) -> str:
        return str(self.tokens[min(self.position, len(self.tokens) - 1)].place)


def _same_width(a: Value, b: Value) -> list[tuple[Function, Function]]:
    width = max(len(a), len(b))
    pad = (ZERO,) * width
    return list(zip((a + pad)[:width], (b + pad)[:width], strict=True))


def _reduced(operator: str, value: Value) -> Function:
    result = value[0]
    for bit in value[1:]:
        result = join(operator, result, bit)
    return result


def _unary(operator: str, value: Value) -> Value:
    if operator == "~":
        return tuple(map(invert, value))
    if operator == "!":
        return (invert(truth(value)),)
    reduced = _reduced(operator.strip("~") or "^", value)
    return (invert(reduced),) if "~" in operator else (reduced,)


def _binary(operator: str, a: Value, b: Value) -> Value:
    if operator in ("&&", "||"):
        return (join(operator[0], truth(a), truth(b)),)
    pairs = _same_width(a, b)
    if operator in ("&", "|", "^"):
        return tuple(join(operator, x, y) for x, y in pairs)
    if operator in ("~^", "^~"):
        return tuple(invert(join("^", x, y)) for x, y in pairs)
    differ = truth(tuple(join("^", x, y) for x, y in pairs))
    return (differ if operator[0] == "!" else invert(differ),)
