"""The gates of a cone simulated bit-parallel, from the cells' own functions and with the root clock toggling.

It shares no step with the proof: functions are taken unfolded from the library, nets that the mode cuts off carry
noise, flip-flops and latches look at their own clock nets. A net is a row of 64-bit words; bit b of word w is lane
64 w + b, an independent simulation.
"""

from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass, field

import numpy as np
import numpy.typing as npt

from auditor.cells.library import Cell, CellLibrary, Function, Storage
from auditor.cells.primitives import find_cell
from auditor.cells.words import ALL_ONES, Batch, Words, in_batches
from auditor.cone.cone import ClockLatch, Cone, Gate, StorageElement
from auditor.errors import InternalError
from auditor.netlist.netlist import OPEN


@dataclass(slots=True)
class Simulator:
    """Holds a value for every net and stored bit of a cone; ``words`` words of 64 lanes each.

    ``bits`` are the elements of the cone, then the latches of its clock gates: their values are the first slots.
    """

    cone: Cone
    library: CellLibrary
    words: int
    bits: tuple[StorageElement | ClockLatch, ...] = field(init=False)
    slots: dict[int, int] = field(default_factory=dict)
    values: Words = field(init=False)
    noise: npt.NDArray[np.intp] = field(init=False)
    _clock_gates: list[Batch] = field(init=False)
    _gates: list[Batch] = field(init=False)
    _clocks: list[Batch] = field(init=False)
    _data: list[Batch] = field(init=False)
    _forces: list[tuple[int, list[Batch]]] = field(init=False)
    _is_latch: Words = field(init=False)
    _clock_is_data: bool = field(init=False)
    _stored: dict[int, dict[str, int]] = field(default_factory=dict)  # instance → state variable → wire

    def __post_init__(self) -> None:
        self.bits = (*self.cone.elements, *self.cone.clock_latches)
        for bit in self.bits:
            self._slot(bit.wire)
            self._stored.setdefault(bit.instance, {})[self._storage(bit).variable] = bit.wire
        self._clock_gates = self._batches(self.cone.clock_gates)
        self._gates = self._batches(self.cone.gates)
        self._clocks = self._storage_batches(lambda storage: storage.clock)
        self._data = self._storage_batches(lambda storage: storage.data)
        self._forces = [
            (1, self._storage_batches(lambda storage: storage.preset)),
            (0, self._storage_batches(lambda storage: storage.clear)),
        ]
        latches = [self._storage(bit).kind == "latch" for bit in self.bits]
        self._is_latch = np.where(latches, ALL_ONES, np.uint64(0))[:, None].astype(np.uint64)
        self._clock_is_data = self.cone.clock in self.cone.free_inputs
        self._fill()

    def _fill(self) -> None:
        """Give constants their value once; what nothing computes is noise, the free inputs among it."""
        cone = self.cone
        for net in (*cone.free_inputs, cone.clock, *(channel.wire for channel in cone.channels)):
            self._slot(net)
        computed = {gate.output for gate in (*cone.gates, *cone.clock_gates)}
        computed.update(bit.wire for bit in self.bits)
        self.values = np.zeros((len(self.slots), self.words), dtype=np.uint64)
        noise = []
        for net, slot in self.slots.items():
            if net in cone.constants:
                self.values[slot] = ALL_ONES if cone.constants[net] else 0
            elif net not in computed and net != cone.clock:
                noise.append(slot)
        self.noise = np.array(noise, dtype=np.intp)

    def slot_of(self, wires: Iterable[int]) -> npt.NDArray[np.intp]:
        """Return the rows of ``values`` that belong to wires."""
        return np.array([self.slots[wire] for wire in wires], dtype=np.intp)

    def settle(self) -> None:
        """Let the gates, the asynchronous pins and the open latches come to rest."""
        for _ in range(len(self.bits) + 2):
            if self.cone.clock_latches:
                self._evaluate(self._clock_gates)
            self._evaluate(self._gates)
            before = self._state().copy()
            is_open = self._clock_values() & self._is_latch
            self._set_state(_select(is_open, self._next_state(), before))
            self._force()
            if np.array_equal(before, self._state()):
                return
        raise InternalError("the replay does not come to rest: latches open in a loop")

    def toggle(self, level: int) -> None:
        """Set the root clock and let every flip-flop whose clock rises take what its data was before."""
        before, taken = self._clock_values(), self._next_state()
        self.values[self.slots[self.cone.clock]] = ALL_ONES if level else 0
        self._evaluate(self._clock_gates)
        rises = np.bitwise_not(before | self._is_latch) & self._clock_values()
        if rises.any() or self._is_latch.any() or self._clock_is_data:
            self._set_state(_select(rises, taken, self._state()))
            self.settle()

    def _state(self) -> Words:
        return self.values[: len(self.bits)]

    def _set_state(self, state: Words) -> None:
        self.values[: len(self.bits)] = state

    def _clock_values(self) -> Words:
        return self._gather(self._clocks)

    def _next_state(self) -> Words:
        return self._gather(self._data)

    def _gather(self, batches: Sequence[Batch]) -> Words:
        result = np.empty((len(self.bits), self.words), dtype=np.uint64)
        for batch in batches:
            result[batch.outputs] = batch.value(self.values)
        return result

    def _force(self) -> None:
        for bit, batches in self._forces:
            for batch in batches:
                active = batch.value(self.values)
                held = self.values[batch.outputs]
                self.values[batch.outputs] = held | active if bit else held & ~active

    def _evaluate(self, batches: Sequence[Batch]) -> None:
        for batch in batches:
            self.values[batch.outputs] = batch.value(self.values)

    def _slot(self, wire: int) -> int:
        return self.slots.setdefault(wire, len(self.slots))

    def _cell(self, instance: int) -> Cell:
        cell = find_cell(self.library, *self.cone.netlist.cell_of(instance))
        if cell is None:
            raise InternalError(f"{self.cone.netlist.instance_names[instance]} is in the cone without a description")
        return cell

    def _storage(self, stored: StorageElement | ClockLatch) -> Storage:
        return self._cell(stored.instance).storage[stored.bit]

    def _batches(self, gates: Sequence[Gate]) -> list[Batch]:
        """Group gates by level, then by function; the level is that of the folded cone, sources first."""
        level: dict[int, int] = {}
        places = []
        for gate in gates:
            level[gate.output] = 1 + max((level.get(wire, 0) for wire in gate.inputs), default=0)
            function = self._function_of(gate)
            inputs = self._inputs(function, gate.instance)
            places.append((level[gate.output], function, inputs, self._slot(gate.output)))
        return in_batches(places)

    def _storage_batches(self, choose: Callable[[Storage], Function | None]) -> list[Batch]:
        """Group one function of every stored bit, such as its data; the outputs are places in ``bits``."""
        places = []
        for number, bit in enumerate(self.bits):
            function = choose(self._storage(bit))
            if function is not None:
                places.append((0, function, self._inputs(function, bit.instance), number))
        return in_batches(places)

    def _function_of(self, gate: Gate) -> Function:
        cell = self._cell(gate.instance)
        for name, net in self.cone.netlist.pins_of(gate.instance):
            function = cell.pins[name].function if name in cell.pins else None
            if net == gate.output and function is not None:
                return function
        raise InternalError(f"no output of {self.cone.netlist.instance_names[gate.instance]} drives its net")

    def _inputs(self, function: Function, instance: int) -> tuple[int, ...]:
        """Return the slots of a function's inputs; an open pin gets a slot of its own, which carries noise."""
        nets = {name: net for name, net in self.cone.netlist.pins_of(instance) if net != OPEN}
        stored = self._stored.get(instance, {})
        open_pin = -2 - instance  # no wire has such a number
        return tuple(self._slot(stored.get(name, nets.get(name, open_pin))) for name in function.inputs)


def _select(lanes: Words, then: Words, otherwise: Words) -> Words:
    """Return ``then`` in the lanes that are 1, ``otherwise`` in the rest."""
    return np.asarray(np.bitwise_xor(otherwise, np.bitwise_and(np.bitwise_xor(then, otherwise), lanes)))
