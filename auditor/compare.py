"""The comparison of two audits: the verb of ``revisions`` for every mode, then the gates asked for the witness."""

from collections.abc import Callable, Sequence
from dataclasses import replace

from auditor.audit import audit_modes
from auditor.errors import InternalError, fail
from auditor.plan import Plan
from auditor.replay.run import show
from auditor.report.compared import Compared, Comparisons
from auditor.report.facts import AuditFacts
from auditor.revisions.compare import compare_revisions, confirmed
from auditor.revisions.comparison import Comparison, Witness
from auditor.revisions.revision import Revision


def compare(old: AuditFacts, new: AuditFacts) -> Comparison:
    """Compare two audits of one mode each. A witness in it has been confirmed on the gates.

    Raises ``InternalError`` where the gates contradict the comparison.
    """
    found = compare_revisions(_revision(old), _revision(new))
    if found.witness is None:
        return found
    if not _differ(old, new, found.witness):
        raise InternalError("the gates do not differ where the comparison says that they do")
    return confirmed(found)


def compare_plans(old: Plan, new: Plan, progress: Callable[[str], None] | None = None) -> Comparisons:
    """Audit two plans and compare them under each mode that both name; the name is empty where they name none.

    Raises ``InputError`` where no machine can be formed of one of them, or where no mode is in both.
    """
    names = [list(plan.by_mode()) for plan in (old, new)]
    common = [name for name in names[0] if name in names[1]]
    if not common:
        raise fail(
            f"no mode is in both: OLD has {_listed(names[0])}, NEW has {_listed(names[1])}",
            "give both plans modes of the same names, or leave [mode.NAME] out of both and state one mode",
        )
    before, after = (audit_modes(_only(plan, common), progress) for plan in (old, new))
    if progress:
        progress("comparison")
    by_mode = {name: Compared(before[name], after[name], compare(before[name], after[name])) for name in common}
    return Comparisons(by_mode, tuple(name for name in dict.fromkeys(names[0] + names[1]) if name not in common))


def _only(plan: Plan, names: Sequence[str]) -> Plan:
    """Return the plan with these of its modes."""
    return replace(plan, modes={name: mode for name, mode in plan.modes.items() if name in names})


def _listed(modes: Sequence[str]) -> str:
    return ", ".join(name or "one without a name" for name in modes)


def _revision(facts: AuditFacts) -> Revision:
    return Revision(facts.cone, facts.library, facts.extraction, facts.phases, facts.findings)


def _differ(old: AuditFacts, new: AuditFacts, witness: Witness) -> bool:
    """Ask the gates of both netlists what they show from the states of a witness."""
    sides = ((old, witness.old_state, witness.old_channel), (new, witness.new_state, witness.new_channel))
    shown = []
    for facts, state, channel in sides:
        machine = facts.extraction.machine
        storage = machine.storage if machine else [element.name for element in facts.cone.elements]
        shown.append(show(facts.cone, facts.library, storage, state, channel, witness.cycle)[-1])
    return None not in shown and shown[0] != shown[1]
