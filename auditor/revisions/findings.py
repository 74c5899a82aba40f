"""Findings that appeared, vanished or got worse; objects are recognised by the names that they have now."""

from collections.abc import Mapping, Sequence

from auditor.revisions.comparison import FindingChanges
from auditor.risks.finding import LEVELS, Finding

# Figures by which a finding of one rule on one object is worse than another: True where more is worse.
_WORSE_IF_MORE = {
    "separation": False,
    "identical_pairs": True,
    "pairs": True,
    "fan_out": True,
    "capacitance_ff": True,
    "taps": True,
    "depth": True,
    "unknown": True,
    "period": False,
}


def compare_findings(old: Sequence[Finding], new: Sequence[Finding], names: Mapping[str, str]) -> FindingChanges:
    """Compare findings; ``names`` gives the new name of every old object that has another one now."""
    before = {(f.slug, frozenset(names.get(name, name) for name in f.where)): f for f in old}
    after = {(f.slug, frozenset(f.where)): f for f in new}
    return FindingChanges(
        gained=tuple(f for key, f in after.items() if key not in before),
        lost=tuple(f for key, f in before.items() if key not in after),
        worse=tuple((before[key], f) for key, f in after.items() if key in before and _is_worse(before[key], f)),
    )


def _is_worse(old: Finding, new: Finding) -> bool:
    if old.level != new.level:
        return LEVELS.index(new.level) > LEVELS.index(old.level)
    if (old.waived is None) != (new.waived is None):
        return new.waived is None
    for name, more_is_worse in _WORSE_IF_MORE.items():
        before, after = _number(old.figures.get(name)), _number(new.figures.get(name))
        if before is not None and after is not None and before != after:
            return (after > before) == more_is_worse
    return False


def _number(figure: int | float | str | None) -> float | int | None:
    """Return a figure as a number; counts of cycles are decimal strings."""
    if isinstance(figure, str):
        return int(figure) if figure.isdecimal() and len(figure) < 4000 else None
    return figure
