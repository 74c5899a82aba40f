"""Which combinations of two polynomials are worth a test: those with many small factors.

The p that divide α f + β g for one pair (α, β) follow from the remainders of f and g alone. What their degrees leave
of the degree of the combination says how likely it is smooth (the early abort of Pomerance 1982).
"""

from collections.abc import Iterator
from functools import cache
from itertools import groupby
from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray

from auditor.gf2.batch import Elements
from auditor.gf2.calculus.factor_base import irreducibles
from auditor.gf2.calculus.smooth import degrees
from auditor.gf2.polynomial import degree

_SMALL = 8  # remainders modulo primes of this degree or less fit a byte

Bytes: TypeAlias = NDArray[np.uint8]


def degrees_left(first: Elements, second: Elements, size: int, power: int) -> Bytes:
    """Return what factors of small degree leave of the degree of all combinations of f and g, for many f and g.

    Shape (4^size, rows): that of α^power f + β^power g, α and β with ``size`` coefficients, is in row
    α + 2^size β. Leading terms are taken not to cancel, and a factor is counted once.
    """
    remainders = _remainders(np.concatenate([first, second]))
    covered = np.zeros((1 << size, 1 << size, len(first)), np.uint8)
    count, divides = np.empty_like(covered), np.empty(covered.shape, np.bool_)
    for weight, numbers in groupby(range(len(remainders)), lambda number: degree(_primes()[number])):
        count[:] = 0
        for number in numbers:
            multiples = _multiples(_primes()[number], size, power)[:, remainders[number]]
            alpha, beta = multiples[:, : len(first)], multiples[:, len(first) :]
            np.equal(alpha[None], beta[:, None], out=divides)
            count += divides.view(np.uint8)
        count *= np.uint8(weight)
        covered += count
    growth = power * np.array([degree(multiplier) for multiplier in range(1 << size)])[:, None]
    sizes = [growth + degrees(side) for side in (first, second)]
    for size_of in sizes:
        size_of[0] = -1  # a multiplier of zero leaves nothing, however long the polynomial
    whole = np.maximum(sizes[0][None], sizes[1][:, None]).clip(0).astype(np.uint8)
    return (whole - np.minimum(covered, whole)).reshape(-1, len(first))


@cache
def _primes() -> list[int]:
    primes: list[int] = irreducibles(_SMALL).tolist()
    return primes


def _remainders(elements: Elements) -> Bytes:
    """Return the remainders of all elements, a row for each prime."""
    data = np.ascontiguousarray(elements, dtype="<u8").view(np.uint8)
    result = np.zeros((len(elements), len(_primes())), np.uint8)
    for position, table in zip(range(data.shape[1]), _byte_tables(data.shape[1]), strict=True):
        result ^= table[data[:, position]]
    return np.ascontiguousarray(result.T)


@cache
def _byte_tables(count: int) -> list[Bytes]:
    """Return for each byte of an element a table: its remainder modulo each prime, shape (256, primes)."""
    columns = [_powers(p, 8 * count) for p in _primes()]
    images = np.array(columns, np.uint8).T
    tables = []
    for start in range(0, 8 * count, 8):
        table = np.zeros((1, len(columns)), np.uint8)
        for bit in range(start, start + 8):
            table = np.concatenate([table, table ^ images[bit]])
        tables.append(table)
    return tables


@cache
def _multiples(p: int, size: int, power: int) -> Bytes:
    """Return α^power r modulo p in row α, column r."""
    residues = np.arange(1 << degree(p))
    table = np.zeros((1, len(residues)), np.int64)
    for constant in _powers(p, power * size)[::power]:
        image = np.zeros_like(residues)
        for bit, shifted in zip(range(degree(p)), _shifts(constant, p), strict=False):
            image ^= shifted * (residues >> bit & 1)
        table = np.concatenate([table, table ^ image])
    return table.astype(np.uint8)


def _powers(p: int, count: int) -> list[int]:
    """Return x^k modulo p for k = 0 ... count - 1."""
    return [power for _, power in zip(range(count), _shifts(1, p), strict=False)]


def _shifts(value: int, p: int) -> Iterator[int]:
    """Yield value, value x, value x^2, ... modulo p; the value has a smaller degree, or p has degree 1."""
    top = 1 << degree(p)
    if value >= top:
        value ^= p
    while True:
        yield value
        value <<= 1
        if value & top:
            value ^= p
