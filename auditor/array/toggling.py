"""Which nets of the circuit under test the generator moves, seen in bit-parallel simulation.

A net is moved if in some state it differs from what it is in a reference state while the free sources stay as they
are. In one block of lanes they have one setting, and one more word holds the reference.
"""

from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import NamedTuple

import numpy as np
import numpy.typing as npt

from auditor.array.circuit import Circuit
from auditor.array.loading import Loading, States, sequence
from auditor.array.simulation import Simulation, simulation
from auditor.cells.words import ALL_ONES, Words
from auditor.notation import Vector

LANES = 1024  # of one block: a power of two, and of whole words
SETTINGS = 8  # of the free sources: the least number with which planned patterns are simulated
RANDOM_BLOCKS = 16
MOST_BLOCKS = 1 << 10  # of planned patterns: a million of them
SEED = 0xF702E

Random = np.random.Generator


class Planned(NamedTuple):
    """The planned test: the states it is started from, clocks a pattern, those of the shift, patterns each time."""

    starts: tuple[Vector, ...]
    clocks: int
    shift_cycles: int
    patterns: int


@dataclass(slots=True)
class Watch:
    """Nets that have not moved yet; gates that decide none of them are no longer simulated."""

    circuit: Circuit
    waiting: list[int]
    blocks: int = 0
    simulation: Simulation = field(init=False)
    places: npt.NDArray[np.intp] = field(init=False)  # of the waiting nets among the simulated gates

    def __post_init__(self) -> None:
        self._narrow()

    def show(self, loaded: Words, reference: Words, free: Words, lanes: Words) -> None:
        """Simulate a block and let go of the nets that move in its ``lanes`` (words,), a mask.

        ``loaded`` (bits, words) and ``reference`` (bits, 1) are the loaded bits, ``free`` (free sources, 1).
        """
        if not self.waiting:
            return
        values = self.simulation.run(np.hstack([loaded, reference]), np.repeat(free, loaded.shape[1] + 1, axis=1))
        kept = values[self.places]
        moved = ((kept[:, :-1] ^ kept[:, -1:]) & lanes).any(axis=1)
        self.waiting = [self.waiting[k] for k in np.flatnonzero(~moved).tolist()]
        self.places = self.places[~moved]
        self.blocks += 1
        # Each look for the gates that are still needed costs as much as some blocks.
        if self.blocks & (self.blocks - 1) == 0:
            self._narrow()

    def _narrow(self) -> None:
        self.simulation = simulation(self.circuit, self.waiting)
        slot = {net: k for k, net in enumerate(self.simulation.gates)}
        self.places = np.array([slot[net] for net in self.waiting], dtype=np.intp)


def unmoved_by_patterns(circuit: Circuit, loading: Loading, planned: Planned, nets: Sequence[int]) -> list[int]:
    """Return the nets that do not move from what they are in the first pattern, whatever was tried at the free sources.

    At most ``MOST_BLOCKS`` blocks are simulated for one setting; see ``simulated``.
    """
    watch, random = Watch(circuit, list(nets)), np.random.default_rng(SEED)
    patterns = simulated(planned)
    blocks = -(-patterns // LANES) * len(planned.starts)
    reference = _in_all_lanes(first_load(loading, planned).values(loading.rows))
    for turn in range(-(-SETTINGS // blocks) if circuit.free else 1):
        for start in planned.starts:
            states = sequence(loading, start, planned.shift_cycles - loading.reach, planned.clocks, LANES)
            for first in range(0, patterns, LANES):
                free = _setting(circuit, random, all_zero=not turn and not first)
                watch.show(next(states).values(loading.rows), reference, free, _first_lanes(patterns - first))
    return watch.waiting


def simulated(planned: Planned) -> int:
    """Return how many of the planned patterns are simulated from each start."""
    return min(planned.patterns, MOST_BLOCKS * LANES // len(planned.starts))


def first_load(loading: Loading, planned: Planned) -> States:
    """Return the base state of the first pattern, in one lane."""
    return next(sequence(loading, planned.starts[0], planned.shift_cycles - loading.reach, planned.clocks, 1))


def _in_all_lanes(values: Words) -> Words:
    """Return the bits of lane 0 in all lanes of one word."""
    return np.where(values[:, :1] & np.uint64(1), ALL_ONES, np.uint64(0)).astype(np.uint64)


def unmoved_by_states(circuit: Circuit, loading: Loading, reference: Vector, nets: Sequence[int]) -> list[int]:
    """Return the nets that no random state outside lock-up moves from what they are in the reference state.

    The reference is a vector over z; see ``loading``.
    """
    watch, random = Watch(circuit, list(nets)), np.random.default_rng(SEED)
    start = _in_all_lanes(States([reference >> k & 1 for k in range(loading.width)], 1).values(loading.steady))
    for _ in range(RANDOM_BLOCKS):
        bits = random.integers(0, 2, (loading.width, LANES), dtype=np.uint8)
        columns = [int.from_bytes(np.packbits(row, bitorder="little").tobytes(), "little") for row in bits]
        states = States([(1 << LANES) - 1, *columns[1:]], LANES)
        watch.show(states.values(loading.steady), start, _setting(circuit, random), _unlocked(loading, states))
    return watch.waiting


def _setting(circuit: Circuit, random: Random, all_zero: bool = False) -> Words:
    """Return one value for each free source, in all lanes of a word."""
    chosen = random.integers(0, 2, (len(circuit.free), 1)) * (not all_zero)
    return np.where(chosen, ALL_ONES, np.uint64(0)).astype(np.uint64)


def _first_lanes(count: int) -> Words:
    """Return a mask of the first lanes of a block."""
    mask = (1 << min(count, LANES)) - 1
    return np.frombuffer(mask.to_bytes(LANES // 8, "little"), dtype="<u8").astype(np.uint64)


def _unlocked(loading: Loading, states: States) -> Words:
    """Return a mask of the lanes in which no register is locked up."""
    mask = np.full(LANES // 64, ALL_ONES, dtype=np.uint64)
    for forms in loading.lock_ups:
        mask &= np.bitwise_or.reduce(states.values(forms), axis=0)
    return mask
