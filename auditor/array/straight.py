"""The same register without its phase shifter: chains fed straight from the flip-flops, one after another in turn."""

from collections.abc import Iterable
from dataclasses import replace

from auditor.array.scan_array import Chain
from auditor.cells.library import CellLibrary
from auditor.cells.primitives import find_cell
from auditor.cone.cone import Cone
from auditor.machine.machine import AffineRow, LinearMachine, ObservedRow


def straight_elements(machine: LinearMachine) -> list[int]:
    """Return the elements of the registers that the channels tap, in state order."""
    tapped = {tap.element for row in machine.observed if not row.cut_from for tap in row.taps}
    return sorted(k for register in machine.registers if tapped.intersection(register) for k in register)


def straight_machine(machine: LinearMachine, elements: Iterable[int]) -> LinearMachine:
    """Return the machine with one channel for each of the elements."""
    rows = (ObservedRow(machine.storage[k], AffineRow(1 << k, 0, 0), None, (), 0, 0) for k in elements)
    return replace(machine, observed=tuple(rows))


def straight_chains(machine: LinearMachine, elements: list[int], chains: Iterable[Chain]) -> tuple[Chain, ...]:
    """Return the chains, chain k fed by the k-th of the elements; after the last comes the first again."""
    return tuple(
        replace(chain, channel=machine.storage[elements[number % len(elements)]]) for number, chain in enumerate(chains)
    )


def network_area(cone: Cone, library: CellLibrary) -> tuple[float | None, float | None]:
    """Return the area of the gates between registers and channels alone, and that of the registers with their feedback.

    None where the library gives no area for one of the cells. Pipeline registers count for neither.
    """
    looping = {number for register in cone.feedback for number in register}
    data = [wire for number in looping for wire in cone.elements[number].inputs]
    feedback = _gates_behind(cone, data, looping)
    network = _gates_behind(cone, (channel.wire for channel in cone.channels), looping) - feedback
    register = feedback | {cone.elements[number].instance for number in looping}
    return _area(cone, library, network), _area(cone, library, register)


def _gates_behind(cone: Cone, wires: Iterable[int], looping: set[int]) -> set[int]:
    """Return the instances of all gates behind the wires, through pipeline elements, back to the registers."""
    gates = {gate.output: gate for gate in cone.gates}
    elements = {element.wire: number for number, element in enumerate(cone.elements)}
    stored = {element.instance for element in cone.elements}
    waiting, seen, found = list(wires), set(), set()
    while waiting:
        wire = waiting.pop()
        if wire in seen:
            continue
        seen.add(wire)
        if gate := gates.get(wire):
            found.add(gate.instance)
            waiting += gate.inputs
        elif (number := elements.get(wire)) is not None and number not in looping:
            waiting += cone.elements[number].inputs
    return found - stored


def _area(cone: Cone, library: CellLibrary, instances: set[int]) -> float | None:
    areas = [0.0]
    for instance in sorted(instances):
        cell = find_cell(library, *cone.netlist.cell_of(instance))
        if cell is None or cell.area is None:
            return None
        areas.append(cell.area)
    return sum(areas)
