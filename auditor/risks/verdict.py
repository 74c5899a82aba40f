"""From findings and open questions to one word."""

from collections.abc import Iterable, Sequence
from typing import Literal

from auditor.risks.finding import LEVELS, Finding

_RANK: dict[str, int] = {level: rank for rank, level in enumerate(LEVELS)}


def verdict(
    findings: Iterable[Finding], undecided: Sequence[str], fail_at: str
) -> Literal["pass", "fail", "undecided"]:
    """Return "fail" for a finding at or above ``fail_at`` that is not waived, else "undecided" for an open question.

    A failure stands first: no answer to an open question could take it back.
    """
    if any(finding.waived is None and _RANK[finding.level] >= _RANK[fail_at] for finding in findings):
        return "fail"
    return "undecided" if undecided else "pass"
