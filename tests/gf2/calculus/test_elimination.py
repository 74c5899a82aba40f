"""Structured elimination of sparse equations, against a solution chosen beforehand."""

import random

import pytest

from auditor.errors import InternalError
from auditor.gf2.calculus.elimination import SparseSystem

MODULUS = (2**89 - 1) * (2**31 - 1)


def _equations(solution, count, rng):
    """Return equations of four unknowns with small coefficients; a small number occurs more often than a large one."""
    names = [name for name in solution if name]
    equations = []
    for _ in range(count):
        chosen = {names[int(len(names) * rng.random() ** 2)] for _ in range(4)}
        equation = {name: rng.choice((4, 8, -1, -2)) for name in sorted(chosen)}
        equation[0] = -sum(value * solution[name] for name, value in equation.items())
        equations.append(equation)
    return equations


@pytest.mark.parametrize(("unknowns", "count"), [(1, 5), (30, 90), (200, 500)])
def test_what_is_found_is_the_solution(unknowns, count):
    """Nearly all unknowns of a system with more equations than unknowns are found, and all that are found are right."""
    rng = random.Random(unknowns)
    solution = {0: 1} | {k: rng.randrange(MODULUS) for k in range(1, unknowns + 1)}
    found = SparseSystem(_equations(solution, count, rng), 0, MODULUS).solution()
    assert len(found) > 0.9 * len(solution)
    assert found.items() <= solution.items()


def test_the_equations_of_the_caller_stay():
    """The elimination works on copies."""
    rng = random.Random(2)
    equations = _equations({0: 1, 1: 5, 2: 6, 3: 7}, 10, rng)
    before = [dict(equation) for equation in equations]
    SparseSystem(equations, 0, MODULUS).solution()
    assert equations == before


def test_undetermined_unknowns_are_left_out():
    """Y1 + y2 = 0 says nothing of either; 2 y3 = 6 and y3 + y4 = 10 say all of theirs."""
    equations = [{1: 1, 2: 1}, {3: 2, 0: -6}, {3: 1, 4: 1, 0: -10}]
    assert SparseSystem(equations, 0, MODULUS).solution() == {0: 1, 3: 3, 4: 7}


def test_a_contradiction_is_told():
    """Two values for one unknown."""
    with pytest.raises(InternalError, match="contradict"):
        SparseSystem([{1: 1, 0: -2}, {1: 1, 0: -3}], 0, MODULUS).solution()


def test_a_column_that_no_equation_can_be_solved_for_loses_them():
    """Where all coefficients of an unknown share a prime with the modulus, its equations are of no use."""
    shared = 2**31 - 1
    equations = [{1: shared, 2: 1, 0: -1}, {2: 1, 3: 1, 0: -5}, {2: 1, 3: 2, 0: -7}]
    assert SparseSystem(equations, 0, MODULUS).solution() == {0: 1, 2: 3, 3: 2}
