"""Shifts of rows against stepping."""

import random

import pytest

from auditor.gf2 import matrix
from auditor.revisions.shifts import shifts
from auditor.revisions.steady import settle
from tests.support.linear_machines import linear_machine
from tests.support.machines import fibonacci, with_channels


@pytest.mark.parametrize("cycles", [0, 1, -1, 63, 64, 100, -900, 1023, -1023])
@pytest.mark.parametrize("offset", [0, 0b101])
def test_shift_is_that_of_the_steps_taken(cycles: int, offset: int) -> None:
    """A row stepped so many times, or its complement, leads by so many cycles modulo the period 2^11 - 1."""
    register = with_channels(fibonacci((11, 9), 11), [(0, 3)])
    machine = linear_machine(register.rows, [(register.channels[0], 0)], offset)
    steady = settle(machine, 0, [0])
    row = steady.rows[0]
    for _ in range(cycles % 2047):
        row = matrix.row_times(row, steady.step)
    found, complement = shifts(steady.step, [(steady.rows[0], row), (steady.rows[0], row ^ 1)])
    assert found is not None
    assert complement is not None
    assert found.cycles is not None
    assert (found.cycles - cycles) % 2047 == 0
    assert abs(found.cycles) <= 1023
    assert (found.inverted, complement.inverted) == (False, True)


def test_rows_on_different_cycles_are_no_shifts() -> None:
    """Of the six cycles of x^4 + x^3 + x^2 + x + 1 and the like, rows on two of them have no shift."""
    steady = settle(linear_machine((0b1111, 1, 2, 4), [(1, 0), (0b0011, 0)]), 0, [0, 1])
    reached, row = set(), steady.rows[0]
    while row not in reached:
        reached.add(row)
        row = matrix.row_times(row, steady.step)
    rng = random.Random(1)
    for _ in range(10):
        target = rng.randrange(2, 32) & ~1
        (found,) = shifts(steady.step, [(steady.rows[0], target)]) if target else [None]
        assert (found is not None) == (target in reached)
