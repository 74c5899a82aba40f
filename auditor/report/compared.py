"""Two audits and what comparing them gave, as the writers get them."""

from collections.abc import Mapping
from dataclasses import dataclass

from auditor.report.facts import AuditFacts
from auditor.revisions.comparison import Comparison, Outcome


@dataclass(frozen=True, slots=True)
class Compared:
    """The audits of both revisions under one mode, and their comparison."""

    old: AuditFacts
    new: AuditFacts
    comparison: Comparison


@dataclass(frozen=True, slots=True)
class Comparisons:
    """The comparisons by mode, under "" where no mode has a name; ``only`` names modes that one plan alone has."""

    by_mode: Mapping[str, Compared]
    only: tuple[str, ...] = ()

    @property
    def outcome(self) -> Outcome:
        """The outcome over all modes: differs before undecided before same; a mode of one plan alone is undecided."""
        order: tuple[Outcome, ...] = ("differs", "undecided", "same")
        found: list[Outcome] = [compared.comparison.outcome for compared in self.by_mode.values()]
        return min([*found, "undecided"] if self.only else found, key=order.index)
