"""Runs an audit over text that a test made, and reads the facts back by name."""

from pathlib import Path
from typing import Any

from auditor.audit import audit
from auditor.plan import Plan
from auditor.report.facts import AuditFacts
from tests.support.gates import CELLS, Block


def audit_text(folder: Path, text: str, cells: tuple[Path, ...] = (CELLS,), **stated: Any) -> AuditFacts:
    """Write the text to a file of the folder and audit it; ``stated`` are further fields of the plan."""
    netlist = folder / "netlist.v"
    netlist.write_text(text)
    return audit(Plan(netlists=(netlist,), cells=cells, **stated))


def audit_block(folder: Path, block: Block, **stated: Any) -> AuditFacts:
    """Audit a drawn block under its own mode."""
    return audit_text(folder, block.text, top=block.top, mode=block.mode, **stated)


def leads(facts: AuditFacts) -> dict[str, int | None]:
    """Return every channel's lead by name."""
    assert facts.phases is not None
    return {name: phase.lead for name, phase in zip(channel_names(facts), facts.phases.phases, strict=True)}


def channel_names(facts: AuditFacts) -> list[str]:
    """Return the names of the observed rows in order."""
    assert facts.extraction.machine is not None
    return [row.name for row in facts.extraction.machine.observed]


def slugs(facts: AuditFacts) -> set[str]:
    """Return the slugs of all findings."""
    return {finding.slug for finding in facts.findings}
