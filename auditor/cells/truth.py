"""Truth tables to functions: the way back from ``function.truth_table``.

A table over n names is an int of 2^n bits; bit k is the value where name j is bit j of k.
"""

from collections.abc import Sequence

from auditor.cells.function import EXACT_INPUTS, BitAlgebra, column, truth_table
from auditor.cells.library import Function


class TableSpace:
    """The tables over ``count`` names: all places (``mask``), those where name j is 1 (``columns[j]``)."""

    __slots__ = ("algebra", "columns", "mask")

    def __init__(self, count: int) -> None:
        self.algebra = BitAlgebra(1 << count)
        self.mask = self.algebra.mask
        self.columns = tuple(column(self.algebra, j) for j in range(count))

    def flip(self, table: int, j: int) -> int:
        """Return the table whose value at k is that of ``table`` where name j is the other bit."""
        at_1 = self.columns[j]
        return (table & at_1) >> (1 << j) | (table & ~at_1) << (1 << j)

    def either(self, table: int, j: int) -> int:
        """Return the places where ``table`` is 1 for one of the two values of name j."""
        return table | self.flip(table, j)


def function_between(names: Sequence[str], ones: int, zeros: int) -> Function:
    """Return a function that is 1 on ``ones`` and 0 on ``zeros``, which must not meet; elsewhere it may be either.

    Names that it can do without are dropped, the last ones first; each choice is kept, so the result is irredundant,
    though not always the smallest.
    """
    space = TableSpace(len(names))
    kept = list(range(len(names)))
    for j in reversed(range(len(names))):
        wider_ones, wider_zeros = space.either(ones, j), space.either(zeros, j)
        if not wider_ones & wider_zeros:
            ones, zeros = wider_ones, wider_zeros
            kept.remove(j)
    places = [sum(1 << j for bit, j in enumerate(kept) if k >> bit & 1) for k in range(1 << len(kept))]
    table = sum(1 << k for k, place in enumerate(places) if ones >> place & 1)
    return table_function([names[j] for j in kept], table)


def first_one(function: Function) -> dict[str, int] | None:
    """Return inputs for which the function is 1, None if there are none; {} where there are too many inputs to tell."""
    if len(function.inputs) > EXACT_INPUTS:
        return {}
    table = truth_table(function)
    place = (table & -table).bit_length() - 1
    return {name: place >> j & 1 for j, name in enumerate(function.inputs)} if table else None


def table_function(names: Sequence[str], table: int) -> Function:
    """Return the function with this table, by joining cofactors from the first name up (C. E. Shannon, 1938)."""
    parts = [(table >> k & 1, ["1" if table >> k & 1 else "0"]) for k in range(1 << len(names))]
    for j in range(len(names)):
        all_ones = (1 << (1 << j)) - 1
        parts = [
            (low[0] | high[0] << (1 << j), _select(f"${j}", low, high, all_ones))
            for low, high in zip(parts[::2], parts[1::2], strict=True)
        ]
    program = parts[0][1]
    if program in (["0"], ["1"]):
        return Function((), tuple(program))
    return _renumbered(names, program)


def _select(operand: str, low: tuple[int, list[str]], high: tuple[int, list[str]], all_ones: int) -> list[str]:
    """Return the program of ``operand ? high : low`` from (table, program) of the two, simplified."""
    (at_0, text_0), (at_1, text_1) = low, high
    if at_0 == at_1:
        return text_0
    if at_0 == all_ones ^ at_1:
        if at_0 == 0:
            return [operand]
        return [operand, "!"] if at_1 == 0 else [*text_0, operand, "^"]
    if at_0 == 0:
        return [operand, *text_1, "&"]
    if at_1 == 0:
        return [operand, "!", *text_0, "&"]
    if at_1 == all_ones:
        return [operand, *text_0, "|"]
    if at_0 == all_ones:
        return [operand, "!", *text_1, "|"]
    return [operand, *text_1, "&", operand, "!", *text_0, "&", "|"]


def _renumbered(names: Sequence[str], program: Sequence[str]) -> Function:
    """Return the function without the names that its program does not read."""
    read = [j for j in range(len(names)) if f"${j}" in program]
    place = {f"${old}": f"${new}" for new, old in enumerate(read)}
    return Function(tuple(names[j] for j in read), tuple(place.get(word, word) for word in program))
