import random
from math import lcm

import pytest

from auditor.gf2.factorisation import factor
from auditor.gf2.order import order_of_x
from auditor.gf2.polynomial import degree, gcd, multiply_modulo, power_modulo
from auditor.phases.leads import coordinates
from tests.support.algebra import pari_logarithm

X = 0b10


def walked_classes(f: int) -> dict[int, tuple[int, int]]:
    """Return for every unit modulo f the least unit of its class and the number of steps of x from there."""
    found: dict[int, tuple[int, int]] = {}
    for unit in range(1, 1 << degree(f)):
        if unit in found or gcd(unit, f) != 1:
            continue
        walked, steps = unit, 0
        while walked not in found:
            found[walked] = unit, steps
            walked, steps = multiply_modulo(walked, X, f), steps + 1
    return found


@pytest.mark.parametrize("seed", range(4))
def test_classes_and_differences_are_those_of_walking(seed: int) -> None:
    """For 5,000 random f of degree up to 8, repeated factors too, signature and difference agree with stepping by x."""
    rng = random.Random(seed)
    for _ in range(1250):
        f = rng.getrandbits(rng.randint(1, 8)) << 1 | 1
        f |= 1 << max(1, degree(f))
        walked = walked_classes(f)
        units = rng.sample(sorted(walked), min(6, len(walked)))
        found = coordinates(units, factor(f))
        assert found.decided
        assert found.period == found.known_period == order_of_x(f)
        for i, one in enumerate(units):
            for j, other in enumerate(units):
                same = walked[one][0] == walked[other][0]
                assert (found.signature(i) == found.signature(j)) == same
                if same:
                    assert found.difference(i, j) == (walked[one][1] - walked[other][1]) % found.period


@pytest.mark.parametrize("multiplicities", [(1, 1), (2, 1), (5, 3)])
def test_large_shifts_come_back_through_repeated_factors(multiplicities: tuple[int, int]) -> None:
    """x^s modulo g^a h^b, deg g = 20 and deg h = 31, gives s modulo the order that the theory states."""
    rng = random.Random(2)
    factors = ((1 << 20 | 1 << 3 | 1, multiplicities[0]), (1 << 31 | 1 << 3 | 1, multiplicities[1]))
    f = 1
    for irreducible, multiplicity in factors:
        for _ in range(multiplicity):
            f = multiply_modulo(f, irreducible, 1 << 400)
    period = lcm(2**20 - 1, 2**31 - 1) << (max(multiplicities) - 1).bit_length()
    shifts = [0, *(rng.randrange(period) for _ in range(5))]
    start = 0b1101
    units = [multiply_modulo(start, power_modulo(X, shift, f), f) for shift in shifts]
    found = coordinates(units, factors)
    assert found.period == period
    assert len({found.signature(i) for i in range(len(units))}) == 1
    assert [found.difference(i, 0) for i in range(len(units))] == shifts


def test_logarithms_are_those_of_computer_algebra() -> None:
    """Differences in a field of 2^40 elements are the discrete logarithms that PARI finds."""
    f, rng = 1 << 40 | 1 << 5 | 1 << 4 | 1 << 3 | 1, random.Random(3)
    units = [1, *(rng.getrandbits(40) for _ in range(3))]
    found = coordinates(units, ((f, 1),))
    assert [found.difference(i, 0) for i in range(1, 4)] == [pari_logarithm(unit, f) for unit in units[1:]]
