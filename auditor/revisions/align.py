"""Which channels of two machines agree under one state map: as many as can be found together."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from auditor.errors import InternalError
from auditor.notation import Matrix, Vector
from auditor.revisions.inversion import find_inversions
from auditor.revisions.relations import Relations
from auditor.revisions.steady import Steady

RowPair = tuple[Vector, Vector]
_SEEDS = 8
# A map under which less than two of so many pairs agree is not followed further, nor one that its seed does not make.
_GLANCE = 48


@dataclass(frozen=True, slots=True)
class Alignment:
    """A state map and the pairs that agree under it: place among the pairs → whether the new one is inverted."""

    relations: Relations
    inverted: Mapping[int, bool]

    @property
    def size(self) -> tuple[int, int]:
        """The number of pairs that agree, and how many of them without inversion: the more the better."""
        return len(self.inverted), sum(not inverted for inverted in self.inverted.values())


def align(old_step: Matrix, new_step: Matrix, pairs: Sequence[RowPair]) -> Alignment:
    """Return the largest set of pairs found that agree under one map; it is complete where all pairs can agree.

    Each pair that disagrees with all maps so far is a seed of another one, until more than half of the pairs agree.
    """
    if whole := complete(old_step, new_step, pairs):
        return whole
    best = Alignment(Relations(old_step, new_step), {})
    tried: set[int] = set()
    for _ in range(_SEEDS):
        fresh = [place for place, (old, new) in enumerate(pairs) if place not in tried and old > 1 and new > 1]
        order = [*fresh[:1], *(place for place in range(len(pairs)) if place not in fresh[:1])]
        found = _grow(old_step, new_step, pairs, order)
        if found.size > best.size:
            best = found
        tried |= set(found.inverted) | set(fresh[:1])
        if 2 * len(best.inverted) > len(pairs) or len(fresh) <= 1:
            break
    return best


def _grow(old_step: Matrix, new_step: Matrix, pairs: Sequence[RowPair], order: Sequence[int]) -> Alignment:
    relations, inverted = Relations(old_step, new_step), dict[int, bool]()
    for seen, place in enumerate(order):
        if (seen == 1 and not inverted) or (seen == _GLANCE and len(inverted) < 2):
            break
        old, new = pairs[place]
        if relations.relate(old, new):
            inverted[place] = False
        elif relations.relate(old, new ^ 1):
            inverted[place] = True
    return Alignment(relations, inverted)


def complete(old_step: Matrix, new_step: Matrix, pairs: Sequence[RowPair]) -> Alignment | None:
    """Return an alignment of all pairs with few of them inverted, None where there is none."""
    relations = Relations(old_step, new_step)
    if all(relations.relate(old, new) for old, new in pairs):
        return Alignment(relations, dict.fromkeys(range(len(pairs)), False))
    inverted = find_inversions(old_step, new_step, pairs)
    if inverted is None:
        return None
    relations = Relations(old_step, new_step)
    for place, (old, new) in enumerate(pairs):
        if not relations.relate(old, new ^ (inverted >> place & 1)):
            raise InternalError("inversions that were solved for contradict the rows")
    return Alignment(relations, {place: bool(inverted >> place & 1) for place in range(len(pairs))})


def agreeing(relations: Relations, pairs: Sequence[RowPair]) -> Alignment:
    """Return which pairs agree under relations already made."""
    inverted = {}
    for place, (old, new) in enumerate(pairs):
        if relations.holds(old, new):
            inverted[place] = False
        elif relations.holds(old, new ^ 1):
            inverted[place] = True
    return Alignment(relations, inverted)


def align_registers(old: Steady, new: Steady, names: Sequence[tuple[int, int]], least: int) -> Relations | None:
    """Return the map that elements of one name in both registers make, complements allowed.

    None where fewer than ``least`` are seen in both machines, or where they make no map: the names then say nothing.
    """
    seen = [(old.elements[i], new.elements[j]) for i, j in names if i in old.elements and j in new.elements]
    if len(seen) < least:
        return None
    found = complete(old.step, new.step, seen)
    return found.relations if found and found.relations.dimension == old.width == new.width else None
