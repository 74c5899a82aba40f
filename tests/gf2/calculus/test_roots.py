"""A root of a polynomial in another representation of its field."""

import pytest

from auditor.gf2.calculus.factor_base import canonical_polynomial
from auditor.gf2.calculus.roots import root
from auditor.gf2.factorisation import is_irreducible
from auditor.gf2.polynomial import from_exponents, multiply_modulo


def _value(f, at, field):
    """Return f(at) in the field, by Horner's rule."""
    result = 0
    for digit in f"{f:b}":
        result = multiply_modulo(result, at, field) ^ int(digit)
    return result


@pytest.mark.parametrize("n", [1, 2, 3, 4, 5, 6])
def test_every_polynomial_of_small_degree(n):
    """All irreducible polynomials have a root in up to six fields of their degree."""
    polynomials = [f for f in range((1 << n) + 1, 2 << n, 2) if is_irreducible(f)]
    for f in polynomials:
        for field in polynomials[:: -(-len(polynomials) // 6)]:
            assert _value(f, root(f, field), field) == 0


@pytest.mark.parametrize("n", [49, 65, 128])
def test_a_dense_polynomial_of_large_degree(n):
    """The root in the canonical field is one."""
    field = canonical_polynomial(n, 1)
    candidates = (1 << n | pow(3, 400 + k) & (1 << n) - 1 | 1 for k in range(1000))
    f = next(filter(is_irreducible, candidates))
    assert _value(f, root(f, field), field) == 0


def test_a_field_in_itself():
    """The root of the field's own polynomial is x."""
    field = from_exponents((127, 1, 0))
    assert root(field, field) == 0b10
