"""The second opinion: the proved machine held against the simulated gates, cycle by cycle. Main verb of this room."""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np
import numpy.typing as npt

from auditor.cells.library import CellLibrary
from auditor.cells.words import ALL_ONES, Words
from auditor.cone.cone import Cone
from auditor.errors import InternalError
from auditor.gf2.matrix import ones
from auditor.machine.machine import AffineRow, LinearMachine
from auditor.replay.simulator import Simulator

WORDS = 2  # 128 lanes: reset, all zeros, all ones and 125 random states
CYCLES = 256
SEED = 0x5EED


class Replayed(NamedTuple):
    """How much was compared: lanes, and cycles in each."""

    states: int
    cycles: int


@dataclass(frozen=True, slots=True)
class _Rows:
    """Affine rows as index lists over the vector (state, inputs, 1), for whole words at once."""

    columns: npt.NDArray[np.intp]
    starts: npt.NDArray[np.intp]

    def value(self, vector: Words) -> Words:
        """Return (rows, words) from (state + inputs + 1, words)."""
        return np.asarray(np.bitwise_xor.reduceat(vector[self.columns], self.starts, axis=0))


def _rows(rows: Sequence[AffineRow], states: int, inputs: int) -> _Rows:
    """Every row reads the zero at the end at least, so that no index list is empty."""
    columns: list[int] = []
    starts = []
    for row in rows:
        starts.append(len(columns))
        columns.extend(ones(row.state))
        columns.extend(states + k for k in ones(row.inputs))
        columns.append(states + inputs + (0 if row.constant else 1))
    return _Rows(np.array(columns, dtype=np.intp), np.array(starts, dtype=np.intp))


def replay(cone: Cone, library: CellLibrary, machine: LinearMachine, cycles: int = CYCLES) -> Replayed:
    """Simulate the gates from 128 states and compare every state and channel in every cycle.

    Raises ``InternalError`` at the first disagreement, with the element or channel, the lane and the cycle.
    """
    simulator = Simulator(cone, library, WORDS)
    random = np.random.default_rng(SEED)
    place = {element.name: number for number, element in enumerate(cone.elements)}
    kept = np.array([place[name] for name in machine.storage], dtype=np.intp)
    observed = [row for row in machine.observed if row.row is not None and not row.cut_from]
    wire_of = {channel.name: channel.wire for channel in cone.channels}
    channel_slots = simulator.slot_of(wire_of[row.name] for row in observed)
    input_slots = simulator.slot_of(cone.free_inputs)
    n, k = machine.size, len(machine.free_inputs)
    offsets = [machine.offset >> i & 1 for i in range(n)]
    next_rows = _rows(list(map(AffineRow, machine.transition, machine.input_matrix, offsets)), n, k)
    channel_rows = _rows([row.row for row in observed if row.row], n, k)

    before_edge = 0 if cone.clock_edge == "rising" else 1
    _start(simulator, machine, cone, kept, random, before_edge)
    held = bool(machine.half_cycle)
    for cycle in range(cycles):
        if not held or not cycle:
            _noise(simulator, random)
        simulator.settle()
        state = simulator.values[kept]
        vector = np.vstack([state, simulator.values[input_slots], _constants()])
        if observed:
            _compare(simulator.values[channel_slots], channel_rows.value(vector), [r.name for r in observed], cycle)
        simulator.toggle(1 - before_edge)
        simulator.toggle(before_edge)
        _compare(simulator.values[kept], next_rows.value(vector), machine.storage, cycle + 1)
    return Replayed(64 * WORDS, cycles)


def _constants() -> Words:
    return np.array([[ALL_ONES] * WORDS, [0] * WORDS], dtype=np.uint64)


def _start(
    simulator: Simulator,
    machine: LinearMachine,
    cone: Cone,
    kept: npt.NDArray[np.intp],
    random: np.random.Generator,
    level: int,
) -> None:
    """Set the root before its edge and the state: lane 0 from reset, lane 1 all zeros, lane 2 all ones, then random."""
    elements = len(cone.elements)
    state = random.integers(0, 2**64, (elements, WORDS), dtype=np.uint64)
    state[:, 0] = state[:, 0] & ~np.uint64(0b110) | np.uint64(0b100)
    for bit, number in enumerate(kept.tolist()):
        if machine.reset_known >> bit & 1:
            state[number, 0] = state[number, 0] & ~np.uint64(1) | np.uint64(machine.reset_state >> bit & 1)
    simulator.toggle(level)
    simulator.values[:elements] = state


def _noise(simulator: Simulator, random: np.random.Generator) -> None:
    """Give fresh values to everything that nothing in the cone computes."""
    shape = (len(simulator.noise), WORDS)
    simulator.values[simulator.noise] = random.integers(0, 2**64, shape, dtype=np.uint64)


def _compare(simulated: Words, proved: Words, names: Sequence[str], cycle: int) -> None:
    wrong = np.argwhere(simulated != proved)
    if len(wrong):
        row, word = wrong[0].tolist()
        difference = int(simulated[row, word] ^ proved[row, word])
        lane = 64 * word + (difference & -difference).bit_length() - 1
        raise InternalError(
            f"the replayed gates and the proved machine disagree on {names[row]} in cycle {cycle}, lane {lane}"
        )
