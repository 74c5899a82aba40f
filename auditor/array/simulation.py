"""The circuit under test simulated bit-parallel, in whole or in the part that decides some of its nets."""

from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from auditor.array.circuit import Circuit
from auditor.cells.words import Batch, Words, in_batches
from auditor.cone.cone import Gate

Slots = npt.NDArray[np.intp]


@dataclass(frozen=True, slots=True)
class Simulation:
    """The gates in batches; values are (slots, words): the loaded bits first, then the free ones, then the gates.

    ``gates``  the wires of the gates that are simulated, in the order of their slots
    """

    batches: tuple[Batch, ...]
    loaded: int
    free: int
    gates: tuple[int, ...]

    def run(self, loaded: Words, free: Words) -> Words:
        """Return (gates, words) from the values of all sources."""
        sources = self.loaded + self.free
        values = np.zeros((sources + len(self.gates), loaded.shape[1]), dtype=np.uint64)
        values[: self.loaded] = loaded
        values[self.loaded : sources] = free
        for batch in self.batches:
            values[batch.outputs] = batch.value(values)
        return values[sources:]


def simulation(circuit: Circuit, wanted: Iterable[int] | None = None) -> Simulation:
    """Return the simulation of all gates, or of those behind the wanted wires."""
    gates = circuit.gates if wanted is None else _behind(circuit, wanted)
    sources = (*circuit.loaded, *circuit.free)
    slots = {wire: slot for slot, wire in enumerate((*sources, *(gate.output for gate in gates)))}
    level: dict[int, int] = {}
    places = []
    for gate in gates:
        level[gate.output] = 1 + max((level.get(wire, 0) for wire in gate.inputs), default=0)
        inputs = tuple(slots[wire] for wire in gate.inputs)
        places.append((level[gate.output], gate.function, inputs, slots[gate.output]))
    outputs = tuple(gate.output for gate in gates)
    return Simulation(tuple(in_batches(places)), len(circuit.loaded), len(circuit.free), outputs)


def _behind(circuit: Circuit, wanted: Iterable[int]) -> list[Gate]:
    """Return the gates that decide the wires, in topological order."""
    needed = set(wanted)
    kept = []
    for gate in reversed(circuit.gates):
        if gate.output in needed:
            kept.append(gate)
            needed.update(gate.inputs)
    return kept[::-1]
