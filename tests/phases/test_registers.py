import random

import pytest

from auditor.gf2.polynomial import exponents, from_exponents
from auditor.phases.registers import minimal_polynomial, register_facts, without_transient
from auditor.phases.table import RegisterFacts
from tests.support.brute_force import cycle_lengths, random_transition, run
from tests.support.linear_machines import fibonacci, galois, linear_machine

X = 0b10


def one_register(transition: list[int], offset: int = 0, **reset: int) -> RegisterFacts:
    """Return the facts of a machine whose elements all are taken for one register."""
    (facts,) = register_facts(linear_machine(transition, [], offset, registers=[range(len(transition))], **reset))
    return facts


@pytest.mark.parametrize("seed", range(4))
def test_period_and_lock_up_states_are_those_of_stepping(seed: int) -> None:
    """Cycling degree, period, primitive and the smallest lock-up states agree with stepping through all states."""
    rng = random.Random(seed)
    for _ in range(40):
        size = rng.randint(1, 7)
        transition, offset = random_transition(rng, size), rng.getrandbits(size) * rng.randrange(2)
        facts = one_register(transition, offset)
        returning, period = cycle_lengths(transition, offset)
        fixed = [state for state in range(1 << size) if run(transition, offset, state) == state]
        assert (1 << facts.cycling_degree, facts.period) == (returning, period)
        assert (facts.lock_up_count, list(facts.lock_up_states)) == (len(fixed), fixed[:16])
        assert facts.maximum_period == returning - 1
        assert facts.primitive == (period == returning - 1)


@pytest.mark.parametrize("seed", range(4))
def test_orbit_from_reset_is_that_of_stepping(seed: int) -> None:
    """The period from the reset state is the length of the cycle that stepping falls into, and stuck says it is 1."""
    rng = random.Random(100 + seed)
    for _ in range(40):
        size = rng.randint(1, 7)
        transition, offset, state = random_transition(rng, size), rng.getrandbits(size), rng.getrandbits(size)
        reset = one_register(transition, offset, reset_known=(1 << size) - 1, reset_state=state).reset
        seen = {}
        walked = state
        while walked not in seen:
            seen[walked] = len(seen)
            walked = run(transition, offset, walked)
        assert reset
        assert (reset.state, reset.period) == (state, len(seen) - seen[walked])
        assert reset.stuck == (run(transition, offset, state) == state)


def test_a_reset_that_misses_elements_leaves_the_orbit_open() -> None:
    """Unknown bits are named by their place in the register and count as 0; without any reset there are no facts."""
    transition = [0, *(row << 1 for row in fibonacci((3, 2, 0)))]
    machine = linear_machine(transition, [], reset_known=0b0110, reset_state=0b1111)
    (facts,) = register_facts(machine)
    assert facts.elements == (1, 2, 3)
    assert facts.reset
    assert (facts.reset.state, facts.reset.unknown) == (0b011, (2,))
    assert (facts.reset.stuck, facts.reset.period) == (None, None)
    (other,) = register_facts(linear_machine(transition, [], reset_known=0b0001, reset_state=0b0001))
    assert other.reset is None


def test_polynomials_of_the_two_forms_of_a_register() -> None:
    """Stages 32, 22, 2, 1 are a connection polynomial, CRC-32 of IEEE 802.3 names a characteristic one."""
    stages = one_register(fibonacci((32, 22, 2, 1, 0)))
    assert exponents(stages.connection_polynomial) == (32, 22, 2, 1, 0)
    assert exponents(stages.characteristic_polynomial) == (32, 31, 30, 10, 0)
    crc = (32, 26, 23, 22, 16, 12, 11, 10, 8, 7, 5, 4, 2, 1, 0)
    assert exponents(one_register(galois(crc)).characteristic_polynomial) == crc


def test_a_transient_part_is_left_out_of_the_connection_polynomial() -> None:
    """A register with characteristic polynomial x^2 (x^3 + x + 1) has degree 3 where it cycles, and period 7."""
    facts = one_register(galois((5, 3, 2)))
    assert exponents(facts.characteristic_polynomial) == (5, 3, 2)
    assert exponents(facts.connection_polynomial) == (3, 2, 0)
    assert (facts.cycling_degree, facts.period, facts.primitive) == (3, 7, True)
    assert [(f.polynomial, f.multiplicity, f.primitive) for f in facts.factors] == [(X, 2, False), (0b1011, 1, True)]


def test_a_misprint_of_a_much_reprinted_table_is_found_out() -> None:
    """Stages 102, 101, 36, 35 are no maximal register but factors of degree 3, 34 and 65; 102, 101, 26, 25 are one."""
    misprint = one_register(fibonacci((102, 101, 36, 35, 0)))
    assert [len(bin(f.polynomial)) - 3 for f in misprint.factors] == [3, 34, 65]
    assert misprint.primitive is False
    mended = one_register(fibonacci((102, 101, 26, 25, 0)))
    assert (mended.primitive, mended.period) == (True, 2**102 - 1)


def test_an_inverted_register_locks_up_in_the_opposite_state() -> None:
    """XNOR feedback moves the lock-up state from all zeros to all ones and keeps the period."""
    facts = one_register(fibonacci((16, 15, 13, 4, 0)), offset=1)
    assert (facts.lock_up_count, facts.lock_up_states) == (1, (0xFFFF,))
    assert (facts.period, facts.primitive) == (65535, True)


def test_many_lock_up_states_are_counted_without_being_listed() -> None:
    """A register of 200 elements that only holds has 2^200 lock-up states; the 16 smallest are given."""
    facts = one_register([1 << k for k in range(200)])
    assert facts.lock_up_count == 1 << 200
    assert facts.lock_up_states == tuple(range(16))
    assert facts.period == 1


def test_repeated_blocks_have_the_period_of_one() -> None:
    """Two copies of one block: the minimal polynomial, not the characteristic one, says the period."""
    block = fibonacci((4, 3, 0))
    facts = one_register(block + [row << 4 for row in block])
    assert facts.characteristic_polynomial == from_exponents((8, 2, 0))
    assert facts.period == 15


@pytest.mark.parametrize("rules", ["0101", "11001", "010101", "1101010", "11010101", "110010101", "1100101010100"])
def test_published_cellular_automata_are_maximal(rules: str) -> None:
    """Hybrid automata (0: rule 90, 1: rule 150) of Hortensius et al., IEEE Trans. CAD 8 (1989), are primitive."""
    size = len(rules)
    transition = [sum(1 << k for k in (i - 1, i + 1) if 0 <= k < size) | int(rule) << i for i, rule in enumerate(rules)]
    facts = one_register(transition)
    assert (facts.period, facts.primitive) == (2**size - 1, True)


def test_the_order_beyond_known_factors_is_undecided() -> None:
    """For a degree whose 2^n - 1 is not factored here, neither period nor primitive is guessed."""
    facts = one_register(fibonacci((521, 32, 0)))  # x^521 + x^32 + 1 is irreducible, and 2^521 - 1 is prime
    assert len(facts.factors) == 1
    assert (facts.period, facts.primitive, facts.factors[0].primitive) == (None, None, None)


def test_minimal_polynomial_of_a_matrix_that_is_not_cyclic() -> None:
    """Of a double block it is that of the block; without a factor x it keeps what cycles."""
    assert minimal_polynomial([0b01, 0b10]) == 0b11
    assert minimal_polynomial([0b000, 0b001, 0b000]) == 0b100
    assert without_transient(0b110100) == 0b1101
