"""Dense linear equations modulo a large number, by Gaussian elimination.

A row is one Python int with a slot of fixed width for each coefficient, so that adding a multiple of a row is one
long multiplication. Slots are wide enough for the sum of all such products and are reduced only once.
"""

from collections.abc import Mapping, Sequence
from itertools import accumulate, repeat
from math import gcd

from auditor.errors import InternalError


class DenseSystem:
    """Equations Σ a_k y_k + a = 0 modulo a number, for unknowns that are named by ints."""

    def __init__(self, unknowns: Sequence[int], unit: int, modulus: int) -> None:
        """Prepare for equations in these unknowns; the coefficient named ``unit`` is the constant a."""
        self._columns = (*unknowns, unit)
        self._modulus = modulus
        self._width = 8 * (-(-(2 * modulus.bit_length() + len(unknowns).bit_length() + 1) // 8))
        self._pivots: list[int | None] = [None] * len(unknowns)

    @property
    def rank(self) -> int:
        """The number of independent equations added."""
        return sum(pivot is not None for pivot in self._pivots)

    def add(self, equation: Mapping[int, int]) -> None:
        """Add an equation; ``InternalError`` if it contradicts those before."""
        row = self._pack([equation.get(column, 0) % self._modulus for column in self._columns])
        mask, modulus = (1 << self._width) - 1, self._modulus
        for slot, pivot in enumerate(self._pivots):
            leading = (row & mask) % modulus
            row >>= self._width
            if not leading:
                continue
            if pivot is None:
                if gcd(leading, modulus) != 1:
                    return  # hardly ever with primes this large, and one equation less does no harm
                scale = pow(leading, -1, modulus)
                rest = self._unpack(row, len(self._pivots) - slot)
                self._pivots[slot] = self._pack([value * scale % modulus for value in rest])
                return
            row += (modulus - leading) * pivot
        if row % modulus:
            raise InternalError("two relations between logarithms contradict each other")

    def solution(self) -> dict[int, int]:
        """Return the unknowns that the equations determine."""
        found = {self._columns[-1]: 1}
        for slot in range(len(self._pivots) - 1, -1, -1):
            pivot = self._pivots[slot]
            if pivot is None:
                continue
            names = self._columns[slot + 1 :]
            terms = zip(names, self._unpack(pivot, len(names)), strict=True)
            total = 0
            for name, coefficient in terms:
                if coefficient and name not in found:
                    break
                total += coefficient * found.get(name, 0)
            else:
                found[self._columns[slot]] = -total % self._modulus
        return found

    def _pack(self, values: Sequence[int]) -> int:
        size = self._width // 8
        return int.from_bytes(b"".join(value.to_bytes(size, "little") for value in values), "little")

    def _unpack(self, row: int, count: int) -> list[int]:
        size = self._width // 8
        data = row.to_bytes(size * count, "little")
        starts = accumulate(repeat(size, count - 1), initial=0)
        return [int.from_bytes(data[start : start + size], "little") % self._modulus for start in starts]
