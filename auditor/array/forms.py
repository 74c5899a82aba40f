"""Relations among scan cells, each in its first form, and the look-ups that find them.

Rows that sum to zero do so after any common shift too. Shifted back until one of them reaches the start of its run,
every set of them has one first form; the places it stands for are the shifts until one reaches the end of its run.
"""

from collections.abc import Callable
from dataclasses import dataclass
from itertools import permutations
from math import gcd

import numpy as np
from numpy.typing import NDArray

from auditor.array.distinct import DistinctCells, place_of
from auditor.array.rows import Indices, Words
from auditor.array.scan_array import Place
from auditor.gf2.batch import LinearMap

# Class, position and modulus of a scan cell's row on the cycle of its class; None where no lead is known.
Position = tuple[int, int, int] | None
Positions = Callable[[Place], Position]

_SEED = 0x37


@dataclass(frozen=True, slots=True)
class Forms:
    """First forms. Shapes: F forms of r scan cells each.

    ``entries``  (F, r) entries of the distinct cells
    ``places``   (F,) sets of distinct cells each stands for       ``ones``  (F,) whether the sum is 1
    """

    entries: Indices
    places: NDArray[np.int64]
    ones: NDArray[np.bool_]


def forms_of(cells: DistinctCells, entries: Indices) -> Forms:
    """Return the forms of sets of entries (F, r), those left out whose linear parts do not truly sum to zero."""
    if not cells.exact:
        rows = np.bitwise_xor.reduce(cells.packed[entries], axis=1)
        rows[:, 0] &= ~np.uint64(1)
        entries = entries[~rows.any(axis=1)]
    ones = np.bitwise_xor.reduce(cells.constant[entries], axis=1)
    return Forms(entries, cells.ahead[entries].min(axis=1), ones)


def joined(found: list[Forms], size: int) -> Forms:
    """Return all forms: those with the most places first, then by their entries."""
    entries = np.concatenate([np.zeros((0, size), np.intp), *(form.entries for form in found)])
    entries.sort(axis=1)
    places = np.concatenate([np.zeros(0, np.int64), *(form.places for form in found)])
    ones = np.concatenate([np.zeros(0, bool), *(form.ones for form in found)])
    order = np.lexsort((*(entries[:, k] for k in range(size - 1, -1, -1)), -places))
    return Forms(entries[order], places[order], ones[order])


class ShortKeys:
    """A linear hash of keys, ``bits`` wide, and flags of the values that are listed: most look-ups end at a flag."""

    def __init__(self, bits: int) -> None:
        images = np.random.default_rng(_SEED).integers(0, 1 << bits, 64, dtype=np.uint64)
        self._map = LinearMap(images[:, None])
        self.flags = np.zeros(1 << bits, bool)

    def __call__(self, keys: Words) -> Indices:
        """Return the hash of every key; that of a sum is the sum of the hashes."""
        return self._map(keys[:, None])[:, 0].astype(np.intp)


def bits_for(count: int) -> int:
    """Return how many bits let few of the look-ups among so many keys pass by chance."""
    return min(26, max(8, count.bit_length() + 5))


def up_to_shift(cells: DistinctCells, entries: list[int], position: Positions) -> object:
    """Return a name that relations have in common if and only if they are shifts of each other.

    A common shift takes one set of positions to another if and only if the differences agree modulo the common
    divisors of the moduli (Chinese remainders). Without leads a relation is told by the runs in which it stands.
    """
    known = [position(place_of(cells, entry)) for entry in entries]
    members = [place for place in known if place is not None]
    if len(members) < len(entries):
        return tuple(entries)
    return min(map(_differences, permutations(members)))


def _differences(members: tuple[tuple[int, int, int], ...]) -> tuple[tuple[int, ...], tuple[int, ...]]:
    classes = tuple(group for group, _, _ in members)
    pairs = ((one, other) for k, one in enumerate(members) for other in members[k + 1 :])
    return classes, tuple((a - b) % gcd(m, n) for (_, a, m), (_, b, n) in pairs)
