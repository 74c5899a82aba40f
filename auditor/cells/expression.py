"""Reads a Boolean expression in the syntax of Liberty into a postfix program.

Strongest first: prefix ``!``, postfix ``'``; then ``^``; then ``&``, ``*`` and mere juxtaposition; then ``|`` and
``+``. Parentheses, the constants 0 and 1, names (with ``.`` and ``[]``), and any name at all between double quotes.
The parser keeps its own stack (E. W. Dijkstra's operator-precedence method, 1961), so depth costs memory alone.
"""

import re

from auditor.cells.library import Function

_TOKEN = re.compile(r"""\s*+(?:([\w.$\[\]]++)|("[^"]++")|([!'^&*|+()])|(\S))""")
_SPELLING = {"*": "&", "+": "|"}
_STRENGTH = {"(": 0, "|": 1, "&": 2, "^": 3, "!": 4}


class ExpressionError(ValueError):
    """The text is no expression; the message says what stands where, without a file and line."""


class _Parser:
    """One pass over the tokens: operands go out at once, operators wait on a stack for a weaker one."""

    def __init__(self, text: str) -> None:
        self.text = text
        self.index: dict[str, int] = {}
        self.program: list[str] = []
        self.waiting: list[str] = []
        self.operand_expected = True
        # Whether the run since the last parenthesis, & or | holds a ^, a juxtaposition; one entry a parenthesis.
        self.runs: list[set[str]] = [set()]
        self.ambiguous = False

    def parse(self) -> None:
        """Read the whole text. Raises ``ExpressionError``."""
        for token in _TOKEN.finditer(self.text):
            name, quoted, sign, stray = token.groups()
            if stray:
                raise self.error(f"unexpected {stray!r}", token.end() - 1)
            operand = name or quoted
            if self.operand_expected:
                if operand:
                    self.take_operand(operand)
                elif sign in ("!", "("):
                    self.open(sign)
                else:
                    raise self.error(f"{sign!r} stands where a pin is expected", token.end() - 1)
            elif operand or sign in ("!", "("):
                self.take_operator("&", "juxtaposition")
                if operand:
                    self.take_operand(operand)
                else:
                    self.open(sign)
            elif sign == "'":
                self.program.append("!")
            elif sign == ")":
                self.close(token.end() - 1)
            else:
                self.take_operator(_SPELLING.get(sign, sign), sign)
        self.finish()

    def take_operand(self, operand: str) -> None:
        """Put out a pin or a constant."""
        self.operand_expected = False
        if operand in ("0", "1"):
            self.program.append(operand)
        else:
            self.program.append(f"${self.index.setdefault(operand.strip(chr(34)), len(self.index))}")

    def open(self, sign: str) -> None:
        """Let a prefix or an opening parenthesis wait."""
        self.waiting.append(sign)
        if sign == "(":
            self.runs.append(set())

    def take_operator(self, operator: str, written: str) -> None:
        """Put out what binds at least as strongly, and let the operator wait."""
        strength = _STRENGTH[operator]
        while self.waiting and _STRENGTH[self.waiting[-1]] >= strength:
            self.program.append(self.waiting.pop())
        self.waiting.append(operator)
        self.operand_expected = True
        run = self.runs[-1]
        if written in ("^", "juxtaposition"):
            run.add(written)
            self.ambiguous = self.ambiguous or len(run) == 2
        else:
            run.clear()

    def close(self, column: int) -> None:
        """Put out everything up to the matching parenthesis."""
        while self.waiting and self.waiting[-1] != "(":
            self.program.append(self.waiting.pop())
        if not self.waiting:
            raise self.error("')' closes nothing", column)
        self.waiting.pop()
        self.runs.pop()

    def finish(self) -> None:
        """Put out what still waits."""
        if self.operand_expected:
            what = "it ends where a pin is expected" if self.program or self.waiting else "it is empty"
            raise self.error(what, len(self.text))
        if "(" in self.waiting:
            raise self.error("a parenthesis is not closed", len(self.text))
        self.program.extend(reversed(self.waiting))

    def error(self, found: str, column: int) -> ExpressionError:
        """Return the error with the text around the column (from 1)."""
        near = self.text[max(0, column - 30) : column + 30]
        return ExpressionError(f'{found}, at column {column + 1} of the expression, near "{near}"')


def parse_expression(text: str) -> Function:
    """Return the function that the expression denotes; its inputs stand in order of first appearance.

    Raises ``ExpressionError``.
    """
    parser = _Parser(text)
    parser.parse()
    return Function(tuple(parser.index), tuple(parser.program))


def is_read_differently(text: str) -> bool:
    """Return whether juxtaposition meets ``^`` without parentheses, as in ``A ^ B C``.

    By the rule above that is ``(A ^ B) & C``; some programs let juxtaposition bind first. Raises ``ExpressionError``.
    """
    parser = _Parser(text)
    parser.parse()
    return parser.ambiguous
