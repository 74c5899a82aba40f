"""What the generator does to the scan array behind its channels: the main verb of this room."""

from collections.abc import Callable
from dataclasses import dataclass, field, replace

from auditor.array.distinct import DistinctCells, distinct_cells
from auditor.array.forms import Position
from auditor.array.loads import count_loads, find_loads
from auditor.array.meetings import comes_again_within
from auditor.array.orbits import reset_start, start_machine
from auditor.array.relations import find_relations, look_ups
from auditor.array.rows import ChainRows, chain_rows
from auditor.array.scan_array import (
    ArrayFacts,
    Chain,
    Loads,
    Place,
    Relation,
    Relations,
    ScanArray,
    Seeds,
    WithoutShifter,
)
from auditor.array.seeds import check_seeds, find_seeds
from auditor.array.straight import network_area, straight_chains, straight_elements, straight_machine
from auditor.array.twins import find_twins
from auditor.array.witness import confirm, confirm_seeds, load_claims, relation_claims, twin_claims
from auditor.cells.library import CellLibrary
from auditor.cone.cone import Cone
from auditor.machine.machine import LinearMachine
from auditor.notation import SourcePlace
from auditor.phases.table import PhaseTable
from auditor.plan import Plan

Progress = Callable[[str], None]
Solve = Callable[[LinearMachine, int], PhaseTable]

_UNASKED_LOOK_UPS = 1 << 26  # three-cell relations are searched without being asked for where that takes no second
_ORBIT_WINDOW = 1 << 20


@dataclass(slots=True)
class _Search:
    """One scan array under work; ``solve`` gives the phases of a machine, with all pairs closer than a window."""

    plan: Plan
    machine: LinearMachine
    table: PhaseTable
    solve: Solve
    tell: Progress
    open: list[str] = field(default_factory=list)

    @property
    def clocks(self) -> int:
        """Generator clocks from load to load, 0 where no patterns are stated."""
        return self.plan.patterns.clocks_per_pattern if self.plan.patterns else 0

    @property
    def window(self) -> int:
        """Patterns across which twins are looked for."""
        return self.plan.patterns.twin_window if self.plan.patterns else 0


def find_array(
    plan: Plan,
    cone: Cone,
    library: CellLibrary,
    machine: LinearMachine,
    table: PhaseTable,
    scan: ScanArray | None,
    solve: Solve,
    tell: Progress,
) -> ArrayFacts:
    """Return everything on the chains, where they are known, and on the seeds of the plan.

    ``InputError`` for seeds that do not fit; ``InternalError`` where a run of the machine contradicts an example.
    """
    search = _Search(plan, machine, table, solve, tell)
    seeds, reset_period = _orbits(search)
    if scan is None:
        return ArrayFacts(None, None, None, None, None, None, seeds, ())
    rows = chain_rows(machine, scan.chains)
    tell("twin scan cells")
    twins = find_twins(rows, search.window, search.clocks)
    if twins is None:
        search.open.append("Which scan cells are twins is not decided: the chains or the window are too long.")
    else:
        confirm(machine, twin_claims(scan.chains, twins, search.clocks))
    loads = _loads(search, rows, reset_period)
    three, four = _relations(search, rows, _position(search, rows))
    for found in (three, four):
        if found:
            confirm(machine, relation_claims(scan.chains, found.examples))
    bare = _without_shifter(search, cone, library, scan, bool(three))
    return ArrayFacts(scan, twins, loads, three, four, bare, seeds, tuple(search.open))


def _orbits(search: _Search) -> tuple[Seeds | None, int | None]:
    """Return the seeds, and the period of the orbit from reset where the planned test starts there.

    It starts elsewhere where the plan has seeds, or where reset leaves the generator stuck.
    """
    plan, machine = search.plan, search.machine
    place = SourcePlace(str(plan.file)) if plan.file else None
    if plan.seeds:
        check_seeds(machine, plan.seeds, place)
        search.tell("seeds")
        clocks = plan.patterns.count * search.clocks if plan.patterns else 0
        orbits = search.solve(start_machine(machine, list(plan.seeds.values())), max(_ORBIT_WINDOW, clocks))
        seeds = find_seeds(machine, orbits, 0, plan.seeds, plan.patterns)
        confirm_seeds(machine, seeds, seeds.pairs[:10])
        if seeds.at_least is not None and seeds.at_least < clocks:
            search.open.append(f"Whether {seeds.undecided} pairs of seeds meet within the planned test is not decided.")
        return replace(seeds, place=place), None
    reset = reset_start(machine)
    if reset is None or plan.patterns is None or any(machine.input_matrix):
        return None, None
    orbits = search.solve(start_machine(machine, [reset]), _ORBIT_WINDOW)
    group = orbits.phases[0].group
    period = None if group is None else orbits.classes[group].modulus
    return None, None if period == 1 else period


