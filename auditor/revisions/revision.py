"""One of the two machines of a comparison, with what the audit found about it."""

from dataclasses import dataclass

from auditor.cells.library import CellLibrary
from auditor.cone.cone import Cone
from auditor.machine.machine import Extraction, LinearMachine, ObservedRow
from auditor.notation import Vector
from auditor.phases.table import Phase, PhaseTable
from auditor.risks.finding import Finding


@dataclass(frozen=True, slots=True)
class Revision:
    """A revision under one mode; ``phases`` is None where the machine was refused."""

    cone: Cone
    library: CellLibrary
    extraction: Extraction
    phases: PhaseTable | None
    findings: tuple[Finding, ...]

    @property
    def machine(self) -> LinearMachine | None:
        """The proved machine, None where a next state was refused."""
        return self.extraction.machine

    @property
    def observed(self) -> tuple[ObservedRow, ...]:
        """The channels' rows, in the order of the cone's channels; nothing where the machine was refused."""
        return tuple(row for row in self.machine.observed if not row.cut_from) if self.machine else ()

    def phase(self, channel: int) -> Phase | None:
        """Return the phase of a channel."""
        return self.phases.phases[channel] if self.phases else None


def storage_names(revision: Revision) -> list[str]:
    """Return the elements of a state: those of the machine, or all of the cone where there is none."""
    return list(revision.machine.storage) if revision.machine else [e.name for e in revision.cone.elements]


def reset_of(revision: Revision) -> Vector | None:
    """Return the state after reset, bit k the k-th of ``storage_names``; None where it leaves an element open."""
    names = set(storage_names(revision))
    resets = [element.reset for element in revision.cone.elements if element.name in names]
    if None in resets:
        return None
    return sum(1 << k for k, reset in enumerate(resets) if reset)
