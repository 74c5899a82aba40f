"""How far apart channels are, from sorted leads: O(m log m) for nearest neighbours, never all pairs."""

from bisect import bisect_left
from collections.abc import Container, Iterable, Iterator, Mapping, Sequence

from auditor.phases.table import Closest, Infinite, Neighbour, Phase, PhaseClass, PhaseTable, Separation

Pair = tuple[int, int, int, bool]  # channel, channel, cycles, complement


def gap(group: PhaseClass, one: Phase, other: Phase) -> tuple[int, bool]:
    """Return the separation of two channels with known leads, and whether the streams are then complements.

    Both ways round are looked at. A shift that complements counts as one that does not: the streams carry the same
    information, so distances are taken modulo ``group.turn``.
    """
    if one.lead is None or other.lead is None or not group.modulus or not group.turn:
        raise ValueError("a gap needs two leads and their modulus")
    differ = one.inverted != other.inverted
    ways = []
    for difference in (one.lead - other.lead, other.lead - one.lead):
        turns, cycles = divmod(difference % group.modulus, group.turn)
        ways.append((cycles, differ != bool(turns)))
    return min(ways)


def separation(table: PhaseTable, i: int, j: int) -> Separation:
    """Return how far apart two channels are.

    ``Infinite`` for channels of two classes. None while undecided, and where one has no class because it is refused
    or constant.
    """
    if i == j:
        return 0
    one, other = table.phases[i], table.phases[j]
    if one.group is not None and other.group is not None and one.group != other.group:
        return Infinite()
    if one.group is not None and one.lead is not None and other.lead is not None:
        return gap(table.classes[one.group], one, other)[0]
    pair = find_close_pair(table, i, j)
    return pair[2] if pair else None


def find_close_pair(table: PhaseTable, i: int, j: int) -> Pair | None:
    """Return the pair of a bounded search with these two channels, the leading one first; None if there is none."""
    for channels in ((i, j), (j, i)):
        place = bisect_left(table.close_pairs, channels)
        if place < len(table.close_pairs) and table.close_pairs[place][:2] == channels:
            return table.close_pairs[place]
    return None


def pairs_closer_than(table: PhaseTable, bound: int) -> list[Pair]:
    """Return (i, j, cycles, complement), i < j, of all pairs known to be closer than the bound, nearest first.

    They are all there are where ``table.decides(bound)``.
    """
    found = [pair for group in table.classes for pair in _close_by_leads(group, table.phases, bound)]
    for i, j, cycles, complement in table.close_pairs:
        if cycles < bound and None in (table.phases[i].lead, table.phases[j].lead):
            found.append((min(i, j), max(i, j), cycles, complement))
    return sorted(found, key=lambda pair: (pair[2], pair[:2]))


def _close_by_leads(group: PhaseClass, phases: Sequence[Phase], bound: int) -> Iterator[Pair]:
    """Yield the close pairs of a class, by a window that slides once round the sorted leads."""
    turn = group.turn
    if not turn:
        return
    ring = sorted_leads(group, phases, turn)
    count = len(ring)
    for start, (lead, channel) in enumerate(ring):
        for step in range(1, count):
            later, other = ring[(start + step) % count]
            ahead = (later - lead) % turn if start + step < count else later + turn - lead
            # Half a turn ahead is half a turn behind too: the pair is taken from its first place only.
            if ahead >= bound or 2 * ahead > turn or (2 * ahead == turn and start + step >= count):
                break
            cycles, complement = gap(group, phases[channel], phases[other])
            yield min(channel, other), max(channel, other), cycles, complement


def sorted_leads(group: PhaseClass, phases: Sequence[Phase], turn: int) -> list[tuple[int, int]]:
    """Return (lead, channel) of the channels of a class with known leads, as they stand on the circle of one turn."""
    known = ((phases[channel].lead, channel) for channel in group.channels)
    return sorted((lead % turn, channel) for lead, channel in known if lead is not None)


def nearest_neighbours(
    classes: Sequence[PhaseClass],
    phases: Sequence[Phase],
    windows: Mapping[int, int],
    pairs: Iterable[Pair],
    cut: Container[int] = (),
) -> dict[int, Neighbour]:
    """Return the nearest neighbour of every channel for which it is certain; of equals the first channel.

    Some members of a class may have no lead, or not be recognised. ``windows`` gives such a class the bound below
    which leads and the pairs of a bounded search together still leave no pair out. ``cut`` are nets that feed no
    chain: they have a neighbour and are none.
    """
    candidates: dict[int, tuple[int, int, bool]] = {}

    def offer(channel: int, other: int, cycles: int, complement: bool) -> None:
        candidate = (cycles, other, complement)
        if other not in cut and (channel not in candidates or candidate < candidates[channel]):
            candidates[channel] = candidate

    for index, group in enumerate(classes):
        for channel, other in _ring_neighbours(group, phases, cut):
            cycles, complement = gap(group, phases[channel], phases[other])
            if index not in windows or cycles < windows[index]:
                offer(channel, other, cycles, complement)
    for i, j, cycles, complement in pairs:
        offer(i, j, cycles, complement)
        offer(j, i, cycles, complement)
    return {
        channel: Neighbour(other, cycles, complement) for channel, (cycles, other, complement) in candidates.items()
    }


def _ring_neighbours(group: PhaseClass, phases: Sequence[Phase], cut: Container[int]) -> Iterator[tuple[int, int]]:
    """Yield each member with those that can be its nearest: one in step with it, else the first on either side."""
    ring = sorted_leads(group, phases, group.turn) if group.turn else []
    places: dict[int, list[int]] = {}
    for lead, channel in ring:
        if channel not in cut:
            places.setdefault(lead, []).append(channel)
    leads = list(places)
    for lead, channel in ring if leads else []:
        at = bisect_left(leads, lead)
        in_step = places.get(lead, [])
        sides = (leads[at - 1], leads[(at + bool(in_step)) % len(leads)])
        others = [other for other in in_step[:2] if other != channel] or [places[side][0] for side in sides]
        yield from ((channel, other) for other in others[:2] if other != channel)


def closest(channels: Iterable[int], neighbours: Mapping[int, Neighbour]) -> Closest | None:
    """Return the two nearest channels of a class, of equals the first; None where nobody's neighbour is known."""
    known = [(channel, neighbours[channel]) for channel in channels if channel in neighbours]
    if not known:
        return None
    cycles, i, j, complement = min(
        (near.separation, min(channel, near.channel), max(channel, near.channel), near.complement)
        for channel, near in known
    )
    return Closest((i, j), cycles, complement)
