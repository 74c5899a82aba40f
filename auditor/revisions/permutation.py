"""Whether the channels only changed places: the streams of one machine are those of the other in another order."""

from collections import Counter
from collections.abc import Sequence

from auditor.notation import Vector
from auditor.revisions.align import RowPair
from auditor.revisions.relations import Relations
from auditor.revisions.steady import Steady

# How many channels are tried for others, times the dimension of the machines: a second or two.
_WORK = 1 << 18


def find_permutation(old: Steady, new: Steady, pairs: Sequence[RowPair]) -> Relations | None:
    """Return the map under which every old stream is some new one, one to one; None where none is found.

    Channels that the map binds must be among the new ones that are left. For one that it does not bind yet each of
    those is tried in turn, complemented as a last resort, and given up as soon as a bound channel is not found.
    """
    if old.width != new.width:
        return None
    ours = [row for row, _ in pairs]
    left = Counter(row for _, row in pairs)
    tries = _WORK // max(1, old.width)
    waiting = [(Relations(old.step, new.step), 0, left)]
    while waiting and tries:
        relations, place, left = waiting.pop()
        tries -= 1
        found = _bound(relations, ours, place, left)
        if found is None:
            continue
        place, left = found
        if place == len(ours):
            return relations
        branches = []
        for inverted in (0, 1):
            for row in left:
                grown = relations.copy()
                if grown.relate(ours[place], row ^ inverted):
                    branches.append((grown, place, left))
        waiting += reversed(branches)
    return None


def _bound(
    relations: Relations, ours: Sequence[Vector], place: int, left: Counter[Vector]
) -> tuple[int, Counter[Vector]] | None:
    """Return the first channel from ``place`` on that is not bound, and the new rows left; None if one is missing."""
    left = left.copy()
    while place < len(ours):
        image = relations.to_new(ours[place])
        if image is None:
            break
        image = image if left[image] else image ^ 1
        if not left[image]:
            return None
        left[image] -= 1
        left += Counter()  # drops what is used up
        place += 1
    return place, left
