"""What the gates show from one given state, cycle by cycle."""

from collections.abc import Sequence

import numpy as np

from auditor.cells.library import CellLibrary
from auditor.cells.words import ALL_ONES
from auditor.cone.cone import Cone
from auditor.notation import Vector
from auditor.replay.simulator import Simulator

SEED = 0x0B5


def show(
    cone: Cone, library: CellLibrary, storage: Sequence[str], state: Vector, channel: str, cycles: int
) -> list[int | None]:
    """Return what a channel shows in cycle 0, 1, ... ``cycles`` from a state, free inputs at 0.

    ``storage`` names the elements of the state, bit k the k-th. All other storage and all that the mode cuts off
    carry noise, differently in each of 64 simulations: None stands where these do not agree.
    """
    simulator = Simulator(cone, library, 1)
    random = np.random.default_rng(SEED)
    given = {name: state >> k & 1 for k, name in enumerate(storage)}
    bits = [given.get(element.name) for element in cone.elements]
    noise = random.integers(0, 2**64, (len(bits), 1), dtype=np.uint64)
    before_edge = 0 if cone.clock_edge == "rising" else 1
    simulator.values[simulator.noise] = random.integers(0, 2**64, (len(simulator.noise), 1), dtype=np.uint64)
    simulator.values[simulator.slot_of(cone.free_inputs)] = 0
    simulator.toggle(before_edge)
    for k, bit in enumerate(bits):
        simulator.values[k] = noise[k] if bit is None else (ALL_ONES if bit else 0)
    slot = next(slot for c, slot in zip(cone.channels, simulator.slot_of(c.wire for c in cone.channels), strict=True)
                if c.name == channel)  # fmt: skip
    shown: list[int | None] = []
    for _ in range(cycles + 1):
        simulator.settle()
        word = int(simulator.values[slot, 0])
        shown.append({0: 0, int(ALL_ONES): 1}.get(word))
        simulator.toggle(1 - before_edge)
        simulator.toggle(before_edge)
    return shown
