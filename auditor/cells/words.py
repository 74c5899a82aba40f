"""Functions on 64-bit words: bit b of word w is lane 64 w + b, an independent evaluation; many like gates at once."""

from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from auditor.cells.library import Function

Words = npt.NDArray[np.uint64]
ALL_ONES = np.uint64(0xFFFF_FFFF_FFFF_FFFF)


class WordAlgebra:
    """Functions evaluated on words."""

    def constant(self, bit: int) -> Words:
        """Return 0 or 1 in every lane."""
        return np.array(ALL_ONES if bit else 0, dtype=np.uint64)

    def invert(self, a: Words) -> Words:
        """Return NOT a."""
        return np.bitwise_not(a)

    def conjoin(self, a: Words, b: Words) -> Words:
        """Return a AND b."""
        return np.bitwise_and(a, b)

    def disjoin(self, a: Words, b: Words) -> Words:
        """Return a OR b."""
        return np.bitwise_or(a, b)

    def add(self, a: Words, b: Words) -> Words:
        """Return a XOR b."""
        return np.bitwise_xor(a, b)


_WORDS = WordAlgebra()


@dataclass(frozen=True, slots=True)
class Batch:
    """Equal functions evaluated at once: ``inputs`` (inputs of the function, g) and ``outputs`` (g,) are slots."""

    function: Function
    inputs: npt.NDArray[np.intp]
    outputs: npt.NDArray[np.intp]

    def value(self, values: Words) -> Words:
        """Return (g, words)."""
        value = self.function.evaluate([values[row] for row in self.inputs], _WORDS)
        return value if value.ndim else np.full((len(self.outputs), values.shape[1]), value)


def in_batches(places: Iterable[tuple[int, Function, tuple[int, ...], int]]) -> list[Batch]:
    """Group (level, function, slots of its inputs, slot of its output) by level, then by function."""
    groups: dict[tuple[int, Function], list[tuple[tuple[int, ...], int]]] = {}
    for level, function, inputs, output in places:
        groups.setdefault((level, function), []).append((inputs, output))
    batches = []
    for level, function in sorted(groups, key=lambda group: group[0]):
        members = groups[level, function]
        rows = np.array([slots for slots, _ in members], dtype=np.intp).reshape(len(members), -1).T
        batches.append(Batch(function, rows, np.array([slot for _, slot in members], dtype=np.intp)))
    return batches
