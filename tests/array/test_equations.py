"""Linear equations and lock-up, against trying all vectors."""

import random
from itertools import product

from auditor.array.equations import Equations, outside_lock_up

WIDTH = 6


def solutions(forms: list[int]) -> set[int]:
    """Return the vectors, bit 0 set, for which all forms are 0."""
    return {v for v in range(1, 1 << WIDTH, 2) if all((form & v).bit_count() % 2 == 0 for form in forms)}


def build(forms: list[int]) -> Equations | None:
    """Return the system of equations, None if they contradict each other."""
    system = Equations()
    for form in forms:
        rest = system.reduce(form)
        if rest == 1:
            return None
        if rest:
            system = system.with_zero(rest)
    return system


def test_systems_have_the_solutions_that_trying_finds() -> None:
    """A system is refused exactly if it has no solution, and gives one of them otherwise."""
    rng = random.Random(1)
    contradictions = 0
    for _ in range(400):
        forms = [rng.getrandbits(WIDTH) for _ in range(rng.randint(0, 7))]
        system, all_of_them = build(forms), solutions(forms)
        if system is None:
            contradictions += 1
            assert not all_of_them
        else:
            assert system.solution() in all_of_them
            form = rng.getrandbits(WIDTH)
            decided = {(form & v).bit_count() % 2 for v in all_of_them}
            assert (system.reduce(form) in (0, 1)) == (len(decided) == 1)
    assert contradictions


def test_lock_up_is_left_where_that_is_possible() -> None:
    """A state outside the lock-up of every register is found exactly if trying finds one."""
    rng = random.Random(2)
    outcomes = set()
    for _ in range(600):
        system = build([rng.getrandbits(WIDTH) for _ in range(rng.randint(0, 4))])
        if system is None:
            continue
        lock_ups = [[rng.getrandbits(WIDTH) for _ in range(rng.randint(1, 3))] for _ in range(rng.randint(0, 3))]
        inside = solutions(list(system.by_leading_bit.values()))
        allowed = {v for v in inside if all(v not in solutions(forms) for forms in lock_ups)}
        found = outside_lock_up(system, lock_ups)
        outcomes.add(found is None)
        assert (found is not None) == bool(allowed)
        if found is not None:
            assert found.solution() in allowed
    assert outcomes == {False, True}


def test_a_register_held_by_two_conditions_needs_one_broken() -> None:
    """Of two registers that share a form, one broken condition may serve both or neither."""
    for forms in product(range(2, 8), repeat=2):
        found = outside_lock_up(Equations(), [[forms[0]], [forms[1]]])
        both = {v for v in range(1, 8, 2) if all((form & v).bit_count() % 2 for form in forms)}
        assert (found is not None) == bool(both)
