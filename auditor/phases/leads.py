"""Leads as logarithms: which units of GF(2)[x]/(f) differ by a power of x, and by which.

The group of units is a product over the irreducible factors g of f, g^e dividing it: the field modulo g, and where
e > 1 a group of 2^k-th roots of one, k = ceil(log2 e) (Lidl and Niederreiter 1983, chapter 3). In each part the powers
of x form a cyclic group. A unit has there a coset of that group, and a residue, its place in the coset. Two units
differ by a power of x if and only if they share every coset and the differences of their residues agree wherever the
orders of two parts have a common divisor (Chinese remainders for moduli that are not coprime).
"""

from collections.abc import Sequence
from itertools import combinations
from math import gcd, lcm
from typing import NamedTuple

from auditor.errors import InternalError
from auditor.gf2.effort import Effort
from auditor.gf2.logarithm import logarithms
from auditor.gf2.order import order_in_field
from auditor.gf2.polynomial import degree, inverse, multiply, multiply_modulo, power_modulo, remainder
from auditor.notation import Polynomial

_X = 0b10
_WITHOUT_BOUNDS = Effort()


class Part(NamedTuple):
    """One part of the group of units, with the coset and the residue of every unit asked for.

    ``order``     of x in this part, None where it is unknown; cosets are then unknown too and all equal
    ``known``     residues are known modulo this divisor of the order
    ``because``   why not modulo all of it, in words
    """

    order: int | None
    known: int
    cosets: tuple[Polynomial, ...]
    residues: tuple[int, ...]
    because: str = ""


class Coordinates(NamedTuple):
    """Every unit in every part."""

    parts: tuple[Part, ...]

    @property
    def period(self) -> int | None:
        """The order of x modulo f, None where it is unknown in one part."""
        orders = [part.order for part in self.parts if part.order is not None]
        return lcm(*orders) if len(orders) == len(self.parts) else None

    @property
    def known_period(self) -> int:
        """The modulus to which differences of leads are known, a divisor of the period."""
        return lcm(*(part.known for part in self.parts))

    @property
    def because(self) -> str:
        """Why the known period is not the period, in words; empty where it is."""
        return "; ".join(dict.fromkeys(part.because for part in self.parts if part.because))

    @property
    def decided(self) -> bool:
        """Whether equal signatures prove that two units differ by a power of x."""
        if any(part.order is None for part in self.parts):
            return False
        return all(gcd(a.known, b.known) == gcd(a.order or 0, b.order or 0) for a, b in combinations(self.parts, 2))

    def signature(self, unit: int) -> tuple[int, ...]:
        """Return what units that differ by a power of x have in common."""
        agreement = (
            (a.residues[unit] - b.residues[unit]) % gcd(a.known, b.known) for a, b in combinations(self.parts, 2)
        )
        return (*(part.cosets[unit] for part in self.parts), *agreement)

    def difference(self, unit: int, base: int) -> int:
        """Return s with unit = x^s base, modulo ``known_period``, for two units of one signature."""
        lead, modulus = 0, 1
        for part in self.parts:
            residue = part.residues[unit] - part.residues[base]
            common = gcd(modulus, part.known)
            step = (residue - lead) // common * pow(modulus // common, -1, part.known // common)
            lead += modulus * (step % (part.known // common))
            modulus = lcm(modulus, part.known)
        return lead


def coordinates(
    units: Sequence[Polynomial], factors: Sequence[tuple[Polynomial, int]], effort: Effort = _WITHOUT_BOUNDS
) -> Coordinates:
    """Return the coordinates of units of GF(2)[x]/(f); f is given by its factors, and f(0) = 1."""
    parts = []
    for irreducible, multiplicity in factors:
        phrase = f"leads of {len(units)} channels in a field of degree {degree(irreducible)}"
        effort.report(phrase)
        parts.append(_field_part([remainder(unit, irreducible) for unit in units], irreducible, effort.under(phrase)))
        if multiplicity > 1:
            parts.append(_two_part(units, irreducible, multiplicity))
    return Coordinates(tuple(parts))


def _field_part(values: Sequence[Polynomial], g: Polynomial, effort: Effort) -> Part:
    """Return the part of the field modulo g; the cosets are told apart by value^order, and 1 stands for its own."""
    order = order_in_field(_X, g)
    if order is None:
        because = f"the factors of 2^{degree(g)} - 1 are not known"
        return Part(None, 1, (0,) * len(values), (0,) * len(values), because)
    if order == (1 << degree(g)) - 1:
        cosets, ratios = (1,) * len(values), list(values)
    else:
        cosets = tuple(power_modulo(value, order, g) for value in values)
        inverses = {1: 1}
        for value, coset in zip(values, cosets, strict=True):
            if coset not in inverses:
                inverses[coset] = inverse(value, g)
        ratios = [multiply_modulo(v, inverses[coset], g) for v, coset in zip(values, cosets, strict=True)]
    found = logarithms(ratios, g, effort=effort)
    residues = tuple(value for value in found.values if value is not None)
    if len(residues) < len(values):
        raise InternalError(f"a power of x modulo {g:#x} was told from the others, but has no logarithm")
    return Part(order, found.modulus, cosets, residues, found.because)


def _two_part(units: Sequence[Polynomial], g: Polynomial, multiplicity: int) -> Part:
    """Return the part of the roots of one modulo g^e: x^N generates a group of order 2^k, N = 2^(degree of g) - 1.

    Raising to the odd N removes the field part. The least element of each coset stands for it; the coset is walked,
    which takes less than 2 e steps.
    """
    power, odd, order = 1, (1 << degree(g)) - 1, 1 << (multiplicity - 1).bit_length()
    for _ in range(multiplicity):
        power = multiply(power, g)
    backward = power_modulo(_X, -odd, power)
    cosets, residues = [], []
    for unit in units:
        walk = [power_modulo(unit, odd, power)]
        for _ in range(order - 1):
            walk.append(multiply_modulo(walk[-1], backward, power))
        cosets.append(min(walk))
        residues.append(walk.index(cosets[-1]))
    return Part(order, order, tuple(cosets), tuple(residues))
