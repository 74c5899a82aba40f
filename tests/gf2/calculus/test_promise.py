"""What small factors leave, against the factorisation of every combination."""

import numpy as np
import pytest

from auditor.gf2.calculus.promise import degrees_left
from auditor.gf2.factorisation import factor
from auditor.gf2.polynomial import degree, multiply, power_modulo


@pytest.mark.parametrize(("size", "power"), [(2, 1), (3, 1), (3, 4)])
def test_degrees_left(size, power):
    """Each combination α^k f + β^k g has its degree less those of its distinct factors of degrees up to 8."""
    first = [pow(3, 300 + 50 * k) >> 40 & (1 << 60) - 1 | 1 << 60 for k in range(4)]
    second = [pow(3, 310 + 50 * k) >> 40 & (1 << 59) - 1 | 1 << 59 for k in range(4)]
    found = degrees_left(_packed(first), _packed(second), size, power)
    assert found.shape == (4**size, 4)
    for k, (f, g) in enumerate(zip(first, second, strict=True)):
        for alpha in range(1 << size):
            for beta in range(1 << size):
                if not alpha | beta:
                    continue
                multipliers = [power_modulo(multiplier, power, 1 << 40) for multiplier in (alpha, beta)]
                parts = multiply(multipliers[0], f), multiply(multipliers[1], g)
                whole = parts[0] ^ parts[1]
                small = sum(degree(p) for p, _ in factor(whole) if degree(p) <= 8)
                assert found[alpha + (beta << size), k] == max(map(degree, parts)) - small


def _packed(polynomials):
    return np.array([[polynomial & (1 << 64) - 1, polynomial >> 64] for polynomial in polynomials], np.uint64)
