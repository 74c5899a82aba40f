"""The walk back from the channels: through gates to storage, and on from its data, until nothing new is met."""

from collections.abc import Iterable
from dataclasses import dataclass, field

from auditor.cells.library import Cell, Function, Storage
from auditor.cone.buses import driver_of
from auditor.cone.fold import OPEN_PIN, Folded, fold
from auditor.cone.trouble import ConeTroubles
from auditor.cone.wiring import NO_DRIVER, SEVERAL_DRIVERS, Wiring


@dataclass(frozen=True, slots=True)
class Stored:
    """A stored bit met on the walk: bit ``index`` of the cell ``cell`` at ``instance``, read as ``wire``."""

    instance: int
    index: int
    cell: Cell
    storage: Storage
    wire: int


@dataclass(slots=True)
class Walk:
    """What the walk met, in the order met; ``settled`` are nets that turned out constant by themselves."""

    wiring: Wiring
    known: dict[int, int]
    ports: frozenset[int]
    troubles: ConeTroubles
    gates: dict[int, tuple[Folded, int]] = field(default_factory=dict)  # output net → folded function, instance
    stored: dict[tuple[int, int], Stored] = field(default_factory=dict)
    data: dict[int, Folded] = field(default_factory=dict)  # wire of a stored bit → its next state
    free: dict[int, None] = field(default_factory=dict)
    settled: dict[int, int] = field(default_factory=dict)
    resets: dict[int, int | None] = field(default_factory=dict)  # wire of a stored bit → what its reset gives
    _by_wire: list[Stored] = field(default_factory=list)

    def from_channels(self, nets: Iterable[int]) -> None:
        """Meet everything that decides the nets."""
        waiting = [net for net in nets if net not in self.known]
        seen = set(waiting)
        while waiting:
            for wire in self._behind(waiting.pop()):
                if wire not in seen and wire not in self.known:
                    seen.add(wire)
                    waiting.append(wire)

    def met(self) -> list[Stored]:
        """Return the stored bits inside the cone; a cell may hold others, which nothing reads."""
        return [stored for stored in self._by_wire if stored.wire in self.data]

    def _behind(self, wire: int) -> tuple[int, ...]:
        """Return the wires that decide ``wire``, and note what stands between."""
        if wire >= len(self.wiring.netlist.net_names):
            return self._behind_storage(self._by_wire[wire - len(self.wiring.netlist.net_names)])
        driver = driver_of(self.wiring, wire, self.known)
        if wire in self.ports and driver == NO_DRIVER:
            self.free[wire] = None
            return ()
        if driver == SEVERAL_DRIVERS or wire in self.ports:
            self.troubles.several_drivers(wire)
        elif driver == NO_DRIVER:
            return self._behind_unknown(self.troubles.driverless(wire))
        else:
            return self._behind_pin(wire, *self.wiring.pin_of(driver))
        return ()

    def _behind_pin(self, net: int, instance: int, pin_name: str) -> tuple[int, ...]:
        cell = self.wiring.cell(instance)
        pin = cell.pins.get(pin_name) if cell else None
        if cell is None or pin is None or pin.function is None or cell.not_understood:
            self.troubles.unknown_cell(instance)
            return self._behind_unknown([instance])
        wire_of = self.wires_of(instance, cell)
        if pin.three_state is not None and fold(pin.three_state, wire_of, self.known).constant != 0:
            self.troubles.three_state(instance, pin_name)
            return ()
        folded = self._checked(pin.function, wire_of, instance)
        if folded.constant is not None:
            self.settled[net] = folded.constant
        else:
            self.gates[net] = (folded, instance)
        return folded.connected

    def _behind_unknown(self, instances: list[int]) -> tuple[int, ...]:
        """Walk on through every net of unknown cells, so that all of them come up in one run."""
        return tuple(net for instance in instances for net in self.wiring.nets_of(instance).values())

    def _behind_storage(self, stored: Stored) -> tuple[int, ...]:
        wire_of = self.wires_of(stored.instance, stored.cell)
        folded = self._checked(stored.storage.data, wire_of, stored.instance)
        self.data[stored.wire] = folded
        return folded.connected

    def _checked(self, function: Function, wire_of: dict[str, int], instance: int) -> Folded:
        """Fold, and complain of an input that matters but is connected to nothing."""
        folded = fold(function, wire_of, self.known)
        if OPEN_PIN in folded.wires:
            for name in function.inputs:
                if name not in wire_of:
                    self.troubles.open_pin(instance, name)
        return folded

    def wires_of(self, instance: int, cell: Cell) -> dict[str, int]:
        """Return the wire of every name that the cell's functions may use: its pins and its state variables."""
        wire_of = self.wiring.nets_of(instance)
        for index, storage in enumerate(cell.storage):
            wire_of[storage.variable] = self._wire_of_stored(instance, index, cell, storage)
        return wire_of

    def _wire_of_stored(self, instance: int, index: int, cell: Cell, storage: Storage) -> int:
        key = (instance, index)
        if key not in self.stored:
            wire = len(self.wiring.netlist.net_names) + len(self.stored)
            self.stored[key] = Stored(instance, index, cell, storage, wire)
            self._by_wire.append(self.stored[key])
        return self.stored[key].wire
