"""How much has been computed: units of work, so that a limit gives the same result on every machine."""

from collections.abc import Callable
from dataclasses import dataclass
from time import monotonic

Progress = Callable[[str], None]


class OutOfWork(Exception):  # noqa: N818 - no error: the caller answers with what is known so far
    """A limit is reached, or a search has come to its end; the text says which."""


@dataclass(slots=True)
class Work:
    """A count of units, with optional limits, and where to tell how far it is.

    One unit is one pair of polynomials that is tested for small factors, or one element of a group that is looked at.
    ``deadline`` is a time of ``time.monotonic``, after which no work begins: results then depend on the machine.
    """

    limit: int | None = None
    progress: Progress | None = None
    deadline: float | None = None
    done: int = 0

    def spend(self, units: int) -> None:
        """Count work that is about to be done; ``OutOfWork`` if it would exceed the limit or time is over."""
        if self.limit is not None and self.done + units > self.limit:
            raise OutOfWork("the limit on work is reached")
        if self.deadline is not None and monotonic() > self.deadline:
            raise OutOfWork("the limit on time is reached")
        self.done += units

    def report(self, phrase: str) -> None:
        """Say in a few words what is being done."""
        if self.progress is not None:
            self.progress(phrase)
