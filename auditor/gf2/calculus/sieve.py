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
        if first == 0:
            wanted[0] = False  # u = 0 gives the relation 4 log v = log v^4
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
        step = max(1, _CHUNK // self._rows)
        for size, (all_primes, ratios) in enumerate(zip(self._primes, self._ratios, strict=True), start=1):
            for start in range(0, len(all_primes), step):
                primes, ratio = all_primes[start : start + step], ratios[side][start : start + step]
                offset = _product(ratio, first, primes, size)
                remainders = _products(ratio, self._rows.bit_length() - 1, primes, size) ^ offset[:, None]
                if size <= _DENSE:
                    self._add_rows(cells, primes, remainders, size)
                    continue
                for places in self._places(primes, remainders, size):
                    np.add.at(cells.reshape(-1), places, np.uint8(size))
        return cells

    def _add_rows(self, cells: Degrees, primes: Numbers, remainders: Numbers, size: int) -> None:
        """Add the degree of each prime to the cells it divides: a row of cells depends on the row's remainder only."""
        columns = _products(np.ones_like(primes), self._width, primes, size)
        for column_remainders, row_remainders in zip(columns, remainders, strict=True):
            patterns = (column_remainders == np.arange(1 << size)[:, None]).astype(np.uint8) * np.uint8(size)
            cells += patterns[row_remainders]

    def _places(self, primes: Numbers, remainders: Numbers, size: int) -> Iterator[Numbers]:
        """Yield the cells that the primes divide: v is the row's remainder plus a multiple of the prime."""
        starts = np.arange(self._rows) << self._width
        if size > self._width:
            yield (starts + remainders)[remainders < 1 << self._width]
            return
        cofactors = np.arange(1 << self._width - size)
        step = max(1, _CHUNK // (self._rows * len(cofactors)))
        for k in range(0, len(primes), step):
            steps = np.array([multiples(p, cofactors) for p in primes[k : k + step].tolist()])
            yield ((starts + remainders[k : k + step])[:, :, None] ^ steps[:, None, :]).reshape(-1)


def _ratios(shape: Shape, primes: Numbers, size: int) -> tuple[Numbers, Numbers]:
    """Return ``shape.power`` and ``shape.fourth_root`` of many primes of one degree."""
    ones = np.ones_like(primes)
    power, root = (_product(ones, polynomial, primes, size) for polynomial in (1 << shape.shift, shape.high))
    for _ in range(size - 2):
        # The square of Σ r_k x^k is Σ r_k x^(2 k).
        square = np.zeros_like(root)
        for k in range(size - 1, -1, -1):
            square = _times_x(_times_x(square, primes, size), primes, size) ^ (root >> k & 1)
        root = square
    return power, root


def _product(factors: Numbers, polynomial: Polynomial, primes: Numbers, size: int) -> Numbers:
    """Return the product of a factor and the polynomial modulo each of the primes, by Horner's rule."""
    result = np.zeros_like(primes)
    for digit in f"{polynomial:b}":
        result = _times_x(result, primes, size)
        if digit == "1":
            result ^= factors
    return result


def _products(factors: Numbers, bits: int, primes: Numbers, size: int) -> Numbers:
    """Return the products with all polynomials of that many coefficients, shape (primes, 2^bits)."""
    table = np.zeros((len(primes), 1), np.int64)
    for _ in range(bits):
        table = np.concatenate([table, table ^ factors[:, None]], axis=1)
        factors = _times_x(factors, primes, size)
    return table


def _times_x(numbers: Numbers, primes: Numbers, size: int) -> Numbers:
    """Return x times remainders modulo primes, modulo the primes."""
    shifted = numbers << 1
    result: Numbers = shifted ^ primes * (shifted >> size)
    return result
