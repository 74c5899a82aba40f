"""What logarithms may cost, who is told how far they are, and where their tables come from."""

from dataclasses import dataclass, replace

from auditor.gf2.calculus.table import TableSource, make_factor_base
from auditor.gf2.calculus.work import Progress, Work


@dataclass(frozen=True, slots=True)
class Effort:
    """The bounds of each call of ``logarithms``; without any, all that is in reach is computed.

    ``work_limit``  units of ``Work``: the same limit gives the same answer on every machine
    ``deadline``    a time of ``time.monotonic`` after which no work begins
    ``progress``    is told in short phrases what is being done
    ``tables``      makes or finds the factor base of a degree
    """

    work_limit: int | None = None
    deadline: float | None = None
    progress: Progress | None = None
    tables: TableSource = make_factor_base

    def work(self) -> Work:
        """Return a new count of work under these bounds."""
        return Work(self.work_limit, self.progress, self.deadline)

    def under(self, phrase: str) -> "Effort":
        """Return the same with a phrase before all that is reported."""
        return replace(self, progress=lambda detail: self.report(f"{phrase}: {detail}"))

    def report(self, phrase: str) -> None:
        """Say in a few words what is being done."""
        self.work().report(phrase)
