"""The circuit under test under the generator: ranks of its cones, frozen nets. Main verb of this subject."""

from collections.abc import Callable

from auditor.array.capture import circuit_under_test
from auditor.array.circuit import CaptureFacts, LoadedCell
from auditor.array.cone_ranks import rank_cones
from auditor.array.frozen import find_frozen
from auditor.array.loading import find_loading
from auditor.array.orbits import next_state
from auditor.array.proofs import NODE_LIMIT
from auditor.array.scan_array import ScanArray
from auditor.array.toggling import Planned
from auditor.cells.library import CellLibrary
from auditor.cone.wiring import connect
from auditor.errors import fail
from auditor.machine.machine import LinearMachine
from auditor.netlist.netlist import Netlist
from auditor.notation import SourcePlace
from auditor.plan import Plan

Progress = Callable[[str], None]


def examine_capture(
    plan: Plan, netlist: Netlist, library: CellLibrary, machine: LinearMachine, scan: ScanArray | None, tell: Progress
) -> CaptureFacts | None:
    """Return what the generator cannot do to the circuit under test; None where the plan does not ask.

    Raises ``InputError`` where the plan asks and the scan cells are not known by name.
    """
    if plan.capture is None:
        return None
    if scan is None or not any(chain.cells for chain in scan.chains):
        place = SourcePlace(str(plan.file)) if plan.file else None
        remedy = "give --scan-outputs, or --chains a file that names the cells of each chain"
        raise fail("the circuit under test is asked for, but no scan cell is known by name", remedy, place)
    tell("circuit under test")
    cells = loaded_cells(scan, machine, plan.patterns.shift_cycles if plan.patterns else None)
    generator = {name: k for k, name in enumerate(machine.storage)}
    circuit = circuit_under_test(connect(netlist, library), plan.capture, [cell.name for cell in cells], generator)
    loading = find_loading(machine, cells, list(circuit.generator.values()))
    tell("ranks of cones")
    cones = rank_cones(circuit, loading, two_cycles=plan.patterns is not None and plan.patterns.launch == "shift")
    tell("frozen nets")
    nets = find_frozen(circuit, loading, planned_test(plan, machine), plan.work_limit or NODE_LIMIT)
    return CaptureFacts(circuit, cones, nets)


def loaded_cells(scan: ScanArray, machine: LinearMachine, shift_cycles: int | None) -> list[LoadedCell]:
    """Return the scan cells that the generator fills: their channel has a row, and the shift reaches them."""
    channels = {row.name: k for k, row in enumerate(machine.observed) if row.row is not None and not row.cut_from}
    return [
        LoadedCell(cell.name, channels[chain.channel], cell.delay, cell.inverted)
        for chain in scan.chains
        for cell in chain.cells
        if chain.channel in channels and (shift_cycles is None or cell.delay <= shift_cycles)
    ]


def planned_test(plan: Plan, machine: LinearMachine) -> Planned | None:
    """Return the planned test from each seed, else from reset; None where no patterns or no start are known.

    A start in which the generator is stuck gives one pattern for ever, and is left out.
    """
    if plan.patterns is None or any(machine.input_matrix):
        return None
    known = machine.reset_known == (1 << machine.size) - 1
    starts = list(plan.seeds.values()) or ([machine.reset_state] if known else [])
    running = tuple(start for start in starts if next_state(machine, start) != start)
    patterns = plan.patterns
    return Planned(running, patterns.clocks_per_pattern, patterns.shift_cycles, patterns.count) if running else None
