"""Waivers: findings that the reviewer knows of and accepts, with a reason; they stay listed and do not count."""

from collections.abc import Iterable
from dataclasses import replace
from fnmatch import fnmatchcase

from auditor.errors import TroubleList, near_misses
from auditor.notation import SourcePlace
from auditor.plan import Plan, Waiver
from auditor.risks.finding import Finding
from auditor.risks.levels import KINDS


def check_waivers(plan: Plan) -> None:
    """Refuse waivers of findings that do not exist, which would silence nothing. Raises ``InputError``."""
    troubles = TroubleList()
    for waiver in plan.waivers:
        if waiver.slug not in KINDS:
            remedy = near_misses(waiver.slug, KINDS) or f"use one of {', '.join(KINDS)}"
            place = SourcePlace(str(plan.file)) if plan.file else None
            troubles.add(f"a waiver names the finding {waiver.slug}, which does not exist", remedy, place)
    troubles.raise_any()


def waived(finding: Finding, waivers: Iterable[Waiver]) -> Finding:
    """Return the finding, with the reason of the first waiver that covers it."""
    reason = waiver_reason(finding.slug, finding.where, waivers)
    return finding if reason is None else replace(finding, waived=reason)


def waiver_reason(slug: str, where: Iterable[str], waivers: Iterable[Waiver]) -> str | None:
    """Return the reason of the first waiver of ``slug`` whose every name is among the objects ``where``.

    A name may hold ``*`` and ``?``. Brackets stand for themselves, because bits are written with them.
    """
    objects = tuple(where)
    for waiver in waivers:
        if waiver.slug == slug and all(_is_among(name, objects) for name in waiver.where):
            return waiver.reason
    return None


def _is_among(pattern: str, objects: tuple[str, ...]) -> bool:
    literal_brackets = pattern.replace("[", "[[]")
    return any(pattern == name or fnmatchcase(name, literal_brackets) for name in objects)
