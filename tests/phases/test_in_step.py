"""Registers that share a factor, against streams that were stepped bit by bit from the reset state."""

import random
from dataclasses import replace
from itertools import combinations

import pytest

from auditor.gf2.polynomial import power_modulo
from auditor.machine.machine import LinearMachine
from auditor.phases.find import find_phases
from auditor.phases.in_step import shared_factors
from auditor.phases.registers import register_facts
from auditor.phases.table import Infinite, PhaseTable
from tests.support.evidence import evidence
from tests.support.linear_machines import fibonacci, galois, linear_machine

# Connection polynomials with many common factors: x^3 + x + 1, x^4 + x + 1 (period 15), x^4 + x^3 + x^2 + x + 1
# (period 5), (x^2 + x + 1)^2, x^3 + x + 1 times x + 1 and times x^2 + x + 1.
SMALL = ((3, 1, 0), (4, 1, 0), (4, 3, 2, 1, 0), (4, 2, 0), (4, 3, 2, 0), (5, 4, 0))


def phases(machine: LinearMachine) -> PhaseTable:
    """Return the phases of a machine, each channel tapping what its row reads."""
    table = evidence(machine).phases
    assert table is not None
    return table


def side_by_side(*parts: list[int]) -> list[int]:
    """Return the transition of registers that do not see each other."""
    rows: list[int] = []
    for part in parts:
        first = len(rows)
        rows += [row << first for row in part]
    return rows


def drawn(draw: random.Random) -> LinearMachine:
    """Return two or three registers side by side and a pipeline element without reset, with a random start."""
    parts = [draw.choice((fibonacci, galois))(draw.choice(SMALL)) for _ in range(draw.choice((2, 2, 3)))]
    transition = side_by_side(*parts)
    size = len(transition)
    transition.append(draw.randrange(1, 1 << size))
    rows = [1 << draw.randrange(size) for _ in range(4)]
    rows += [draw.randrange(1, 1 << size) for _ in range(3)] + [1 << size]
    return linear_machine(
        transition,
        [(row, draw.randrange(2)) for row in rows],
        offset=draw.choice((0, draw.randrange(1 << size))),
        reset_known=(1 << size) - 1,
        reset_state=draw.randrange(1 << size),
    )


def stepped(machine: LinearMachine, row: int, constant: int, count: int) -> list[int]:
    """Return the first bits of a stream after the transient, from reset; elements without reset start at 0."""
    state, bits = machine.reset_state & machine.reset_known, []
    for _ in range(machine.transient + count):
        bits.append((row & state).bit_count() & 1 ^ constant)
        following = ((line & state).bit_count() & 1 for line in machine.transition)
        state = machine.offset ^ sum(bit << k for k, bit in enumerate(following))
    return bits[machine.transient :]


def meeting(own: list[int], other: list[int], width: int) -> tuple[int | None, int]:
    """Return the least lead of one stream against another, complements included, and the turn of the other.

    Over ``width`` bits two streams that agree, agree for ever.
    """

    def alike(a: list[int], b: list[int]) -> bool:
        return len({x ^ y for x, y in zip(a[:width], b[:width], strict=True)}) == 1

    turn = next(s for s in range(1, len(other)) if alike(other, other[s:]))
    return next((s for s in range(turn) if alike(own, other[s:])), None), turn


@pytest.mark.parametrize("seed", range(120))
def test_shifts_and_closest_channels_are_those_of_the_streams(seed: int) -> None:
    """Each shift and the closest pair are what stepping from reset gives, whatever the forms and offsets."""
    machine = drawn(random.Random(seed))
    table, width = phases(machine), 2 * machine.size + 2
    count = 420 + 2 * width  # twice the longest period is less than 420
    firsts = [stepped(machine, 1 << elements[0], 0, count) for elements in machine.registers]
    for shared in table.in_step:
        assert shared.certain_below is None
        for number, shift in zip(shared.registers[1:], shared.shifts, strict=True):
            lead, turn = meeting(firsts[number], firsts[shared.registers[0]], width)
            flat = len(set(firsts[number])) == 1 or turn == 1
            assert (None if isinstance(shift, Infinite) or shift is None else shift % turn) == (None if flat else lead)
        expected = nearest(machine, table, shared.registers, count, width)
        assert (shared.closest and shared.closest.cycles) == expected


