"""Polynomials against PARI and against the laws of a ring."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from auditor.gf2 import polynomial as gf2
from tests.support.algebra import from_pari, pari_polynomial

polynomials = st.integers(0, (1 << 300) - 1)
nonzero = st.integers(1, (1 << 300) - 1)


@given(polynomials, polynomials)
def test_products_are_those_of_pari(a, b):
    """The product of any two polynomials is the one that PARI computes."""
    assert gf2.multiply(a, b) == from_pari(pari_polynomial(a) * pari_polynomial(b))


@given(polynomials)
def test_a_square_is_a_product(p):
    """Squaring by spreading bits equals multiplying."""
    assert gf2.square(p) == gf2.multiply(p, p)


@given(polynomials, nonzero)
def test_division_gives_back_the_dividend(a, b):
    """A = quotient b + remainder, the remainder of lower degree than b; ``remainder`` is the same remainder."""
    quotient, rest = gf2.divide(a, b)
    assert gf2.multiply(quotient, b) ^ rest == a
    assert gf2.degree(rest) < gf2.degree(b)
    assert gf2.remainder(a, b) == rest


@pytest.mark.parametrize("operation", [gf2.divide, gf2.remainder])
def test_division_by_zero_is_refused(operation):
    """Dividing by the zero polynomial raises instead of running for ever."""
    with pytest.raises(ZeroDivisionError):
        operation(0b101, 0)


@given(nonzero, nonzero, nonzero)
def test_common_factors_are_found(a, b, common):
    """A common factor divides the gcd, the gcd divides both, and gcd times lcm is the product."""
    left, right = gf2.multiply(a, common), gf2.multiply(b, common)
    divisor = gf2.gcd(left, right)
    assert gf2.remainder(divisor, common) == gf2.remainder(left, divisor) == gf2.remainder(right, divisor) == 0
    assert gf2.multiply(divisor, gf2.least_common_multiple(left, right)) == gf2.multiply(left, right)


def test_zero_has_a_gcd_and_a_multiple():
    """gcd(0, p) is p, and the only common multiple with zero is zero."""
    assert gf2.gcd(0, 0b111) == gf2.gcd(0b111, 0) == 0b111
    assert gf2.gcd(0, 0) == gf2.least_common_multiple(0, 0b111) == 0


@given(nonzero, st.integers(2, (1 << 200) - 1))
def test_an_inverse_exists_for_coprime_elements_only(a, f):
    """The inverse times the element is 1; with a common factor there is none."""
    if gf2.gcd(a, f) == 1:
        assert gf2.multiply_modulo(a, gf2.inverse(a, f), f) == 1
    else:
        with pytest.raises(ValueError, match="has no inverse modulo"):
            gf2.inverse(a, f)


@given(st.integers(0, 255), st.integers(0, 40), st.integers(1, 511))
def test_powers_are_repeated_products(base, exponent, f):
    """A power equals the product taken one factor at a time, for x as for any other base."""
    product = gf2.remainder(1, f)
    for _ in range(exponent):
        product = gf2.multiply_modulo(product, base, f)
    assert gf2.power_modulo(base, exponent, f) == product


def test_negative_powers_invert():
    """x^-1 modulo x^4 + x + 1 is x^3 + 1; an even base modulo x^2 has no negative power."""
    assert gf2.power_modulo(0b10, -1, 0b10011) == 0b1001
    with pytest.raises(ValueError, match="no inverse"):
        gf2.power_modulo(0b10, -1, 0b100)


@given(polynomials, polynomials)
def test_the_derivative_obeys_the_product_rule(a, b):
    """(ab)' = a'b + ab', and x' = 1."""
    expected = gf2.multiply(gf2.derivative(a), b) ^ gf2.multiply(a, gf2.derivative(b))
    assert gf2.derivative(gf2.multiply(a, b)) == expected
    assert gf2.derivative(0b10) == 1


@given(nonzero, nonzero)
def test_the_reciprocal_respects_products(a, b):
    """The reciprocal of a product is the product of the reciprocals; x^4 + x + 1 and x^4 + x^3 + 1 are a pair."""
    assert gf2.reciprocal(gf2.multiply(a, b)) == gf2.multiply(gf2.reciprocal(a), gf2.reciprocal(b))
    assert gf2.reciprocal(0b10011) == 0b11001
    assert gf2.reciprocal(0b100110) == 0b11001


@given(polynomials)
def test_exponents_and_back(p):
    """Exponents descend and give the polynomial back."""
    terms = gf2.exponents(p)
    assert list(terms) == sorted(set(terms), reverse=True)
    assert gf2.from_exponents(terms) == p


def test_text_as_engineers_write_it():
    """Terms descend, x^1 is x and x^0 is 1."""
    assert gf2.text(0b10011) == "x^4 + x + 1"
    assert gf2.text(0b10) == "x"
    assert gf2.text(0) == "0"


def test_equal_terms_cancel():
    """x^3 + x^3 is zero."""
    assert gf2.from_exponents([3, 0, 3]) == 1


def test_degrees():
    """The zero polynomial has degree -1."""
    assert [gf2.degree(p) for p in (0, 1, 2, 0b10011)] == [-1, 0, 1, 4]
