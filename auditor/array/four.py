"""First forms of four scan cells: sums of a run's start and a row, met by the sums of all pairs of rows."""

from collections.abc import Iterator

import numpy as np

from auditor.array.distinct import DistinctCells
from auditor.array.forms import Forms, ShortKeys, bits_for, forms_of
from auditor.array.rows import Indices
from auditor.array.three import Progress

MOST_LISTED = 1 << 23  # sums with a start
MOST_PAIRS = 1 << 29


def is_bearable(cells: DistinctCells) -> bool:
    """Whether the search stays within the work that is done."""
    count = len(cells)
    return int(cells.starts.sum()) * count <= MOST_LISTED and count * (count - 1) // 2 <= MOST_PAIRS


def four_cell_forms(cells: DistinctCells, tell: Progress) -> Iterator[Forms]:
    """Yield all first forms of four entries."""
    count, starts = len(cells), np.flatnonzero(cells.starts)
    sums = (cells.keys[starts][:, None] ^ cells.keys[None, :]).reshape(-1)
    order = np.argsort(sums)
    ordered = sums[order]
    short = ShortKeys(bits_for(len(sums)))
    short.flags[short(sums)] = True
    hashes = short(cells.keys)
    told = 0
    for third in range(count):
        done = third * (2 * count - third)
        if done >= told:
            told += 1 << 28
            tell(f"four-cell relations of {count} scan cells, {100 * done // count**2} % done")
        fourth = third + 1 + np.flatnonzero(short.flags[hashes[third + 1 :] ^ hashes[third]])
        wanted = cells.keys[fourth] ^ cells.keys[third]
        low = np.searchsorted(ordered, wanted, "left")
        lengths = np.searchsorted(ordered, wanted, "right") - low
        fourth = np.repeat(fourth, lengths)
        within = np.arange(len(fourth)) - np.repeat(np.cumsum(lengths) - lengths, lengths)
        place = order[np.repeat(low, lengths) + within]
        if len(place):
            yield forms_of(cells, _each_once(cells, starts[place // count], place % count, third, fourth))


def _each_once(cells: DistinctCells, start: Indices, second: Indices, third: int, fourth: Indices) -> Indices:
    """Return the sets (F, 4), entries second < third < fourth, that are told by their least start."""
    kept = (second < third) & (start != second) & (start != third) & (start != fourth)
    for other in (second, np.full(len(second), third), fourth):
        kept &= ~(cells.starts[other] & (other < start))
    start, second, fourth = start[kept], second[kept], fourth[kept]
    return np.stack([start, second, np.full(len(start), third, np.intp), fourth], axis=1)
