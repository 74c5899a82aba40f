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
    cone: Cone, library: CellLibrary, storage: Sequence[str], state: Vector, channels: Sequence[str], cycles: int
) -> list[list[int | None]]:
    """Return for each channel what it shows in cycle 0, 1, ... ``cycles`` - 1 from a state, free inputs at 0.

    ``storage`` names the elements of the state, bit k the k-th. All other storage and all that the mode cuts off
    carry noise, differently in each of 64 simulations: None stands where these do not agree.
    """
    simulator = Simulator(cone, library, 1)
    random = np.random.default_rng(SEED)
    given = {name: state >> k & 1 for k, name in enumerate(storage)}
    noise = random.integers(0, 2**64, (len(cone.elements), 1), dtype=np.uint64)
    before_edge = 0 if cone.clock_edge == "rising" else 1
    simulator.values[simulator.noise] = random.integers(0, 2**64, (len(simulator.noise), 1), dtype=np.uint64)
    simulator.values[simulator.slot_of(cone.free_inputs)] = 0
    simulator.toggle(before_edge)
    for k, element in enumerate(cone.elements):
        bit = given.get(element.name)
        simulator.values[k] = noise[k] if bit is None else (ALL_ONES if bit else 0)
    wires = {channel.name: channel.wire for channel in cone.channels}
    slots = simulator.slot_of(wires[name] for name in channels)
    shown: list[list[int | None]] = [[] for _ in channels]
    for _ in range(cycles):
        simulator.settle()
        for values, word in zip(shown, simulator.values[slots, 0].tolist(), strict=True):
            values.append({0: 0, int(ALL_ONES): 1}.get(word))
        simulator.toggle(1 - before_edge)
        simulator.toggle(before_edge)
    return shown
