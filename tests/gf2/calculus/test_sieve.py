"""The sieve against the factors of every pair."""

import numpy as np
import pytest

from auditor.gf2.calculus.factor_base import canonical_polynomial, irreducibles
from auditor.gf2.calculus.sieve import Shape, Sieve
from auditor.gf2.factorisation import factor
from auditor.gf2.polynomial import degree, gcd, power_modulo, remainder


@pytest.mark.parametrize("n", [49, 64, 103, 122, 127])
def test_the_sides_are_powers_of_each_other(n):
    """D = C^4 modulo the field polynomial."""
    shape = Shape(canonical_polynomial(n, 1))
    for u, v in ((1, 0), (1, 1), (0b1011, 0b110), (0b1110001, 0b1101)):
        assert remainder(shape.right(u, v), shape.field) == power_modulo(shape.left(u, v), 4, shape.field)


@pytest.mark.parametrize("n", [49, 127])
def test_the_ratios_tell_the_divisors(n):
    """An irreducible p divides C or D where v is the ratio times u modulo p."""
    shape = Shape(canonical_polynomial(n, 1))
    for p in irreducibles(8).tolist():
        assert remainder(shape.left(1, shape.power(p)), p) == 0
        assert remainder(shape.right(1, shape.fourth_root(p)), p) == 0


@pytest.mark.parametrize(
    ("n", "bound", "width", "rows", "block"), [(49, 7, 5, 32, 0), (49, 9, 6, 8, 3), (61, 10, 5, 16, 1)]
)
def test_the_sieve_finds_what_it_promises(n, bound, width, rows, block):
    """The pairs found are the coprime ones where repeated factors make up no more than the bound, on both sides."""
    shape = Shape(canonical_polynomial(n, 1))
    pairs = ((u, v) for u in range(rows * block, rows * (block + 1)) for v in range(1 << width) if u)
    expected = [
        (u, v)
        for u, v in pairs
        if gcd(u, v) == 1 and all(_missing(side, bound) <= bound for side in (shape.left(u, v), shape.right(u, v)))
    ]
    found = Sieve(shape, bound, width, rows).smooth_pairs(block)
    assert found == expected
    assert len(found) > 3


def _missing(polynomial, bound):
    """Return the degree without the distinct factors of degrees up to the bound."""
    return degree(polynomial) - sum(degree(p) for p, _ in factor(polynomial) if degree(p) <= bound)


@pytest.mark.parametrize("n", [115, 128])
def test_both_sides_of_a_found_pair_are_smooth(n):
    """In the degrees with long sides, every 20th pair found has only factors in the base."""
    shape = Shape(canonical_polynomial(n, 1))
    sieve = Sieve(shape, 14, 9, 128)
    found = sieve.smooth_pairs(0)
    assert sieve.cells == 128 * 512
    assert len(found) > 100
    for u, v in found[::20]:
        for side in (shape.left(u, v), shape.right(u, v)):
            assert max(degree(p) for p, _ in factor(side)) <= 14


def test_a_sieve_gives_the_same_pairs_again():
    """Blocks can be asked for in any order."""
    shape = Shape(canonical_polynomial(49, 1))
    sieve = Sieve(shape, 9, 6, 16)
    assert sieve.smooth_pairs(2) == sieve.smooth_pairs(2) == Sieve(shape, 9, 6, 16).smooth_pairs(2)
    assert np.array(sieve.smooth_pairs(2)).min(axis=0)[0] >= 32
