"""Which chains receive the same bits some cycles apart, found on the rows: no logarithm is needed.

Chain i leads chain k by e cycles if row_i = row_k S^e up to the constant, S the step. With e = g B - b, 0 <= b < B,
that is row_i S^b = row_k S^(g B), because S can be undone once the transient is over. So a table of B rows a chain,
met by as many giant steps as the reach needs, finds all of them (the balance of Shanks 1971).
"""

from dataclasses import dataclass, replace
from math import isqrt

import numpy as np
from numpy.typing import NDArray

from auditor.array.rows import ChainRows, Indices, Keys, Rows, Words, constants, same_linear_part

_MOST_STEPS = 1 << 26  # rows that are made
_MOST_MEETINGS = 1 << 24


@dataclass(frozen=True, slots=True)
class Meetings:
    """One entry each: chain ``first`` leads chain ``second`` by ``distance`` cycles, 0 <= distance < reach.

    Chains count as in the rows. For distance 0, first < second. ``complement``: the streams are complements.
    """

    first: Indices
    second: Indices
    distance: NDArray[np.int64]
    complement: NDArray[np.bool_]

    def taken(self, which: Indices | slice) -> "Meetings":
        """Return the entries at these places, in that order."""
        return Meetings(self.first[which], self.second[which], self.distance[which], self.complement[which])


def find_meetings(rows: ChainRows, reach: int) -> Meetings | None:
    """Return all meetings closer than ``reach`` cycles, None where that exceeds the work that is done."""
    count = len(rows.chains)
    if not count or reach < 1:
        return _joined([])
    small = isqrt(reach - 1) + 1
    giants = -(-(reach - 1) // small)
    if count * (small + giants) > _MOST_STEPS:
        return None
    keys = Keys(rows.width)
    table = _progression(rows, 1, small, rows.packed)
    listed = _Table(keys(table), table)
    found = [_in_step(listed, count)]
    total = len(found[0].first)
    together = max(1, (1 << 16) // count)
    current = rows.later(small)(rows.packed)
    for done in range(0, giants, together):
        here = min(together, giants - done)
        block = _progression(rows, small, here, current)
        current = rows.later(small)(block[-count:])
        query, entry = listed.equal(keys(block), block)
        distance = (done + query // count + 1) * small - entry // count
        kept = distance < reach
        query, entry, distance = query[kept], entry[kept], distance[kept]
        complement = constants(block[query]) != constants(table[entry])
        found.append(Meetings(entry % count, query % count, distance, complement))
        total += len(query)
        if total > _MOST_MEETINGS:
            return None
    return _joined(found)


def comes_again_within(rows: ChainRows, reach: int) -> bool | None:
    """Whether the stream of the first chain, or its complement, is itself again in less than ``reach`` cycles.

    None where that exceeds the work that is done.
    """
    alone = replace(rows, numbers=rows.numbers[:1], chains=rows.chains[:1], rows=rows.rows[:1])
    meetings = find_meetings(alone, reach)
    return None if meetings is None else bool(len(meetings.first))


def _progression(rows: ChainRows, stride: int, count: int, start: Rows) -> Rows:
    """Return start, start S^stride, ... one below the other, ``count`` times."""
    advance = rows.later(stride)
    blocks = [start]
    while len(blocks) < count:
        blocks.append(advance(blocks[-1]))
    return np.concatenate(blocks[:count])


class _Table:
    """Rows by their keys."""

    def __init__(self, keys: Words, rows: Rows) -> None:
        self.rows = rows
        self.order = np.argsort(keys, kind="stable")
        self.sorted = keys[self.order]

    def equal(self, keys: Words, rows: Rows) -> tuple[Indices, Indices]:
        """Return (query, entry) of all queries whose linear part is that of an entry."""
        low = np.searchsorted(self.sorted, keys, "left")
        counts = np.searchsorted(self.sorted, keys, "right") - low
        query = np.repeat(np.arange(len(keys)), counts)
        within = np.arange(len(query)) - np.repeat(np.cumsum(counts) - counts, counts)
        entry = self.order[low[query] + within]
        same = same_linear_part(rows[query], self.rows[entry])
        return query[same], entry[same]


def _in_step(listed: _Table, count: int) -> Meetings:
    """Return the chains whose rows are equal or complements at one and the same time."""
    first = listed.rows[:count]
    here = _Table(listed.sorted[np.argsort(listed.order)][:count], first)
    query, entry = here.equal(here.sorted[np.argsort(here.order)], first)
    kept = entry < query
    query, entry = query[kept], entry[kept]
    complement = constants(first[query]) != constants(first[entry])
    return Meetings(entry, query, np.zeros(len(query), np.int64), complement)


def _joined(found: list[Meetings]) -> Meetings:
    """Return the entries of all, by distance, then chains."""
    none = np.zeros(0, np.intp)
    first = np.concatenate([none, *(part.first for part in found)])
    second = np.concatenate([none, *(part.second for part in found)])
    distance = np.concatenate([np.zeros(0, np.int64), *(part.distance for part in found)])
    complement = np.concatenate([np.zeros(0, bool), *(part.complement for part in found)])
    return Meetings(first, second, distance, complement).taken(np.lexsort((second, first, distance)))
