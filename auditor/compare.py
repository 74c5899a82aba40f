"""The comparison of two audits: the verb of ``revisions`` for every mode, then the gates asked for the witness."""

from collections.abc import Callable, Sequence
from dataclasses import replace
from time import monotonic

from auditor.audit import audit_modes
from auditor.cache import kept_tables
from auditor.errors import InternalError, fail
from auditor.gf2.calculus.table import TableSource
from auditor.gf2.effort import Effort
from auditor.notation import Vector
from auditor.plan import Plan
from auditor.replay.run import show
from auditor.report.compared import Compared, Comparisons
from auditor.report.facts import AuditFacts
from auditor.revisions.compare import compare_revisions, confirmed
from auditor.revisions.comparison import Comparison, Witness
from auditor.revisions.revision import Revision, reset_of, storage_names

# Cycles for which the gates are run side by side where the algebra does not decide.
SIDE_BY_SIDE = 512


def compare(old: AuditFacts, new: AuditFacts, effort: Effort | None = None) -> Comparison:
    """Compare two audits of one mode each. A witness in it has been confirmed on the gates.

    ``effort`` bounds the logarithms by which shifts are found (default: the work limit of the new plan).

    Raises ``InternalError`` where the gates contradict the comparison.
    """
    found = compare_revisions(_revision(old), _revision(new), effort or Effort(new.plan.work_limit))
    if found.outcome == "undecided":
        return _held_side_by_side(old, new, found)
    if found.witness is None:
        return found
    witness = found.witness
    before, after = (
        _shown(facts, state, [channel], witness.cycle + 1)[0][-1]
        for facts, state, channel in (
            (old, witness.old_state, witness.old_channel),
            (new, witness.new_state, witness.new_channel),
        )
    )
    if None in (before, after) or before == after:
        raise InternalError("the gates do not differ where the comparison says that they do")
    return confirmed(found, witness)


def compare_plans(
    old: Plan, new: Plan, progress: Callable[[str], None] | None = None, tables: TableSource | None = None
) -> Comparisons:
    """Audit two plans and compare them under each mode that both name; the name is empty where they name none.

    ``tables`` as in ``audit_modes``.
    Raises ``InputError`` where no machine can be formed of one of them, or where no mode is in both.
    """
    names = [list(plan.by_mode()) for plan in (old, new)]
    common = [name for name in names[0] if name in names[1]]
    if not common:
        raise fail(
            f"no mode is in both: OLD has {_listed(names[0])}, NEW has {_listed(names[1])}",
            "give both plans modes of the same names, or leave [mode.NAME] out of both and state one mode",
        )
    tables = tables or kept_tables(None)
    before, after = (audit_modes(_only(plan, common), progress, tables) for plan in (old, new))
    if progress:
        progress("comparison")
    deadline = None if new.time_limit is None else monotonic() + new.time_limit
    effort = Effort(new.work_limit, deadline, progress, tables)
    by_mode = {name: Compared(before[name], after[name], compare(before[name], after[name], effort)) for name in common}
    return Comparisons(by_mode, tuple(name for name in dict.fromkeys(names[0] + names[1]) if name not in common))


def _only(plan: Plan, names: Sequence[str]) -> Plan:
    """Return the plan with these of its modes."""
    return replace(plan, modes={name: mode for name, mode in plan.modes.items() if name in names})


def _listed(modes: Sequence[str]) -> str:
    return ", ".join(name or "one without a name" for name in modes)


def _revision(facts: AuditFacts) -> Revision:
    return Revision(facts.cone, facts.library, facts.extraction, facts.phases, facts.findings)


def _shown(facts: AuditFacts, state: Vector, channels: Sequence[str], cycles: int) -> list[list[int | None]]:
    """Return what the gates show on channels from a state of the machine, or of all storage where there is none."""
    return show(facts.cone, facts.library, storage_names(_revision(facts)), state, channels, cycles)


def _held_side_by_side(old: AuditFacts, new: AuditFacts, found: Comparison) -> Comparison:
    """Run the gates of both from reset where the algebra does not decide: a difference that is seen is proved."""
    states = [reset_of(_revision(facts)) for facts in (old, new)]
    names = [channel.name for channel in old.cone.channels]
    common = [channel.name for channel in new.cone.channels if channel.name in names]
    if states[0] is None or states[1] is None or not common:
        return found
    before = _shown(old, states[0], common, SIDE_BY_SIDE)
    after = _shown(new, states[1], common, SIDE_BY_SIDE)
    seen = [
        (cycle, place)
        for place, (ours, theirs) in enumerate(zip(before, after, strict=True))
        for cycle, pair in enumerate(zip(ours, theirs, strict=True))
        if pair in ((0, 1), (1, 0))
    ]
    if not seen:
        return found
    cycle, place = min(seen)
    witness = Witness(states[0], states[1], cycle, common[place], common[place], "both from reset")
    reset = replace(found.reset, agree=False, because="", shift=None)
    found = replace(found, outcome="differs", parts=("different",), holds_from=None, state_map=None, reset=reset)
    return confirmed(found, witness)
