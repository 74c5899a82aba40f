"""What a bounded search tells without logarithms: pairs of channels closer than a window, and chains of such pairs."""

from collections.abc import Sequence
from dataclasses import dataclass

from auditor.gf2.window import close_pairs
from auditor.phases.classes import CyclicSpace
from auditor.phases.streams import Orbit, Streams


@dataclass(frozen=True, slots=True)
class Links:
    """The search of one cyclic space; its members go by their place in it.

    ``pairs``    (i, j, d): member i leads member j by d cycles, 0 <= d < window; one for each pair, the least d
    ``head``     the first of the members that a member is linked to by a chain of pairs
    ``offset``   the lead of a member against the head, >= 0, not reduced
    """

    pairs: tuple[tuple[int, int, int], ...]
    head: tuple[int, ...]
    offset: tuple[int, ...]

    def difference(self, member: int, base: int) -> int | None:
        """Return the lead of a member against a base, of any sign; None where no chain links them."""
        return self.offset[member] - self.offset[base] if self.head[member] == self.head[base] else None


def find_links(space: CyclicSpace, window: int) -> Links:
    """Search a space for all pairs of members closer than the window."""
    nearest: dict[tuple[int, int], tuple[int, int, int]] = {}
    for i, j, d in close_pairs(space.units, space.annihilator, window):
        if i == j:
            continue
        pair, found = (min(i, j), max(i, j)), (i, j, d)
        if pair not in nearest or d < nearest[pair][2]:
            nearest[pair] = found
    pairs = tuple(nearest[pair] for pair in sorted(nearest))
    head, offset = _chains(len(space.members), pairs)
    return Links(pairs, head, offset)


def _chains(count: int, pairs: Sequence[tuple[int, int, int]]) -> tuple[tuple[int, ...], tuple[int, ...]]:
    """Return head and offset of every member; the head is the one that all others of its chain lead."""
    neighbours: list[list[tuple[int, int]]] = [[] for _ in range(count)]
    for i, j, d in pairs:
        neighbours[i].append((j, -d))
        neighbours[j].append((i, d))
    head, offset = list(range(count)), [0] * count
    reached = [False] * count
    for first in range(count):
        if reached[first]:
            continue
        reached[first], chain = True, [first]
        for member in chain:
            for other, lead in neighbours[member]:
                if not reached[other]:
                    reached[other], offset[other] = True, offset[member] + lead
                    chain.append(other)
        last = min(chain, key=lambda member: (offset[member], member))
        lowest = offset[last]
        for member in chain:
            head[member], offset[member] = last, offset[member] - lowest
    return tuple(head), tuple(offset)


def proved_pairs(streams: Streams, space: CyclicSpace, links: Links) -> list[tuple[int, int, int, bool]]:
    """Return the pairs by channel numbers with their complement, each proved on the rows of the two channels."""
    heads = {links.head[i] for i, _, _ in links.pairs}
    orbits = {head: Orbit(streams, space.members[head]) for head in sorted(heads)}
    inverted = {
        member: orbits[head].align(space.members[member], links.offset[member]).inverted
        for member, head in enumerate(links.head)
        if head in orbits
    }
    return [(space.members[i], space.members[j], d, inverted[i] != inverted[j]) for i, j, d in links.pairs]
