"""Values that are few steps of x apart, found without logarithms: works at any degree and for any f.

If value_i = x^d value_j with 0 < d < H, then d = k B - b with 0 <= b < B and 0 < k <= ceil(H / B), and
x^b value_i = x^(k B) value_j. With B near the root of H, a table of m sqrt(H) elements and as many look-ups find
every such meeting (the balance of Shanks 1971, with all m values on both sides).
"""

from collections.abc import Iterator, Sequence
from itertools import combinations
from math import isqrt

import numpy as np

from auditor.gf2.batch import Ring, progression
from auditor.gf2.keys import KeyTable, hash_keys
from auditor.gf2.order import order_of_x
from auditor.gf2.polynomial import multiply_modulo, power_modulo, remainder
from auditor.notation import Polynomial

_X = 0b10


def close_pairs(values: Sequence[Polynomial], f: Polynomial, window: int) -> list[tuple[int, int, int]]:
    """Return all (i, j, d), i != j, with values[i] = x^d values[j] modulo f and 0 <= d < window, sorted.

    Of several d for one ordered pair the least is given; equal values (d = 0) come once, with i < j. Every pair
    is verified exactly and none is missed. ``ValueError`` if f(0) = 0 or a value is zero modulo f.
    """
    if not f & 1 or f == 1:
        raise ValueError("steps of x need a polynomial with constant term and positive degree")
    reduced = [remainder(value, f) for value in values]
    if not all(reduced):
        raise ValueError("zero is every number of steps from itself")
    order = order_of_x(f)
    # Distances that repeat after a whole period are no news, and a short period would list them without end.
    reach = window if order is None else min(window, order)
    least: dict[tuple[int, int], int] = {}
    for i, j, d in _meetings(reduced, f, reach):
        least[i, j] = min(d, least.get((i, j), d))
    if window > 0:
        least |= dict.fromkeys(_equal_pairs(reduced), 0)
    return sorted((i, j, d) for (i, j), d in least.items())


def _equal_pairs(values: Sequence[Polynomial]) -> Iterator[tuple[int, int]]:
    holders: dict[Polynomial, list[int]] = {}
    for i, value in enumerate(values):
        holders.setdefault(value, []).append(i)
    for same in holders.values():
        yield from combinations(same, 2)


def _meetings(values: Sequence[Polynomial], f: Polynomial, reach: int) -> Iterator[tuple[int, int, int]]:
    """Yield every (i, j, d) with values[i] = x^d values[j], values[i] != values[j] and 0 < d < reach."""
    if reach < 2 or not values:
        return
    ring, count = Ring(f), len(values)
    starts = ring.pack(values)
    small = min(isqrt(reach - 2) + 1, max(1, KeyTable.LARGEST // count))
    table = KeyTable(np.concatenate([hash_keys(block) for block in progression(ring, starts, _X, small)]))
    stride = power_modulo(_X, small, f)
    powers: dict[int, Polynomial] = {}
    done = 0
    for block in progression(ring, ring.multiplier(stride)(starts), stride, -(-(reach - 1) // small)):
        for row, place in table.candidates(hash_keys(block)):
            (k, j), (b, i) = divmod(done + row, count), divmod(place, count)
            d = (k + 1) * small - b
            if d < reach and values[i] != values[j]:
                if d not in powers:
                    powers[d] = power_modulo(_X, d, f)
                if multiply_modulo(powers[d], values[j], f) == values[i]:
                    yield i, j, d
        done += len(block)
