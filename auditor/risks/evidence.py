"""The facts that the rules compare, and the small views of them that several rules share."""

from collections.abc import Iterator
from dataclasses import dataclass

from auditor.array.circuit import CaptureFacts, GivenCones
from auditor.array.scan_array import ArrayFacts, ScanArray
from auditor.cone.cone import Cone
from auditor.gf2.matrix import ones
from auditor.machine.machine import Extraction, LinearMachine, ObservedRow
from auditor.notation import SourcePlace, Vector
from auditor.phases.table import PhaseClass, PhaseTable, RegisterFacts
from auditor.plan import Plan


@dataclass(frozen=True, slots=True)
class Evidence:
    """All facts of one audit; ``phases``, ``array``, ``capture`` and ``given`` are None where there is no machine."""

    plan: Plan
    cone: Cone
    extraction: Extraction
    phases: PhaseTable | None
    array: ArrayFacts | None = None
    capture: CaptureFacts | None = None
    given: GivenCones | None = None

    @property
    def machine(self) -> LinearMachine | None:
        """The proved machine, or None where it was refused."""
        return self.extraction.machine

    @property
    def registers(self) -> tuple[RegisterFacts, ...]:
        """The feedback registers, none where the machine was refused."""
        return self.phases.registers if self.phases else ()

    @property
    def scan(self) -> ScanArray | None:
        """The scan chains, or None where they are not known."""
        return self.array.scan if self.array else None

    @property
    def longest_chain(self) -> int | None:
        """Scan cells of the longest chain, or None where no chain is known."""
        return self.scan.longest if self.scan else self.plan.chain_length

    def windows(self) -> dict[str, int]:
        """Return the greatest delay in the chains of each channel: the bits of its stream that they hold together."""
        if self.scan is None:
            length = self.plan.chain_length
            return {} if length is None else {row.name: length for _, row in self.channels()}
        lengths: dict[str, int] = {}
        for chain in self.scan.chains:
            lengths[chain.channel] = max(chain.greatest_delay, lengths.get(chain.channel, 0))
        return lengths

    def plain_chains(self) -> set[str]:
        """Return the channels whose chains have one scan cell for each bit of the window."""
        fed = set(self.windows())
        return fed - {chain.channel for chain in (self.scan.chains if self.scan else ()) if not chain.is_plain}

    @property
    def bound(self) -> int | None:
        """The separation that is asked for: the chain length or the limit, whichever is more; None: not asked."""
        return max((n for n in (self.longest_chain, self.plan.limits.separation) if n is not None), default=None)

    @property
    def test_clocks(self) -> int | None:
        """Generator clocks of the whole planned test, or None where no patterns are stated."""
        patterns = self.plan.patterns
        return patterns.count * patterns.clocks_per_pattern if patterns else None

    def channels(self) -> Iterator[tuple[int, ObservedRow]]:
        """Yield the observed rows that feed chains, with their numbers; nets behind a spoiled channel are left out."""
        for number, row in enumerate(self.machine.observed if self.machine else ()):
            if not row.cut_from:
                yield number, row

    def chain_fed(self, group: PhaseClass) -> list[int]:
        """Return the channels of a class that feed chains."""
        fed = {number for number, _ in self.channels()}
        return [number for number in group.channels if number in fed]

    def storage_names(self, register: RegisterFacts) -> tuple[str, ...]:
        """Return the names of a register's elements."""
        return tuple(self.machine.storage[k] for k in register.elements) if self.machine else ()

    def net_place(self, name: str) -> SourcePlace | None:
        """Return where a net stands, or None for a name that is none."""
        net = self.cone.netlist.net_of_name.get(name)
        return None if net is None else self.cone.netlist.net_place(net)

    def element_place(self, element: int) -> SourcePlace:
        """Return where a storage element's instance stands."""
        return self.cone.netlist.instance_place(self.cone.elements[element].instance)


def decimal(number: int) -> str:
    """Return a count as a decimal string, or its size where it has thousands of digits."""
    return str(number) if number.bit_length() <= 14_000 else f"about 2^{number.bit_length() - 1}"


def register_name(names: tuple[str, ...]) -> str:
    """Return a phrase for a register: its first and last element and how many there are."""
    return f"{names[0]} to {names[-1]} ({len(names)} elements)" if len(names) > 1 else names[0]


def open_input_reach(machine: LinearMachine, inputs: Vector = -1) -> Vector:
    """Return the elements on which these free inputs (default: all) act, at once or later, as a vector of n bits."""
    readers: dict[int, list[int]] = {}
    for k, row in enumerate(machine.transition):
        for element in ones(row):
            readers.setdefault(element, []).append(k)
    pending = [k for k, row in enumerate(machine.input_matrix) if row & inputs]
    reached = set(pending)
    while pending:
        new = [k for k in readers.get(pending.pop(), ()) if k not in reached]
        reached.update(new)
        pending += new
    return sum(1 << k for k in reached)
