"""Logarithms to base x in a field GF(2)[x]/(f), of many values at once: how far apart two streams are.

Pohlig and Hellman (1978): a logarithm modulo the order of x is put together from logarithms modulo the prime powers
of it. Small ones have a group of their own that is searched (``steps``). Where one is too large for that, the index
calculus (``calculus``) gives the logarithm modulo all of the larger ones at once. Primes can be left out on demand or
for want of work allowed, and then the logarithm is known modulo the rest.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from math import gcd, prod

from auditor.errors import InternalError
from auditor.gf2.batch import Elements, Ring
from auditor.gf2.calculus.field import field_logarithms
from auditor.gf2.calculus.table import TableSource
from auditor.gf2.calculus.work import OutOfWork, Work
from auditor.gf2.effort import Effort
from auditor.gf2.factorisation import is_irreducible
from auditor.gf2.order import factors_of_mersenne, order_of_x
from auditor.gf2.polynomial import degree, power_modulo, remainder
from auditor.gf2.steps import shared_logarithms
from auditor.notation import Polynomial

_X = 0b10
# One group of this many bits costs less than the powers that take the values into several smaller groups.
_GROUP_BITS = 26
# The largest group that is searched: with 1,000 values it takes about as long as an index calculus of degree 128.
_SEARCHED_BITS = 38
_WITHOUT_BOUNDS = Effort()


@dataclass(frozen=True, slots=True)
class Logarithms:
    """Logarithms to base x modulo f.

    ``values``   one for each value asked: s with 0 <= s < modulus, or None where the value is no power of x
    ``modulus``  the logarithms are known modulo this divisor of the order
    ``order``    the order of x modulo f
    ``because``  why it is not all of the order, in words; empty where it is, or where the caller left primes out
    """

    values: tuple[int | None, ...]
    modulus: int
    order: int
    because: str = ""

    @property
    def complete(self) -> bool:
        """Whether no prime was left out."""
        return self.modulus == self.order


def logarithms(
    values: Sequence[Polynomial], f: Polynomial, max_prime_bits: int | None = None, effort: Effort = _WITHOUT_BOUNDS
) -> Logarithms:
    """Return the logarithms to base x of the values modulo the irreducible f.

    All of them are complete up to degree ``calculus.table.LARGEST_DEGREE``, unless ``max_prime_bits`` leaves out the
    prime powers of the order with more bits or a bound of the effort is reached. Beyond that degree only prime powers
    that can be searched are in the modulus. Every logarithm is verified by exponentiation.

    ``ValueError`` if f is x, is reducible or has a degree for which the order of x is unknown.
    """
    if not f & 1 or not is_irreducible(f):
        raise ValueError("logarithms need an irreducible polynomial other than x")
    order = order_of_x(f)
    if order is None:
        raise ValueError(f"the order of x modulo a polynomial of degree {degree(f)} is unknown")
    ring = Ring(f)
    elements = ring.pack(remainder(value, f) for value in values)
    # Zero to any power is zero, so this test refuses it as well.
    is_power = (ring.power(elements, order) == ring.pack([1])).all(axis=1)
    members = elements[is_power]
    parts = _prime_powers(order, ring.degree)
    if max_prime_bits is not None:
        parts = [part for part in parts if part.bit_length() <= max_prime_bits]
    found, modulus, because = _solve(ring, members, order, parts, effort)
    _verify(ring, members, found, order // modulus)
    remaining = iter(found)
    return Logarithms(tuple(next(remaining) if ok else None for ok in is_power.tolist()), modulus, order, because)


def _solve(
    ring: Ring, members: Elements, order: int, parts: Sequence[int], effort: Effort
) -> tuple[list[int], int, str]:
    """Return logarithms modulo as much of the product of the parts as can be had, that modulus, and why not all."""
    if not len(members):
        return [], prod(parts), ""
    work, because = effort.work(), ""
    known = [0] * len(members), 1
    if max(parts, default=1).bit_length() > _SEARCHED_BITS:
        try:
            known = _large_part(ring, members, parts, work, effort.tables)
        except OutOfWork as reached:
            because = str(reached)
    for group in _groups([part for part in parts if known[1] % part and part.bit_length() <= _SEARCHED_BITS]):
        # Small groups cost less than it takes to count them.
        allowed = work if group.bit_length() > _GROUP_BITS else Work()
        try:
            known = _combined(known, _searched(ring, members, order, group, allowed), group)
        except OutOfWork as reached:
            because = str(reached)
    return *known, because


def _prime_powers(order: int, n: int) -> list[int]:
    """Return the prime powers whose product is the order, primes ascending."""
    powers = []
    for prime in factors_of_mersenne(n) or {}:
        part = 1
        while order % (part * prime) == 0:
            part *= prime
        if part > 1:
            powers.append(part)
    return powers


def _groups(parts: Sequence[int]) -> list[int]:
    """Return the parts with small ones merged."""
    groups: list[int] = []
    for part in parts:
        if groups and (groups[-1] * part).bit_length() <= _GROUP_BITS:
            groups[-1] *= part
        else:
            groups.append(part)
    return groups


def _large_part(
    ring: Ring, members: Elements, parts: Sequence[int], work: Work, tables: TableSource
) -> tuple[list[int], int]:
    """Return logarithms by index calculus and their modulus, the product of the larger parts."""
    # The table holds for all polynomials of the degree, so it is made modulo all large primes, whatever this order.
    whole = prod(part for part in _prime_powers((1 << ring.degree) - 1, ring.degree) if part.bit_length() > _GROUP_BITS)
    modulus = gcd(whole, prod(parts))
    base = tables(ring.degree, whole, work)
    return field_logarithms(ring.unpack(members), ring.f, base, modulus, work), modulus


def _searched(ring: Ring, members: Elements, order: int, group: int, work: Work) -> list[int]:
    """Return logarithms modulo one divisor of the order by a search of the group of that order."""
    generator = power_modulo(_X, order // group, ring.f)
    return shared_logarithms(ring, ring.power(members, order // group), generator, group, work)


def _combined(known: tuple[list[int], int], residues: Sequence[int], group: int) -> tuple[list[int], int]:
    """Return what is known when residues modulo a coprime number are added (Chinese remainders)."""
    found, modulus = known
    scale = pow(modulus, -1, group)
    joined = [old + modulus * ((new - old) * scale % group) for old, new in zip(found, residues, strict=True)]
    return joined, modulus * group


def _verify(ring: Ring, elements: Elements, results: Sequence[int], cofactor: int) -> None:
    """Check x^(s cofactor) = element^cofactor for every logarithm s."""
    powers = ring.powers_of_x([result * cofactor for result in results])
    if not (powers == ring.power(elements, cofactor)).all():
        raise InternalError(f"a logarithm modulo {ring.f:#x} failed its check by exponentiation")
