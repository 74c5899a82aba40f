"""First forms of three scan cells: the start of each run added to all rows, and the sum looked up.

1,000 chains of 500 scan cells take 1,000 x 500,000 look-ups in place of the 10^11 pairs. Of the two rows that complete
the start one has a given bit at 0, which halves them.
"""

from collections.abc import Callable, Iterator

import numpy as np

from auditor.array.distinct import DistinctCells
from auditor.array.forms import Forms, ShortKeys, bits_for, forms_of
from auditor.array.rows import Indices, Words

Progress = Callable[[str], None]


def three_cell_forms(cells: DistinctCells, tell: Progress) -> Iterator[Forms]:
    """Yield all first forms of three entries."""
    short = ShortKeys(bits_for(len(cells)))
    hashes = short(cells.keys)
    short.flags[hashes] = True
    listed = np.argsort(cells.keys)
    starts = np.flatnonzero(cells.starts)
    top = np.array([hashed.bit_length() - 1 for hashed in hashes[starts].tolist()])
    done = told = 0
    for bit in sorted(set(top.tolist())):
        rest = np.flatnonzero((hashes >> bit & 1) == 0) if bit >= 0 else np.arange(len(cells))
        of_rest = hashes[rest]
        for start in starts[top == bit].tolist():
            if done * len(cells) >= told:
                told += 1 << 28
                tell(f"three-cell relations of {len(cells)} scan cells, {100 * done // len(starts)} % done")
            done += 1
            hits = rest[np.flatnonzero(short.flags[of_rest ^ hashes[start]])]
            if len(hits):
                second, third = _listed(cells.keys, listed, hits, cells.keys[hits] ^ cells.keys[start])
                yield forms_of(cells, _each_once(cells, start, second, third, bit < 0))


def _listed(keys: Words, order: Indices, entries: Indices, wanted: Words) -> tuple[Indices, Indices]:
    """Return those of the entries whose wanted key is a key, and the entry that has it."""
    at = np.minimum(np.searchsorted(keys, wanted, sorter=order), len(keys) - 1)
    third = order[at]
    found = keys[third] == wanted
    return entries[found], third[found]


def _each_once(cells: DistinctCells, start: int, second: Indices, third: Indices, either: bool) -> Indices:
    """Return the sets (F, 3) that are told by this start; ``either``: second and third come in both orders."""
    kept = ~(cells.starts[second] & (second < start)) & ~(cells.starts[third] & (third < start))
    if either:
        kept &= second < third
    second, third = second[kept], third[kept]
    return np.stack([np.full(len(second), start, np.intp), second, third], axis=1)
