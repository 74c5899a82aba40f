"""The cycles of a machine against walking through all its states."""

import random
from collections import Counter

import pytest

from auditor.array.cycles import cycle_counts
from tests.support.brute_force import random_transition, run
from tests.support.linear_machines import fibonacci, galois, linear_machine


@pytest.mark.parametrize("seed", range(150))
def test_cycles_are_those_of_a_walk(seed: int) -> None:
    """Singular, derogatory, unipotent and affine machines of up to eight elements."""
    rng = random.Random(seed)
    size = rng.randint(1, 8)
    machine = linear_machine(random_transition(rng, size), [(1, 0)], offset=rng.getrandbits(size))
    states = set(range(1 << size))
    for _ in range(machine.transient):
        states = {run(machine.transition, machine.offset, state) for state in states}
    counts: Counter[int] = Counter()
    while states:
        first = state = min(states)
        length = 0
        while True:
            states.discard(state)
            state, length = run(machine.transition, machine.offset, state), length + 1
            if state == first:
                break
        counts[length] += 1
    assert cycle_counts(machine) == dict(counts)


def test_a_primitive_register_has_lock_up_and_one_cycle() -> None:
    """Degree 61: 2^61 - 1 states on one cycle."""
    assert cycle_counts(linear_machine(galois((61, 5, 2, 1, 0)), [(1, 0)])) == {1: 1, 2**61 - 1: 1}


def test_large_machines_are_not_answered() -> None:
    """A machine of more than 256 elements."""
    assert cycle_counts(linear_machine(fibonacci((521, 489, 0)), [(1, 0)], transient=0)) is None
