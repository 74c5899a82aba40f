"""Shows on a terminal which stage is running."""

from collections.abc import Callable, Iterator
from contextlib import contextmanager
from typing import TypeAlias

from rich.console import Console
from rich.text import Text

Step: TypeAlias = Callable[[str], None]


def silent(name: str) -> None:
    """Take the name of a stage and show nothing."""
    del name


@contextmanager
def stages(console: Console, enabled: bool = True) -> Iterator[Step]:
    """Yield a callable that is told the name of the stage that starts; on a terminal it shows it, and cleans up after.

    ``console`` should write to stderr. In a pipe, or where not ``enabled``, nothing is written.
    """
    if not enabled or not console.is_terminal:
        yield silent
        return
    with console.status(Text("starting"), spinner="line") as status:
        yield lambda name: status.update(Text(name))
