"""The draft as data: the candidates, and the plan that is proposed where one of them is clear. A noun of this room."""

from dataclasses import dataclass

from auditor.drafting.candidate import Candidate, Constant
from auditor.drafting.exits import Exit


@dataclass(frozen=True, slots=True)
class ChannelGuess:
    """A net that was looked at as a channel: ``kept`` where it is proposed; why, or why not."""

    name: str
    kept: bool
    reason: str


@dataclass(frozen=True, slots=True)
class Proposal:
    """What the plan states. ``registers`` index the candidates; ``chain_lengths`` are of the shift registers fed."""

    registers: tuple[int, ...]
    constants: tuple[Constant, ...]
    channels: tuple[ChannelGuess, ...]
    clock: str
    chain_lengths: tuple[int, ...]

    @property
    def names(self) -> tuple[str, ...]:
        """The channels that are proposed."""
        return tuple(channel.name for channel in self.channels if channel.kept)


@dataclass(frozen=True, slots=True)
class Draft:
    """All that drafting found.

    ``exits``     of each candidate, in the same order
    ``passed_over``  loops beyond the bound that were not looked into
    ``proposal``  None where none is clear; ``because`` then says what was tried
    """

    top: str
    candidates: tuple[Candidate, ...]
    exits: tuple[tuple[Exit, ...], ...]
    passed_over: int
    proposal: Proposal | None
    because: str
