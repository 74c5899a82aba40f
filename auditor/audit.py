"""The audit: the verbs of all stages in a row."""

import gc
import hashlib
import platform
from collections.abc import Callable, Mapping, Sequence
from dataclasses import replace
from importlib.metadata import version
from pathlib import Path
from time import monotonic
from typing import TypeVar

from auditor.array.chains import scan_array
from auditor.array.examine import examine_capture
from auditor.array.find import find_array
from auditor.array.forward import chain_ends
from auditor.array.given_cones import rank_given_cones
from auditor.array.scan_array import ArrayFacts, ScanArray
from auditor.cache import kept_tables
from auditor.cells.library import CellLibrary
from auditor.cells.read import read_cells
from auditor.cone.cone import Cone
from auditor.cone.extract import extract_cone
from auditor.cone.wiring import connect
from auditor.errors import InputError, Trouble, fail
from auditor.gf2.calculus.table import TableSource
from auditor.gf2.effort import Effort
from auditor.in_capture import settle_capture
from auditor.machine.machine import Extraction, LinearMachine
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
from auditor.verilog.statements import Reading

Progress = Callable[[str], None]
Result = TypeVar("Result")

# Separations below the window are found even where logarithms are out of reach: a larger one where the plan asks
# for it, up to what memory and patience bear.
WINDOW, LARGEST_WINDOW = 1 << 20, 1 << 28
DEPENDENCIES = ("pyverilog", "networkx", "numpy", "rich", "dd")


def audit(plan: Plan, progress: Progress | None = None) -> AuditFacts:
    """Audit what a plan of one mode names and return all facts.

    ``progress`` is called with the name of each stage as it starts. Raises ``InputError`` where no machine can be
    formed, ``InternalError`` where the auditor contradicts itself; a defect of the design is a finding.
    """
    if plan.modes:
        raise fail("the plan has several modes", "audit each, or all by audit_modes")
    return audit_modes(plan, progress)[""]


def audit_modes(
    plan: Plan, progress: Progress | None = None, tables: TableSource | None = None
) -> dict[str, AuditFacts]:
    """Audit a plan under each of its modes; cells and netlist are read once, troubles of all modes told together.

    ``tables`` is where leads of large degrees get their tables from (default: each is made once).
    """
    tell = progress or _silent
    deadline = None if plan.time_limit is None else monotonic() + plan.time_limit
    bounds = Effort(plan.work_limit, deadline, tables=tables or kept_tables(None))
    tell("cells")
    library = read_library(plan)
    tell("netlist")
    reading = Reading()
    netlist = read_netlist(plan, library, reading)
    library = replace(library, notes=(*reading.notes, *library.notes))
    inputs, plans = _input_files(plan, reading.included), plan.by_mode()

    def in_mode(name: str) -> Progress:
        return (lambda stage: tell(f"mode {name}: {stage}")) if name else tell

    cones = _in_every_mode(plans, lambda name: _cone(plans[name], library, netlist, in_mode(name)))
    return _in_every_mode(
        plans,
        lambda name: _facts(plans[name], library, cones[name], inputs, replace(bounds, progress=in_mode(name))),
    )


def read_library(plan: Plan) -> CellLibrary:
    """Read the cells of a plan. Troubles come together with those that the netlist has whatever the cells are."""
    try:
        return read_cells(plan.cells, plan.defines, plan.include)
    except InputError as error:
        troubles = error.troubles
    try:
        read_verilog(plan.netlists, "both", plan.defines, plan.include, cells=_AnyCell())
    except InputError as error:
        troubles += error.troubles
    raise InputError(troubles)


class _AnyCell:
    """Takes every module for a library cell: what is inside may be a model, whose text is not judged."""

    def __contains__(self, name: object) -> bool:
        return True


def read_netlist(plan: Plan, library: CellLibrary, reading: Reading | None = None) -> Netlist:
    """Read and flatten the netlist of a plan; what is included and noted on the way is entered into ``reading``.

    A large one is millions of new tuples, none in a circle, that are dropped once it is flat: the cyclic collector
    would walk them for nothing, so it is paused over both stages.
    """
    was_enabled = gc.isenabled()
    gc.disable()
    try:
        cells = library.cells.keys() - {plan.top}
        modules = read_verilog(plan.netlists, "both", plan.defines, plan.include, reading, cells)
        return flatten(modules, plan.top, library.cells)
    finally:
        if was_enabled:
            gc.enable()


def _in_every_mode(plans: Mapping[str, Plan], carry_out: Callable[[str], Result]) -> dict[str, Result]:
    """Return the results of a step by mode, or raise ``InputError`` with all troubles and the modes they are in."""
    results: dict[str, Result] = {}
    modes: dict[Trouble, list[str]] = {}
    for name in plans:
        try:
            results[name] = carry_out(name)
        except InputError as error:
            for trouble in error.troubles:
                modes.setdefault(trouble, []).append(name)
    if modes:
        raise InputError(replace(t, found=_under(names) + t.found) for t, names in modes.items())
    return results


