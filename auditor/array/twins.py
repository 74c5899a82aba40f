"""Twin scan cells: those that hold the same bit, or its complement, whatever the state.

Where chain i leads chain k by e cycles, scan cells of the delays a and b are twins in one pattern if a - b = e, and
cells of a pattern and of the one q patterns of C clocks later if a - b = e - q C. Where the delays are 1, 2, ... the
cells j = max(1, 1 + e) ... min(L_1, L_2 + e) of the first chain have a partner.
"""

from collections import Counter
from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from auditor.array.meetings import Meetings, find_meetings
from auditor.array.rows import ChainRows
from auditor.array.scan_array import Chain, Place, TwinChains, Twins
from auditor.errors import InternalError

MOST_EXAMPLES = 100

Counts = NDArray[np.int64]


def find_twins(rows: ChainRows, window: int = 0, clocks: int = 0) -> Twins | None:
    """Return the twins in one pattern, and between patterns up to ``window`` of ``clocks`` cycles apart.

    None where the search exceeds the work that is done.
    """
    span = rows.greatest_delay + 1
    meetings = find_meetings(rows, span + window * clocks)
    if meetings is None:
        return None
    known = [number for number, chain in enumerate(rows.chains) if not chain.is_plain]
    meetings = _with_selves(meetings, known)
    here = _Counted(rows, meetings, 0, 0)
    twins, repeats = here.part(meetings.first != meetings.second), here.part(meetings.first == meetings.second)
    signed = _both_ways(meetings, len(rows.chains)) if window else meetings
    others = [_later(rows, signed, later, later * clocks) for later in range(1, window + 1)]
    near = meetings.distance[(meetings.first != meetings.second) & (meetings.distance < span)]
    return Twins(
        pairs=twins.total,
        chain_pairs=len(twins.chain_pairs),
        repeats=repeats.total,
        repeating=len(repeats.chain_pairs),
        window=window,
        across=sum(part.total for part in others),
        across_chains=len(set().union(*(part.chain_pairs for part in others))),
        nearest=int(near.min()) if len(near) else None,
        twinned=twins.chains,
        examples=(*twins.examples(), *repeats.examples(), *_most([e for part in others for e in part.examples()])),
    )


def _with_selves(meetings: Meetings, chains: Sequence[int]) -> Meetings:
    """Return the meetings and those of chains with themselves in step."""
    return Meetings(
        np.concatenate([np.array(chains, dtype=np.intp), meetings.first]),
        np.concatenate([np.array(chains, dtype=np.intp), meetings.second]),
        np.concatenate([np.zeros(len(chains), dtype=np.int64), meetings.distance]),
        np.concatenate([np.zeros(len(chains), dtype=bool), meetings.complement]),
    )


def _later(rows: ChainRows, meetings: Meetings, later: int, shift: int) -> "_Part":
    """Return the twins between patterns ``later`` apart; ``meetings`` stand by distance."""
    span = rows.greatest_delay + 1
    near = slice(*np.searchsorted(meetings.distance, [shift - span, shift + span]).tolist())
    counted = _Counted(rows, meetings.taken(near), later, shift)
    return counted.part(np.ones(len(counted.pairs), bool))


def _both_ways(meetings: Meetings, count: int) -> Meetings:
    """Return each meeting of two as seen from either chain, with a sign, and every chain met by itself in step.

    They stand by distance.
    """
    two = meetings.taken(np.flatnonzero((meetings.first != meetings.second) | (meetings.distance > 0)))
    turned = Meetings(
        np.concatenate([two.first, two.second]),
        np.concatenate([two.second, two.first]),
        np.concatenate([two.distance, -two.distance]),
        np.concatenate([two.complement, two.complement]),
    )
    signed = _with_selves(turned, range(count))
    return signed.taken(np.argsort(signed.distance, kind="stable"))


