"""The map from a user's field GF(2)[x]/(f) into the canonical one, by a root of f there.

Over the canonical field f is a product of linear factors X + ρ. The trace of β ρ is 0 or 1, and for β = x, x^2, ...
it tells any two roots apart, so that greatest common divisors with the trace of β X split f down to one factor
(Berlekamp 1970; Cantor and Zassenhaus 1981 for characteristic 2). Nothing is drawn at random.
"""

import numpy as np

from auditor.gf2 import matrix
from auditor.gf2.batch import Elements, Ring
from auditor.gf2.polynomial import degree, inverse, multiply_modulo, square_modulo
from auditor.notation import Polynomial

_X = 0b10


def root(f: Polynomial, field: Polynomial) -> Polynomial:
    """Return a root of the irreducible f in GF(2)[x]/(field), always the same one; both have one degree.

    A polynomial over the field is an array of packed elements, row k the coefficient of X^k.
    """
    if f == field:
        return _X
    n, ring = degree(f), Ring(field)
    if n == 1:
        return f & 1
    # Bit i of row j: whether X^(2^i) modulo f has the term X^j.
    terms = matrix.transpose(_repeated_squares(_X, f, n), n)
    factor = ring.pack(f >> k & 1 for k in range(n + 1))
    beta = 1
    while len(factor) > 2:
        beta = multiply_modulo(beta, _X, field)
        conjugates = _repeated_squares(beta, field, n)
        trace = ring.pack(matrix.row_times(row, conjugates) for row in terms)
        common = _gcd(ring, factor, trace)
        if 1 < len(common) < len(factor):
            other = _divide(ring, factor, common)[0]
            factor = min(common, other, key=len)
    return ring.unpack(factor[:1])[0]


def _repeated_squares(element: Polynomial, f: Polynomial, count: int) -> list[Polynomial]:
    squares = [element]
    while len(squares) < count:
        squares.append(square_modulo(squares[-1], f))
    return squares


def _gcd(ring: Ring, a: Elements, b: Elements) -> Elements:
    """Return the monic greatest common divisor of a monic polynomial and another."""
    while len(b := _monic(ring, _trimmed(_divide(ring, b, a)[1]))):
        a, b = b, a
    return a


def _divide(ring: Ring, a: Elements, b: Elements) -> tuple[Elements, Elements]:
    """Return quotient and remainder by a monic polynomial."""
    rest, size = a.copy(), len(b) - 1
    low = b[:size]
    for top in range(len(a) - 1, size - 1, -1):
        leading = np.broadcast_to(rest[top], low.shape)
        rest[top - size : top] ^= ring.multiply(low, leading)
    return rest[size:], rest[:size]


def _monic(ring: Ring, a: Elements) -> Elements:
    if not len(a):
        return a
    scale = ring.pack([inverse(ring.unpack(a[-1:])[0], ring.f)])
    return ring.multiply(a, np.broadcast_to(scale, a.shape))


def _trimmed(a: Elements) -> Elements:
    """Return a without zero leading coefficients."""
    used = np.flatnonzero(a.any(axis=1))
    return a[: used[-1] + 1] if len(used) else a[:0]
