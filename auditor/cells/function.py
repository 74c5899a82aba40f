"""What can be done with a ``Function``: put functions into it, fix inputs, tabulate it, ask what it depends on.

Nothing here recurses. The cost is the length of the program, times 2^inputs bits where a truth table is made.
"""

from collections.abc import Mapping
from typing import Literal, TypeAlias

from auditor.cells.library import Function

EXACT_INPUTS = 12  # with so many inputs or fewer, questions are settled by the truth table

Dependence: TypeAlias = Literal["positive", "negative", "mixed", "none"]
Ternary: TypeAlias = int | None


class BitAlgebra:
    """``width`` evaluations at once: a value is an int, bit k belongs to evaluation k; ``mask`` has all bits set."""

    __slots__ = ("mask", "width")

    def __init__(self, width: int) -> None:
        self.width = width
        self.mask = (1 << width) - 1

    def constant(self, bit: int) -> int:
        """Return the literal in every evaluation."""
        return self.mask if bit else 0

    def invert(self, a: int) -> int:
        """Return NOT a."""
        return a ^ self.mask

    def conjoin(self, a: int, b: int) -> int:
        """Return a AND b."""
        return a & b

    def disjoin(self, a: int, b: int) -> int:
        """Return a OR b."""
        return a | b

    def add(self, a: int, b: int) -> int:
        """Return a XOR b."""
        return a ^ b


class TernaryAlgebra:
    """The values 0, 1 and None for unknown (S. C. Kleene's strong logic, 1952)."""

    __slots__ = ()

    def constant(self, bit: int) -> Ternary:
        """Return the literal."""
        return bit

    def invert(self, a: Ternary) -> Ternary:
        """Return NOT a."""
        return None if a is None else 1 - a

    def conjoin(self, a: Ternary, b: Ternary) -> Ternary:
        """Return a AND b: 0 as soon as one is 0."""
        if a == 0 or b == 0:
            return 0
        return None if a is None or b is None else 1

    def disjoin(self, a: Ternary, b: Ternary) -> Ternary:
        """Return a OR b: 1 as soon as one is 1."""
        if a == 1 or b == 1:
            return 1
        return None if a is None or b is None else 0

    def add(self, a: Ternary, b: Ternary) -> Ternary:
        """Return a XOR b: unknown as soon as one is unknown."""
        return None if a is None or b is None else a ^ b


TERNARY = TernaryAlgebra()


class _PolarityAlgebra:
    """A value is (inputs met un-inverted, inputs met inverted), as bit sets: a syntactic bound on the dependence."""

    def constant(self, bit: int) -> tuple[int, int]:  # noqa: ARG002 - the algebra asks for it
        return 0, 0

    def invert(self, a: tuple[int, int]) -> tuple[int, int]:
        return a[1], a[0]

    def conjoin(self, a: tuple[int, int], b: tuple[int, int]) -> tuple[int, int]:
        return a[0] | b[0], a[1] | b[1]

    disjoin = conjoin

    def add(self, a: tuple[int, int], b: tuple[int, int]) -> tuple[int, int]:
        met = a[0] | a[1] | b[0] | b[1]
        return met, met


def _tidy(inputs: tuple[str, ...], program: list[str]) -> Function:
    """Return the function with only the inputs that its program reads, in their old order."""
    read = sorted({int(word[1:]) for word in program if word[0] == "$"})
    renamed = {f"${old}": f"${new}" for new, old in enumerate(read)}
    return Function(tuple(inputs[k] for k in read), tuple(renamed.get(word, word) for word in program))


def substitute(function: Function, replacements: Mapping[str, Function]) -> Function:
    """Return ``function`` with each input named in ``replacements`` replaced; inputs in order of first use."""
    index: dict[str, int] = {}

    def placed(part: Function) -> list[str]:
        words = [f"${index.setdefault(name, len(index))}" for name in part.inputs]
        return [words[int(word[1:])] if word[0] == "$" else word for word in part.program]

    itself = {name: Function((name,), ("$0",)) for name in function.inputs}
    parts = [placed(replacements.get(name, itself[name])) for name in function.inputs]
    program: list[str] = []
    for word in function.program:
        if word[0] == "$":
            program += parts[int(word[1:])]
        else:
            program.append(word)
    return _tidy(tuple(index), program)


