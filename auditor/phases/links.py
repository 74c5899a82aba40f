"""What a bounded search tells without logarithms: pairs of channels closer than a window, and chains of such pairs."""

from collections.abc import Collection, Sequence
from dataclasses import dataclass
from itertools import chain, combinations, product

from auditor.gf2.window import close_pairs
from auditor.phases.classes import CyclicSpace
from auditor.phases.streams import Orbit, Streams


@dataclass(frozen=True, slots=True)
class Links:
    """The search of one cyclic space. Members in step with each other, going by their place in the space, are a team.

    ``teams``    the members of each team, ascending         ``team``    the team of each member
    ``pairs``    (a, b, d): team a leads team b by d cycles, 0 < d < window; one for each pair, the least d
    ``head``     for each team, the one that all teams linked to it by a chain of pairs lead
    ``offset``   for each team, its lead against the head, >= 0, not reduced
    """

    teams: tuple[tuple[int, ...], ...]
    team: tuple[int, ...]
    pairs: tuple[tuple[int, int, int], ...]
    head: tuple[int, ...]
    offset: tuple[int, ...]

    def difference(self, member: int, base: int) -> int | None:
        """Return the lead of a member against a base, of any sign; None where no chain links them."""
        a, b = self.team[member], self.team[base]
        return self.offset[a] - self.offset[b] if self.head[a] == self.head[b] else None


def find_links(space: CyclicSpace, window: int) -> Links:
    """Search a space for all pairs of members closer than the window."""
    teams: dict[int, list[int]] = {}
    for member, unit in enumerate(space.units):
        teams.setdefault(unit, []).append(member)
    numbered = {unit: number for number, unit in enumerate(teams)}
    nearest: dict[tuple[int, int], tuple[int, int, int]] = {}
    for a, b, d in close_pairs(list(teams), space.annihilator, window):
        pair = min(a, b), max(a, b)
        if pair not in nearest or d < nearest[pair][2]:
            nearest[pair] = a, b, d
    pairs = tuple(nearest[pair] for pair in sorted(nearest))
    return Links(
        tuple(map(tuple, teams.values())), tuple(numbered[u] for u in space.units), pairs, *_chains(len(teams), pairs)
    )


def _chains(count: int, pairs: Sequence[tuple[int, int, int]]) -> tuple[tuple[int, ...], tuple[int, ...]]:
    """Return head and offset of every team."""
    neighbours: list[list[tuple[int, int]]] = [[] for _ in range(count)]
    for a, b, d in pairs:
        neighbours[a].append((b, -d))
        neighbours[b].append((a, d))
    head, offset = list(range(count)), [0] * count
    reached = [False] * count
    for first in range(count):
        if reached[first]:
            continue
        reached[first], linked = True, [first]
        for team in linked:
            for other, lead in neighbours[team]:
                if not reached[other]:
                    reached[other], offset[other] = True, offset[team] + lead
                    linked.append(other)
        last = min(linked, key=lambda team: (offset[team], team))
        lowest = offset[last]
        for team in linked:
            head[team], offset[team] = last, offset[team] - lowest
    return tuple(head), tuple(offset)


def proved_pairs(
    streams: Streams, space: CyclicSpace, links: Links, settled: Collection[int]
) -> list[tuple[int, int, int, bool]]:
    """Return (i, j, cycles, complement) by channel numbers, i leading j, each proved on the rows.

    Chains whose members are all settled, by a lead against their reference, are left out.
    """
    open_heads = {links.head[links.team[member]] for member in range(len(space.members)) if member not in settled}
    orbits = {head: Orbit(streams, space.members[links.teams[head][0]]) for head in sorted(open_heads)}
    inverted = {
        member: orbits[links.head[team]].align(space.members[member], links.offset[team]).inverted
        for member, team in enumerate(links.team)
        if links.head[team] in orbits
    }
    in_step = ((a, a, 0) for a in range(len(links.teams)))
    found = []
    for a, b, d in chain(in_step, links.pairs):
        if links.head[a] in orbits:
            members = combinations(links.teams[a], 2) if a == b else product(links.teams[a], links.teams[b])
            found += [(space.members[i], space.members[j], d, inverted[i] != inverted[j]) for i, j in members]
    return found
