"""Rows of loaded bits and sequences of loads against machines stepped bit by bit."""

import random
from itertools import islice

import pytest

from auditor.array.circuit import LoadedCell
from auditor.array.loading import find_loading, sequence
from auditor.machine.machine import LinearMachine
from tests.support.brute_force import random_transition, run
from tests.support.linear_machines import linear_machine

SIZE = 5


def random_machine(rng: random.Random) -> LinearMachine:
    """Return a machine with offset, two channels with constants, and quite often a transient."""
    channels = [(rng.getrandbits(SIZE), rng.getrandbits(1)) for _ in range(2)]
    return linear_machine(random_transition(rng, SIZE), channels, rng.getrandbits(SIZE))


def states_from(machine: LinearMachine, state: int, cycles: int) -> list[int]:
    states = [state]
    for _ in range(cycles):
        states.append(run(machine.transition, machine.offset, states[-1]))
    return states


def shown(machine: LinearMachine, channel: int, state: int) -> int:
    row = machine.observed[channel].row
    assert row is not None
    return ((row.state & state).bit_count() + row.constant) % 2


def bit(row: int, state: int) -> int:
    """Return an augmented row of a state."""
    return (row & (state << 1 | 1)).bit_count() % 2


@pytest.mark.parametrize("seed", range(30))
def test_rows_tell_what_the_cells_hold(seed: int) -> None:
    """From the base state, rows give what each cell holds at capture; steady ones do so after the transient."""
    rng = random.Random(seed)
    machine = random_machine(rng)
    cells = [LoadedCell(str(k), rng.randrange(2), rng.randrange(5), bool(rng.getrandbits(1))) for k in range(6)]
    loading = find_loading(machine, cells, [1, 3])
    reach = max(cell.delay for cell in cells)
    assert loading.reach == reach
    settle = machine.transient
    for state in range(1 << SIZE):
        states = states_from(machine, state, reach + settle + 2)

        def held(capture: int, states: list[int] = states) -> list[int]:
            scanned = [shown(machine, c.channel, states[capture - c.delay]) ^ c.inverted for c in cells]
            return [*scanned, states[capture] >> 1 & 1, states[capture] >> 3 & 1]

        assert [bit(row, state) for row in loading.rows] == held(reach)
        assert [bit(row, state) for row in loading.before] == held(reach + settle)
        assert [bit(row, state) for row in loading.steady] == held(reach + settle + 1)


@pytest.mark.parametrize("seed", range(10))
def test_sequences_are_the_stepped_loads(seed: int) -> None:
    """Successive blocks of base states are those of the machine stepped from its start, pattern by pattern."""
    rng = random.Random(seed)
    machine = random_machine(rng)
    cells = [LoadedCell(str(k), k % 2, rng.randrange(4), False) for k in range(4)]
    loading = find_loading(machine, cells, [])
    start, first, clocks = rng.getrandbits(SIZE), rng.randrange(5), rng.randint(1, 9)
    states = states_from(machine, start, first + 130 * clocks + loading.reach)
    blocks = islice(sequence(loading, start, first, clocks, 64), 2)
    for number, block in enumerate(blocks):
        values = block.values(loading.rows)
        for lane in range(64):
            base = first + (64 * number + lane) * clocks
            capture = base + loading.reach
            expected = [shown(machine, c.channel, states[capture - c.delay]) for c in cells]
            assert [int(word) >> lane & 1 for word in values[:, 0]] == expected


@pytest.mark.parametrize("seed", range(30))
def test_lock_up_forms_are_zero_in_lock_up_alone(seed: int) -> None:
    """After the transient the forms of a register are all 0 exactly where it repeats its own state for ever."""
    rng = random.Random(seed)
    rows = [rng.getrandbits(SIZE) for _ in range(SIZE)]
    machine = linear_machine(rows, [(1, 0)], rng.getrandbits(SIZE))
    loading = find_loading(machine, [LoadedCell("c", 0, 1, False)], [])
    told = iter(loading.lock_ups)
    for register in machine.registers:
        mask = sum(1 << k for k in register)
        if any(machine.transition[k] & ~mask for k in register):
            continue  # what feeds it can always move it on
        block = [row & mask if mask >> k & 1 else 0 for k, row in enumerate(machine.transition)]
        stuck = {s & mask for s in range(1 << SIZE) if run(block, machine.offset & mask, s & mask) == s & mask}
        settled = [states_from(machine, state, machine.transient + 1)[-1] & mask for state in range(1 << SIZE)]
        if not stuck & set(settled) or stuck >= set(settled):
            continue  # it comes to none, or is never anywhere else
        forms = next(told)
        for state, later in enumerate(settled):
            assert (not any(bit(form, state) for form in forms)) == (later in stuck)
    assert not list(told)
