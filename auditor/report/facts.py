"""All that one audit found, as the writers get it: the noun of this room."""

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Literal, NamedTuple, TypeAlias

from auditor.array.circuit import CaptureFacts, GivenCones
from auditor.array.scan_array import ArrayFacts
from auditor.cells.library import CellLibrary
from auditor.cone.cone import Cone
from auditor.machine.machine import Extraction
from auditor.phases.table import PhaseTable
from auditor.plan import Plan
from auditor.risks.finding import Finding

Verdict: TypeAlias = Literal["pass", "fail", "undecided"]


class InputFile(NamedTuple):
    """One file the audit read: ``role`` is netlist, cells or plan; ``sha256`` of the bytes as stored."""

    path: str
    role: str
    sha256: str


class ReplayFacts(NamedTuple):
    """The second opinion: random states, cycles each, and disagreements (0, or there is no report)."""

    states: int
    cycles: int
    mismatches: int


@dataclass(frozen=True, slots=True)
class AuditFacts:
    """One audit. ``phases``, ``replay`` and ``array`` are None where the machine was refused.

    ``capture`` is None where nobody asked about the circuit under test as well, ``given`` where no cones are given.
    """

    plan: Plan
    inputs: tuple[InputFile, ...]
    mode: Mapping[str, int]
    library: CellLibrary
    cone: Cone
    extraction: Extraction
    phases: PhaseTable | None
    replay: ReplayFacts | None
    findings: tuple[Finding, ...]
    assumed: tuple[str, ...]
    undecided: tuple[str, ...]
    verdict: Verdict
    environment: Mapping[str, str]
    array: ArrayFacts | None = None
    capture: CaptureFacts | None = None
    given: GivenCones | None = None


# The audits of one plan by the name of their mode, in the plan's order; a plan that names none has one, under "".
Audits: TypeAlias = Mapping[str, AuditFacts]


def worst(audits: Audits) -> Verdict:
    """Return the verdict over all modes: fail before undecided before pass."""
    order: tuple[Verdict, ...] = ("fail", "undecided", "pass")
    return min((facts.verdict for facts in audits.values()), key=order.index)
