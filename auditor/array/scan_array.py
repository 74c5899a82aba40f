"""The scan chains behind the channels, and what the generator does to their scan cells: the noun of this room.

Chains and scan cells are numbered from 0; texts for people count scan cells from 1 at the scan input. A scan cell
holds y(t - delay) + inverted, t the cycle after the last shift.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal, NamedTuple, TypeAlias

from auditor.notation import SourcePlace, Vector


class ScanCell(NamedTuple):
    """One scan cell of a chain that is known cell by cell."""

    name: str
    delay: int
    inverted: bool


@dataclass(frozen=True, slots=True)
class Chain:
    """One scan chain, fed by the channel of that name; ``cells`` is empty where only the length is known.

    Without cells, scan cell j (from 0) has the delay j + 1 and is not inverted.
    """

    channel: str
    length: int
    cells: tuple[ScanCell, ...] = ()

    @property
    def delays(self) -> Sequence[int]:
        """The delay of every scan cell, in order from the scan input."""
        return [cell.delay for cell in self.cells] if self.cells else range(1, self.length + 1)

    @property
    def is_plain(self) -> bool:
        """Whether the scan cells have the delays 1, 2, ... in order."""
        return not self.cells or all(cell.delay == place for place, cell in enumerate(self.cells, 1))

    @property
    def greatest_delay(self) -> int:
        """The delay of the scan cell that is filled first."""
        return max((cell.delay for cell in self.cells), default=self.length)

    def delay_of(self, cell: int) -> int:
        """Return the delay of one scan cell."""
        return self.cells[cell].delay if self.cells else cell + 1

    def inverted(self, cell: int) -> bool:
        """Whether a scan cell holds the complement of what the channel gave."""
        return bool(self.cells) and self.cells[cell].inverted

    def name_of(self, cell: int) -> str:
        """Return the name of a scan cell, or its number from 1 on where it has none."""
        return self.cells[cell].name if self.cells else str(cell + 1)


@dataclass(frozen=True, slots=True)
class ScanArray:
    """All chains, and where they are known from."""

    chains: tuple[Chain, ...]
    known_from: Literal["length", "file", "netlist"]

    @property
    def longest(self) -> int:
        """The scan cells of the longest chain, or the greatest delay where that is more."""
        return max((max(chain.length, chain.greatest_delay) for chain in self.chains), default=0)

    @property
    def size(self) -> int:
        """All scan cells."""
        return sum(chain.length for chain in self.chains)


class Place(NamedTuple):
    """A scan cell: its chain, and its place there."""

    chain: int
    cell: int


@dataclass(frozen=True, slots=True)
class TwinChains:
    """Scan cells of two chains (or of one, that repeats itself) that hold the same bit or its complement.

    ``distance``  the first chain's channel leads the second's by so many cycles
    ``later``     the cell of the second chain is looked at so many patterns after the first's; 0: in one pattern
    ``pairs``     scan cells that agree so; ``example`` is the first, ``complement`` says how its two cells agree
    """

    chains: tuple[int, int]
    distance: int
    later: int
    pairs: int
    example: tuple[Place, Place]
    complement: bool


@dataclass(frozen=True, slots=True)
class Twins:
    """Pairs of twin scan cells.

    ``pairs``, ``chain_pairs``   between two chains in one pattern
    ``repeats``, ``repeating``   inside one chain in one pattern, and the chains in which there are any
    ``across``, ``across_chains``  between two patterns at most ``window`` apart, and the pairs of chains concerned
    ``nearest``     the least distance between two chains, None: none within the chains
    ``twinned``     chains with twins in another chain, in one pattern
    ``examples``    of each kind the chains with the most pairs
    """

    pairs: int
    chain_pairs: int
    repeats: int
    repeating: int
    window: int
    across: int
    across_chains: int
    nearest: int | None
    twinned: tuple[int, ...]
    examples: tuple[TwinChains, ...]

    @property
    def between(self) -> TwinChains | None:
        """The two chains with the most twins in one pattern."""
        return next((one for one in self.examples if not one.later and one.chains[0] != one.chains[1]), None)

    @property
    def inside(self) -> TwinChains | None:
        """The chain that repeats itself most."""
        return next((one for one in self.examples if not one.later and one.chains[0] == one.chains[1]), None)

    @property
    def later(self) -> TwinChains | None:
        """The two chains with the most twins across patterns."""
        return next((one for one in self.examples if one.later), None)


@dataclass(frozen=True, slots=True)
class Relation:
    """Scan cells whose sum is ``constant`` for every state; ``places`` counts it with all its shifts."""

    cells: tuple[Place, ...]
    constant: int
    places: int


@dataclass(frozen=True, slots=True)
class Relations:
    """All sets of ``size`` scan cells whose sum is constant for every state; twins are merged first.

    ``distinct``   scan cells left after that
    ``relations``  each counted once with all its shifts; None where there are too many to tell apart
    ``places``     sets of distinct scan cells; None where they were not counted
    ``ones``       of the places, those whose sum is 1
    ``cell_sets``  sets of scan cells, twins told apart; None where not counted
    ``expected``   places that as many random rows of this degree would have
    """

    size: int
    distinct: int
    relations: int | None
    places: int | None
    ones: int
    cell_sets: int | None
    expected: float
    examples: tuple[Relation, ...]

    @property
    def skewness(self) -> float | None:
        """Skewness of the number of ones in the distinct scan cells over all states, from relations of three.

        With X the sum of (-1)^bit over M cells, E X = 0, E X^2 = M and E X^3 = 6 (places of sum 0 less those of sum
        1); ones = (M - X) / 2 (Lindholm 1968). Lock-up states are among the states.
        """
        if self.size != 3 or self.places is None or not self.distinct:
            return None
        return float(-6 * (self.places - 2 * self.ones) / self.distinct**1.5)


Start: TypeAlias = Literal["reset", "any state outside lock-up", "the states of the longest cycles"]


@dataclass(frozen=True, slots=True)
class Loads:
    """How many different patterns the chains can be given, one load after another.

    ``distinct``  None while the period is undecided
    ``exact``     the loads tell all states apart; otherwise there are at most so many
    ``counted``   different loads among the planned ones from reset, taken one by one; None where that was not needed
                  or not possible
    ``beyond``    the period is longer than the planned test, even if it is undecided
    ``cycles``    (length, how many) of all cycles of a machine that is not one primitive register, shortest first;
                  empty where they are not known
    """

    period: int | None
    distinct: int | None
    exact: bool
    start: Start
    counted: int | None = None
    beyond: bool = False
    cycles: tuple[tuple[int, int], ...] = ()

    @property
    def different(self) -> int | None:
        """The least that is known of how many patterns differ at most."""
        return min((count for count in (self.distinct, self.counted) if count is not None), default=None)


@dataclass(frozen=True, slots=True)
class WithoutShifter:
    """The same register feeding the same chains straight from its flip-flops, chain by chain in turn.

    ``elements``       register elements that take part
    ``xors``           two-input XORs of the network that this does without, shared ones counted once
    ``area``           of the gates in it, ``register_area`` of the register with its feedback; None if not known
    """

    elements: int
    twins: Twins | None
    three: Relations | None
    xors: int
    area: float | None
    register_area: float | None


@dataclass(frozen=True, slots=True)
class SeedRun:
    """A seed of the plan: ``stuck`` are the registers, by number, that never leave where it puts them.

    ``period``    of the orbit that it leads to, None while undecided
    ``distinct``  patterns of the planned test from this seed that differ, None while undecided or not asked
    """

    name: str
    state: Vector
    stuck: tuple[int, ...]
    period: int | None
    distinct: int | None


@dataclass(frozen=True, slots=True)
class SeedPair:
    """Two seeds on one cycle: the first comes ``cycles`` cycles after the second, the shorter way round.

    ``overlap``   cycles of the planned test from the second seed that repeat what the first one gives
    ``repeated``  patterns that both of them load
    """

    seeds: tuple[int, int]
    cycles: int
    overlap: int
    repeated: int


@dataclass(frozen=True, slots=True)
class Seeds:
    """All seeds; ``apart``: pairs on different cycles; ``undecided``: pairs of which neither is known.

    ``at_least``  no pair of the undecided ones is closer; None where none is undecided
    """

    runs: tuple[SeedRun, ...]
    pairs: tuple[SeedPair, ...]
    apart: int
    undecided: int
    at_least: int | None
    place: SourcePlace | None = None


@dataclass(frozen=True, slots=True)
class ArrayFacts:
    """What was found on the scan array; None for what was not asked or could not be carried out.

    ``open``  sentences on what was asked and exceeds the work that is done
    """

    scan: ScanArray | None
    twins: Twins | None
    loads: Loads | None
    three: Relations | None
    four: Relations | None
    bare: WithoutShifter | None
    seeds: Seeds | None
    open: tuple[str, ...]