def _loads(search: _Search, rows: ChainRows, reset_period: int | None) -> Loads | None:
    """Return how many of the planned loads differ, with a repeat among them confirmed; None where none are planned."""
    patterns, machine = search.plan.patterns, search.machine
    if patterns is None:
        return None
    loads = find_loads(machine, search.table, rows, search.clocks, reset_period)
    if loads.distinct is None:
        loads = replace(loads, beyond=_outlasts(search, rows))
        if not loads.beyond:
            search.open.append("Whether all planned patterns differ is not decided: the period is not known.")
    elif loads.distinct < patterns.count:
        start = machine.reset_state if loads.start == "reset" else None
        confirm(machine, load_claims((chain.channel for chain in rows.chains), loads, search.clocks), start)
    elif not loads.exact and loads.start == "reset":
        search.tell("planned loads")
        loads = replace(loads, counted=count_loads(machine, rows, patterns, machine.reset_state))
    return loads


def _outlasts(search: _Search, rows: ChainRows) -> bool:
    """Whether the stream of the first chain, from most states, and the run from reset are new for the whole test."""
    clocks = search.plan.patterns.count * search.clocks if search.plan.patterns else 0
    reset = reset_start(search.machine)
    runs = [rows] if rows.chains else []
    if reset is not None and not search.plan.seeds:
        runs.append(chain_rows(start_machine(search.machine, [reset]), [Chain("0", 1)]))
    return bool(runs) and all(comes_again_within(run, clocks + 1) is False for run in runs)


def _position(search: _Search, rows: ChainRows) -> Callable[[Place], Position]:
    """Return the function that gives the position of a scan cell on the cycle of its class."""
    channel = {row.name: k for k, row in enumerate(search.machine.observed) if not row.cut_from}
    numbers = [channel[chain.channel] for chain in rows.chains]

    def position(place: Place) -> Position:
        phase = search.table.phases[numbers[place.chain]]
        turn = search.table.classes[phase.group].turn if phase.group is not None else None
        if phase.lead is None or phase.group is None or not turn:
            return None
        return phase.group, (phase.lead - rows.chains[place.chain].delay_of(place.cell)) % turn, turn

    return position


def _relations(
    search: _Search, rows: ChainRows, position: Callable[[Place], Position]
) -> tuple[Relations | None, Relations | None]:
    """Return the relations of three and of four scan cells, as far as they are asked for or cheap."""
    asked = search.plan.relations or 0
    cells = distinct_cells(rows)
    found: list[Relations | None] = []
    for size in (3, 4):
        wanted = size <= asked
        if cells is None or not (wanted or (size == 3 and look_ups(cells) <= _UNASKED_LOOK_UPS)):
            relations = None
        else:
            relations = find_relations(cells, size, rows.dimension, position, search.tell)
        if wanted and relations is None and rows.chains:
            search.open.append(f"Which {size} scan cells sum to a constant is not decided: there are too many.")
        found.append(_numbered(rows, relations))
    return found[0], found[1]


def _numbered(rows: ChainRows, relations: Relations | None) -> Relations | None:
    """Return the relations with the chains of their examples numbered as in the whole array."""
    if relations is None:
        return None

    def whole(relation: Relation) -> Relation:
        return replace(relation, cells=tuple(Place(rows.numbers[c], j) for c, j in relation.cells))

    return replace(relations, examples=tuple(map(whole, relations.examples)))


def _without_shifter(
    search: _Search, cone: Cone, library: CellLibrary, scan: ScanArray, relations: bool
) -> WithoutShifter | None:
    """Return the figures of the same register and chains without the network in between."""
    elements = straight_elements(search.machine)
    if not elements:
        return None
    search.tell("the register without its phase shifter")
    machine = straight_machine(search.machine, elements)
    rows = chain_rows(machine, straight_chains(search.machine, elements, scan.chains))
    cells: DistinctCells | None = distinct_cells(rows) if relations else None
    area, register_area = network_area(cone, library)
    return WithoutShifter(
        elements=min(len(elements), len(scan.chains)),
        twins=find_twins(rows),
        three=find_relations(cells, 3, rows.dimension, lambda _: None, search.tell) if cells else None,
        xors=search.machine.network_xors,
        area=area,
        register_area=register_area,
    )
