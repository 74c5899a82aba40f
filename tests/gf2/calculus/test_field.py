"""Logarithms in a field given by any polynomial of the degree of a factor base."""

from dataclasses import replace

import pytest

from auditor.errors import InternalError
from auditor.gf2.calculus.field import field_logarithms
from auditor.gf2.calculus.table import make_factor_base
from auditor.gf2.calculus.work import Work
from auditor.gf2.factorisation import is_irreducible
from auditor.gf2.polynomial import power_modulo

MODULUS = 4432676798593  # the largest prime of 2^49 - 1 = 127 x 4432676798593


@pytest.fixture(scope="module")
def base():
    """Return the table of degree 49."""
    return make_factor_base(49, MODULUS, Work())


@pytest.mark.parametrize("skip", [0, 1, 2])
def test_exponents_come_back_in_any_field(base, skip):
    """Three dense polynomials share one table."""
    candidates = (1 << 49 | pow(3, 400 + k) & (1 << 49) - 1 | 1 for k in range(1000))
    f = [f for f in candidates if is_irreducible(f) and power_modulo(2, 127, f) != 1][skip]
    exponents = [0, 1, 49, *(pow(7, 50 + k, MODULUS) for k in range(10))]
    values = [power_modulo(2, s, f) for s in exponents]
    assert field_logarithms(values, f, base, MODULUS, Work()) == exponents


def test_a_table_that_contradicts_the_order_is_told(base):
    """Where all logarithms are said to be zero, x would have no order, which cannot be."""
    zero = replace(base, logs=(0,) * len(base.logs))
    with pytest.raises(InternalError, match="contradicts its order"):
        field_logarithms([0b1011], base.field, zero, MODULUS, Work())
