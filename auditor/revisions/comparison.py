"""What two revisions have in common and what sets them apart: the noun of this room."""

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Literal, TypeAlias

from auditor.notation import SourcePlace, Vector
from auditor.risks.finding import Finding

Outcome: TypeAlias = Literal["same", "differs", "undecided"]
MatchedBy: TypeAlias = Literal["name", "behaviour"]
ChannelStatus: TypeAlias = Literal[
    "same",
    "inverted",
    "shifted",
    "permuted",
    "reversed",
    "decimated",
    "different",
    "undecided",
    "refused",
    "added",
    "removed",
]
# Classes under which every stream of one machine is one of the other, channel by channel.
ALIKE = ("identical", "re-encoded")


@dataclass(frozen=True, slots=True)
class ChannelFacts:
    """A channel in one revision: taps as "element" or "element(t-k)", phase and nearest neighbour by name."""

    taps: tuple[str, ...]
    inverted: bool | None
    lead: int | None
    nearest: str | None
    separation: int | None


@dataclass(frozen=True, slots=True)
class ChannelChange:
    """A channel in both revisions, or in one of them.

    ``shift``     y_new(t) = y_old(t + shift) + inverted under the state map; None where there is none or it is open
    ``carries``   of a permuted channel: the old channel whose stream it now carries
    """

    old: str | None
    new: str | None
    matched_by: MatchedBy | None
    status: ChannelStatus
    shift: int | None = None
    inverted: bool | None = None
    carries: str | None = None
    before: ChannelFacts | None = None
    after: ChannelFacts | None = None


@dataclass(frozen=True, slots=True)
class FlipFlopFacts:
    """A storage element in one revision; ``reset`` is what its asynchronous pins give; fan-out over all its outputs."""

    cell: str
    reset: int | None
    direct_fan_out: int
    fan_out: int
    xor_fan_out: int | None


@dataclass(frozen=True, slots=True)
class FlipFlopChange:
    """A storage element in both revisions, or in one; ``inverted``: the new one stores the complement."""

    old: str | None
    new: str | None
    matched_by: MatchedBy | None
    inverted: bool
    before: FlipFlopFacts | None
    after: FlipFlopFacts | None


@dataclass(frozen=True, slots=True)
class ChangedNet:
    """A net whose function changed although all that its driver reads kept theirs: its driver did it.

    ``feeds``   the channels that it moves; ``rows`` the storage elements whose row of A it moves
    """

    net: str
    instance: str
    cell: str
    place: SourcePlace
    feeds: tuple[str, ...]
    rows: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class FindingChanges:
    """Findings by what became of them; ``worse`` pairs the old one with the new one."""

    gained: tuple[Finding, ...]
    lost: tuple[Finding, ...]
    worse: tuple[tuple[Finding, Finding], ...]


@dataclass(frozen=True, slots=True)
class StateMap:
    """x_new = S x_old + p: ``rows`` of S by new element, over the old elements; None where no channel sees it."""

    rows: tuple[Vector | None, ...]
    offset: Vector


@dataclass(frozen=True, slots=True)
class FromReset:
    """How the streams run from reset, compared from the cycle ``known_from`` at which all of them are determined.

    ``agree``   every channel carries the same from then on; None where the reset states are not known (``because``)
    ``agree_from``  the cycle from which they do, None if never
    ``shift``   y_new(t) = y_old(t + shift) in the long run, 0 included; None where there is none or it is open
    ``first``   the first (cycle, place in the pairs of channels) at which they differ
    """

    agree: bool | None
    because: str = ""
    known_from: int = 0
    agree_from: int | None = None
    shift: int | None = None
    first: tuple[int, int] | None = None


@dataclass(frozen=True, slots=True)
class Witness:
    """States from which the two netlists differ on a channel in a cycle; bit k is element k of the machine.

    ``start``  how the states belong together, in words        ``confirmed``  the gates were simulated and did differ
    """

    old_state: Vector
    new_state: Vector
    cycle: int
    old_channel: str
    new_channel: str
    start: str
    confirmed: bool = False


@dataclass(frozen=True, slots=True)
class Structure:
    """The size of a cone: instances by cell, area where the library states it for all, XOR figures over channels."""

    cells: Mapping[str, int]
    area: float | None
    xor_inputs: int
    xor_depth: int
    smallest_separation: int | None


@dataclass(frozen=True, slots=True)
class Comparison:
    """Two revisions compared under one mode.

    ``parts``   the class, as words that belong together: "identical" or "re-encoded", "shifted" ...
    ``holds_from``  the cycle from which the class holds for every state; None where it says nothing of that kind
    ``factor``  of decimated streams: y_new(t) = y_old(factor t), up to a shift a channel unless ``one_map``
    ``remarks`` sentences on what could not be compared, or what else sets the two apart
    """

    outcome: Outcome
    parts: tuple[str, ...]
    holds_from: int | None
    state_map: StateMap | None
    shift: int | None
    factor: int | None
    one_map: bool
    reset: FromReset
    channels: tuple[ChannelChange, ...]
    findings: FindingChanges
    flip_flops: tuple[FlipFlopChange, ...]
    changed_nets: tuple[ChangedNet, ...]
    witness: Witness | None
    before: Structure
    after: Structure
    remarks: tuple[str, ...]

    @property
    def name(self) -> str:
        """The class in words."""
        return ", ".join(self.parts)
