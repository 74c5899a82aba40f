"""The scan cells of an array with twins merged: distinct linear parts, in runs that shift into each other.

Cells stand chain by chain, the greatest delay first, so that the next cell of a run shows what this one shows a cycle
later. A cell that equals an earlier one, or its complement, is merged into it. A run ends where its chain ends, where a
delay is left out, or where the next cell was merged into another.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import count

import numpy as np
from numpy.typing import NDArray

from auditor.array.rows import ChainRows, Indices, Keys, Rows, Words, constants, same_linear_part
from auditor.array.scan_array import Chain, Place

MOST_CELLS = 1 << 24  # rows made at once


@dataclass(frozen=True, slots=True)
class DistinctCells:
    """One entry for each distinct linear part. Shapes: M entries, W words a row.

    ``chain``, ``cell``  the scan cell that stands for it; chains count as in the rows
    ``keys``      (M,) linear fingerprints; ``packed`` (M, W) the rows, inversions included
    ``starts``    whether a run starts here       ``ahead``  entries from here to the end of the run, itself included
    ``weight``    scan cells that are merged here
    """

    chain: Indices
    cell: Indices
    keys: Words
    packed: Rows
    constant: NDArray[np.bool_]
    starts: NDArray[np.bool_]
    ahead: NDArray[np.int64]
    weight: NDArray[np.int64]
    exact: bool

    def __len__(self) -> int:
        return len(self.keys)


def distinct_cells(rows: ChainRows) -> DistinctCells | None:
    """Return the distinct scan cells of an array, None where it has too many cells."""
    cells = sum(chain.length for chain in rows.chains)
    span = rows.greatest_delay + 1
    if not cells or max(cells, len(rows.chains) * span) * rows.words > MOST_CELLS:
        return None
    chain, cell, delay = _in_order(rows.chains)
    packed = _rows_at(rows, chain, delay)
    packed[:, 0] ^= _inversions(rows.chains, chain, cell)
    for seed in count():
        keys = Keys(rows.width, seed)
        found, exact = keys(packed), keys.exact
        distinct, first, merged, weight = np.unique(found, return_index=True, return_inverse=True, return_counts=True)
        if exact or same_linear_part(packed, packed[first[merged]]).all():
            break
    order = np.argsort(first)
    order = order[distinct[order] != 0]
    at = first[order]
    starts = _run_starts(chain[at], delay[at])
    return DistinctCells(
        chain=chain[at], cell=cell[at], keys=distinct[order], packed=packed[at], constant=constants(packed[at]),
        starts=starts, ahead=_to_the_end(starts), weight=weight[order].astype(np.int64), exact=exact,
    )  # fmt: skip


def _in_order(chains: Sequence[Chain]) -> tuple[Indices, Indices, NDArray[np.int64]]:
    """Return chain, cell and delay of all scan cells, the greatest delay of each chain first."""
    parts = []
    for number, chain in enumerate(chains):
        delays = np.array(chain.delays, dtype=np.int64)
        order = np.argsort(-delays, kind="stable")
        parts.append((np.full(len(delays), number, dtype=np.intp), order, delays[order]))
    chain_of, cell, delay = (np.concatenate(column) for column in zip(*parts, strict=True))
    return chain_of, cell, delay


def _rows_at(rows: ChainRows, chain: Indices, delay: NDArray[np.int64]) -> Rows:
    """Return the rows of scan cells, inversions left out: those of all chains are stepped together."""
    greatest = rows.greatest_delay
    packed = np.empty((len(chain), rows.words), np.uint64)
    by_delay = np.argsort(-delay, kind="stable")
    bounds = np.searchsorted(-delay[by_delay], np.arange(-greatest, 2))
    current, step = rows.packed, rows.later(1)
    for cycles in range(greatest + 1):
        here = by_delay[bounds[cycles] : bounds[cycles + 1]]
        packed[here] = current[chain[here]]
        current = step(current)
    return packed


def _inversions(chains: Sequence[Chain], chain: Indices, cell: Indices) -> Words:
    if not any(one.cells for one in chains):
        return np.zeros(len(chain), np.uint64)
    inverted = (chains[i].inverted(j) for i, j in zip(chain.tolist(), cell.tolist(), strict=True))
    return np.fromiter(inverted, np.uint64, len(chain))


def _run_starts(chain: Indices, delay: NDArray[np.int64]) -> NDArray[np.bool_]:
    starts = np.ones(len(chain), bool)
    starts[1:] = (chain[1:] != chain[:-1]) | (delay[1:] != delay[:-1] - 1)
    return starts


def _to_the_end(starts: NDArray[np.bool_]) -> NDArray[np.int64]:
    """Return the entries from each place to the end of its run, itself included."""
    places = np.flatnonzero(starts)
    ends = np.append(places[1:], len(starts))
    run = np.cumsum(starts) - 1
    return np.asarray(ends[run] - np.arange(len(starts)), dtype=np.int64)


def place_of(cells: DistinctCells, entry: int) -> Place:
    """Return the scan cell that stands for an entry."""
    return Place(int(cells.chain[entry]), int(cells.cell[entry]))
