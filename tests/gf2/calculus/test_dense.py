"""Dense equations modulo a large number, against a solution chosen beforehand."""

import random

import pytest

from auditor.errors import InternalError
from auditor.gf2.calculus.dense import DenseSystem

MODULUS = (2**61 - 1) * (2**31 - 1)
UNIT = -1


def _equations(solution, count, rng):
    """Return random equations that the solution satisfies."""
    equations = []
    for _ in range(count):
        equation = {name: rng.randrange(MODULUS) for name in solution}
        equation[UNIT] = -sum(equation[name] * value for name, value in solution.items())
        equations.append(equation)
    return equations


@pytest.mark.parametrize("count", [1, 2, 40])
def test_a_solution_comes_back(count):
    """As many random equations as unknowns determine all; further ones change nothing."""
    rng = random.Random(count)
    solution = {3 * k: rng.randrange(MODULUS) for k in range(count)}
    system = DenseSystem(list(solution), UNIT, MODULUS)
    for equation in _equations(solution, count + 3, rng):
        system.add(equation)
    assert system.rank == count
    assert system.solution() == solution | {UNIT: 1}


def test_only_what_is_determined_is_solved():
    """With y0 + y1 = 5, 2 y2 = 8 and an empty equation, only y2 is known."""
    system = DenseSystem([0, 1, 2], UNIT, MODULUS)
    for equation in ({0: 1, 1: 1, UNIT: -5}, {2: 2, UNIT: -8}, {}):
        system.add(equation)
    assert system.rank == 2
    assert system.solution() == {2: 4, UNIT: 1}


def test_what_a_free_unknown_cancels_from_is_solved():
    """Y0 + y1 = 5 and y0 + 2 y1 = 7 give both, in either order."""
    for equations in (
        ({0: 1, 1: 1, UNIT: -5}, {0: 1, 1: 2, UNIT: -7}),
        ({0: 1, 1: 2, UNIT: -7}, {0: 1, 1: 1, UNIT: -5}),
    ):
        system = DenseSystem([0, 1], UNIT, MODULUS)
        for equation in equations:
            system.add(equation)
        assert system.solution() == {0: 3, 1: 2, UNIT: 1}


def test_a_contradiction_is_told():
    """An equation off by one is found out."""
    rng = random.Random(5)
    system = DenseSystem([0, 1], UNIT, MODULUS)
    first, second, third = _equations({0: 7, 1: 9}, 3, rng)
    system.add(first)
    system.add(second)
    third[UNIT] += 1
    with pytest.raises(InternalError, match="contradict"):
        system.add(third)


def test_a_coefficient_without_inverse_loses_one_equation():
    """A leading coefficient that shares a prime with the modulus gives no pivot and no wrong solution."""
    system = DenseSystem([0], UNIT, MODULUS)
    system.add({0: 2**31 - 1, UNIT: -(2**31 - 1)})
    assert system.rank == 0
    system.add({0: 1, UNIT: -1})
    assert system.solution() == {0: 1, UNIT: 1}
