"""Who drives and who loads each net, once the cells' pin directions are known; in columns, for the whole netlist."""

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from auditor.cells.library import Cell, CellLibrary, Function
from auditor.cells.primitives import find_cell
from auditor.netlist.netlist import OPEN, Column, Netlist

NO_DRIVER = -1
SEVERAL_DRIVERS = -2

# Roles of a pin, as codes in ``Wiring.role``.
INPUT, OUTPUT, POWER, UNLISTED, UNKNOWN_CELL = range(5)
_ROLE = {"input": INPUT, "output": OUTPUT, "internal": OUTPUT, "power": POWER, "inout": UNLISTED}


@dataclass(frozen=True, slots=True)
class Wiring:
    """The netlist with directions. Shapes: P pins, N nets, T cell types.

    ``cells``      (T,) the cell of each type, None where no description has it
    ``has_gate``   (T,) whether an output of the cell is a function of input pins
    ``role``       (P,) INPUT, OUTPUT, POWER, UNLISTED (the cell is known, the pin is not) or UNKNOWN_CELL
    ``instance``   (P,) the instance of each pin
    ``driver``     (N,) the output pin that drives the net, NO_DRIVER or SEVERAL_DRIVERS
    ``by_net``     pins sorted by net; those of net k are by_net[net_first[k]:net_first[k + 1]]
    """

    netlist: Netlist
    cells: tuple[Cell | None, ...]
    has_gate: npt.NDArray[np.bool_]
    role: Column
    instance: Column
    driver: Column
    by_net: Column
    net_first: Column

    def cell(self, instance: int) -> Cell | None:
        """Return the cell that an instance instantiates, or None if no description has it."""
        return self.cells[int(self.netlist.instance_type[instance])]

    def pins_on(self, net: int, role: int) -> Iterator[int]:
        """Yield the pins of one role on a net, in the order of the netlist."""
        pins = self.by_net[self.net_first[net] : self.net_first[net + 1]]
        yield from pins[self.role[pins] == role].tolist()

    def gate_inputs_on(self, net: int) -> list[int]:
        """Return the instances that read a net and have an output which input pins decide: no plain flip-flop."""
        pins = self.by_net[self.net_first[net] : self.net_first[net + 1]]
        instances = self.instance[pins[self.role[pins] == INPUT]]
        gates = instances[self.has_gate[self.netlist.instance_type[instances]]]
        return list(dict.fromkeys(gates.tolist()))

    def pin_of(self, pin: int) -> tuple[int, str]:
        """Return the instance and the name of a pin."""
        return int(self.instance[pin]), self.netlist.pin_names[int(self.netlist.pin_name[pin])]

    def nets_of(self, instance: int) -> dict[str, int]:
        """Return pin name → net of an instance, open pins left out."""
        return {name: net for name, net in self.netlist.pins_of(instance) if net != OPEN}


def find_cells(netlist: Netlist, library: CellLibrary) -> tuple[Cell | None, ...]:
    """Return the cell of every cell type of the netlist, None where there is no description."""
    return tuple(find_cell(library, *kind) for kind in netlist.cell_types)


def gate_functions(cell: Cell) -> list[tuple[str, Function]]:
    """Return the outputs that input pins decide, with their functions; three-state outputs are left out."""
    return [
        (pin.name, pin.function)
        for pin in cell.pins.values()
        if pin.function is not None
        and pin.three_state is None
        and any(name in cell.pins for name in pin.function.inputs)
    ]


def connect(netlist: Netlist, library: CellLibrary) -> Wiring:
    """Find the role of every pin and the driver of every net."""
    cells = find_cells(netlist, library)
    instances, nets = len(netlist.instance_type), len(netlist.net_names)
    instance = np.repeat(np.arange(instances, dtype=np.int32), np.diff(netlist.first_pin))
    role = _pin_roles(netlist, cells, instance)
    by_net = np.argsort(netlist.pin_net, kind="stable").astype(np.int32)
    net_first = np.searchsorted(netlist.pin_net[by_net], np.arange(nets + 1)).astype(np.int32)
    has_gate = np.array([cell is not None and bool(gate_functions(cell)) for cell in cells], dtype=np.bool_)
    return Wiring(netlist, cells, has_gate, role, instance, _drivers(netlist, role), by_net, net_first)


def _pin_roles(netlist: Netlist, cells: tuple[Cell | None, ...], instance: Column) -> Column:
    """Look every distinct (cell type, pin name) up once and spread the answer over the pins."""
    width = max(1, len(netlist.pin_names))
    kind = netlist.instance_type[instance].astype(np.int64) * width + netlist.pin_name
    distinct = np.unique(kind)
    roles = np.empty(len(distinct), dtype=np.int32)
    for k, code in enumerate(distinct.tolist()):
        cell = cells[code // width]
        pin = cell.pins.get(netlist.pin_names[code % width]) if cell else None
        roles[k] = UNKNOWN_CELL if cell is None else UNLISTED if pin is None else _ROLE[pin.direction]
    return roles[np.searchsorted(distinct, kind)]


def _drivers(netlist: Netlist, role: Column) -> Column:
    nets = len(netlist.net_names)
    outputs = np.flatnonzero((role == OUTPUT) & (netlist.pin_net != OPEN))
    driven = netlist.pin_net[outputs]
    driver = np.full(nets, NO_DRIVER, dtype=np.int32)
    driver[driven] = outputs
    driver[np.bincount(driven, minlength=nets) > 1] = SEVERAL_DRIVERS
    return driver
