"""Registers that share a factor: how far apart their streams run from the state that reset leaves.

No shift between two registers holds for every state, because their states are independent; from one start there is
one. The states that the machine runs through from its start lie in a space that it does not leave, and on which it
is a machine by itself. In that machine streams of all registers are ordinary channels, and what is a shift of what
is found as always.

    d(t) = x(t+1) + x(t),   d(t+1) = A d(t),   m of least degree D with m(A) d(0) = 0
    x(t) = x(0) + sum of z_k(t) d(k) over k < D:    z(0) = 0,   z(t+1) = C z(t) + (1, 0, ... 0)

C is the companion matrix of m. A stream c x + e is there the row of the c d(k), with the constant c x(0) + e.
"""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import replace
from itertools import pairwise
from typing import NamedTuple

from auditor.gf2 import matrix
from auditor.gf2.polynomial import degree
from auditor.machine.machine import AffineRow, LinearMachine, ObservedRow
from auditor.notation import Polynomial, Vector
from auditor.phases.separations import gap, sorted_leads
from auditor.phases.streams import Streams, reached, read_streams
from auditor.phases.table import Closest, Infinite, InStep, PhaseTable, RegisterFacts, Separation


class FromReset(NamedTuple):
    """The machine on the states it runs through from reset, observed by the streams that are known there.

    ``registers``, ``channels``  register or channel of the whole machine → its number in ``machine.observed``; the
    stream of a register is that of its first element. Streams that reset does not decide are left out.
    """

    machine: LinearMachine
    registers: Mapping[int, int]
    channels: Mapping[int, int]


def shared_factors(registers: Sequence[RegisterFacts]) -> dict[tuple[int, ...], tuple[Polynomial, ...]]:
    """Return the irreducible factors of degree 2 or more that two registers or more have, by those registers."""
    holders: dict[Polynomial, tuple[int, ...]] = {}
    for number, register in enumerate(registers):
        for factor in register.factors:
            if degree(factor.polynomial) > 1:
                holders[factor.polynomial] = (*holders.get(factor.polynomial, ()), number)
    shared: dict[tuple[int, ...], tuple[Polynomial, ...]] = {}
    for polynomial, numbers in holders.items():
        if len(numbers) > 1:
            shared[numbers] = (*shared.get(numbers, ()), polynomial)
    return shared


def run_from_reset(machine: LinearMachine) -> FromReset:
    """Return the machine on its states from reset. All streams are taken once the transient is over."""
    firsts = [
        ObservedRow(machine.storage[elements[0]], AffineRow(1 << elements[0], 0, 0), None, (), 0, 0)
        for elements in machine.registers
    ]
    streams = read_streams(replace(machine, observed=(*firsts, *machine.observed)))
    seen = {number: reached(streams.step, [row]) for number, row in streams.steady.items()}
    unsure = {place for place, element in enumerate(streams.elements, 1) if _is_unsure(machine, element)}
    known = [number for number in streams.steady if not seen[number] & unsure]
    start, moves, relation = _run(machine, streams, {place for number in known for place in seen[number]})

    size, transient = len(moves), (relation & -relation).bit_length() - 1
    rows = [_observed(streams.steady[number], start, moves) for number in known]
    restricted = LinearMachine(
        storage=tuple(f"z[{k}]" for k in range(size)),
        free_inputs=(),
        transition=tuple((1 << k >> 1) | (relation >> k & 1) << size - 1 for k in range(size)),
        input_matrix=(0,) * size,
        offset=min(size, 1),
        observed=tuple(rows),
        registers=(),
        half_cycle=frozenset(),
        reset_known=0,
        reset_state=0,
        transient=transient,
        cycling_degree=size - transient,
        xor_fan_out=(0,) * size,
    )
    count = len(firsts)
    registers = {number: place for place, number in enumerate(known) if number < count}
    channels = {number - count: place for place, number in enumerate(known) if number >= count}
    return FromReset(restricted, registers, channels)


def _is_unsure(machine: LinearMachine, element: int) -> bool:
    """Whether reset leaves the element open, or a free input acts on it."""
    return not machine.reset_known >> element & 1 or machine.input_matrix[element] != 0


