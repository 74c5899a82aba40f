"""The circuit under test as capture sees it, and what the generator cannot do to it: the noun of this subject.

Its gates stand between what the generator loads and what is captured.

A wire is a net number of the netlist; a number from ``len(netlist.net_names)`` on is a stored bit, or the next state
of a scan cell where that is no plain net. Everything holds under the constants of capture.
"""

from collections.abc import Mapping
from dataclasses import dataclass
from math import prod
from typing import Literal, NamedTuple, TypeAlias

from auditor.cone.cone import Gate
from auditor.netlist.netlist import Netlist

Scope: TypeAlias = Literal["every-state", "planned-patterns", "only-with-freedom"]


class LoadedCell(NamedTuple):
    """A scan cell with a known row: it holds y(t - delay) + inverted of its channel, t the cycle after the last shift.

    ``name``     the path of its storage instance, with ``[k]`` where the instance stores several bits
    ``channel``  the number of its channel among the machine's observed rows
    """

    name: str
    channel: int
    delay: int
    inverted: bool


class Sink(NamedTuple):
    """Where a test sees the circuit: a captured next state or a primary output, and the wire that carries it."""

    name: str
    wire: int


class Outside(NamedTuple):
    """A source that is neither scan cell nor input port: ``because`` says in words what it is."""

    name: str
    wire: int
    because: str


@dataclass(frozen=True, slots=True)
class Circuit:
    """The circuit under test.

    ``gates``        in topological order, sources first
    ``cells``        wire of every scan cell, in the order in which they were given
    ``generator``    wire → element, for elements of the generator that the circuit reads directly
    ``free_inputs``  input ports that capture leaves open
    ``outside``      memories, storage outside the chains, cells without description ...: taken as free
    ``names``        of the wires that are no nets
    """

    netlist: Netlist
    gates: tuple[Gate, ...]
    cells: tuple[int, ...]
    generator: Mapping[int, int]
    free_inputs: tuple[int, ...]
    outside: tuple[Outside, ...]
    sinks: tuple[Sink, ...]
    names: Mapping[int, str]

    @property
    def loaded(self) -> tuple[int, ...]:
        """The wires whose values the generator decides: scan cells, then its own elements."""
        return (*self.cells, *self.generator)

    @property
    def free(self) -> tuple[int, ...]:
        """The wires that it does not decide."""
        return (*self.free_inputs, *(source.wire for source in self.outside))

    def wire_name(self, wire: int) -> str:
        """Return the name of a wire."""
        return self.names[wire] if wire in self.names else self.netlist.net_names[wire]


class LoadedBit(NamedTuple):
    """A scan cell, by number, at capture or, ``earlier``, a cycle before."""

    cell: int
    earlier: bool


@dataclass(frozen=True, slots=True)
class CellSet:
    """The scan cells of a cone, which several sinks may share, with their rank.

    ``size``      bits that the cone sees: its scan cells, twice where two cycles are looked at
    ``occurring`` input combinations that occur outside lock-up
    ``relation``  of a cone short of rank: bits whose sum is ``constant`` for every state, so that no combination with
                  another sum ever occurs; empty otherwise
    """

    cells: tuple[int, ...]
    size: int
    rank: int
    occurring: int
    relation: tuple[LoadedBit, ...] = ()
    constant: int = 0

    @property
    def short(self) -> bool:
        """Whether some combination never occurs, whatever the state."""
        return self.rank < self.size


class SinkCone(NamedTuple):
    """The cone of one sink: ``cells`` is an index into the sets; ``others`` are inputs and sources outside in it."""

    name: str
    cells: int
    others: int


@dataclass(frozen=True, slots=True)
class ConeFacts:
    """All cones with a scan cell in them, and their sets of scan cells.

    ``two_cycles``  rows at capture and a cycle before are stacked
    ``dimension``   rank of all loaded bits together
    """

    cones: tuple[SinkCone, ...]
    sets: tuple[CellSet, ...]
    two_cycles: bool
    dimension: int

    def random_share_of_full_rank(self, size: int) -> float:
        """Return the probability that so many random rows of this dimension are independent.

        The product of 1 - 2^(i - dimension) over i < size (Chen 1986).
        """
        return prod(1 - 2.0 ** (i - self.dimension) for i in range(size)) if size <= self.dimension else 0.0


@dataclass(frozen=True, slots=True)
class GivenCones:
    """The cones that the reviewer gives; ``names`` of the scan cells in them, by number."""

    cones: ConeFacts
    names: tuple[str, ...]


class FrozenNet(NamedTuple):
    """A net that the generator does not toggle although free scan cells would.

    ``value``      the value it keeps, None where free sources decide it
    ``proved_by``  decision-diagrams or simulation
    ``follows``    an input of its gate is frozen as well
    ``needs``      an example of (source, value) with which it would have the other value: loaded bits by number, then
                   free ones
    ``relation``   loaded bits among them whose sum never is what that needs; empty where there is no example, or where
                   the example occurs in lock-up states
    """

    net: int
    value: int | None
    scope: Scope
    proved_by: Literal["decision-diagrams", "simulation"]
    follows: bool = False
    needs: tuple[tuple[int, int], ...] = ()
    relation: tuple[int, ...] = ()


@dataclass(frozen=True, slots=True)
class FrozenFacts:
    """``examined`` nets depend on scan cells; ``undecided`` are those among them that the bound leaves open.

    ``patterns``  planned patterns that were simulated from each start; 0 where none are planned, or no start is known
    """

    examined: int
    frozen: tuple[FrozenNet, ...]
    undecided: tuple[int, ...]
    patterns: int


@dataclass(frozen=True, slots=True)
class CaptureFacts:
    """What the generator cannot do to the circuit under test."""

    circuit: Circuit
    cones: ConeFacts
    nets: FrozenFacts

    @property
    def assumed(self) -> tuple[str, ...]:
        """Sentences on what was taken for granted."""
        return ("in capture each scan cell takes its data, and its asynchronous pins are inactive",)
