"""The order of x modulo a polynomial, which is the period of the register it describes, and primitivity.

Orders in the field of 2^n elements divide 2^n - 1, so they need its prime factors; a table in the package
holds them for n up to 256. Beyond it the answer is None, never a guess.
"""

from functools import cache
from math import lcm
from pathlib import Path

from auditor.gf2.factorisation import factor, is_irreducible
from auditor.gf2.polynomial import degree, power_modulo, remainder
from auditor.notation import Polynomial

_TABLE = Path(__file__).parent / "data" / "mersenne_factors.txt"
_X = 0b10


@cache
def _table() -> dict[int, dict[int, int]]:
    table = {}
    for line in _TABLE.read_text(encoding="ascii").splitlines():
        if not line or line.startswith("#"):
            continue
        n, _, powers = line.partition(":")
        primes = (power.partition("^") for power in powers.split())
        table[int(n)] = {int(prime): int(exponent or 1) for prime, _, exponent in primes}
    return table


def factors_of_mersenne(n: int) -> dict[int, int] | None:
    """Return {prime: exponent} of 2^n - 1, primes ascending; None where the table has no entry."""
    factors = _table().get(n)
    return None if factors is None else dict(factors)


def order_in_field(a: Polynomial, f: Polynomial) -> int | None:
    """Return the least k > 0 with a^k = 1 modulo the irreducible f, None where 2^n - 1 is not factored.

    ``ValueError`` if f divides a.
    """
    if not remainder(a, f):
        raise ValueError("zero has no order")
    factors = factors_of_mersenne(degree(f))
    if factors is None:
        return None
    order = (1 << degree(f)) - 1
    for prime, exponent in factors.items():
        for _ in range(exponent):
            if power_modulo(a, order // prime, f) != 1:
                break
            order //= prime
    return order


def order_of_x(f: Polynomial) -> int | None:
    """Return the least k > 0 for which f divides x^k + 1; ``ValueError`` if f(0) = 0, f divides none then.

    For f = product of g^e: the least common multiple of the orders modulo the g, times the least power of two that
    is not below any e (Lidl and Niederreiter 1983, theorems 3.8 and 3.9). None where an order modulo g is unknown.
    """
    if not f & 1:
        raise ValueError("x has no order modulo a polynomial without constant term")
    order, greatest = 1, 1
    for irreducible, multiplicity in factor(f):
        part = order_in_field(_X, irreducible)
        if part is None:
            return None
        order, greatest = lcm(order, part), max(greatest, multiplicity)
    return order << (greatest - 1).bit_length()


def is_primitive(f: Polynomial) -> bool | None:
    """Return whether f is irreducible and x has order 2^n - 1 modulo f; None where only the order is unknown."""
    if not f & 1 or not is_irreducible(f):
        return False
    order = order_in_field(_X, f)
    return None if order is None else order == (1 << degree(f)) - 1