def _run(machine: LinearMachine, streams: Streams, places: set[int]) -> tuple[Vector, list[Vector], Polynomial]:
    """Return x(0), the independent d(k) and the polynomial m, as rows of the streams with the places given."""
    bits = enumerate(streams.elements, 1)
    start = 1 | sum((machine.reset_state >> element & 1) << place for place, element in bits if place in places)
    step = [row if place in places else 0 for place, row in enumerate(streams.step)]
    step[0] = 1
    moves: list[Vector] = []
    state, span = start, matrix.Span()
    while True:
        after = matrix.apply(step, state)
        if relation := span.add(state ^ after):
            return start, moves, relation
        moves.append(state ^ after)
        state = after


def _observed(row: Vector, start: Vector, moves: Sequence[Vector]) -> ObservedRow:
    state = sum(((row & move).bit_count() & 1) << k for k, move in enumerate(moves))
    return ObservedRow("", AffineRow(state, 0, (row & start).bit_count() & 1), None, (), 0, 0)


def in_step(machine: LinearMachine, table: PhaseTable, start: FromReset, run: PhaseTable) -> Iterator[InStep]:
    """Yield how the registers of each shared factor run; ``run`` holds the phases of ``start.machine``."""
    for registers, factors in shared_factors(table.registers).items():
        tapped = _tapped(machine, registers)
        places = [start.registers.get(number) for number in registers]
        known = start.channels.keys() >= tapped.keys()
        yield InStep(
            registers=registers,
            factors=factors,
            shifts=tuple(_shift(run, place, places[0]) for place in places[1:]),
            closest=_closest(table, start, run, tapped),
            certain_below=run.window if known else 0,
        )


def _tapped(machine: LinearMachine, registers: Sequence[int]) -> dict[int, frozenset[int]]:
    """Return which of these registers a channel taps, for those that tap any."""
    owner = {element: number for number in registers for element in machine.registers[number]}
    found = {}
    for channel, observed in enumerate(machine.observed):
        numbers = frozenset(owner[tap.element] for tap in observed.taps if tap.element in owner)
        if numbers and not observed.cut_from:
            found[channel] = numbers
    return found


def _shift(run: PhaseTable, place: int | None, first: int | None) -> Separation:
    """Return the lead of one register's stream against the first's; None where a start or a lead is not known."""
    if place is None or first is None:
        return None
    own, other = run.phases[place], run.phases[first]
    if "undecided" in (own.kind, other.kind):
        return None
    if own.group is None or own.group != other.group or own.lead is None or other.lead is None:
        return Infinite()
    return (own.lead - other.lead) % (run.classes[own.group].modulus or 1)


def _closest(
    table: PhaseTable, start: FromReset, run: PhaseTable, tapped: Mapping[int, frozenset[int]]
) -> Closest | None:
    """Return the two nearest channels among those given that only their start brings together.

    Channels of one class that tap the same registers keep their distance whatever the start; they are of one kind.
    On the circle of the leads the nearest two of different kinds have nobody between them.
    """
    channel_at = {place: channel for channel, place in start.channels.items() if channel in tapped}
    kinds = {place: (tapped[channel], table.phases[channel].group) for place, channel in channel_at.items()}
    near = list(run.close_pairs)
    for group in run.classes:
        members = replace(group, channels=tuple(place for place in group.channels if place in kinds))
        ring = [place for _, place in sorted_leads(members, run.phases, group.turn)] if group.turn else []
        near += [(i, j, *gap(group, run.phases[i], run.phases[j])) for i, j in pairwise([*ring, *ring[:1]])]
    pairs = [
        (cycles, min(channel_at[i], channel_at[j]), max(channel_at[i], channel_at[j]), complement)
        for i, j, cycles, complement in near
        if {i, j} <= kinds.keys() and kinds[i] != kinds[j]
    ]
    if not pairs:
        return None
    cycles, first, second, complement = min(pairs)
    return Closest((first, second), cycles, complement)