class _Counted:
    """How many pairs of scan cells agree at each meeting, ``shift`` = q C cycles taken off its distance."""

    def __init__(self, rows: ChainRows, meetings: Meetings, later: int, shift: int) -> None:
        self.rows, self.meetings, self.later, self.shift = rows, meetings, later, shift
        difference = meetings.distance - shift
        lengths = np.array([chain.length for chain in rows.chains], dtype=np.int64)
        first, second = lengths[meetings.first], lengths[meetings.second]
        self.pairs = np.maximum(0, np.minimum(first, second + difference) - np.maximum(0, difference))
        own = np.array([not chain.is_plain for chain in rows.chains], dtype=bool)
        for place in np.flatnonzero(own[meetings.first] | own[meetings.second]).tolist():
            i, k = int(meetings.first[place]), int(meetings.second[place])
            same = i == k and not meetings.distance[place] and not later
            self.pairs[place] = _equal_delays(rows.chains[i], rows.chains[k], int(difference[place]), same)

    def part(self, chosen: NDArray[np.bool_]) -> "_Part":
        """Return the meetings chosen, as far as scan cells agree there."""
        return _Part(self, np.flatnonzero(chosen & (self.pairs > 0)))

    def example(self, place: int) -> TwinChains:
        """Return the meeting at one place, with its first pair of scan cells."""
        meetings, chains = self.meetings, self.rows.chains
        i, k = int(meetings.first[place]), int(meetings.second[place])
        same = i == k and not meetings.distance[place] and not self.later
        a, b = _first_pair(chains[i], chains[k], int(meetings.distance[place]) - self.shift, same)
        inverted = chains[i].inverted(a) != chains[k].inverted(b)
        numbers = self.rows.numbers
        return TwinChains(
            chains=(numbers[i], numbers[k]),
            distance=int(meetings.distance[place]),
            later=self.later,
            pairs=int(self.pairs[place]),
            example=(Place(numbers[i], a), Place(numbers[k], b)),
            complement=bool(meetings.complement[place]) != inverted,
        )


class _Part:
    """Some of the meetings that were counted."""

    def __init__(self, counted: _Counted, places: NDArray[np.intp]) -> None:
        self.counted, self.places = counted, places
        self.total = sum(counted.pairs[places].tolist())
        first, second = counted.meetings.first[places], counted.meetings.second[places]
        numbers = np.minimum(first, second) * len(counted.rows.chains) + np.maximum(first, second)
        self.chain_pairs = set(np.unique(numbers).tolist())
        concerned = np.unique(np.concatenate([first, second])).tolist()
        self.chains = tuple(counted.rows.numbers[chain] for chain in concerned)

    def examples(self) -> list[TwinChains]:
        """Return those with the most pairs of scan cells; of equals the nearest, then the first chains."""
        order = np.argsort(-self.counted.pairs[self.places], kind="stable")[:MOST_EXAMPLES]
        return [self.counted.example(place) for place in self.places[order].tolist()]


def _most(examples: Sequence[TwinChains]) -> list[TwinChains]:
    return sorted(examples, key=lambda twin: (-twin.pairs, twin.later))[:MOST_EXAMPLES]


def _equal_delays(one: Chain, other: Chain, difference: int, same: bool) -> int:
    """Count the pairs of scan cells whose delays differ by ``difference``; ``same``: of one load of one chain."""
    partners = Counter(other.delays)
    if same:
        return sum(count * (count - 1) // 2 for count in partners.values())
    return sum(partners[delay - difference] for delay in one.delays)


def _first_pair(one: Chain, other: Chain, difference: int, same: bool) -> tuple[int, int]:
    """Return the first scan cell of one chain that has a partner, and the first such; arguments as above."""
    if one.is_plain and other.is_plain:
        first = max(0, difference)
        return first, first - difference
    places: dict[int, list[int]] = {}
    for place, delay in enumerate(other.delays):
        places.setdefault(delay, []).append(place)
    for a, delay in enumerate(one.delays):
        partners = [b for b in places.get(delay - difference, []) if not same or b > a]
        if partners:
            return a, partners[0]
    raise InternalError("scan cells were counted as twins where no two delays agree")
