"""Factors of polynomials over GF(2), and whether one is irreducible.

Three steps: square-free parts by the derivative; each split by the degree of its factors; each of those split
by traces into the field of two elements (Cantor and Zassenhaus 1981, characteristic 2). Nothing is drawn at
random: two distinct factors of degree d differ in the trace of some x^j, j < 2d, since those powers span the
ring modulo both; and as a and a^2 have the same trace, odd j are enough.
"""

from auditor.gf2.polynomial import (
    degree,
    derivative,
    divide,
    gcd,
    multiply_modulo,
    remainder,
    square,
    square_modulo,
)
from auditor.notation import Polynomial

_X = 0b10


def factor(p: Polynomial) -> tuple[tuple[Polynomial, int], ...]:
    """Return the irreducible factors with their multiplicities, ascending; ``ValueError`` for zero."""
    if not p:
        raise ValueError("the zero polynomial has no factorisation")
    found: dict[Polynomial, int] = {}
    for part, multiplicity in _square_free_parts(p):
        for product, factor_degree in _distinct_degrees(part):
            for irreducible in _equal_degrees(product, factor_degree):
                found[irreducible] = found.get(irreducible, 0) + multiplicity
    return tuple(sorted(found.items()))


def is_irreducible(p: Polynomial) -> bool:
    """Return whether p has no proper divisor; constants are not irreducible.

    Rabin (1980): p divides x^(2^n) + x, and shares no factor with x^(2^(n/q)) + x for any prime q dividing n.
    """
    n = degree(p)
    if n < 2:
        return n == 1
    checks = {n // q for q in _prime_divisors(n)}
    power = _X
    for k in range(1, n + 1):
        power = square_modulo(power, p)
        if k in checks and gcd(p, power ^ _X) != 1:
            return False
    return power == _X


def _prime_divisors(n: int) -> list[int]:
    primes, q = [], 2
    while q * q <= n:
        if n % q == 0:
            primes.append(q)
            while n % q == 0:
                n //= q
        q += 1
    return [*primes, n] if n > 1 else primes


def _square_free_parts(p: Polynomial) -> list[tuple[Polynomial, int]]:
    """Return square-free polynomials with multiplicities whose powers multiply to p (Yun 1976 for characteristic 2)."""
    parts, scale = [], 1
    while degree(p) > 0:
        repeated = gcd(p, derivative(p))
        distinct = divide(p, repeated)[0]  # the product of the factors of odd multiplicity
        multiplicity = 1
        while distinct != 1:
            still = gcd(distinct, repeated)
            if (part := divide(distinct, still)[0]) != 1:
                parts.append((part, multiplicity * scale))
            distinct, repeated = still, divide(repeated, still)[0]
            multiplicity += 1
        p, scale = _square_root(repeated), 2 * scale
    return parts


def _square_root(p: Polynomial) -> Polynomial:
    """Return the root of a polynomial that has even exponents only."""
    return int(f"{p:b}"[::-1][::2][::-1], 2)


def _distinct_degrees(p: Polynomial) -> list[tuple[Polynomial, int]]:
    """Split a square-free polynomial into (product of its irreducible factors of degree d, d)."""
    products, d, power = [], 0, _X
    while 2 * (d + 1) <= degree(p):
        d += 1
        power = square_modulo(power, p)
        common = gcd(p, power ^ _X)
        if common != 1:
            products.append((common, d))
            p = divide(p, common)[0]
            power = remainder(power, p)
    if degree(p) > 0:
        products.append((p, degree(p)))
    return products


def _equal_degrees(product: Polynomial, d: int) -> list[Polynomial]:
    """Split a product of distinct irreducible polynomials of degree d."""
    pending, odd = [product], _X
    done: list[Polynomial] = []
    while pending:
        whole, pending = pending, []
        for p in whole:
            if degree(p) == d:
                done.append(p)
                continue
            common = gcd(p, _trace(odd, d, p))
            pending += [p] if common in (1, p) else [common, divide(p, common)[0]]
        odd = multiply_modulo(odd, square(_X), product)
    return done


def _trace(a: Polynomial, d: int, p: Polynomial) -> Polynomial:
    """Return a + a^2 + a^4 + ... + a^(2^(d - 1)) modulo p: 0 or 1 modulo each factor of degree d."""
    total = power = remainder(a, p)
    for _ in range(d - 1):
        power = square_modulo(power, p)
        total ^= power
    return total
