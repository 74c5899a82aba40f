"""Making the factor base of one degree: relations by the sieve, then linear algebra."""

from bisect import bisect_left, bisect_right
from collections.abc import Callable, Sequence
from typing import TypeAlias

from auditor.errors import InternalError
from auditor.gf2.calculus.divisors import Divisors
from auditor.gf2.calculus.elimination import SparseSystem
from auditor.gf2.calculus.factor_base import FactorBase, canonical_polynomial, irreducibles
from auditor.gf2.calculus.sieve import Shape, Sieve
from auditor.gf2.calculus.work import OutOfWork, Work
from auditor.gf2.polynomial import degree
from auditor.notation import Polynomial

LARGEST_DEGREE = 168

Relation: TypeAlias = dict[int, int]
TableSource: TypeAlias = Callable[[int, int, Work], FactorBase]

# (largest n, degree of the base, width of the sieve)
_PARAMETERS = (
    *((56, 11, 9), (70, 12, 9), (82, 13, 10), (94, 14, 10), (106, 15, 11), (128, 16, 11)),
    *((140, 16, 12), (156, 17, 12), (LARGEST_DEGREE, 18, 12)),
)
_BLOCKS = 512  # of the sieve, before the search is given up
_X_INDEX = 0  # x is the first of the irreducible polynomials
_PLENTY = 1.5  # relations for each unknown
_CORE_SURPLUS = 1.2  # relations for each unknown of the core


def make_factor_base(n: int, modulus: int, work: Work) -> FactorBase:
    """Return logarithms of small polynomials in the canonical field of degree n, modulo a divisor of 2^n - 1.

    Each prime of the modulus must be above any exponent in a relation. ``OutOfWork`` where the limit is reached
    or n is beyond ``LARGEST_DEGREE``.
    """
    bound, width = _parameters(n)
    field = canonical_polynomial(n, modulus)
    primes = irreducibles(bound)
    sizes = [degree(p) for p in primes.tolist()]
    relations, core = _relations(field, bound, width, sizes, work)
    work.report(f"linear algebra, {core} unknowns")
    found = SparseSystem([relation for relation in relations if max(relation) < core], _X_INDEX, modulus).solution()
    _solve_one_by_one(relations, found, modulus)
    _check(relations, found, modulus)
    return FactorBase(field, bound, modulus, tuple(map(found.get, range(len(primes)))))


def base_degree(n: int) -> int:
    """Return the degree of the factor base for fields of degree n; ``OutOfWork`` beyond ``LARGEST_DEGREE``."""
    return _parameters(n)[0]


def _parameters(n: int) -> tuple[int, int]:
    for largest, size, width in _PARAMETERS:
        if n <= largest:
            return size, width
    raise OutOfWork(f"a field of degree {n} is out of reach of the index calculus")


def _relations(
    field: Polynomial, bound: int, width: int, sizes: Sequence[int], work: Work
) -> tuple[list[Relation], int]:
    """Return enough relations Σ exponent log = 0, by index, and how many of the smallest primes they surely solve."""
    shape = Shape(field)
    sieve = Sieve(shape, bound, width, 1 << width - 3)
    divisors = Divisors(bound, 128)
    relations: list[Relation] = []
    for block in range(_BLOCKS):
        work.report(f"relations {len(relations)}/{int(_PLENTY * len(sizes))}")
        work.spend(sieve.cells)
        for u, v in sieve.smooth_pairs(block):
            relation = {k: 4 * exponent for k, exponent in divisors.of(shape.left(u, v)).exponents.items()}
            for k, exponent in divisors.of(shape.right(u, v)).exponents.items():
                relation[k] = relation.get(k, 0) - exponent
            if relation := {k: exponent for k, exponent in relation.items() if exponent}:
                relations.append(relation)
        core = _core(relations, sizes)
        if core and len(relations) > _PLENTY * len(sizes):
            return relations, core
    raise OutOfWork("too few relations were found")


def _core(relations: Sequence[Relation], sizes: Sequence[int]) -> int:
    """Return the number of the primes up to some degree for which there are relations in plenty, 0 if there is none.

    The smallest such set will do: the others follow from it.
    """
    greatest = sorted(max(relation) for relation in relations)
    for size in range(1, sizes[-1] + 1):
        unknowns = bisect_right(sizes, size)
        if bisect_left(greatest, unknowns) > _CORE_SURPLUS * unknowns + 20:
            return unknowns
    return 0


def _solve_one_by_one(relations: Sequence[Relation], found: dict[int, int], modulus: int) -> None:
    """Add to the logarithms found what follows from relations with one unknown, until there are none."""
    holders: dict[int, list[int]] = {}
    missing = []
    for number, relation in enumerate(relations):
        unknown = [k for k in relation if k not in found]
        missing.append(len(unknown))
        for k in unknown:
            holders.setdefault(k, []).append(number)
    ready = [number for number, count in enumerate(missing) if count == 1]
    while ready:
        relation = relations[ready.pop()]
        unknown = [k for k in relation if k not in found]
        if not unknown:
            continue
        total = sum(exponent * found[k] for k, exponent in relation.items() if k in found)
        found[unknown[0]] = -total * pow(relation[unknown[0]], -1, modulus) % modulus
        for number in holders[unknown[0]]:
            missing[number] -= 1
            if missing[number] == 1:
                ready.append(number)


def _check(relations: Sequence[Relation], found: dict[int, int], modulus: int) -> None:
    """Check every relation between logarithms found."""
    for relation in relations:
        if all(k in found for k in relation) and sum(e * found[k] for k, e in relation.items()) % modulus:
            raise InternalError("a relation between logarithms does not hold")
