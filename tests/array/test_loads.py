"""How many patterns differ, against loads taken one after another."""

import random

import pytest

from auditor.array.loads import count_loads, find_loads, load_basis
from auditor.array.meetings import comes_again_within
from auditor.array.orbits import reset_start
from auditor.array.rows import chain_rows
from auditor.array.scan_array import Chain
from auditor.phases.find import find_phases
from auditor.plan import Patterns
from tests.support.brute_force import run
from tests.support.linear_machines import fibonacci, galois, linear_machine
from tests.support.machines import rank
from tests.support.scan_cells import columns_of, random_array


@pytest.mark.parametrize("seed", range(30))
def test_the_rank_is_that_of_the_columns(seed: int) -> None:
    """The dimension that the scan cells span is the rank of what they hold over all steady states, less constants."""
    machine, chains = random_array(random.Random(seed))
    columns, everything = columns_of(machine, chains)
    linear = [column ^ everything if column & 1 else column for column in columns.values()]
    assert len(load_basis(chain_rows(machine, chains))) == rank(linear)


@pytest.mark.parametrize("clocks", range(1, 13))
@pytest.mark.parametrize(("exponents", "state"), [((4, 1, 0), 1), ((4, 2, 0), 1), ((6, 4, 2, 1, 0), 5)])
def test_distinct_loads_are_those_of_a_run(exponents: tuple[int, ...], state: int, clocks: int) -> None:
    """From a start, every load is a new one until so many are over, and then they come again in order."""
    machine = linear_machine(galois(exponents), [(1, 0), (2, 1)])
    rows = chain_rows(machine, [Chain("c0", 9), Chain("c1", 9)])
    orbit = [state]
    while (after := run(machine.transition, 0, orbit[-1])) != state:
        orbit.append(after)
    loads = find_loads(machine, find_phases(machine), rows, clocks, len(orbit))
    seen = [orbit[k * clocks % len(orbit)] for k in range(2 * len(orbit))]
    assert loads.distinct == len(set(seen))
    assert (loads.period, loads.exact, loads.start) == (len(orbit), True, "reset")


def test_without_a_reset_the_longest_cycles_count() -> None:
    """A primitive register has one cycle; another is judged by its longest, and says so."""
    whole, part = linear_machine(galois((4, 1, 0)), [(1, 0)]), linear_machine(galois((4, 2, 0)), [(1, 0)])
    facts = [find_loads(m, find_phases(m), chain_rows(m, [Chain("c0", 4)]), 3, None) for m in (whole, part)]
    assert [(one.period, one.distinct) for one in facts] == [(15, 5), (6, 2)]
    assert [one.cycles for one in facts] == [(), ((1, 1), (3, 1), (6, 2))]
    assert [one.start for one in facts] == ["any state outside lock-up", "the states of the longest cycles"]


def test_short_chains_do_not_tell_all_states_apart() -> None:
    """Three scan cells of a register of four elements: the count is an upper bound."""
    machine = linear_machine(galois((4, 1, 0)), [(1, 0)])
    loads = find_loads(machine, find_phases(machine), chain_rows(machine, [Chain("c0", 3)]), 1, None)
    assert (loads.distinct, loads.exact) == (15, False)


def test_a_start_is_known_where_everything_that_is_felt_has_a_reset() -> None:
    """A pipeline element behind the register is forgotten; one of the register is not."""
    piped = [*fibonacci((3, 1, 0)), 0b100]
    assert reset_start(linear_machine(piped, [(0b1000, 0)], reset_known=0b0111, reset_state=0b0101)) == 0b0101
    assert reset_start(linear_machine(piped, [(0b1000, 0)], reset_known=0b1110, reset_state=0b0101)) is None


def test_a_stream_is_new_until_its_period_is_over() -> None:
    """Period 31: nothing comes again in less than 31 cycles, and something in less than 32; too far is not decided."""
    rows = chain_rows(linear_machine(galois((5, 2, 0)), [(1, 0)]), [Chain("c0", 3)])
    assert [comes_again_within(rows, reach) for reach in (1, 30, 31, 32, 100)] == [False, False, False, True, True]
    assert comes_again_within(rows, 1 << 60) is None
    wide = chain_rows(linear_machine(galois((521, 32, 0)), [(1, 0)]), [Chain("c0", 3)])
    assert comes_again_within(wide, 1 << 16) is False


@pytest.mark.parametrize("seed", range(40))
def test_counted_loads_are_those_of_a_run(seed: int) -> None:
    """Different contents of all scan cells after each of the planned loads from a start."""
    rng = random.Random(seed)
    machine, chains = random_array(rng)
    rows = chain_rows(machine, chains)
    if not rows.chains:
        return
    start, count, shift = rng.getrandbits(machine.size), rng.randint(1, 20), rng.randint(1, 9)
    states = [start]
    while len(states) <= machine.transient + rows.greatest_delay + 20 * count + 50:
        states.append(run(machine.transition, machine.offset, states[-1]))
    base = max(machine.transient, shift - rows.greatest_delay)
    contents = set()
    for pattern in range(count):
        parked = base + rows.greatest_delay + pattern * shift
        contents.add(
            tuple(
                (row.row.state & states[parked - delay]).bit_count() & 1
                for chain in rows.chains
                for row in machine.observed
                if row.name == chain.channel and row.row
                for delay in chain.delays
            )
        )
    assert count_loads(machine, rows, Patterns(count, shift), start) == len(contents)
