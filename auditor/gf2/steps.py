"""Logarithms of many elements in one cyclic group by baby and giant steps (Shanks 1971), the baby table shared.

With m elements in a group of order q the table holds about sqrt(q m) / 2 entries and each element takes
sqrt(q / m) giant steps on average: 2^38 and m = 1,000 give 8 million and 16,000.
"""

from collections.abc import Iterator
from math import isqrt

import numpy as np

from auditor.errors import InternalError
from auditor.gf2.batch import BLOCK, Elements, Ring, geometric_block, hash_keys, progression_keys
from auditor.gf2.polynomial import inverse, power_modulo
from auditor.notation import Polynomial

_LARGEST_TABLE = 1 << 24
_FILTER_BITS = 27


class BabyTable:
    """The powers g^0 ... g^(size - 1), found by key.

    An entry is one sorted uint64: the upper bits of the key, below them the exponent. A plain table of flags
    answers most of the look-ups that find nothing, because a binary search costs fifty times as much.
    """

    def __init__(self, ring: Ring, generator: Polynomial, size: int) -> None:
        self.size = size
        exponent_bits = size.bit_length()
        self._mask = np.uint64((1 << exponent_bits) - 1)
        self._entries = progression_keys(ring, ring.pack([1]), generator, size)
        self._entries &= ~self._mask
        self._entries |= np.arange(size, dtype=np.uint64)
        self._entries.sort()
        filter_bits = min(_FILTER_BITS, exponent_bits + 3)
        self._shift = np.uint64(64 - filter_bits)
        self._flags = np.zeros(1 << filter_bits, bool)
        self._flags[(self._entries >> self._shift).astype(np.intp)] = True

    def candidates(self, elements: Elements) -> Iterator[tuple[int, int]]:
        """Yield (row, exponent) wherever the keys agree; a wrong pair is possible, a missed one is not."""
        keys = hash_keys(elements)
        rows = np.flatnonzero(self._flags.take((keys >> self._shift).astype(np.intp)))
        wanted = keys[rows] & ~self._mask
        places = np.searchsorted(self._entries, wanted)
        while len(rows):
            inside = places < self.size
            rows, wanted, places = rows[inside], wanted[inside], places[inside]
            entries = self._entries[places]
            equal = entries & ~self._mask == wanted
            rows, wanted, places = rows[equal], wanted[equal], places[equal] + 1
            yield from zip(rows.tolist(), (entries[equal] & self._mask).tolist(), strict=True)


def shared_logarithms(ring: Ring, elements: Elements, generator: Polynomial, order: int) -> list[int]:
    """Return for each row the s, 0 <= s < order, with generator^s = row, in the group of that order.

    ``InternalError`` if a row is not in the group: the caller has tested that it is.
    """
    values = len(elements)
    size = max(1, min(_LARGEST_TABLE, order, isqrt(order * values) // 2))
    table = BabyTable(ring, generator, size)
    giants = -(-order // size)
    together = max(1, min(giants, BLOCK // max(1, values)))
    giant = power_modulo(inverse(generator, ring.f), size, ring.f)
    block = geometric_block(ring, elements, giant, together)
    advance = ring.multiplier(power_modulo(giant, together, ring.f))
    found: dict[int, int] = {}
    open_rows = np.arange(values)
    for first in range(0, giants, together):
        hits = {}
        for row, exponent in table.candidates(block):
            step, position = divmod(row, len(open_rows))
            if ring.pack([power_modulo(generator, exponent, ring.f)]).tobytes() == block[row].tobytes():
                hits[position] = ((first + step) * size + exponent) % order
        if hits:
            found |= {int(open_rows[position]): logarithm for position, logarithm in hits.items()}
            kept = np.ones(len(open_rows), bool)
            kept[list(hits)] = False
            open_rows = open_rows[kept]
            block = block.reshape(-1, len(kept), ring.words)[:, kept].reshape(-1, ring.words)
        if not len(open_rows):
            return [found[row] for row in range(values)]
        block = advance(block)
    raise InternalError(f"an element said to lie in a group of order {order} does not")
