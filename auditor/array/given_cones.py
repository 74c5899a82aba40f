"""The cones that the reviewer gives in a CSV file, one line for each scan cell of a cone, and their ranks.

net,cell
u_alu.carry,u_core.r1_ff       a scan cell by its name, where the chains are known cell by cell
u_alu.carry,so[0]/17           cell 17 of the chain of so[0], counted from 1 at the scan input
"""

from dataclasses import dataclass, field
from pathlib import Path

from auditor.array.chain_file import whole_number
from auditor.array.circuit import GivenCones, LoadedCell
from auditor.array.cone_ranks import rank_sets
from auditor.array.csv_file import csv_lines
from auditor.array.loading import find_loading
from auditor.array.scan_array import Chain, Place, ScanArray
from auditor.errors import TroubleList, fail, near_misses
from auditor.machine.machine import LinearMachine
from auditor.notation import SourcePlace
from auditor.plan import Plan

_HEADER = ["net", "cell"]
_REMEDY = "write net,cell, then a line for each scan cell of a cone"
_MOST_SUGGESTIONS = 10  # troubles that look for names like theirs: on a large array each takes a second


def rank_given_cones(plan: Plan, machine: LinearMachine, scan: ScanArray | None) -> GivenCones | None:
    """Return the ranks of the cones that the plan gives, None where it gives none.

    Scan cells that the generator does not fill (the shift ends before them, their channel was refused) count as free.
    Raises ``InputError`` for a file that is wrong, or where the chains are not known.
    """
    if plan.cone_file is None:
        return None
    if scan is None:
        remedy = "tell the chains: --chain-length, --chains or --scan-outputs"
        raise fail("cones are given, but the chains are not known", remedy, SourcePlace(str(plan.cone_file)))
    cones = read_cone_file(plan.cone_file, scan)
    channels = {row.name: k for k, row in enumerate(machine.observed) if row.row is not None and not row.cut_from}
    shift = plan.patterns.shift_cycles if plan.patterns else None

    def filled(channel: str, delay: int) -> bool:
        return channel in channels and (shift is None or delay <= shift)

    numbers: dict[Place, int] = {}
    cells: list[LoadedCell] = []
    for place in dict.fromkeys(place for members in cones.values() for place in members):
        chain = scan.chains[place.chain]
        delay, inverted = chain.delay_of(place.cell), chain.inverted(place.cell)
        if filled(chain.channel, delay):
            numbers[place] = len(cells)
            cells.append(LoadedCell(_name(chain, place.cell), channels[chain.channel], delay, inverted))
    # More cells only for the dimension, which is that of the whole array.
    others = {(chain.channel, delay) for chain in scan.chains for delay in _telling(chain, machine.size + 1)}
    spare = [LoadedCell("", channels[name], delay, False) for name, delay in sorted(others) if filled(name, delay)]
    given = (
        (net, sum(1 << numbers[place] for place in members if place in numbers), len(set(members) - numbers.keys()))
        for net, members in cones.items()
    )
    two_cycles = plan.patterns is not None and plan.patterns.launch == "shift"
    facts = rank_sets(given, find_loading(machine, [*cells, *spare], ()), two_cycles)
    return GivenCones(facts, tuple(cell.name for cell in cells))


def _telling(chain: Chain, width: int) -> list[int]:
    """Return delays whose rows span those of all cells: so many in a row do, as rows obey a recurrence that long."""
    return list(chain.delays[:width] if chain.is_plain else chain.delays)


def _name(chain: Chain, cell: int) -> str:
    return chain.name_of(cell) if chain.cells else f"{chain.channel}/{cell + 1}"


def read_cone_file(path: Path, scan: ScanArray) -> dict[str, list[Place]]:
    """Return net → scan cells, both in the order of the file. Raises ``InputError`` with all that is wrong in it."""
    place = SourcePlace(str(path), 1)
    lines = csv_lines(path, "cones", "--cones", _REMEDY)
    first = next(lines, None)
    if first is None:
        raise fail("the file of the cones is empty", _REMEDY, place)
    if first[1] != _HEADER:
        raise fail(f"the cones have the header {','.join(first[1])}", _REMEDY, SourcePlace(str(path), first[0]))
    reader = _Reader(str(path), scan)
    for number, words in lines:
        reader.take(number, words)
    if not reader.cones and not reader.troubles.troubles:
        raise fail("the file names no cone", "add a line for each scan cell of a cone", place)
    reader.troubles.raise_any()
    return {net: list(members) for net, members in reader.cones.items()}


@dataclass(slots=True)
class _Reader:
    """Collects cones and what is wrong with their lines."""

    file: str
    scan: ScanArray
    cones: dict[str, dict[Place, None]] = field(default_factory=dict)
    troubles: TroubleList = field(default_factory=TroubleList)
    named: dict[str, Place] = field(init=False)
    chains: dict[str, list[int]] = field(init=False)

    def __post_init__(self) -> None:
        self.named, self.chains = {}, {}
        for number, chain in enumerate(self.scan.chains):
            self.chains.setdefault(chain.channel, []).append(number)
            self.named |= {cell.name: Place(number, k) for k, cell in enumerate(chain.cells)}

    def take(self, line: int, words: list[str]) -> None:
        """Take one line: a net and a scan cell of its cone."""
        if len(words) != 2 or not all(words):
            self._wrong(line, "the line is not a net and a scan cell", "write net,cell")
            return
        net, name = words
        place = self._place(line, name)
        if place is None:
            return
        members = self.cones.setdefault(net, {})
        if place in members:
            self._wrong(line, f"scan cell {name} stands twice in the cone of {net}", "remove one of the lines")
        members[place] = None

    def _place(self, line: int, name: str) -> Place | None:
        """Return the scan cell of a name, or of a place in a chain; what is wrong is noted."""
        if name in self.named:
            return self.named[name]
        channel, slash, word = name.rpartition("/")
        chains = self.chains.get(channel, []) if slash else []
        if not chains:
            close = near_misses(name, self.named) if len(self.troubles.troubles) < _MOST_SUGGESTIONS else ""
            remedy = close or f"name a cell, or its place in a chain as in {self.scan.chains[0].channel}/1"
            self._wrong(line, f"{name} is no scan cell", remedy)
        elif len(chains) > 1:
            self._wrong(line, f"{channel} feeds {len(chains)} chains", "give the scan cell by its name")
        else:
            length, number = self.scan.chains[chains[0]].length, whole_number(word)
            if number is not None and 1 <= number <= length:
                return Place(chains[0], number - 1)
            self._wrong(line, f"{name} is no scan cell", f"give a place from 1 to {length} after {channel}/")
        return None

    def _wrong(self, line: int, found: str, remedy: str) -> None:
        self.troubles.add(found, remedy, SourcePlace(self.file, line))
