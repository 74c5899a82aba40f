"""The draft: the verbs that it needs in a row, with the search of ``drafting`` in the middle."""

from collections.abc import Mapping, Sequence
from dataclasses import replace

from auditor.audit import read_library, read_netlist
from auditor.cells.library import CellLibrary
from auditor.cone.constants import resolve_mode
from auditor.cone.extract import extract_cone
from auditor.cone.wiring import connect
from auditor.drafting.candidate import Attempt, Ground, Prove
from auditor.drafting.part import input_ports
from auditor.drafting.proposal import Draft
from auditor.drafting.propose import propose
from auditor.drafting.text import guesses
from auditor.errors import InputError, TroubleList, fail
from auditor.machine.machine import LinearMachine
from auditor.machine.prove import prove_machine
from auditor.netlist.netlist import Netlist
from auditor.phases.find import find_phases
from auditor.phases.table import RegisterFacts
from auditor.plan import Plan

# Diagram nodes of one gate in a proof: a register needs a few hundred, and what needs more is refused sooner.
PROOF_NODES = 5_000


def draft(plan: Plan) -> Draft:
    """Return what the netlists of a plan hold, under the constants of its mode. Raises ``InputError``."""
    library = read_library(plan)
    netlist = read_netlist(plan, library)
    troubles = TroubleList()
    stated = resolve_mode(netlist, plan.mode, troubles)
    troubles.raise_any()
    prove = _prover(library, plan.work_limit or PROOF_NODES)
    return propose(Ground(connect(netlist, library), library, input_ports(netlist), prove, _registers), stated)


def with_draft(plan: Plan) -> Plan:
    """Return a plan with what it leaves open taken from the draft, and a sentence on every guess.

    Raises ``InputError`` where no register is clear.
    """
    if plan.modes:
        raise fail("a plan of several modes cannot be completed by a draft", "give --use-draft a plan of one mode")
    found = draft(plan)
    if found.proposal is None:
        raise fail(f"no register is clear: {found.because}", "state --mode and --channels without --use-draft")
    mode = {**{constant.name: constant.value for constant in found.proposal.constants}, **plan.mode}
    told = guesses(found.proposal, with_channels=not plan.channels)
    return replace(plan, mode=mode, channels=plan.channels or found.proposal.names, guesses=told)


def _prover(library: CellLibrary, work_limit: int) -> Prove:
    def prove(netlist: Netlist, mode: Mapping[str, int], channels: Sequence[str]) -> Attempt:
        try:
            cone = extract_cone(netlist, library, mode, channels)
            return Attempt(cone, prove_machine(cone, work_limit))
        except InputError as error:
            return Attempt(None, None, error.troubles)

    return prove


def _registers(machine: LinearMachine) -> tuple[RegisterFacts, ...]:
    """Return the facts of a machine's registers without a look at any channel."""
    return find_phases(replace(machine, observed=())).registers
