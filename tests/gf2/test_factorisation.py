"""Factors against PARI, irreducibility against counting."""

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from auditor.gf2.factorisation import factor, is_irreducible
from auditor.gf2.polynomial import multiply, square
from tests.support.algebra import pari_factors


@settings(deadline=None, max_examples=60)
@given(st.integers(2, (1 << 300) - 1))
def test_factors_are_those_of_pari(p):
    """Factors and multiplicities of any polynomial up to degree 300 agree with PARI."""
    assert factor(p) == pari_factors(p)


@settings(deadline=None)
@given(st.integers(2, 255), st.integers(2, 255), st.integers(0, 9))
def test_repeated_factors_are_those_of_pari(a, b, shift):
    """High multiplicities, odd and even ones mixed, agree with PARI."""
    p = multiply(square(square(multiply(square(a), b))), multiply(a, b)) << shift
    assert factor(p) == pari_factors(p)


@pytest.mark.parametrize("exponent", [127, 255, 257, 300])
def test_cyclotomic_products_are_those_of_pari(exponent):
    """x^e + 1, which has many factors of one degree, is split completely."""
    p = 1 << exponent | 1
    assert factor(p) == pari_factors(p)


def test_the_constant_has_no_factors():
    """1 is the empty product and zero has no factorisation."""
    assert factor(1) == ()
    with pytest.raises(ValueError, match="zero polynomial"):
        factor(0)


def test_irreducible_polynomials_are_as_many_as_the_necklace_formula_says():
    """Degrees 1 to 10 have 2, 1, 2, 3, 6, 9, 18, 30, 56, 99 irreducible polynomials (OEIS A001037)."""
    counts = [sum(map(is_irreducible, range(1 << n, 2 << n))) for n in range(1, 11)]
    assert counts == [2, 1, 2, 3, 6, 9, 18, 30, 56, 99]


@settings(deadline=None, max_examples=200)
@given(st.integers(0, (1 << 40) - 1))
def test_irreducible_means_one_factor(p):
    """A polynomial is irreducible exactly if PARI finds it to be its only factor."""
    assert is_irreducible(p) == (p > 1 and pari_factors(p) == ((p, 1),))
