"""Which channels belong together: cyclic spaces first, then classes of streams that are shifts of each other."""

from collections.abc import Sequence
from dataclasses import dataclass

from auditor.errors import InternalError
from auditor.gf2 import matrix
from auditor.gf2.factorisation import factor
from auditor.gf2.polynomial import remainder
from auditor.notation import Polynomial
from auditor.phases.leads import Coordinates
from auditor.phases.streams import Streams


@dataclass(frozen=True, slots=True)
class CyclicSpace:
    """Channels whose steady rows generate one and the same space under A.

    Member k has the steady row units[k](A) times that of the first member; a unit has no factor in common with
    the annihilator f, which is given by its irreducible factors and their multiplicities.
    """

    members: tuple[int, ...]
    units: tuple[Polynomial, ...]
    annihilator: Polynomial
    factors: tuple[tuple[Polynomial, int], ...]


def cyclic_spaces(streams: Streams) -> list[CyclicSpace]:
    """Return the spaces of all channels that are not constant in the long run, by first member.

    A channel outside the space of another, or inside but with a smaller annihilator, is no shift of it. A need not
    be cyclic: two registers may have one polynomial, and then equal annihilators prove nothing. ``InternalError``
    if a row is not steady.
    """
    step = streams.linear_step()
    pending = {channel: row >> 1 for channel, row in streams.steady.items() if row > 1}
    spaces = []
    while pending:
        row, span = next(iter(pending.values())), matrix.Span()
        while not (annihilator := span.add(row)):
            row = matrix.row_times(row, step)
        if not annihilator & 1:
            raise InternalError(f"a row is not steady after the transient: its annihilator is {annihilator:#x}")
        factors = factor(annihilator)
        units: dict[int, Polynomial] = {}
        for channel, steady in pending.items():
            rest, unit = span.reduce(steady)
            if not rest and all(remainder(unit, irreducible) for irreducible, _ in factors):
                units[channel] = unit
        pending = {channel: steady for channel, steady in pending.items() if channel not in units}
        spaces.append(CyclicSpace(tuple(units), tuple(units.values()), annihilator, factors))
    return spaces


def alike(space: CyclicSpace, found: Coordinates) -> list[list[int]]:
    """Return the members, by their place in the space, that share a signature; each group and all by first place."""
    groups: dict[tuple[int, ...], list[int]] = {}
    for place in range(len(space.members)):
        groups.setdefault(found.signature(place), []).append(place)
    return list(groups.values())


def choose_reference(channels: Sequence[int], named: int | None, cut: Sequence[bool]) -> int:
    """Return the named channel if it is among these, else the first that is no net behind a spoiled channel."""
    if named in channels:
        return channels[channels.index(named)]
    return next((channel for channel in channels if not cut[channel]), channels[0])
