"""Every trouble that ends a run: what was found, where, and what to do about it.

A trouble is plain data. The troubles of a run are collected and raised together, so that a user mends them
in one go. A defect of the design under audit is no trouble but a finding (``risks/``).
"""

import difflib
from collections.abc import Iterable
from dataclasses import dataclass, field

from auditor.notation import SourcePlace


@dataclass(frozen=True, slots=True)
class Trouble:
    """One thing that keeps the audit from forming a machine.

    ``found`` says what stands there and names every party; ``remedy`` what to do. Both are sentences or
    clauses without a full stop at the end.
    """

    found: str
    remedy: str
    place: SourcePlace | None = None

    def __str__(self) -> str:
        where = f"{self.place}: " if self.place else ""
        return f"{where}{self.found}; {self.remedy}"


class InputError(Exception):
    """Wrong use, or text, names or structure from which no machine can be formed (exit status 2)."""

    def __init__(self, troubles: Iterable[Trouble]) -> None:
        unique = dict.fromkeys(troubles)
        self.troubles = tuple(sorted(unique, key=lambda t: (t.place or SourcePlace(""), t.found)))
        super().__init__("\n".join(map(str, self.troubles)))


class InternalError(Exception):
    """The auditor contradicts itself (exit status 4): no verdict, whatever else was found."""


@dataclass(slots=True)
class TroubleList:
    """Collects troubles over a stage and raises them together."""

    troubles: list[Trouble] = field(default_factory=list)

    def add(self, found: str, remedy: str, place: SourcePlace | None = None) -> None:
        """Note one trouble and go on."""
        self.troubles.append(Trouble(found, remedy, place))

    def raise_any(self) -> None:
        """Raise ``InputError`` with all that was noted, if anything was."""
        if self.troubles:
            raise InputError(self.troubles)


def fail(found: str, remedy: str, place: SourcePlace | None = None) -> InputError:
    """Return the error for a single trouble, to be raised where nothing more can be learned by going on."""
    return InputError([Trouble(found, remedy, place)])


def near_misses(name: str, known: Iterable[str]) -> str:
    """Return a clause that suggests up to three known names like ``name``, or an empty string."""
    close = difflib.get_close_matches(name, list(dict.fromkeys(known)), n=3, cutoff=0.6)
    return f"did you mean {' or '.join(close)}?" if close else ""
