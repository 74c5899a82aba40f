"""Seeds against runs of small machines."""

import random

import pytest

from auditor.array.orbits import start_machine, state_after
from auditor.array.scan_array import Seeds
from auditor.array.seeds import check_seeds, find_seeds, repeated_patterns, stuck_registers
from auditor.errors import InputError
from auditor.machine.machine import LinearMachine
from auditor.notation import SourcePlace
from auditor.phases.find import find_phases
from auditor.plan import Patterns
from tests.support.brute_force import random_transition, run
from tests.support.linear_machines import fibonacci, linear_machine


def seeds_of(machine: LinearMachine, states: dict[str, int], patterns: Patterns | None = None) -> Seeds:
    """Return what the seeds do."""
    return find_seeds(machine, find_phases(start_machine(machine, list(states.values()))), 0, states, patterns)


def steady_run(machine: LinearMachine, state: int, cycles: int) -> list[int]:
    """Return the states from the end of the transient on."""
    states = [state]
    for _ in range(machine.transient + cycles):
        states.append(run(machine.transition, machine.offset, states[-1]))
    return states[machine.transient :]


@pytest.mark.parametrize("seed", range(40))
def test_cycles_and_distances_are_those_of_a_run(seed: int) -> None:
    """Periods, pairs on one cycle with the shorter way round, and pairs on different cycles."""
    rng = random.Random(seed)
    size = rng.randint(2, 6)
    machine = linear_machine(random_transition(rng, size), [(1, 0)], offset=rng.getrandbits(size))
    states = {f"s{k}": rng.getrandbits(size) for k in range(5)}
    found = seeds_of(machine, states)
    runs = {name: steady_run(machine, state, 1 << size) for name, state in states.items()}
    for seed_run in found.runs:
        states_met = runs[seed_run.name]
        assert seed_run.period == states_met.index(states_met[0], 1)
    pairs = {frozenset(pair.seeds): pair for pair in found.pairs}
    apart = 0
    for i in range(5):
        for k in range(i + 1, 5):
            one, other = runs[f"s{i}"], runs[f"s{k}"]
            if one[0] not in other:
                apart += 1
                continue
            pair = pairs[frozenset((i, k))]
            later, earlier = (runs[f"s{number}"] for number in pair.seeds)
            assert earlier[pair.cycles] == later[0]
            assert pair.cycles == min(other.index(one[0]), one.index(other[0]))
    assert (found.apart, found.undecided, len(found.pairs)) == (apart, 0, 10 - apart)


@pytest.mark.parametrize("seed", range(40))
def test_stuck_registers_are_those_that_do_not_move(seed: int) -> None:
    """A register is stuck where its elements keep their values from the end of the transient on."""
    rng = random.Random(seed)
    size = rng.randint(2, 6)
    machine = linear_machine(random_transition(rng, size), [(1, 0)], offset=rng.getrandbits(size))
    state = rng.getrandbits(size)
    states = steady_run(machine, state, 1 << size)
    still = [all((s ^ states[0]) >> k & 1 == 0 for s in states for k in register) for register in machine.registers]
    assert stuck_registers(machine, state) == tuple(number for number, stays in enumerate(still) if stays)


@pytest.mark.parametrize("seed", range(60))
def test_repeated_patterns_are_those_of_two_tests(seed: int) -> None:
    """Pairs (p, q) of patterns at ahead + p C = q C modulo the length of the cycle, counted one by one."""
    rng = random.Random(seed)
    modulus, clocks, count = rng.randint(1, 30), rng.randint(1, 12), rng.randint(1, 25)
    ahead = rng.randrange(modulus)
    told = sum(not (ahead + (p - q) * clocks) % modulus for p in range(count) for q in range(count))
    assert repeated_patterns(ahead, modulus, clocks, count) == told
    assert repeated_patterns(ahead, None, clocks, count) == sum(
        ahead + p * clocks == q * clocks for p in range(count) for q in range(count)
    )


def test_overlap_is_what_is_left_of_the_test() -> None:
    """Seeds 12 cycles apart under a test of 10 patterns of 4 clocks share 28 cycles and 7 patterns."""
    machine = linear_machine(fibonacci((9, 5, 0)), [(1, 0)])
    first = 0b1011
    states = {"b": state_after(machine, first, 12), "a": first}
    (pair,) = seeds_of(machine, states, Patterns(10, 4)).pairs
    assert (pair.seeds, pair.cycles, pair.overlap, pair.repeated) == ((0, 1), 12, 28, 7)
    (pair,) = seeds_of(machine, states, Patterns(3, 4)).pairs
    assert (pair.overlap, pair.repeated) == (0, 0)


def test_large_registers_have_exact_distances() -> None:
    """Two states of a register of 64 elements, 10^15 cycles apart."""
    machine = linear_machine(fibonacci((64, 63, 61, 60, 0)), [(1, 0)])
    far = state_after(machine, 5, 10**15)
    (pair,) = seeds_of(machine, {"near": 5, "far": far}).pairs
    assert (pair.seeds, pair.cycles) == ((1, 0), 10**15)


def test_a_seed_that_does_not_fit_is_refused() -> None:
    """A state with more bits than there are storage elements names its seed and the bound."""
    machine = linear_machine(fibonacci((5, 2, 0)), [(1, 0)])
    with pytest.raises(InputError) as caught:
        check_seeds(machine, {"good": 31, "wide": 32}, SourcePlace("plan.toml"))
    assert [str(trouble) for trouble in caught.value.troubles] == [
        "plan.toml: seed wide has 6 bits, but the generator has 5 storage elements; give at most 2 hexadecimal digits, "
        "bit k for element k of the report"
    ]


def test_seeds_of_a_register_without_known_order_are_apart_as_far_as_was_searched() -> None:
    """Degree 521 has no factored order: near seeds are found, and far ones are at least the window apart."""
    machine = linear_machine(fibonacci((521, 489, 0)), [(1, 0)])
    states = {"a": 5, "b": state_after(machine, 5, 1000), "c": state_after(machine, 5, 1 << 70)}
    found = seeds_of(machine, states, Patterns(100, 30))
    (pair,) = found.pairs
    assert (pair.seeds, pair.cycles, pair.overlap, pair.repeated) == ((1, 0), 1000, 2000, 0)
    assert found.undecided == 2
    assert found.at_least is not None
    assert found.at_least >= 3000
