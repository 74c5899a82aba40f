"""Finding equal elements among millions: 64-bit keys and a table of them."""

from collections.abc import Iterator

import numpy as np

from auditor.gf2.batch import Elements, Words

# 2^64 divided by the golden ratio, odd: the multiplier of Knuth's multiplicative hashing (1973).
_GOLDEN = 0x9E3779B97F4A7C15
_FILTER_BITS = 27


def hash_keys(elements: Elements) -> Words:
    """Return one 64-bit key for each row: equal rows have equal keys, unequal rows rarely, in the upper bits too."""
    keys = np.zeros(len(elements), np.uint64)
    factor = 1
    for word in range(elements.shape[1]):
        factor = factor * _GOLDEN % (1 << 64)
        keys += elements[:, word] * np.uint64(factor)
    keys ^= keys >> np.uint64(32)
    keys *= np.uint64(_GOLDEN)
    return keys


class KeyTable:
    """Where keys stand in a list of up to 2^32.

    An entry is one sorted uint64: the upper bits of the key, below them its place. A plain table of flags
    answers most of the look-ups that find nothing, because a binary search costs fifty times as much.
    """

    # The largest list that keeps the table below half a gigabyte while it is made.
    LARGEST = 1 << 24

    def __init__(self, keys: Words) -> None:
        place_bits = len(keys).bit_length()
        self._mask = np.uint64((1 << place_bits) - 1)
        self._entries = keys & ~self._mask
        self._entries |= np.arange(len(keys), dtype=np.uint64)
        self._entries.sort()
        filter_bits = min(_FILTER_BITS, place_bits + 3)
        self._shift = np.uint64(64 - filter_bits)
        self._flags = np.zeros(1 << filter_bits, bool)
        self._flags[(self._entries >> self._shift).astype(np.intp)] = True

    def candidates(self, keys: Words) -> Iterator[tuple[int, int]]:
        """Yield (row, place) wherever row's key may be the listed one: a wrong pair is rare, none is missed."""
        rows = np.flatnonzero(self._flags.take((keys >> self._shift).astype(np.intp)))
        wanted = keys[rows] & ~self._mask
        at = np.searchsorted(self._entries, wanted)
        while len(rows):
            inside = at < len(self._entries)
            rows, wanted, at = rows[inside], wanted[inside], at[inside]
            entries = self._entries[at]
            equal = entries & ~self._mask == wanted
            rows, wanted, at = rows[equal], wanted[equal], at[equal] + 1
            yield from zip(rows.tolist(), (entries[equal] & self._mask).tolist(), strict=True)
