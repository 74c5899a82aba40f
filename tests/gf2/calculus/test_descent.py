"""Logarithms of elements from a factor base: against exponentiation."""

from dataclasses import replace

import pytest

from auditor.gf2.calculus.descent import Descent
from auditor.gf2.calculus.table import make_factor_base
from auditor.gf2.calculus.work import OutOfWork, Work
from auditor.gf2.polynomial import power_modulo

MODULUS = 4432676798593  # the largest prime of 2^49 - 1 = 127 x 4432676798593


@pytest.fixture(scope="module")
def base():
    """Return the table of degree 49."""
    return make_factor_base(49, MODULUS, Work())


def test_exponents_come_back(base):
    """The logarithm of x^s is s: of small and large exponents, and in any company."""
    exponents = [0, 1, 2, 48, 49, 50, MODULUS - 1, *(pow(3, 100 + k, MODULUS) for k in range(60))]
    elements = [power_modulo(2, s, base.field) for s in exponents]
    assert Descent(base, Work()).logarithms(elements) == exponents
    assert Descent(base, Work()).logarithms(elements[-1:]) == exponents[-1:]


def test_a_thin_table_is_enough(base):
    """With a tenth of the logarithms taken away, the polynomials without one are brought down like larger ones."""
    thin = replace(base, logs=tuple(log if k % 10 or k < 20 else None for k, log in enumerate(base.logs)))
    exponents = [pow(5, 100 + k, MODULUS) for k in range(40)]
    elements = [power_modulo(2, s, base.field) for s in exponents]
    assert Descent(thin, Work()).logarithms(elements) == exponents


def test_an_empty_table_ends_the_search(base):
    """Without a single logarithm there is no result, and no endless search."""
    with pytest.raises(OutOfWork):
        Descent(replace(base, logs=(None,) * len(base.logs)), Work()).logarithms([0b1011])


def test_work_is_limited(base):
    """The limit that suffices is enough, one unit less is not."""
    work = Work()
    elements = [power_modulo(2, pow(3, 200 + k), base.field) for k in range(5)]
    found = Descent(base, work).logarithms(elements)
    assert Descent(base, Work(limit=work.done)).logarithms(elements) == found
    with pytest.raises(OutOfWork):
        Descent(base, Work(limit=work.done - 1)).logarithms(elements)
