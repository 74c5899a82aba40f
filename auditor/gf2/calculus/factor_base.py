"""The factor base of a field: logarithms of all irreducible polynomials of small degree.

One canonical polynomial stands for all polynomials of its degree, so a table made once serves every register of
that degree: the user's field is mapped into the canonical one (``roots``).
"""

from dataclasses import dataclass
from functools import cache
from itertools import count

import numpy as np

from auditor.gf2.batch import Ring, Words
from auditor.gf2.factorisation import is_irreducible
from auditor.gf2.order import factors_of_mersenne
from auditor.gf2.polynomial import degree, power_modulo, remainder
from auditor.notation import Polynomial

_X = 0b10


@dataclass(frozen=True, slots=True)
class FactorBase:
    """Logarithms of small polynomials in the canonical field of one degree.

    ``field``    the canonical polynomial F, of degree n
    ``degree``   every irreducible polynomial of this degree or less belongs to the base
    ``modulus``  the logarithms are known modulo this divisor of 2^n - 1, which divides the order of x modulo F
    ``logs``     one for each polynomial of ``irreducibles(degree)``: its logarithm to base x, None where not found
    """

    field: Polynomial
    degree: int
    modulus: int
    logs: tuple[int | None, ...]

    def check(self) -> bool:
        """Return whether most of the base has a logarithm and each is right, by exponentiation."""
        n, primes = degree(self.field), irreducibles(self.degree)
        group = (1 << n) - 1
        if n < 1 or self.modulus < 1 or group % self.modulus or len(self.logs) != len(primes):
            return False
        if self.field != canonical_polynomial(n, self.modulus):
            return False
        known = [(prime, log) for prime, log in zip(primes.tolist(), self.logs, strict=True) if log is not None]
        if 2 * len(known) < len(primes):
            return False
        ring, cofactor = Ring(self.field), group // self.modulus
        powers = ring.powers_of_x([log % self.modulus * cofactor for _, log in known])
        elements = ring.pack(remainder(prime, self.field) for prime, _ in known)
        return bool((powers == ring.power(elements, cofactor)).all())


@cache
def canonical_polynomial(n: int, modulus: int) -> Polynomial:
    """Return the least irreducible polynomial of degree n modulo which the order of x is a multiple of the modulus.

    The least one has few terms below x^n, all of low degree. The modulus divides 2^n - 1, which must be factored
    (``ValueError``).
    """
    factors = factors_of_mersenne(n)
    if factors is None:
        raise ValueError(f"2^{n} - 1 is not factored")
    group = (1 << n) - 1
    cofactors = [group // prime for prime in factors if modulus % prime == 0]
    for low in count(1, 2):
        f = 1 << n | low
        if is_irreducible(f) and all(power_modulo(_X, cofactor, f) != 1 for cofactor in cofactors):
            return f
    raise AssertionError


@cache
def irreducibles(bound: int) -> Words:
    """Return the irreducible polynomials of degree 1 to the bound, ascending (sieve of Eratosthenes)."""
    composite = np.zeros(2 << bound, bool)
    found = []
    for size in range(1, bound + 1):
        primes = np.flatnonzero(~composite[1 << size : 2 << size]) + (1 << size)
        found.append(primes)
        if 2 * size <= bound:
            cofactors = np.arange(2, 2 << bound - size, dtype=np.int64)
            for prime in primes.tolist():
                composite[multiples(prime, cofactors)] = True
    return np.concatenate(found).astype(np.uint64)


def multiples(p: Polynomial, cofactors: np.ndarray) -> np.ndarray:
    """Return the products of p with each of the cofactors; they must fit the type of the array."""
    products = np.zeros_like(cofactors)
    for shift in range(p.bit_length()):
        if p >> shift & 1:
            products ^= cofactors << shift
    return products
