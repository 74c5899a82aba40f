"""Whether the channels only changed places: the streams of one machine are those of the other in another order."""

from collections.abc import Sequence

from auditor.revisions.align import RowPair
from auditor.revisions.relations import Relations
from auditor.revisions.steady import Steady

# Channels that are tried for the first one, times the dimension of the machines: a second or two.
_WORK = 1 << 17


def find_permutation(old: Steady, new: Steady, pairs: Sequence[RowPair]) -> Relations | None:
    """Return the map under which every old stream is some new one, one to one; None where none is found.

    It is sought by the first channel that is not constant: each new one in turn is taken for it. What more than one
    cyclic part would need is left out: a map that binds only some of the channels is no answer.
    """
    first = next((row for row, _ in pairs if row > 1), None)
    if first is None or old.width != new.width:
        return None
    targets = [row for _, row in pairs if row > 1]
    wanted = {row >> 1 for row in targets}
    for row in dict.fromkeys(targets[: _WORK // max(1, old.width)]):
        for inverted in (0, 1):
            relations = Relations(old.step, new.step)
            if relations.relate(first, row ^ inverted) and _all_found(relations, pairs, wanted):
                return relations
    return None


def _all_found(relations: Relations, pairs: Sequence[RowPair], wanted: set[int]) -> bool:
    images = set()
    for row, _ in pairs:
        image = relations.to_new(row)
        if image is None or (row > 1 and image >> 1 not in wanted):
            return False
        images.add(image >> 1)
    return wanted <= images
