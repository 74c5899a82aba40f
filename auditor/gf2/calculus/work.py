"""How much has been computed: units of work, so that a limit gives the same result on every machine."""

from collections.abc import Callable
from dataclasses import dataclass

Progress = Callable[[str], None]


class OutOfWork(Exception):  # noqa: N818 - no error: the caller answers with what is known so far
    """The limit on work is reached, or a search has come to its end."""


@dataclass(slots=True)
class Work:
    """A count of pair tests, with an optional limit, and where to tell how far it is.

    One unit is one pair of polynomials that is tested for small factors.
    """

    limit: int | None = None
    progress: Progress | None = None
    done: int = 0

    def spend(self, units: int) -> None:
        """Count work that is about to be done; ``OutOfWork`` if it would exceed the limit."""
        if self.limit is not None and self.done + units > self.limit:
            raise OutOfWork
        self.done += units

    def report(self, phrase: str) -> None:
        """Say in a few words what is being done."""
        if self.progress is not None:
            self.progress(phrase)
