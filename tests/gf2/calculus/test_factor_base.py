"""The factor base: its polynomials, the canonical field, and the check that finds any wrong entry."""

from dataclasses import replace

import pytest

from auditor.gf2.calculus.factor_base import FactorBase, canonical_polynomial, irreducibles, multiples
from auditor.gf2.calculus.table import make_factor_base
from auditor.gf2.calculus.work import Work
from auditor.gf2.factorisation import is_irreducible
from auditor.gf2.order import order_of_x
from auditor.gf2.polynomial import multiply

MODULUS = 4432676798593  # the largest prime of 2^49 - 1 = 127 x 4432676798593


@pytest.fixture(scope="module")
def base():
    """Return the table of degree 49."""
    return make_factor_base(49, MODULUS, Work())


def test_irreducible_polynomials_are_listed_in_order():
    """The list up to degree 12 holds just those that Rabin's test finds."""
    assert irreducibles(12).tolist() == [p for p in range(2, 1 << 13) if is_irreducible(p)]


def test_irreducible_polynomials_are_as_many_as_known():
    """The numbers of degree 1 to 16 are those of OEIS A001037."""
    known = [2, 1, 2, 3, 6, 9, 18, 30, 56, 99, 186, 335, 630, 1161, 2182, 4080]
    sizes = [p.bit_length() - 1 for p in irreducibles(16).tolist()]
    assert [sizes.count(size) for size in range(1, 17)] == known


def test_multiples():
    """The products with many cofactors are those with each."""
    cofactors = irreducibles(6)
    assert multiples(0b10011, cofactors).tolist() == [multiply(0b10011, q) for q in cofactors.tolist()]


@pytest.mark.parametrize(("n", "modulus"), [(4, 5), (4, 3), (11, 89), (49, MODULUS), (127, 2**127 - 1)])
def test_the_canonical_polynomial_is_the_least_with_the_order(n, modulus):
    """It is irreducible with an order of x that the modulus divides, and no smaller one is."""
    f = canonical_polynomial(n, modulus)
    smaller = (g for g in range((1 << n) + 1, f, 2) if is_irreducible(g))
    assert is_irreducible(f)
    assert order_of_x(f) % modulus == 0
    assert all(order_of_x(g) % modulus for g in smaller)


def test_the_canonical_polynomial_needs_the_factors():
    """A degree whose 2^n - 1 is not in the table is refused."""
    with pytest.raises(ValueError, match="not factored"):
        canonical_polynomial(266, 3)


def test_a_table_passes_its_check(base):
    """The table of degree 49 is right and nearly complete."""
    assert base.check()
    assert base.logs.count(None) < len(base.logs) / 10


@pytest.mark.parametrize("change", ["one", "first", "order", "short", "field", "modulus", "degree", "empty"])
def test_a_spoilt_table_fails_its_check(base, change):
    """One logarithm off by one, two exchanged, a missing row, other parameters, no logarithms."""
    logs = list(base.logs)
    place = max(k for k, log in enumerate(logs) if log is not None)
    known = [k for k, log in enumerate(logs) if log is not None]
    first, second = known[10], known[11]
    exchanged = [*logs[:first], logs[second], logs[first], *logs[second + 1 :]] if second == first + 1 else logs[::-1]
    spoilt = {
        "one": replace(base, logs=(*logs[:place], (logs[place] + 1) % MODULUS, *logs[place + 1 :])),
        "first": replace(base, logs=(2, *logs[1:])),
        "order": replace(base, logs=tuple(exchanged)),
        "short": replace(base, logs=base.logs[:-1]),
        "field": replace(base, field=base.field ^ 0b110),
        "modulus": replace(base, modulus=MODULUS + 2),
        "degree": replace(base, degree=base.degree + 1),
        "empty": replace(base, logs=(None,) * len(logs)),
    }
    assert not spoilt[change].check()


def test_a_table_without_a_field_fails_its_check():
    """A constant in place of the field polynomial is told, not raised."""
    assert not FactorBase(1, 1, 1, (0, 0)).check()
