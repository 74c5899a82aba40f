"""Factors found by remainders against the factorisation."""

import pytest

from auditor.gf2.calculus.divisors import Divisors, Factors
from auditor.gf2.calculus.factor_base import irreducibles
from auditor.gf2.factorisation import factor
from auditor.gf2.polynomial import degree


def _sample(size, count):
    return [pow(3, 600 + 37 * k) >> 200 & (1 << size) - 1 | 1 for k in range(count)]


@pytest.mark.parametrize(("bound", "size"), [(1, 20), (6, 40), (11, 64), (17, 90)])
def test_factors_are_those_of_the_factorisation(bound, size):
    """Small factors with their multiplicities and the product of the others, of random polynomials and powers."""
    primes = irreducibles(bound).tolist()
    divisors = Divisors(bound, size)
    repeated = [1, 2, 3, 1 << size - 1, (1 << size) - 1, sum(1 << k for k in range(0, size, 4))]
    for polynomial in [*_sample(size, 60), *repeated]:
        found = divisors.of(polynomial)
        complete = dict(factor(polynomial))
        assert {primes[k]: e for k, e in found.exponents.items()} == {
            p: e for p, e in complete.items() if degree(p) <= bound
        }
        assert dict(factor(found.rest)) == {p: e for p, e in complete.items() if degree(p) > bound}


def test_one_has_no_factors():
    """The constant is its own rest."""
    assert Divisors(5, 8).of(1) == Factors({}, 1)


def test_longer_polynomials_are_refused():
    """A polynomial that the table does not reach would lose terms, so it is refused."""
    with pytest.raises(ValueError, match="longer"):
        Divisors(5, 8).of(1 << 8)