def restrict(function: Function, bits: Mapping[str, int]) -> Function:
    """Return ``function`` with the named inputs fixed to 0 or 1 and constants folded away.

    Folds x&0, x&1, x|0, x|1, x^0, x^1 and !!x; the result lists only the inputs that are left in its program.
    """
    program: list[str] = []
    # An entry is where the operand starts in ``program``, or, for a constant (which is not put there), -1 - bit.
    stack: list[int] = []
    for word in function.program:
        if word[0] == "$":
            bit = bits.get(function.inputs[int(word[1:])])
            stack.append(len(program) if bit is None else -1 - bit)
            if bit is None:
                program.append(word)
        elif word in ("0", "1"):
            stack.append(-1 - int(word))
        elif word == "!":
            stack.append(_fold_invert(program, stack.pop()))
        else:
            b, a = stack.pop(), stack.pop()
            stack.append(_fold_pair(program, word, a, b))
    result = stack.pop()
    return _tidy(function.inputs, program) if result >= 0 else Function((), (str(-1 - result),))


def _fold_invert(program: list[str], operand: int) -> int:
    """Invert the last operand in place; see ``restrict`` for the entries."""
    if operand < 0:
        return -3 - operand
    if program[-1] == "!":
        program.pop()
    else:
        program.append("!")
    return operand


def _fold_pair(program: list[str], operator: str, a: int, b: int) -> int:
    """Join the last two operands in place; see ``restrict`` for the entries."""
    if a >= 0 and b >= 0:
        program.append(operator)
        return a
    constant, other = (a, b) if a < 0 else (b, a)
    bit = -1 - constant
    if operator == "^":
        return _fold_invert(program, other) if bit else other
    if bit == (operator == "&"):
        return other
    if other >= 0:
        del program[other:]
    return constant


def truth_table(function: Function) -> int:
    """Return 2^n bits for n inputs: bit k is the value where inputs[j] is bit j of k."""
    algebra = BitAlgebra(1 << len(function.inputs))
    columns = [column(algebra, j) for j in range(len(function.inputs))]
    return function.evaluate(columns, algebra)


def column(algebra: BitAlgebra, j: int) -> int:
    """Return the int whose bit k is bit j of k, over the whole width: 2^j zeros and 2^j ones by turns."""
    half = 1 << j
    return algebra.mask // ((1 << half) + 1) << half


def unateness(function: Function) -> dict[str, Dependence]:
    """Return for each input whether the function rises with it, falls with it, does both, or ignores it.

    Exact up to ``EXACT_INPUTS`` inputs; above, from the inversions in the text, where "mixed" may be too cautious.
    """
    if len(function.inputs) > EXACT_INPUTS:
        operands = [(1 << j, 0) for j in range(len(function.inputs))]
        rising, falling = function.evaluate(operands, _PolarityAlgebra())
        return {name: _dependence(rising >> j & 1, falling >> j & 1) for j, name in enumerate(function.inputs)}
    table, algebra = truth_table(function), BitAlgebra(1 << len(function.inputs))
    result = {}
    for j, name in enumerate(function.inputs):
        ones = column(algebra, j)
        at_1, at_0 = (table & ones) >> (1 << j), table & ~ones
        result[name] = _dependence(at_1 & ~at_0, at_0 & ~at_1)
    return result


def _dependence(rises: int, falls: int) -> Dependence:
    if rises:
        return "mixed" if falls else "positive"
    return "negative" if falls else "none"


def support(function: Function) -> tuple[str, ...]:
    """Return the inputs on which the function truly depends (above ``EXACT_INPUTS``: all that its text reads)."""
    return tuple(name for name, dependence in unateness(function).items() if dependence != "none")
