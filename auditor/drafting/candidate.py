"""What drafting found out about one loop of storage: one of the two nouns of this room."""

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from typing import TypeAlias

from auditor.cells.library import CellLibrary
from auditor.cone.cone import Cone
from auditor.cone.wiring import Wiring
from auditor.errors import Trouble
from auditor.machine.machine import Extraction, LinearMachine
from auditor.netlist.netlist import Netlist
from auditor.phases.table import RegisterFacts


@dataclass(frozen=True, slots=True)
class Attempt:
    """One try to prove a machine: the cone and what the proof gave, or the troubles that kept it from being formed."""

    cone: Cone | None
    extraction: Extraction | None
    troubles: tuple[Trouble, ...] = ()

    @property
    def machine(self) -> LinearMachine | None:
        """The machine, where there is one."""
        return self.extraction.machine if self.extraction else None

    @property
    def because(self) -> str:
        """Why there is no machine."""
        if self.troubles:
            return self.troubles[0].found
        refusals = self.extraction.refusals if self.extraction else ()
        return f"the next state of {refusals[0].what}: {refusals[0].because}" if refusals else ""


# The verbs of other rooms, handed in by the top: netlist, mode and channels to an attempt; a machine to its registers.
Prove: TypeAlias = Callable[[Netlist, Mapping[str, int], Sequence[str]], Attempt]
Describe: TypeAlias = Callable[[LinearMachine], tuple[RegisterFacts, ...]]


@dataclass(frozen=True, slots=True)
class Constant:
    """A guessed constant: the net of the whole netlist, its name, its value, and why."""

    net: int
    name: str
    value: int
    is_port: bool
    reason: str


@dataclass(frozen=True, slots=True)
class Ground:
    """The whole netlist, its input ports (net → name), and the verbs that drafting may use."""

    wiring: Wiring
    library: CellLibrary
    ports: Mapping[int, str]
    prove: Prove
    describe: Describe

    def constant(self, net: int, bit: int, reason: str) -> Constant:
        """Return a constant of a net of the whole, by the name of its port where it has one."""
        name = self.ports.get(net) or self.wiring.netlist.net_names[net]
        return Constant(net, name, bit, net in self.ports, reason)


@dataclass(frozen=True, slots=True)
class Candidate:
    """A loop of storage and what became of it.

    ``elements``   storage instances of the whole, ascending       ``names``  theirs, in natural order
    ``outputs``    a net of the whole for each element that shows its state
    ``constants``  the guesses under which it was proved, or given up
    ``facts``      of the register, None where nothing was proved; ``because`` then says why
    ``free_inputs``  names of nets from outside that add into it
    ``clock``      name of its root and the edge
    """

    elements: tuple[int, ...]
    names: tuple[str, ...]
    outputs: tuple[int, ...]
    constants: tuple[Constant, ...]
    facts: RegisterFacts | None
    free_inputs: tuple[str, ...]
    clock: str
    because: str

    @property
    def size(self) -> int:
        """The number of stored bits that were proved, or of storage instances."""
        return len(self.facts.elements) if self.facts else len(self.elements)

    @property
    def compacts(self) -> bool:
        """Whether so much is added into it from outside that it looks like a response compactor."""
        return len(self.free_inputs) > max(2, self.size // 8)
