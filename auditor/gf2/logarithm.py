"""Logarithms to base x in a field GF(2)[x]/(f), of many values at once: how far apart two streams are.

Pohlig and Hellman (1978): a logarithm modulo the order of x is put together from logarithms in the small groups
whose orders are the prime powers of it. Large primes are left out on demand, and then the logarithm is known
modulo the rest.
"""

from collections.abc import Sequence
from dataclasses import dataclass

from auditor.errors import InternalError
from auditor.gf2.batch import Elements, Ring
from auditor.gf2.factorisation import is_irreducible
from auditor.gf2.order import factors_of_mersenne, order_of_x
from auditor.gf2.polynomial import degree, power_modulo, remainder
from auditor.gf2.steps import shared_logarithms
from auditor.notation import Polynomial

_X = 0b10
# One group of this many bits costs less than the powers that take the values into several smaller groups.
_GROUP_BITS = 26


@dataclass(frozen=True, slots=True)
class Logarithms:
    """Logarithms to base x modulo f.

    ``values``   one for each value asked: s with 0 <= s < modulus, or None where the value is no power of x
    ``modulus``  the logarithms are known modulo this divisor of the order
    ``order``    the order of x modulo f
    """

    values: tuple[int | None, ...]
    modulus: int
    order: int

    @property
    def complete(self) -> bool:
        """Whether no prime was left out."""
        return self.modulus == self.order


def logarithms(values: Sequence[Polynomial], f: Polynomial, max_prime_bits: int = 38) -> Logarithms:
    """Return the logarithms to base x of the values modulo the irreducible f.

    Prime powers of the order with more than ``max_prime_bits`` bits are left out. Every logarithm is verified by
    exponentiation. ``ValueError`` if f is x, is reducible or has a degree for which the order of x is unknown.
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
    found, modulus = _pohlig_hellman(ring, elements[is_power], order, max_prime_bits)
    _verify(ring, elements[is_power], found, order // modulus)
    remaining = iter(found)
    return Logarithms(tuple(next(remaining) if ok else None for ok in is_power.tolist()), modulus, order)


def _groups(order: int, n: int, max_prime_bits: int) -> list[int]:
    """Return pairwise coprime divisors of the order: its prime powers, small ones merged, too large ones dropped."""
    groups: list[int] = []
    for prime in factors_of_mersenne(n) or {}:
        part = 1
        while order % (part * prime) == 0:
            part *= prime
        if part == 1 or part.bit_length() > max_prime_bits:
            continue
        if groups and (groups[-1] * part).bit_length() <= _GROUP_BITS:
            groups[-1] *= part
        else:
            groups.append(part)
    return groups


def _pohlig_hellman(ring: Ring, elements: Elements, order: int, max_prime_bits: int) -> tuple[list[int], int]:
    """Return logarithms of elements of <x>, and the modulus to which they are known."""
    results, modulus = [0] * len(elements), 1
    for group in _groups(order, ring.degree, max_prime_bits):
        cofactor = order // group
        generator = power_modulo(_X, cofactor, ring.f)
        residues = shared_logarithms(ring, ring.power(elements, cofactor), generator, group)
        scale = pow(modulus, -1, group)
        results = [
            known + modulus * ((residue - known) * scale % group)
            for known, residue in zip(results, residues, strict=True)
        ]
        modulus *= group
    return results, modulus


def _verify(ring: Ring, elements: Elements, results: Sequence[int], cofactor: int) -> None:
    """Check x^(s cofactor) = element^cofactor for every logarithm s."""
    powers = ring.powers_of_x([result * cofactor for result in results])
    if not (powers == ring.power(elements, cofactor)).all():
        raise InternalError(f"a logarithm modulo {ring.f:#x} failed its check by exponentiation")
