"""From a netlist, the constants of capture and the scan cells to the circuit under test.

The walk goes back from every captured next state and every output port, and stops at storage. Other than in the cone
of the generator nothing that it meets is a trouble: what it cannot see through is a source outside, which is listed.
"""

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field

from auditor.array.circuit import Circuit, Outside, Sink
from auditor.cells.library import Cell, Function
from auditor.cone.cone import Gate
from auditor.cone.constants import TIES, resolve_mode, spread
from auditor.cone.fold import OPEN_PIN, Folded, fold
from auditor.cone.wiring import NO_DRIVER, SEVERAL_DRIVERS, UNKNOWN_CELL, Wiring
from auditor.errors import TroubleList
from auditor.notation import natural_order

_IDENTITY = Function(("0",), ("$0",))
_NEW, _OPEN, _DONE = range(3)


def circuit_under_test(
    wiring: Wiring, capture: Mapping[str, int], cells: Sequence[str], generator: Mapping[str, int]
) -> Circuit:
    """Return the circuit that the scan cells, by the names of their storage, see in capture.

    ``generator`` gives the elements of the generator by name. Raises ``InputError`` for names of capture that do not
    exist, and for scan cells that are no storage of the netlist.
    """
    troubles = TroubleList()
    constants = resolve_mode(wiring.netlist, capture, troubles, "capture")
    stored = _find_storage(wiring, [*cells, *generator])
    for name in cells:
        if name not in stored:
            troubles.add(f"scan cell {name} is no storage of {wiring.netlist.top}", "give the path of its instance")
    troubles.raise_any()
    known = {**TIES, **constants}
    spread(wiring, known, list(known))
    walk = _Walk(wiring, known)
    sinks = walk.sinks([stored[name] for name in cells])
    walk.back_from(sink.wire for sink in sinks)
    elements = {stored[name]: k for name, k in generator.items() if name in stored}
    return _assemble(walk, sinks, [stored[name] for name in cells], elements)


def _find_storage(wiring: Wiring, names: Iterable[str]) -> dict[str, tuple[int, int]]:
    """Return (instance, bit) of the storage that each name is the path of; names of nothing are left out."""
    wanted: dict[str, list[tuple[str, int]]] = {}
    for name in names:
        wanted.setdefault(name, []).append((name, 0))
        stem, bracket, index = name.rpartition("[")
        if bracket and index[:-1].isdecimal():
            wanted.setdefault(stem, []).append((name, int(index[:-1])))
    found = {}
    for instance, path in enumerate(wiring.netlist.instance_names):
        for name, bit in wanted.get(path, ()):
            cell = wiring.cell(instance)
            if cell and bit < len(cell.storage) and (len(cell.storage) > 1) == (name != path):
                found[name] = (instance, bit)
    return found


