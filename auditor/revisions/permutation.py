"""Whether the channels only changed places: the streams of one machine are those of the other in another order."""

from collections import Counter
from collections.abc import Collection, Sequence

from auditor.gf2 import matrix
from auditor.notation import Vector
from auditor.revisions.align import RowPair
from auditor.revisions.relations import Relations
from auditor.revisions.steady import Steady

# How many channels are tried for others, times the dimension of the machines: a second or two.
_WORK = 1 << 18
_LOOKS = 3


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
    glance = _Glance(old, new, ours, left)
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
        candidates = list(left) if place else [row for row in left if glance.fits(row)]
        for inverted in (0, 1):
            for row in candidates:
                grown = relations.copy()
                if grown.relate(ours[place], row ^ inverted):
                    branches.append((grown, place, left))
        waiting += reversed(branches)
    return None


class _Glance:
    """A quick look at what a new row for the first channel would mean for a few others that it binds."""

    def __init__(self, old: Steady, new: Steady, ours: Sequence[Vector], rows: Collection[Vector]) -> None:
        span, row, length = matrix.Span(), ours[0], 0
        while not span.add(row >> 1):
            row, length = matrix.row_times(row, old.step), length + 1
        bound = ((other >> 1, span.reduce(other >> 1)) for other in ours[1:])
        self._combinations = [combination for other, (rest, combination) in bound if other and not rest][:_LOOKS]
        self._step, self._length = new.step, length
        self._wanted = {other >> 1 for other in rows}

    def fits(self, row: Vector) -> bool:
        """Whether the images of the few are among the new channels, inverted or not."""
        powers = matrix.krylov(row, self._step, self._length)
        return all(matrix.row_times(few, powers) >> 1 in self._wanted for few in self._combinations)


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
