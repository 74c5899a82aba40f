"""The small words of the language that both lanes share: names, literals, plain values, lists of items."""

import re
from collections.abc import Iterator
from functools import partial
from typing import NamedTuple

from auditor.verilog.statements import Concatenation, Constant, Expression, Select

SPACE = r"\s*+"
NAME = r"(?:[A-Za-z_][\w$]*+|\\\S++\s)"
MAX_DEPTH = 256
MAX_BITS = 1 << 20

GATES = frozenset({"and", "nand", "or", "nor", "xor", "xnor", "buf", "not", "bufif0", "bufif1", "notif0", "notif1"})
WIRED = frozenset({"wand", "wor", "triand", "trior"})
_OTHER_KEYWORDS = """
always assign begin buf case casex casez cmos config deassign default defparam disable edge else end endcase
endconfig endfunction endgenerate endmodule endprimitive endspecify endtable endtask event for force forever fork
function generate genvar if ifnone initial inout input integer join localparam logic macromodule module negedge nmos
output parameter pmos posedge primitive pulldown pullup rcmos real realtime reg release repeat rnmos rpmos rtran
rtranif0 rtranif1 scalared signed small specify specparam strong0 strong1 supply0 supply1 table task time tran tranif0
tranif1 tri tri0 tri1 triand trior trireg unsigned uwire vectored wait wand weak0 weak1 while wire wor
"""
RESERVED = GATES | frozenset(_OTHER_KEYWORDS.split())

_LITERAL = re.compile(r"(?:(\d[\d_]*)?\s*'\s*([sS]?)([bBoOdDhH])\s*([\w?]+)|(\d[\d_]*))")
_DIGIT_BITS = {"b": 1, "o": 3, "h": 4}
_TOKEN = re.compile(r'\\\S++|"(?:[^"\\\n]|\\.)*+"|[(\[{]|[)\]}]|,')


class RefusedError(Exception):
    """The text is legal, or nearly so, but not structural; ``found`` and ``remedy`` as in a Trouble."""

    def __init__(self, found: str, remedy: str) -> None:
        super().__init__(found)
        self.found, self.remedy = found, remedy


# The constructor of a named tuple without the call of Python code that its own one makes.
_bit = partial(tuple.__new__, Select)


class NotPlainError(Exception):
    """The text is not plain: the grammar lane must read it."""


class DepthError(Exception):
    """Parentheses are nested deeper than ``MAX_DEPTH``; ``line`` says where."""

    def __init__(self, line: int) -> None:
        super().__init__(line)
        self.line = line


class Item(NamedTuple):
    """One element of a statement's list with the statement's head before it, such as one instance; no ``;``."""

    text: str
    line: int


def plain_name(text: str) -> str:
    """Return a name without the backslash and the blank of an escaped identifier."""
    return text[1:].rstrip() if text.startswith("\\") else text


def literal(text: str) -> Constant:
    """Return the bits of a literal (IEEE 1364-2005, 3.5.1).

    Too many digits are cut, too few filled with 0, or with the leftmost x or z. Raises ValueError with the reason
    where the text is no literal of a bit vector.
    """
    match = _LITERAL.fullmatch(text)
    if not match:
        raise ValueError(f"{text} is no bit vector")
    size, signed, base, digits, number = match.groups()
    if signed:
        raise ValueError(f"{text} is a signed literal")
    width = int((size or "32").replace("_", ""))
    if not 0 < width <= MAX_BITS:
        raise ValueError(f"{text} has an impossible width")
    digits = (digits or number).replace("_", "").lower().replace("?", "z")
    bits = _bits_of_digits(digits, (base or "d").lower())
    if not bits:
        raise ValueError(f"{text} has digits that its base does not know")
    if size is None and len(bits) > width:
        raise ValueError(f"{text} does not fit {width} bits")
    fill = bits[0] if bits[0] in "xz" else "0"
    return Constant(bits[-width:].rjust(width, fill), sized=size is not None)


def _bits_of_digits(digits: str, base: str) -> str:
    """Return the digits as bits, or an empty string where they do not fit the base."""
    if base == "d":
        if digits in ("x", "z"):
            return digits
        return f"{int(digits):b}" if digits.isdecimal() and len(digits) <= 1000 else ""
    each = _DIGIT_BITS[base]
    bits = []
    for digit in digits:
        if digit in "xz":
            bits.append(digit * each)
        elif digit in "0123456789abcdef"[: 1 << each]:
            bits.append(f"{int(digit, 16):0{each}b}")
        else:
            return ""
    return "".join(bits)