@dataclass(slots=True)
class _Walk:
    """The walk under the constants ``known``; nets that turn out constant by themselves are added to them."""

    wiring: Wiring
    known: dict[int, int]
    ports: frozenset[int] = field(init=False)
    gates: dict[int, tuple[Folded, int]] = field(default_factory=dict)  # in topological order once walked
    stored: dict[tuple[int, int], int] = field(default_factory=dict)
    free: dict[int, None] = field(default_factory=dict)
    outside: dict[int, str] = field(default_factory=dict)  # wire → what it is
    names: dict[int, str] = field(default_factory=dict)
    next_states: dict[int, tuple[Folded, int]] = field(default_factory=dict)

    def __post_init__(self) -> None:
        ports = self.wiring.netlist.ports
        self.ports = frozenset(net for port in ports if port.direction != "output" for net in port.nets)

    def sinks(self, cells: Iterable[tuple[int, int]]) -> list[Sink]:
        """Return what is captured: the next state of each scan cell, then every output port, constants left out."""
        netlist, found = self.wiring.netlist, []
        for instance, bit in cells:
            self.wire_of_stored(instance, bit)
        for instance, bit in cells:
            cell = self.wiring.cell(instance)
            data = cell.storage[bit].data if cell else _IDENTITY
            folded = fold(data, self._wires_of(instance, cell), self.known)
            if folded.wires and OPEN_PIN not in folded.wires:
                found.append(self._sink(instance, bit, folded))
        for port in netlist.ports:
            if port.direction == "output":
                found += [Sink(name, net) for name, net in zip(port.bits, port.nets, strict=True)]
        return [sink for sink in found if sink.wire not in self.known]

    def _sink(self, instance: int, bit: int, folded: Folded) -> Sink:
        """Return a captured next state: the net itself where it is one, else a wire of its own."""
        wire = folded.wires[0]
        if folded.function == _IDENTITY:
            return Sink(self._name(wire), wire)
        own = self._new_wire(f"next state of {self.names[self.stored[instance, bit]]}")
        self.next_states[own] = folded, instance
        return Sink(self.names[own], own)

    def back_from(self, wires: Iterable[int]) -> None:
        """Meet everything that decides the wires, depth first; a wire met inside itself is cut and becomes a source."""
        state: dict[int, int] = {}
        waiting: dict[int, tuple[Folded, int]] = {}
        stack = [(wire, False) for wire in reversed(list(wires))]
        while stack:
            wire, all_behind_met = stack.pop()
            if all_behind_met:
                state[wire] = _DONE
                self._enter(wire, *waiting.pop(wire))
            elif state.get(wire) == _OPEN:
                self.outside[wire] = "a net in a loop without storage"
            elif wire not in state:
                gate = self._behind(wire)
                state[wire] = _OPEN if gate else _DONE
                if gate:
                    waiting[wire] = gate
                    stack.append((wire, True))
                    stack.extend((other, False) for other in reversed(gate[0].wires) if state.get(other) != _DONE)
        for wire in self.outside:
            self.gates.pop(wire, None)

    def _enter(self, wire: int, folded: Folded, instance: int) -> None:
        """Note a gate when all behind it is known: an input that turned out constant is folded in."""
        if any(other in self.known for other in folded.wires):
            folded = fold(folded.function, dict(zip(folded.function.inputs, folded.wires, strict=True)), self.known)
        if folded.constant is None:
            self.gates[wire] = folded, instance
        else:
            self.known[wire] = folded.constant

    def _behind(self, wire: int) -> tuple[Folded, int] | None:
        """Return the gate behind a wire, None where it is a source or constant."""
        if wire in self.next_states:
            return self.next_states[wire]
        if wire >= len(self.wiring.netlist.net_names):
            return None
        driver = int(self.wiring.driver[wire])
        if driver == NO_DRIVER and wire in self.ports:
            self.free[wire] = None
        elif driver == SEVERAL_DRIVERS or wire in self.ports:
            self.outside[wire] = "a net with several drivers"
        elif driver == NO_DRIVER:
            self.outside[wire] = self._without_driver(wire)
        else:
            return self._gate(wire, *self.wiring.pin_of(driver))
        return None

    def _without_driver(self, net: int) -> str:
        """Say what a net is that nothing known drives: a cell without description may well drive it."""
        for pin in self.wiring.pins_on(net, UNKNOWN_CELL):
            return f"a net at {self.wiring.netlist.cell_of(self.wiring.pin_of(pin)[0]).name}, which no file describes"
        return "a net without driver"

    def _gate(self, net: int, instance: int, pin_name: str) -> tuple[Folded, int] | None:
        cell = self.wiring.cell(instance)
        pin = cell.pins.get(pin_name) if cell else None
        if cell is None or pin is None or pin.function is None or cell.not_understood:
            self.outside[net] = f"an output of {self.wiring.netlist.cell_of(instance).name}, of unknown function"
            return None
        wires = self._wires_of(instance, cell)
        if pin.three_state is not None and fold(pin.three_state, wires, self.known).constant != 0:
            self.outside[net] = "a three-state net"
            return None
        folded = fold(pin.function, wires, self.known)
        if OPEN_PIN in folded.wires:
            self.outside[net] = "the output of a gate with an open input"
        elif folded.constant is not None:
            self.known[net] = folded.constant
        else:
            return folded, instance
        return None

    def _wires_of(self, instance: int, cell: Cell | None) -> dict[str, int]:
        wires = self.wiring.nets_of(instance)
        for bit, storage in enumerate(cell.storage if cell else ()):
            wires[storage.variable] = self.wire_of_stored(instance, bit)
        return wires

    def wire_of_stored(self, instance: int, bit: int) -> int:
        """Return the wire of a stored bit."""
        if (instance, bit) not in self.stored:
            cell = self.wiring.cell(instance)
            index = f"[{bit}]" if cell and len(cell.storage) > 1 else ""
            self.stored[instance, bit] = self._new_wire(self.wiring.netlist.instance_names[instance] + index)
        return self.stored[instance, bit]

    def _new_wire(self, name: str) -> int:
        wire = len(self.wiring.netlist.net_names) + len(self.names)
        self.names[wire] = name
        return wire

    def _name(self, wire: int) -> str:
        return self.names[wire] if wire in self.names else self.wiring.netlist.net_names[wire]


def _assemble(
    walk: _Walk, sinks: list[Sink], cells: list[tuple[int, int]], generator: Mapping[tuple[int, int], int]
) -> Circuit:
    """Keep what decides the sinks, and tell its sources apart: scan cells, the generator, input ports, the rest."""
    sinks = [sink for sink in dict.fromkeys(sinks) if sink.wire not in walk.known]
    gates, read = _needed(walk, sinks)
    scanned = {walk.stored[key] for key in cells}
    elements = {walk.stored[key]: k for key, k in generator.items() if walk.stored.get(key) in read}
    outside = [Outside(walk._name(wire), wire, because) for wire, because in walk.outside.items() if wire in read]
    outside += [
        Outside(walk.names[wire], wire, "storage outside the chains")
        for wire in walk.stored.values()
        if wire in read and wire not in scanned and wire not in elements
    ]
    netlist = walk.wiring.netlist
    return Circuit(
        netlist=netlist,
        gates=gates,
        cells=tuple(walk.stored[key] for key in cells),
        generator={wire: k for wire, k in elements.items() if wire not in scanned},
        free_inputs=tuple(sorted(walk.free.keys() & read, key=lambda net: natural_order(netlist.net_names[net]))),
        outside=tuple(sorted(outside, key=lambda source: natural_order(source.name))),
        sinks=tuple(sinks),
        names=dict(walk.names),
    )


def _needed(walk: _Walk, sinks: Iterable[Sink]) -> tuple[tuple[Gate, ...], set[int]]:
    """Return the gates that decide the sinks, sources first, and all wires that they or the sinks read."""
    read = {sink.wire for sink in sinks}
    gates = []
    for wire, (folded, instance) in reversed(walk.gates.items()):
        if wire in read:
            read.update(folded.wires)
            gates.append(Gate(wire, folded.function, folded.wires, instance))
    return tuple(reversed(gates)), read
