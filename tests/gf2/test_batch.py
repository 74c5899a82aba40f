"""Packed arithmetic against the same done one element at a time."""

import numpy as np
import pytest

from auditor.gf2.batch import BLOCK, Ring, geometric_block, progression
from auditor.gf2.polynomial import multiply_modulo, power_modulo

# One, two, four (for three) and five words, and degrees at both sides of a word's end; f need not be irreducible.
DEGREES = [1, 2, 3, 8, 63, 64, 65, 127, 128, 150, 192, 300]


def _sample(n, count, seed):
    """Return numbers of n bits, spread by powers of 3; the first are all ones and 1."""
    values = [pow(3, 500 + seed + 41 * i) >> 300 & (1 << n) - 1 for i in range(count)]
    return [(1 << n) - 1, 1, *values][:count]


def _polynomial(n):
    return 1 << n | pow(3, 700) & (1 << n) - 1 | 1


@pytest.mark.parametrize("n", DEGREES)
def test_products_and_powers(n):
    """Packed products, squares, multiples and common powers are those of single elements."""
    f = _polynomial(n)
    ring = Ring(f)
    a, b = _sample(n, 20, 1), _sample(n, 20, 7)[::-1]
    packed = ring.pack(a)
    assert ring.unpack(packed) == a
    assert ring.unpack(ring.multiply(packed, ring.pack(b))) == [
        multiply_modulo(x, y, f) for x, y in zip(a, b, strict=True)
    ]
    assert ring.unpack(ring.square(packed)) == [multiply_modulo(x, x, f) for x in a]
    assert ring.unpack(ring.multiplier(b[3])(packed)) == [multiply_modulo(x, b[3], f) for x in a]
    for exponent in (0, 1, 2, 15, 16, 12345, 2**n - 2):
        assert ring.unpack(ring.power(packed, exponent)) == [power_modulo(x, exponent, f) for x in a]


@pytest.mark.parametrize("n", DEGREES)
def test_powers_of_x(n):
    """X to many exponents at once, zero and great ones among them."""
    f = _polynomial(n)
    exponents = [0, 1, n, 2**n - 1, *_sample(n, 10, 3), 3**200]
    assert Ring(f).unpack(Ring(f).powers_of_x(exponents)) == [power_modulo(2, e, f) for e in exponents]


def test_nothing_is_no_special_case():
    """Arrays without rows go through all operations."""
    ring = Ring(0b10011)
    none = ring.pack([])
    assert ring.unpack(ring.multiply(none, none)) == ring.unpack(ring.power(none, 7)) == []
    assert ring.unpack(ring.powers_of_x([])) == []


@pytest.mark.parametrize("count", [1, 2, 5, 64])
def test_a_geometric_block_lists_every_power(count):
    """Row k of a block with one start is the start times the ratio to the k."""
    ring = Ring(_polynomial(65))
    block = geometric_block(ring, ring.pack([5, 9]), 7, count)
    expected = [multiply_modulo(start, power_modulo(7, k, ring.f), ring.f) for k in range(count) for start in (5, 9)]
    assert ring.unpack(block) == expected


@pytest.mark.parametrize(("starts", "count"), [(1, 3 * BLOCK + 5), (3, BLOCK), (BLOCK + 1, 3)])
def test_a_progression_goes_on_across_blocks(starts, count):
    """The blocks of a progression, end to end, are the powers in order, cut off at the count."""
    ring = Ring(_polynomial(40))
    first = ring.pack(range(1, starts + 1))
    rows = np.concatenate(list(progression(ring, first, 7, count)))
    assert len(rows) == starts * count
    seven = ring.multiplier(7)
    assert (rows[:starts] == first).all()
    assert (rows[starts:] == seven(rows[:-starts])).all()
