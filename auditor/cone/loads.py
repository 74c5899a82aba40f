"""The fan-out of every stored bit, from the whole netlist as it stands: no constant prunes a load."""

from collections import deque
from collections.abc import Sequence
from typing import NamedTuple

from auditor.cells.library import Cell
from auditor.cone.cone import Load, StorageElement
from auditor.cone.wiring import INPUT, UNKNOWN_CELL, UNLISTED, Wiring


class _OutputLoad(NamedTuple):
    pin: str
    direct: int
    leaf: int
    capacitance_ff: float | None
    limit_ff: float | None


def find_loads(wiring: Wiring, elements: Sequence[StorageElement]) -> tuple[Load, ...]:
    """Return the load of every element, output pin by output pin."""
    return tuple(_load(wiring, number, element) for number, element in enumerate(elements))


def _load(wiring: Wiring, number: int, element: StorageElement) -> Load:
    cell = wiring.cell(element.instance)
    carried = {net for net, _ in element.outputs}
    outputs = [
        _output_load(wiring, cell, pin, net)
        for pin, net in sorted(wiring.nets_of(element.instance).items())
        if cell and net in carried and pin in cell.pins and cell.pins[pin].direction == "output"
    ]
    return Load(
        number,
        tuple(output.pin for output in outputs),
        tuple(output.direct for output in outputs),
        tuple(output.leaf for output in outputs),
        tuple(output.capacitance_ff for output in outputs),
        tuple(output.limit_ff for output in outputs),
    )


def _output_load(wiring: Wiring, cell: Cell, pin: str, net: int) -> _OutputLoad:
    direct = _loads_on(wiring, net)
    capacitances = [_capacitance(wiring, load) for load in direct]
    known = [value for value in capacitances if value is not None]
    total = sum(known) if len(known) == len(capacitances) else None
    return _OutputLoad(pin, len(direct), _leaves(wiring, net), total, cell.pins[pin].limit_ff)


def _leaves(wiring: Wiring, net: int) -> int:
    """Count the input pins reached from a net through buffers and inverters, which count for what they drive."""
    leaves, seen, waiting = 0, {net}, deque([net])
    while waiting:
        for pin in _loads_on(wiring, waiting.popleft()):
            instance, _ = wiring.pin_of(pin)
            behind = _repeated(wiring, instance)
            if not behind:
                leaves += 1
            fresh = [other for other in behind if other not in seen]
            seen.update(fresh)
            waiting.extend(fresh)
    return leaves


def _loads_on(wiring: Wiring, net: int) -> list[int]:
    """Return the pins that load a net; a pin of a cell without description counts, a driver and a supply do not."""
    return [
        int(pin)
        for pin in wiring.by_net[wiring.net_first[net] : wiring.net_first[net + 1]]
        if wiring.role[pin] in (INPUT, UNKNOWN_CELL, UNLISTED)
    ]


def _repeated(wiring: Wiring, instance: int) -> list[int]:
    """Return the output nets of a buffer or inverter (one input, no storage), an empty list for any other cell."""
    cell = wiring.cell(instance)
    if cell is None or cell.storage:
        return []
    pins = cell.pins.values()
    if sum(pin.direction == "input" for pin in pins) != 1:
        return []
    nets = wiring.nets_of(instance)
    return [nets[pin.name] for pin in pins if pin.function is not None and pin.function.inputs and pin.name in nets]


def _capacitance(wiring: Wiring, pin: int) -> float | None:
    instance, name = wiring.pin_of(pin)
    cell = wiring.cell(instance)
    described = cell.pins.get(name) if cell else None
    return described.capacitance_ff if described else None
