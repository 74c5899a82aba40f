"""The modes of one plan side by side: what the screen opens with where a plan names several."""

from collections.abc import Sequence

from auditor.phases.table import RegisterFacts
from auditor.report.digest import closest_pairs
from auditor.report.facts import AuditFacts, Audits, worst
from auditor.report.page import EMPTY, Column, Page, Row
from auditor.report.wording import decimal, level_counts, number_text, plural
from auditor.risks.finding import Finding

VERDICT_STYLE = {"pass": "bold green", "fail": "bold red", "undecided": "bold yellow"}
_COLUMNS = (
    Column("mode"),
    Column("verdict"),
    Column("smallest separation", True),
    Column("findings"),
    Column("registers"),
)


def say_modes(page: Page, audits: Audits) -> None:
    """Add the verdict over all modes and a table with a row for each."""
    verdict, top = worst(audits), next(iter(audits.values())).cone.netlist.top
    page.say(f"Verdict {verdict}: {top}, {plural(len(audits), 'mode')}", margin=0, style=VERDICT_STYLE[verdict])
    rows = []
    for name, facts in audits.items():
        told = _separation(facts), finding_counts(facts.findings), _registers(facts)
        rows.append(Row((name, facts.verdict, *told)))
    page.table(_COLUMNS, rows)


def finding_counts(findings: Sequence[Finding]) -> str:
    """Return "2 errors, 1 note, 1 waived"."""
    counted = level_counts(finding.level for finding in findings if finding.waived is None)
    waived = sum(finding.waived is not None for finding in findings)
    return counted + (f", {waived} waived" if waived else "")


def _separation(facts: AuditFacts) -> str:
    """Return the smallest separation, or the bound that is proved where it is not known."""
    if pairs := closest_pairs(facts, 1):
        return decimal(pairs[0].cycles)
    if facts.phases is None or not facts.phases.classes:
        return EMPTY
    certified = facts.phases.certified_at_least
    return "infinite" if certified is None else f"at least {decimal(certified)}"


def _registers(facts: AuditFacts) -> str:
    if facts.phases is None:
        return "refused: no linear machine"
    return "; ".join(map(_register, facts.phases.registers)) or "none"


def _register(register: RegisterFacts) -> str:
    """Return the degree, and primitive or the period."""
    if register.primitive:
        return f"degree {register.cycling_degree}, primitive"
    period = "undecided" if register.period is None else number_text(register.period)
    return f"degree {register.cycling_degree}, period {period}"
