"""A defect or a remarkable fact of the design: the noun of this room."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Literal, TypeAlias

from auditor.notation import SourcePlace

Level: TypeAlias = Literal["note", "warning", "error"]
LEVELS: tuple[Level, ...] = ("note", "warning", "error")


@dataclass(frozen=True, slots=True)
class Finding:
    """One finding.

    ``slug``     stable name of the rule          ``where``   names of the objects concerned
    ``figures``  numbers and short texts, all computed; counts of cycles are decimal strings, as in the JSON
    ``says``     one sentence on what it does to the scan test
    ``waived``   the reason, where a waiver of the plan silences it
    """

    slug: str
    level: Level
    where: tuple[str, ...]
    says: str
    figures: Mapping[str, int | float | str | None] = field(default_factory=dict)
    place: SourcePlace | None = None
    waived: str | None = None
