"""The bit-sliced smoothness test against the factorisation."""

import numpy as np
import pytest

from auditor.gf2.calculus.smooth import are_smooth, degrees, slices
from auditor.gf2.factorisation import factor
from auditor.gf2.polynomial import degree


def _packed(polynomials, words):
    data = b"".join(polynomial.to_bytes(8 * words, "little") for polynomial in polynomials)
    return np.frombuffer(data, "<u8").astype(np.uint64).reshape(-1, words)


def _sample(size, count):
    return [pow(3, 600 + 37 * k) >> 200 & (1 << size) - 1 for k in range(count)]


@pytest.mark.parametrize(("size", "bound", "words"), [(12, 8, 1), (30, 11, 1), (46, 16, 1), (72, 25, 2)])
def test_smooth_polynomials_are_told(size, bound, words):
    """No other polynomial is called smooth, and no smooth one without repeated factors is missed, at any degree."""
    polynomials = [*_sample(size, 500), *(1 << k for k in range(size)), *_sample(size // 2, 200)]
    found = are_smooth(_packed(polynomials, words), bound).tolist()
    missed = 0
    for polynomial, called_smooth in zip(polynomials, found, strict=True):
        factors = factor(polynomial) if polynomial else ((1 << 99, 1),)
        smooth = max((degree(p) for p, _ in factors), default=0) <= bound
        if called_smooth:
            assert smooth
        elif smooth:
            missed += 1
            assert max(exponent for _, exponent in factors) > 1
    assert 0 < sum(found) < len(found)
    assert missed < sum(found) / 2


def test_zero_and_small_degrees():
    """Zero is not smooth; a degree up to the bound is; no rows are no special case."""
    assert are_smooth(_packed([0, 1, 2, 0b10011], 2), 4).tolist() == [False, True, True, True]
    assert are_smooth(_packed([], 1), 4).tolist() == []


def test_more_than_one_batch():
    """Results of 40,000 polynomials are those of some of them alone."""
    polynomials = _packed([(1 << 20) + 7 * k for k in range(40_000)], 1)
    whole = are_smooth(polynomials, 7)
    assert (whole[::1000] == are_smooth(polynomials[::1000], 7)).all()
    assert (whole[-999:] == are_smooth(polynomials[-999:], 7)).all()
    assert whole.any()


def test_degrees_at_the_ends_of_words():
    """The degree is that of the leading coefficient, also where a conversion to a float would round up."""
    polynomials = [0, 1, 2, 3, (1 << 53) - 1, (1 << 54) - 1, (1 << 64) - 1, 1 << 64, (1 << 128) - 1, 1 << 127]
    assert degrees(_packed(polynomials, 2)).tolist() == [degree(polynomial) for polynomial in polynomials]


def test_slices():
    """Bit i of word w in row k is coefficient k of polynomial 64 w + i; missing ones are zero."""
    polynomials = _sample(70, 100)
    rows = slices(_packed(polynomials, 2), 70).tolist()
    assert len(rows) == 70
    for k, row in enumerate(rows):
        bits = row[0] | row[1] << 64
        assert bits == sum((polynomial >> k & 1) << i for i, polynomial in enumerate(polynomials))
