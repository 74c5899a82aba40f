"""Every example held against a run of the machine, which shares nothing with the rows it was found on.

64 runs at once: an element is a word, bit b its value in run b. They start in random states, or all in one state.
"""

import random
from collections.abc import Iterable, Mapping, Sequence
from itertools import pairwise

from auditor.array.orbits import augmented_step, state_after
from auditor.array.scan_array import Chain, Loads, Place, Relation, SeedPair, Seeds, Twins
from auditor.errors import InternalError
from auditor.gf2 import matrix
from auditor.machine.machine import LinearMachine
from auditor.notation import Vector

_LANES = 64
_ALL = (1 << _LANES) - 1
_SEED = 0x5EED
_STEPS = 1 << 12  # longer stretches are not stepped through but taken at once

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
        bits.append((chain.channel, cycles - chain.delays[cell]))
        constant ^= chain.inverted(cell)
    least = min(cycle for _, cycle in bits)
    return tuple((name, cycle - least) for name, cycle in bits), constant


def confirm(machine: LinearMachine, claims: Sequence[Claim], start: Vector | None = None) -> None:
    """Run the machine, transient first, and hold every claim against it. ``InternalError`` where one fails."""
    needed: dict[int, set[str]] = {}
    for bits, _ in claims:
        for name, cycle in bits:
            needed.setdefault(cycle, set()).add(name)
    shown = _run(machine, needed, start)
    for bits, constant in claims:
        total = 0
        for name, cycle in bits:
            total ^= shown[cycle][name]
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


def _run(machine: LinearMachine, needed: Mapping[int, set[str]], start: Vector | None) -> dict[int, dict[str, int]]:
    """Return what the needed channels show in the needed cycles, cycle 0 the first after the transient."""
    draw = random.Random(_SEED)
    state = [draw.getrandbits(_LANES) if start is None else _spread(start, k) for k in range(machine.size)]
    rows = [(tuple(matrix.ones(row)), _spread(machine.offset, i)) for i, row in enumerate(machine.transition)]
    channels = {
        row.name: (tuple(matrix.ones(row.row.state)), _spread(row.row.constant, 0))
        for row in machine.observed
        if row.row is not None and not row.cut_from
    }
    cycles = sorted(needed)
    shown = {}
    for before, cycle in pairwise([-machine.transient, *cycles]):
        state = _advanced(machine, rows, state, cycle - before)
        shown[cycle] = {name: _sum(state, *channels[name]) for name in needed[cycle]}
    return shown


def _advanced(
    machine: LinearMachine, rows: Sequence[tuple[tuple[int, ...], int]], state: list[int], cycles: int
) -> list[int]:
    """Return the state of all runs that many cycles later."""
    if cycles <= _STEPS:
        for _ in range(cycles):
            state = [_sum(state, *row) for row in rows]
        return state
    power = matrix.power(augmented_step(machine), cycles)
    return [_sum([*state, _ALL], tuple(matrix.ones(row)), 0) for row in power[:-1]]


def _sum(state: Sequence[int], elements: Iterable[int], constant: int) -> int:
    for element in elements:
        constant ^= state[element]
    return constant


def _spread(vector: Vector, k: int) -> int:
    """Return bit k of a vector in every run."""
    return _ALL if vector >> k & 1 else 0