def nearest(
    machine: LinearMachine, table: PhaseTable, registers: tuple[int, ...], count: int, width: int
) -> int | None:
    """Return the least distance from reset of two channels that tap the registers and no class keeps together."""
    tapped = {}
    for channel, observed in enumerate(machine.observed):
        assert observed.row is not None
        numbers = frozenset(
            n for n in registers if any(observed.row.state >> element & 1 for element in machine.registers[n])
        )
        if numbers:
            stream = stepped(machine, observed.row.state, observed.row.constant, count)
            tapped[channel] = (numbers, table.phases[channel].group), stream
    distances = []
    for (kind, own), (other_kind, other) in combinations(tapped.values(), 2):
        if kind != other_kind and len(set(own)) > 1 and len(set(other)) > 1:
            lead, turn = meeting(own, other, width)
            distances += [] if lead is None else [min(lead, turn - lead)]
    return min(distances, default=None)


def test_the_groups_of_a_factor_are_its_registers() -> None:
    """Registers are grouped by the factors that they have in common; x + 1 and a factor of one alone are none."""
    both, left, right = galois((4, 3, 2, 0)), galois((3, 1, 0)), galois((3, 2, 0))
    registers = register_facts(linear_machine(side_by_side(both, left, right, left, [1], [1]), []))
    assert shared_factors(registers) == {(0, 1, 3): (0b1011,)}


def test_one_register_in_two_states_leads_by_the_steps_between_them() -> None:
    """A register started 2^50 steps ahead of its twin leads it by 2^50; no step is walked."""
    characteristic = 1 << 60 | 0b11  # x^60 + x + 1, primitive (Zierler and Brillhart 1968)
    ahead = power_modulo(0b10, 1 << 50, characteristic)
    register = galois((60, 1, 0))
    machine = linear_machine(
        side_by_side(register, register),
        [(1, 0), (1 << 60, 0)],
        registers=[range(60), range(60, 120)],
        reset_known=(1 << 120) - 1,
        reset_state=1 | ahead << 60,
        transient=0,
    )
    (shared,) = phases(machine).in_step
    assert shared.shifts == (1 << 50,)
    assert shared.closest is not None
    assert (shared.closest.channels, shared.closest.cycles) == ((0, 1), 1 << 50)


def test_without_logarithms_the_bounded_search_tells_what_is_near() -> None:
    """Beyond the largest degree with logarithms a lead within the window is found, a larger one stays open."""
    register = galois((172, 7, 0))  # primitive (Zierler and Brillhart 1968)
    characteristic = sum(1 << k for k in (172, 7, 0))
    for ahead, found in ((1000, 1000), (1 << 100, None)):
        start = 1 | power_modulo(0b10, ahead, characteristic) << 172
        machine = linear_machine(
            side_by_side(register, register),
            [(1, 0), (1 << 172, 0)],
            registers=[range(172), range(172, 344)],
            reset_known=(1 << 344) - 1,
            reset_state=start,
            transient=0,
        )
        (shared,) = phases(machine).in_step
        assert shared.shifts == (found,)
        assert (shared.closest and shared.closest.cycles) == found
        assert shared.certain_below == (None if found else 1 << 20)


def test_what_reset_does_not_decide_is_not_known() -> None:
    """An element without reset, and a free input, leave the register's start open; others keep theirs."""
    register = fibonacci((4, 1, 0))
    channels = [(1 << k, 0) for k in (0, 4, 8)]
    machine = linear_machine(side_by_side(register, register, register), channels, reset_known=0xFFF, reset_state=0x351)
    loose = replace(machine, reset_known=0xFBF)
    driven = replace(machine, free_inputs=("seed",), input_matrix=(0,) * 6 + (1,) + (0,) * 5)
    (settled,) = phases(machine).in_step
    for open_start in (loose, driven):
        (shared,) = phases(open_start).in_step
        assert shared.shifts == (None, settled.shifts[1])
        assert shared.certain_below == 0
        assert shared.closest is not None
        assert shared.closest.channels == (0, 2)


def test_registers_that_share_nothing_are_not_run() -> None:
    """Without a common factor the table says nothing about registers in step."""
    machine = linear_machine(side_by_side(fibonacci((4, 1, 0)), fibonacci((5, 2, 0))), [(1, 0)])
    assert find_phases(machine).in_step == ()
