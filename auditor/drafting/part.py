"""A part of the netlist cut out around some storage: work on it costs what it holds and not what the chip holds.

Storage outside the part, cells without description and whatever else drives a net across the cut become inputs.
"""

from collections.abc import Container, Iterable, Mapping
from dataclasses import dataclass

import numpy as np

from auditor.cells.library import Cell, CellLibrary, Storage
from auditor.cone.wiring import INPUT, NO_DRIVER, OUTPUT, Wiring, connect
from auditor.netlist.netlist import CONSTANT_1, OPEN, Netlist, Port

LARGEST_PART = 20_000  # instances; a register with more logic around it is not looked into


@dataclass(frozen=True, slots=True)
class Part:
    """Some storage with all gates behind it.

    Instances and nets are numbers of the part; ``instances`` and ``nets`` give those of the whole.

    ``elements``  the storage instances that were asked for
    ``ports``     input ports of the whole        ``cut``  inputs that the cut made
    """

    wiring: Wiring
    elements: tuple[int, ...]
    ports: frozenset[int]
    cut: frozenset[int]
    instances: tuple[int, ...]
    nets: tuple[int, ...]

    @property
    def netlist(self) -> Netlist:
        """The part as a netlist of its own; nets keep their names."""
        return self.wiring.netlist

    def state_nets(self, instance: int) -> list[int]:
        """Return the nets on the outputs of an element that show its state."""
        cell, nets = self.wiring.cell(instance), self.wiring.nets_of(instance)
        variables = {storage.variable for storage in storage_of(self.wiring, instance)}
        return [
            nets[pin.name]
            for pin in (cell.pins.values() if cell else ())
            if pin.function is not None and pin.name in nets and variables.intersection(pin.function.inputs)
        ]


def cut_out(
    wiring: Wiring, library: CellLibrary, ports: Container[int], elements: Iterable[int], known: Mapping[int, int]
) -> Part | None:
    """Return the part around storage instances of the whole; None where it would be too large.

    ``known`` are constant nets of the whole, behind which nothing is taken.
    """
    chosen = sorted(elements)
    inside = _behind(wiring, chosen, known)
    if inside is None:
        return None
    netlist = wiring.netlist
    instances = np.array(inside, dtype=np.int32)
    counts = netlist.first_pin[instances + 1] - netlist.first_pin[instances]
    first = np.concatenate([[0], np.cumsum(counts)]).astype(np.int32)
    pins = np.repeat(netlist.first_pin[instances] - first[:-1], counts) + np.arange(first[-1], dtype=np.int32)
    old = np.unique(np.append(netlist.pin_net[pins], [0, CONSTANT_1]))
    old = old[old != OPEN]
    new = np.where(netlist.pin_net[pins] == OPEN, OPEN, np.searchsorted(old, netlist.pin_net[pins]))
    names = [netlist.net_names[net] for net in old.tolist()]
    driven = set(new[wiring.role[pins] == OUTPUT].tolist())
    inputs = [net for net in range(2, len(old)) if net not in driven]
    real = frozenset(net for net in inputs if int(old[net]) in ports)
    part = Netlist(
        top=netlist.top,
        files=netlist.files,
        cell_types=netlist.cell_types,
        pin_names=netlist.pin_names,
        ports=(Port("inputs", "input", tuple(inputs), tuple(names[net] for net in inputs)),),
        net_names=names,
        net_of_name={name: net for net, name in enumerate(names)},
        net_file=netlist.net_file[old],
        net_line=netlist.net_line[old],
        instance_names=[netlist.instance_names[k] for k in inside],
        instance_type=netlist.instance_type[instances],
        instance_file=netlist.instance_file[instances],
        instance_line=netlist.instance_line[instances],
        first_pin=first,
        pin_name=netlist.pin_name[pins],
        pin_net=new.astype(np.int32),
    )
    local = tuple(np.searchsorted(instances, chosen).tolist())
    return Part(connect(part, library), local, real, frozenset(inputs) - real, tuple(inside), tuple(old.tolist()))


def _behind(wiring: Wiring, chosen: list[int], known: Mapping[int, int]) -> list[int] | None:
    """Return the chosen instances and every gate behind them up to storage and ports; None where too many.

    Latches are walked through on the way of a clock: they belong to a clock gate.
    """
    inside = dict.fromkeys(chosen)
    waiting = [(instance, False) for instance in chosen]
    while waiting:
        if len(inside) > LARGEST_PART:
            return None
        instance, clocks = waiting.pop()
        cell = wiring.cell(instance)
        clocking = {name for storage in cell.storage for name in storage.clock.inputs} if cell else set()
        for name, net in wiring.nets_of(instance).items():
            pin = cell.pins.get(name) if cell else None
            if net in known or pin is None or pin.direction != "input":
                continue
            driver = int(wiring.driver[net])
            if driver <= NO_DRIVER:
                continue
            behind, _ = wiring.pin_of(driver)
            for_clock = clocks or name in clocking
            if behind not in inside and _is_passed(wiring.cell(behind), for_clock):
                inside[behind] = None
                waiting.append((behind, for_clock))
    return sorted(inside)


def _is_passed(cell: Cell | None, clocks: bool) -> bool:
    if cell is None or cell.not_understood:
        return False
    return not cell.storage or (clocks and all(storage.kind == "latch" for storage in cell.storage))


def input_ports(netlist: Netlist) -> dict[int, str]:
    """Return the nets of all ports of the top that are no outputs, with the names of their bits."""
    inputs = [port for port in netlist.ports if port.direction != "output"]
    return {net: bit for port in inputs for net, bit in zip(port.nets, port.bits, strict=True)}


def loads(wiring: Wiring, net: int) -> list[tuple[int, str]]:
    """Return (instance, pin) of every input pin on a net."""
    return [wiring.pin_of(pin) for pin in wiring.pins_on(net, INPUT)]


def storage_of(wiring: Wiring, instance: int) -> tuple[Storage, ...]:
    """Return the stored bits of an instance; none where its cell is not described."""
    cell = wiring.cell(instance)
    return cell.storage if cell else ()
