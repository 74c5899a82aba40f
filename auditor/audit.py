"""The audit: the verbs of all stages in a row."""

import hashlib
import platform
from collections.abc import Callable
from importlib.metadata import version
from pathlib import Path

from auditor.cells.library import CellLibrary
from auditor.cells.read import read_cells
from auditor.cone.cone import Cone
from auditor.cone.extract import extract_cone
from auditor.machine.machine import Extraction
from auditor.machine.prove import prove_machine
from auditor.netlist.flatten import flatten
from auditor.netlist.netlist import Netlist
from auditor.phases.find import find_phases
from auditor.phases.table import PhaseTable
from auditor.plan import Plan
from auditor.replay.replay import replay
from auditor.report.facts import AuditFacts, InputFile, ReplayFacts
from auditor.risks.evidence import Evidence
from auditor.risks.find import find_risks
from auditor.risks.questions import open_questions
from auditor.risks.verdict import verdict
from auditor.verilog.read import read_verilog

Progress = Callable[[str], None]

# Separations below the window are found even where logarithms are out of reach: a larger one where the plan asks
# for it, up to what memory and patience bear.
WINDOW, LARGEST_WINDOW = 1 << 20, 1 << 28
DEPENDENCIES = ("pyverilog", "networkx", "numpy", "rich", "dd")


def audit(plan: Plan, progress: Progress | None = None) -> AuditFacts:
    """Audit what the plan names and return all facts.

    ``progress`` is called with the name of each stage as it starts. Raises ``InputError`` where no machine can be
    formed, ``InternalError`` where the auditor contradicts itself; a defect of the design is a finding.
    """
    tell = progress or _silent
    tell("cells")
    library = read_cells(plan.cells)
    tell("netlist")
    netlist = _read_netlist(plan, library)
    tell("cone")
    cone = extract_cone(netlist, library, plan.mode, plan.channels)
    tell("machine")
    extraction = prove_machine(cone, plan.work_limit)
    replayed, phases = _solve(plan, library, cone, extraction, tell)
    tell("risks")
    evidence = Evidence(plan, cone, extraction, phases)
    findings = find_risks(evidence)
    undecided = open_questions(evidence)
    return AuditFacts(
        plan=plan,
        inputs=_input_files(plan),
        mode=plan.mode,
        library=library,
        cone=cone,
        extraction=extraction,
        phases=phases,
        replay=replayed,
        findings=findings,
        assumed=(*cone.assumed, *library.notes),
        undecided=undecided,
        verdict=verdict(findings, undecided, plan.fail_at),
        environment=_environment(),
    )


def _read_netlist(plan: Plan, library: CellLibrary) -> Netlist:
    return flatten(read_verilog(plan.netlists), plan.top, library.cells)


def _solve(
    plan: Plan, library: CellLibrary, cone: Cone, extraction: Extraction, tell: Progress
) -> tuple[ReplayFacts | None, PhaseTable | None]:
    """Replay the gates against the proved machine, then solve it; nothing of both where there is no machine."""
    machine = extraction.machine
    if machine is None:
        return None, None
    tell("replay")
    replayed = ReplayFacts(*replay(cone, library, machine), mismatches=0)
    tell("phases")
    asked = max(plan.chain_length or 0, plan.limits.separation or 0)
    return replayed, find_phases(machine, plan.reference, min(max(WINDOW, asked), LARGEST_WINDOW), tell)


def _input_files(plan: Plan) -> tuple[InputFile, ...]:
    """Return every file the audit read, with the digest of its bytes as stored."""
    files: list[tuple[Path, str]] = [(plan.file, "plan")] if plan.file else []
    files += [(path, "netlist") for path in plan.netlists] + [(path, "cells") for path in plan.cells]
    return tuple(InputFile(str(path), role, hashlib.sha256(path.read_bytes()).hexdigest()) for path, role in files)


def _environment() -> dict[str, str]:
    return {"python": platform.python_version(), **{name: version(name) for name in DEPENDENCIES}}


def _silent(name: str) -> None:
    """Take a stage's name and show nothing."""
