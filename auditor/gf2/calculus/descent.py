"""Logarithms of arbitrary elements from those of a factor base.

An element is written as a fraction of two polynomials that have factors of moderate degree. Those beyond the base
are brought down by one relation each in which the other factors are in the base (Coppersmith 1984).
"""

from collections.abc import Callable, Sequence

from auditor.gf2.calculus.divisors import Divisors
from auditor.gf2.calculus.factor_base import FactorBase, irreducibles
from auditor.gf2.calculus.lattice import Search, find_smooth, short_fractions
from auditor.gf2.calculus.sieve import Shape
from auditor.gf2.calculus.work import OutOfWork, Work
from auditor.gf2.factorisation import factor
from auditor.gf2.polynomial import degree, divide, multiply_modulo
from auditor.notation import Polynomial

# An element is split into factors of the base degree and so much more, in large fields one more.
_BEYOND, _LARGE_FIELD = 7, 129
_ATTEMPTS = 40  # multiples of an element that are split before the search is given up
_SPLIT_SIZES = (4, 6)  # coefficients of the multipliers of fractions
_RELATION_SIZES = (5, 6)  # and of those of relations
_MARGIN = 64  # coefficients that a polynomial to be factored may have beyond the degree of the field

Product = dict[Polynomial, int]


class Descent:
    """Finds logarithms in the canonical field of one factor base, modulo its modulus."""

    def __init__(self, base: FactorBase, work: Work) -> None:
        self._base, self._work = base, work
        self._split_degree = base.degree + _BEYOND + (degree(base.field) >= _LARGE_FIELD)
        self._primes = irreducibles(base.degree).tolist()
        # A fraction of a short element may have a part as long as a multiple of the field polynomial.
        self._divisors = Divisors(base.degree, degree(base.field) + _MARGIN)
        self._shape = Shape(base.field)
        self._quarter = pow(4, -1, base.modulus)
        self._known = {p: log for p, log in zip(self._primes, base.logs, strict=True) if log is not None}

    def logarithms(self, elements: Sequence[Polynomial]) -> list[int]:
        """Return the logarithms of elements of the field other than zero; ``OutOfWork`` if the search ends before.

        An element that resists is multiplied by one after another of the base; large ones share no fractions.
        """
        found: dict[int, int] = {}
        for prime in [1, *list(self._known)[: -_ATTEMPTS - 1 : -1]]:
            numbers = [number for number in range(len(elements)) if number not in found]
            multiples = [multiply_modulo(elements[number], prime, self._base.field) for number in numbers]
            splits = self._split(multiples)
            self._solve_beyond({p for product in splits.values() for p in product if p not in self._known})
            for k, product in splits.items():
                log = self._log(product)
                if log is not None:
                    found[numbers[k]] = (log - self._known.get(prime, 0)) % self._base.modulus
            if len(found) == len(elements):
                return [found[number] for number in range(len(elements))]
        raise OutOfWork("an element could not be split into small factors")

    def _log(self, product: Product) -> int | None:
        if not all(p in self._known for p in product):
            return None
        return sum(exponent * self._known[p] for p, exponent in product.items()) % self._base.modulus

    def _factors(self, polynomial: Polynomial) -> Product:
        factors = self._divisors.of(polynomial)
        product = {self._primes[index]: exponent for index, exponent in factors.exponents.items()}
        if degree(factors.rest) > self._base.degree:
            # Below twice the bound it can be no product.
            single = degree(factors.rest) < 2 * (self._base.degree + 1)
            product.update({factors.rest: 1} if single else factor(factors.rest))
        return product

    def _split(self, elements: Sequence[Polynomial]) -> dict[int, Product]:
        """Return elements as products, by number; some may be left out."""
        searches = []
        for element in elements:
            (r0, s0), (r1, s1) = short_fractions(element, self._base.field)
            searches.append(Search((r0, r1), (s0, s1)))
        products: dict[int, Product] = {}

        def accept(number: int, above: Polynomial, below: Polynomial) -> bool:
            products[numbers[number]] = _divided(self._factors(above), self._factors(below))
            return True

        numbers = list(range(len(searches)))
        for size in _SPLIT_SIZES:
            self._work.report(f"elements split {len(products)}/{len(elements)}")
            numbers = [k for k in numbers if k not in products]
            find_smooth([searches[k] for k in numbers], 1, size, self._split_degree, accept, self._work)
        return products

    def _solve_beyond(self, primes: set[Polynomial]) -> None:
        """Find logarithms of irreducible polynomials beyond the base, where a relation with only known ones exists."""
        wanted = sorted(primes)
        for size in _RELATION_SIZES:
            for through in (_through_left, _through_right):
                if not wanted:
                    return
                self._work.report(f"{len(wanted)} factors beyond the base")
                wanted = self._solve_by(through, wanted, size)

    def _solve_by(
        self, through: Callable[[Shape, Polynomial], Search], wanted: list[Polynomial], size: int
    ) -> list[int]:
        """Find logarithms from relations with the polynomial on one side; return the polynomials without one."""

        def accept(number: int, left: Polynomial, right: Polynomial) -> bool:
            # 4 log C = log D, and one of the two parts lacks the wanted polynomial.
            fourth, whole = self._log(self._factors(left)), self._log(self._factors(right))
            if fourth is None or whole is None:
                return False
            excess = whole - 4 * fourth
            log = excess * self._quarter if through is _through_left else -excess
            self._known[wanted[number]] = log % self._base.modulus
            return True

        searches = [through(self._shape, p) for p in wanted]
        left_out = find_smooth(searches, 4, size, self._base.degree, accept, self._work)
        return [wanted[number] for number in left_out]


def _divided(above: Product, below: Product) -> Product:
    return {p: above.get(p, 0) - below.get(p, 0) for p in above | below}


def _through_left(shape: Shape, p: Polynomial) -> Search:
    """Return the search among the relations in which p divides C; its left part is C / p."""
    (v0, u0), (v1, u1) = short_fractions(shape.power(p), p)
    left0, left1 = (divide(shape.left(u, v), p)[0] for u, v in ((u0, v0), (u1, v1)))
    return Search((left0, left1), (shape.right(u0, v0), shape.right(u1, v1)))


def _through_right(shape: Shape, p: Polynomial) -> Search:
    """Return the search among the relations in which p divides D; its right part is D / p."""
    (v0, u0), (v1, u1) = short_fractions(shape.fourth_root(p), p)
    right0, right1 = (divide(shape.right(u, v), p)[0] for u, v in ((u0, v0), (u1, v1)))
    return Search((shape.left(u0, v0), shape.left(u1, v1)), (right0, right1))
