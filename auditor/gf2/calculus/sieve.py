"""Relations between the logarithms of small polynomials.

Coppersmith (1984): for small coprime u, v let C = u x^c + v with 4 c >= n. Modulo F = x^n + h,

    C^4 = u^4 x^(4 c) + v^4 = u^4 H + v^4 = D,    H = x^(4 c - n) h,

and C and D have degrees near n / 4 only. Where all factors of both are small, 4 log C = log D is a relation.

For one irreducible p the v with p | C are those with v = u x^c modulo p, and as p | D says the same with the fourth
root of H in place of x^c, both sides are sieved: no polynomial is divided to find out whether it is smooth.
"""

from collections.abc import Iterator
from dataclasses import dataclass
from itertools import pairwise
from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray

from auditor.gf2.calculus.factor_base import irreducibles, multiples
from auditor.gf2.polynomial import degree, gcd, multiply, power_modulo, square
from auditor.notation import Polynomial

Numbers: TypeAlias = NDArray[np.int64]
Degrees: TypeAlias = NDArray[np.uint8]

_DENSE = 5  # primes of this degree or less hit so many cells that whole rows are added
_CHUNK = 1 << 20  # cells hit in one call


@dataclass(frozen=True, slots=True)
class Shape:
    """The two sides of a relation in one field: C = u x^shift + v, D = u^4 high + v^4."""

    field: Polynomial

    @property
    def shift(self) -> int:
        """The exponent c."""
        return -(-degree(self.field) // 4)

    @property
    def high(self) -> Polynomial:
        """The polynomial H."""
        n = degree(self.field)
        return (self.field ^ 1 << n) << 4 * self.shift - n

    def left(self, u: Polynomial, v: Polynomial) -> Polynomial:
        """Return C."""
        return u << self.shift ^ v

    def right(self, u: Polynomial, v: Polynomial) -> Polynomial:
        """Return D."""
        return multiply(square(square(u)), self.high) ^ square(square(v))

    def power(self, p: Polynomial) -> Polynomial:
        """Return x^c modulo p: p divides C where v is this times u."""
        return power_modulo(0b10, self.shift, p)

    def fourth_root(self, p: Polynomial) -> Polynomial:
        """Return the fourth root of H modulo an irreducible p: p divides D where v is this times u."""
        # The power 2^(d - 2) of an element of the field of 2^d elements; for d = 1 the element itself.
        return power_modulo(self.high, 1 << max(degree(p) - 2, 0), p)


class Sieve:
    """Finds the (u, v), v < 2^width, for which both sides have no factor beyond the base degree."""

    def __init__(self, shape: Shape, base_degree: int, width: int, rows: int) -> None:
        self._shape, self._bound, self._width, self._rows = shape, base_degree, width, rows
        primes = irreducibles(base_degree).astype(np.int64)
        sizes = np.array([degree(p) for p in primes.tolist()])
        edges = np.searchsorted(sizes, range(1, base_degree + 2))
        self._primes = [primes[start:end] for start, end in pairwise(edges)]
        self._ratios = [_ratios(shape, group, size) for size, group in enumerate(self._primes, start=1)]

    @property
    def cells(self) -> int:
        """The number of pairs in one block."""
        return self._rows << self._width

    def smooth_pairs(self, block: int) -> list[tuple[Polynomial, Polynomial]]:
        """Return the coprime pairs found with rows block <= u < rows (block + 1), sorted.

        A cell holds the degree of the primes found in it, each counted once. It is taken if what is missing has at
        most the base degree: then it must be smooth. Missed are only those with many repeated factors.
        """
        first = block * self._rows
        u, v = np.arange(first, first + self._rows), np.arange(1 << self._width)
        left, right = self._degrees(u, v)
        wanted = self._found(first, 0) + np.uint8(self._bound) >= left
        wanted &= self._found(first, 1) + np.uint8(self._bound) >= right
        wanted[: 1 - min(first, 1)] = False  # u = 0
        places = np.flatnonzero(wanted)
        pairs = zip((places >> self._width).tolist(), (places & (1 << self._width) - 1).tolist(), strict=True)
        return [(first + row, column) for row, column in pairs if gcd(first + row, column) == 1]

    def _degrees(self, u: Numbers, v: Numbers) -> tuple[Degrees, Degrees]:
        """Return the degrees of both sides, or a little more where leading terms cancel."""
        sizes = [np.frexp(numbers)[1].astype(np.int64) - 1 for numbers in (u, v)]
        left = (self._shape.shift + sizes[0]).astype(np.uint8)[:, None]
        top = degree(self._shape.high)
        right = np.maximum(4 * sizes[0][:, None] + top, 4 * sizes[1]).clip(0).astype(np.uint8)
        return left, right

    def _found(self, first: int, side: int) -> Degrees:
        """Return the sum of the degrees of the primes that divide one side, for every cell."""
        cells = np.zeros((self._rows, 1 << self._width), np.uint8)
        flat = cells.reshape(-1)
        for size, (primes, ratios) in enumerate(zip(self._primes, self._ratios, strict=True), start=1):
            remainders = self._row_remainders(primes, ratios[side], size, first)
            if size <= _DENSE:
                self._add_rows(cells, primes, remainders, size)
            else:
                for places in self._places(primes, remainders, size):
                    np.add.at(flat, places, np.uint8(size))
        return cells

    def _row_remainders(self, primes: Numbers, ratios: Numbers, size: int, first: int) -> Iterator[Numbers]:
        """Yield ratio u modulo p for u = first, first + 1, ...: a row for each prime, some primes at a time."""
        step = max(1, _CHUNK // self._rows)
        for start in range(0, len(primes), step):
            p, power = primes[start : start + step], ratios[start : start + step]
            offset, table = np.zeros_like(p), np.zeros((len(p), 1), np.int64)
            for bit in range((first + self._rows - 1).bit_length()):
                if 1 << bit < self._rows:
                    table = np.concatenate([table, table ^ power[:, None]], axis=1)
                elif first >> bit & 1:
                    offset = offset ^ power
                power = _times_x(power, p, size)
            yield table ^ offset[:, None]

    def _add_rows(self, cells: Degrees, primes: Numbers, remainders: Iterator[Numbers], size: int) -> None:
        """Add the degree of each prime to the cells it divides, row by row from the few different rows there are."""
        columns = np.arange(1 << self._width)
        table = np.concatenate(list(remainders))
        for p, row_remainders in zip(primes.tolist(), table, strict=True):
            folded = columns.copy()
            for high in range(self._width - 1, size - 1, -1):
                folded ^= (folded >> high & 1) * (p << high - size)
            patterns = (folded == np.arange(1 << size)[:, None]).astype(np.uint8) * np.uint8(size)
            cells += patterns[row_remainders]

    def _places(self, primes: Numbers, remainders: Iterator[Numbers], size: int) -> Iterator[Numbers]:
        """Yield the cells that the primes divide."""
        starts = np.arange(self._rows) << self._width
        done = 0
        for table in remainders:
            group = primes[done : done + len(table)]
            done += len(table)
            if size > self._width:
                inside = table < 1 << self._width
                yield (starts + table)[inside]
                continue
            cofactors = np.arange(1 << self._width - size)
            step = max(1, _CHUNK // (self._rows * len(cofactors)))
            for k in range(0, len(group), step):
                steps = np.array([multiples(p, cofactors) for p in group[k : k + step].tolist()])
                yield ((starts + table[k : k + step])[:, :, None] ^ steps[:, None, :]).reshape(-1)


def _ratios(shape: Shape, primes: Numbers, size: int) -> tuple[Numbers, Numbers]:
    """Return ``shape.power`` and ``shape.fourth_root`` of many primes of one degree."""
    power = _horner(1 << shape.shift, primes, size)
    root = _horner(shape.high, primes, size)
    for _ in range(size - 2):
        # The square of Σ r_k x^k is Σ r_k x^(2 k).
        square = np.zeros_like(root)
        for k in range(size - 1, -1, -1):
            square = _times_x(_times_x(square, primes, size), primes, size) ^ (root >> k & 1)
        root = square
    return power, root


def _horner(polynomial: Polynomial, primes: Numbers, size: int) -> Numbers:
    """Return the polynomial modulo each of the primes."""
    result = np.zeros_like(primes)
    for digit in f"{polynomial:b}":
        result = _reduced(result << 1 ^ int(digit), primes, size)
    return result


def _times_x(numbers: Numbers, primes: Numbers, size: int) -> Numbers:
    return _reduced(numbers << 1, primes, size)


def _reduced(numbers: Numbers, primes: Numbers, size: int) -> Numbers:
    """Return polynomials of degree up to that of the primes modulo the primes."""
    result: Numbers = numbers ^ primes * (numbers >> size)
    return result
