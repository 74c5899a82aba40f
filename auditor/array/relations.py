"""Sets of three and four scan cells whose sum is constant for every state: no test can give them another parity."""

from math import comb

import numpy as np

from auditor.array.distinct import DistinctCells, place_of
from auditor.array.forms import Forms, Positions, joined, up_to_shift
from auditor.array.four import four_cell_forms, is_bearable
from auditor.array.scan_array import Relation, Relations
from auditor.array.three import Progress, three_cell_forms

MOST_EXAMPLES = 100
_MOST_TOLD_APART = 50_000  # first forms
_MOST_KEPT = 1 << 22  # first forms in memory: beyond, they are counted, and examples come from the first ones
_MOST_SHIFTS = 1 << 26  # sets of distinct cells whose twins are multiplied out


def look_ups(cells: DistinctCells) -> int:
    """Return how many sums the search for three-cell relations looks up, at most."""
    return int(cells.starts.sum()) * len(cells)


def find_relations(
    cells: DistinctCells, size: int, dimension: int, position: Positions, tell: Progress
) -> Relations | None:
    """Return all relations of three or four distinct scan cells; ``position`` tells which are shifts of each other.

    None where that exceeds the work that is done.
    """
    if size == 4 and not is_bearable(cells):
        return None
    kept: list[Forms] = []
    count = places = ones = 0
    for part in (three_cell_forms if size == 3 else four_cell_forms)(cells, tell):
        count += len(part.places)
        places += int(part.places.sum())
        ones += int(part.places[part.ones].sum())
        if count <= _MOST_KEPT:
            kept.append(part)
    forms = joined(kept, size)
    relations = None
    if count <= _MOST_TOLD_APART:
        relations = len({up_to_shift(cells, entries, position) for entries in forms.entries.tolist()})
    first = zip(forms.entries[:MOST_EXAMPLES].tolist(), forms.ones.tolist(), forms.places.tolist(), strict=False)
    return Relations(
        size=size,
        distinct=len(cells),
        relations=relations,
        places=places,
        ones=ones,
        cell_sets=_cell_sets(cells, forms, places) if count <= _MOST_KEPT else None,
        expected=comb(len(cells), size) / 2**dimension,
        examples=tuple(
            Relation(tuple(sorted(place_of(cells, entry) for entry in entries)), int(one), places)
            for entries, one, places in first
        ),
    )


def _cell_sets(cells: DistinctCells, forms: Forms, total: int) -> int | None:
    """Return the sets of scan cells, every merged twin told apart: the product of the weights at every shift."""
    if (cells.weight == 1).all():
        return total
    if total > _MOST_SHIFTS:
        return None
    entries, places, weight = forms.entries, forms.places, cells.weight
    if int(weight.max()) ** entries.shape[1] * len(entries) >= 1 << 62:
        weight = weight.astype(object)
    sets, shift = 0, 0
    while len(entries):
        sets += int(np.prod(weight[entries + shift], axis=1).sum())
        shift += 1
        going_on = places > shift
        entries, places = entries[going_on], places[going_on]
    return sets
