"""Every example held against a run of the machine, which shares nothing with the rows it was found on.

64 runs at once: an element is a word, bit b its value in run b. They start in random states, or all in one state.
"""

from collections.abc import Iterable, Sequence
from itertools import pairwise

import numpy as np

from auditor.array.orbits import augmented_step, state_after
from auditor.array.rows import Indices, Words
from auditor.array.scan_array import Chain, Loads, Place, Relation, SeedPair, Seeds, Twins
from auditor.errors import InternalError
from auditor.gf2 import matrix
from auditor.machine.machine import LinearMachine
from auditor.notation import Vector

_ALL = np.uint64((1 << 64) - 1)
_SEED = 0x5EED
_MOST_STEPS = 1 << 15  # later cycles are not stepped to but reached at once
_MOST_FAR = 3  # cycles so late; what is said of others is not looked at

# A sum that is said to be constant: (channel by its name, cycle) of every bit in it, and the constant.
Claim = tuple[tuple[tuple[str, int], ...], int]


def twin_claims(chains: Sequence[Chain], twins: Twins, clocks: int) -> list[Claim]:
    """Return what the examples of twins say."""
    return [_claim(chains, twin.example, int(twin.complement), (0, twin.later * clocks)) for twin in twins.examples]


def relation_claims(chains: Sequence[Chain], relations: Iterable[Relation]) -> list[Claim]:
    """Return what relations say."""
    return [_claim(chains, one.cells, one.constant, (0,) * len(one.cells)) for one in relations]


def load_claims(channels: Iterable[str], loads: Loads, clocks: int) -> list[Claim]:
    """Return that each channel gives the same bit again after all different patterns."""
    again = (loads.distinct or 0) * clocks
    return [(((name, 0), (name, again)), 0) for name in channels]


def _claim(chains: Sequence[Chain], cells: Sequence[Place], constant: int, later: Sequence[int]) -> Claim:
    """Return the claim on scan cells as one on their channels: bits ``delay`` cycles back, inversions taken off."""
    bits = []
    for (number, cell), cycles in zip(cells, later, strict=True):
        chain = chains[number]
        bits.append((chain.channel, cycles - chain.delay_of(cell)))
        constant ^= chain.inverted(cell)
    least = min(cycle for _, cycle in bits)
    return tuple((name, cycle - least) for name, cycle in bits), constant


def confirm(machine: LinearMachine, claims: Sequence[Claim], start: Vector | None = None) -> None:
    """Run the machine, transient first, and hold the claims against it. ``InternalError`` where one fails."""
    named = {row.name: k for k, row in enumerate(machine.observed) if row.row is not None and not row.cut_from}
    cycles = sorted({cycle for bits, _ in claims for _, cycle in bits})
    far = [cycle for cycle in cycles if cycle > _MOST_STEPS]
    kept = {cycle for cycle in cycles if cycle <= _MOST_STEPS} | set(far[:_MOST_FAR])
    shown = _run(machine, list(named.values()), sorted(kept), start)
    column = {name: place for place, name in enumerate(named)}
    for bits, constant in claims:
        if not kept.issuperset(cycle for _, cycle in bits):
            continue
        total = np.bitwise_xor.reduce([shown[cycle][column[name]] for name, cycle in bits])
        if total != (_ALL if constant else 0):
            told = ", ".join(f"{name} in cycle {cycle}" for name, cycle in bits)
            raise InternalError(f"the run of the machine contradicts what was found on {told}")


def confirm_seeds(machine: LinearMachine, seeds: Seeds, pairs: Iterable[SeedPair]) -> None:
    """Hold seeds that do not move, and pairs that meet, against the states themselves."""
    for pair in pairs:
        first, second = (seeds.runs[k].state for k in pair.seeds)
        settled = machine.transient
        if state_after(machine, first, settled) != state_after(machine, second, settled + pair.cycles):
            raise InternalError(f"seeds do not meet after {pair.cycles} cycles")
    for run in seeds.runs:
        for register in run.stuck:
            before, after = (state_after(machine, run.state, machine.transient + k) for k in (0, 1))
            if any((before ^ after) >> element & 1 for element in machine.registers[register]):
                raise InternalError(f"seed {run.name} does move")


class _Sums:
    """Rows as index lists over (state, 1, 0), for all runs at once; each reads the 0 at least."""

    def __init__(self, rows: Iterable[tuple[Vector, int]], size: int) -> None:
        columns: list[int] = []
        starts = []
        for row, constant in rows:
            starts.append(len(columns))
            columns += [*matrix.ones(row), size if constant else size + 1]
        self._columns: Indices = np.array(columns, dtype=np.intp)
        self._starts: Indices = np.array(starts, dtype=np.intp)

    def __call__(self, state: Words) -> Words:
        """Return one word for each row."""
        if not len(self._starts):
            return np.zeros(0, np.uint64)
        full = np.concatenate([state, np.array([_ALL, 0], dtype=np.uint64)])
        return np.asarray(np.bitwise_xor.reduceat(full[self._columns], self._starts), dtype=np.uint64)


def _run(
    machine: LinearMachine, channels: Sequence[int], cycles: Sequence[int], start: Vector | None
) -> dict[int, Words]:
    """Return what the channels show in each of the rising cycles; cycle 0 is the first after the transient."""
    size = machine.size
    if start is None:
        state = np.random.default_rng(_SEED).integers(0, 1 << 64, size, dtype=np.uint64)
    else:
        state = np.array([_ALL if start >> k & 1 else 0 for k in range(size)], dtype=np.uint64)
    step = _Sums(((row, machine.offset >> i & 1) for i, row in enumerate(machine.transition)), size)
    rows = (machine.observed[channel].row for channel in channels)
    look = _Sums(((row.state, row.constant) for row in rows if row), size)
    shown = {}
    for before, cycle in pairwise([-machine.transient, *cycles]):
        if cycle <= _MOST_STEPS:
            for _ in range(cycle - before):
                state = step(state)
        else:
            power = matrix.power(augmented_step(machine), cycle - before)[:size]
            mask = (1 << size) - 1
            state = _Sums(((row & mask, row >> size) for row in power), size)(state)
        shown[cycle] = look(state)
    return shown