class PlainNames(dict[str, str]):
    """Names as written → names, computed once each; raises NotPlainError for a keyword."""

    def __missing__(self, text: str) -> str:
        if text in RESERVED:
            raise NotPlainError
        name = self[text] = plain_name(text)
        return name


class PlainPins(dict[str, str]):
    """What stands before the bracket of a connection, as ``, .A``, → the pin, computed once each."""

    def __init__(self, names: PlainNames) -> None:
        super().__init__()
        self.names = names

    def __missing__(self, text: str) -> str:
        name = self[text] = self.names[text.partition(".")[2].strip()]
        return name


class PlainValues(dict[str, Expression | None]):
    """Text of a plain value → expression, None where empty, computed once each; else raises NotPlainError.

    Plain are a net, a bit or part of one, a literal, and a concatenation of these.
    """

    _select = r"\[\s*(-?\d{1,9})\s*(?::\s*(-?\d{1,9})\s*)?\]\s*"
    _number = r"\d*\s*'[\w?\s]+|\d[\d_]*"
    _part = rf"{SPACE}(?:({NAME}){SPACE}(?:{_select})?|({_number})){SPACE}"
    _one = re.compile(_part)

    def __init__(self) -> None:
        super().__init__()
        self.vectors: dict[str, str] = {}

    def __missing__(self, text: str) -> Expression | None:
        value: Expression | None
        if text[-1:] == "]":
            head, _, rest = text.partition("[")
            vector = self.vectors.get(head)
            if vector is not None and rest[:-1].isdecimal() and len(rest) < 10:
                index = int(rest[:-1])
                value = self[text] = _bit((vector, index, index))
                return value
        if text.isidentifier() and text.isascii() and text not in RESERVED:
            value = text
        elif match := self._one.fullmatch(text):
            value = self._value(*match.groups())
            if isinstance(value, Select) and text.startswith(f"{value.net}["):
                self.vectors[value.net] = value.net
        elif not text.strip():
            value = None
        else:
            value = self._concatenation(text.strip())
        self[text] = value
        return value

    def _concatenation(self, text: str) -> Concatenation:
        if text[0] != "{" or text[-1] != "}":
            raise NotPlainError
        parts = []
        for item in split_list(text[1:-1], 0):
            part = None if item.text.startswith("{") else self[item.text]
            if part is None:  # an empty part, or one of parts
                raise NotPlainError
            parts.append(part)
        return Concatenation(tuple(parts))

    @staticmethod
    def _value(name: str, left: str, right: str, number: str) -> Expression:
        if not name:
            try:
                return literal(number.strip())
            except ValueError:
                raise NotPlainError from None
        if name in RESERVED:
            raise NotPlainError
        net = plain_name(name)
        return Select(net, int(left), int(right or left)) if left else net


def split_list(text: str, line: int) -> Iterator[Item]:
    """Cut a text at its outer commas; each item keeps its own line. Raises DepthError."""
    depth = start = 0
    for match in _TOKEN.finditer(text):
        sign = match[0]
        if sign == ",":
            if depth == 0:
                yield _item(text[start : match.start()], line)
                line += text.count("\n", start, match.start())
                start = match.end()
        elif sign in "([{":
            depth += 1
            if depth > MAX_DEPTH:
                raise DepthError(line + text.count("\n", start, match.start()))
        elif sign in ")]}":
            depth -= 1
    yield _item(text[start:], line)


def _item(text: str, line: int) -> Item:
    """Return the item without leading blanks, on the line where its first word stands."""
    begun = text.lstrip()
    return Item(begun, line + text.count("\n", 0, len(text) - len(begun)))


def closing(text: str, start: int, line: int) -> int:
    """Return the index behind the bracket that closes the one at ``start``, or -1. Raises DepthError."""
    depth = 0
    for match in _TOKEN.finditer(text, start):
        if match[0] in "([{":
            depth += 1
            if depth > MAX_DEPTH:
                raise DepthError(line + text.count("\n", 0, match.start()))
        elif match[0] in ")]}":
            depth -= 1
            if depth == 0:
                return match.end()
    return -1