def _under(modes: Sequence[str]) -> str:
    """Return what stands before a trouble of these modes: nothing for the one without a name."""
    return f"mode {', '.join(modes)}: " if any(modes) else ""


def _cone(plan: Plan, library: CellLibrary, netlist: Netlist, tell: Progress) -> Cone:
    tell("cone")
    return extract_cone(netlist, library, plan.mode, plan.channels)


def _facts(plan: Plan, library: CellLibrary, cone: Cone, inputs: tuple[InputFile, ...], effort: Effort) -> AuditFacts:
    """Return all facts of one mode."""
    tell = effort.report
    tell("machine")
    extraction = prove_machine(cone, plan.work_limit)
    machine = extraction.machine
    plan, held = settle_capture(plan, cone, library, machine) if machine else (plan, ())
    scan = _chains(plan, library, cone, tell)
    replayed, phases = _solve(plan, library, cone, extraction, scan, effort)
    array = _array(plan, library, cone, extraction, phases, scan, effort)
    capture = examine_capture(plan, cone.netlist, library, machine, scan, tell) if machine else None
    given = rank_given_cones(plan, machine, scan) if machine else None
    tell("risks")
    evidence = Evidence(plan, cone, extraction, phases, array, capture, given)
    findings = find_risks(evidence)
    undecided = open_questions(evidence)
    return AuditFacts(
        plan=plan,
        inputs=inputs,
        mode=plan.mode,
        library=library,
        cone=cone,
        extraction=extraction,
        phases=phases,
        replay=replayed,
        findings=findings,
        assumed=(*plan.guesses, *cone.assumed, *(capture.assumed if capture else ()), *held, *library.notes),
        undecided=undecided,
        verdict=verdict(findings, undecided, plan.fail_at),
        environment=_environment(),
        array=array,
        capture=capture,
        given=given,
    )


def _chains(plan: Plan, library: CellLibrary, cone: Cone, tell: Progress) -> ScanArray | None:
    """Return the scan chains, traced back from the scan outputs, or from where the ways from the channels end."""
    if not plan.scan_outputs and not plan.trace_forward:
        return scan_array(plan, cone)
    tell("chains")
    outputs = plan.scan_outputs or chain_ends(connect(cone.netlist, library), cone)
    try:
        behind = extract_cone(cone.netlist, library, plan.mode, outputs)
    except InputError as error:
        raise InputError(replace(t, found=f"behind the scan outputs: {t.found}") for t in error.troubles) from None
    return scan_array(plan, cone, behind)


def _solve(
    plan: Plan,
    library: CellLibrary,
    cone: Cone,
    extraction: Extraction,
    scan: ScanArray | None,
    effort: Effort,
) -> tuple[ReplayFacts | None, PhaseTable | None]:
    """Replay the gates against the proved machine, then solve it; nothing of both where there is no machine."""
    machine = extraction.machine
    if machine is None:
        return None, None
    effort.report("replay")
    replayed = ReplayFacts(*replay(cone, library, machine), mismatches=0)
    effort.report("phases")
    asked = max(scan.longest if scan else 0, plan.limits.separation or 0)
    return replayed, find_phases(machine, plan.reference, min(max(WINDOW, asked), LARGEST_WINDOW), effort)


def _array(
    plan: Plan,
    library: CellLibrary,
    cone: Cone,
    extraction: Extraction,
    phases: PhaseTable | None,
    scan: ScanArray | None,
    effort: Effort,
) -> ArrayFacts | None:
    """Return what the generator does to the scan chains, and its runs from the seeds; nothing without a machine."""
    if extraction.machine is None or phases is None:
        return None
    effort.report("scan array")

    def solve(machine: LinearMachine, window: int) -> PhaseTable:
        return find_phases(machine, window=min(window, LARGEST_WINDOW), effort=effort)

    return find_array(plan, cone, library, extraction.machine, phases, scan, solve, effort.report)


def _input_files(plan: Plan, included: Sequence[Path]) -> tuple[InputFile, ...]:
    """Return every file the audit read, with the digest of its bytes as stored."""
    files: list[tuple[Path, str]] = [(plan.file, "plan")] if plan.file else []
    files += [(path, "netlist") for path in plan.netlists] + [(path, "include") for path in included]
    files += [(path, "cells") for path in plan.cells]
    for path, role in ((plan.chain_file, "chains"), (plan.cone_file, "cones")):
        if path and path.is_file():  # what is wrong with it is told where it is read
            files.append((path, role))
    return tuple(InputFile(str(path), role, hashlib.sha256(path.read_bytes()).hexdigest()) for path, role in files)


def _environment() -> dict[str, str]:
    return {"python": platform.python_version(), **{name: version(name) for name in DEPENDENCIES}}


def _silent(name: str) -> None:
    """Take a stage's name and show nothing."""
