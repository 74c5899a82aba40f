"""The key table against a dictionary, with keys made to collide."""

import numpy as np
import pytest

from auditor.gf2.keys import KeyTable, hash_keys


def test_equal_rows_have_equal_keys_and_others_do_not():
    """100,000 rows that differ in few bits, in any word, have 100,000 keys even in their upper 40 bits."""
    low = np.arange(50_000, dtype=np.uint64)
    rows = np.zeros((100_000, 2), np.uint64)
    rows[:50_000, 0] = low << np.uint64(48)
    rows[50_000:, 1] = low + np.uint64(1)
    keys = hash_keys(rows)
    assert (keys == hash_keys(rows.copy())).all()
    assert len(np.unique(keys >> np.uint64(24))) == 100_000


@pytest.mark.parametrize("size", [1, 2, 3, 400, 1000])
def test_no_listed_key_is_missed(size):
    """Every place of every listed key is found, keys that occur several times and the greatest key included."""
    generator = np.random.default_rng(7)
    listed = generator.integers(0, 2**64, size, dtype=np.uint64)
    listed[-1] = 2**64 - 1
    listed[size // 2 :: 9] = listed[0]
    table = KeyTable(listed)
    asked = np.concatenate([listed, generator.integers(0, 2**64, 1000, dtype=np.uint64)])
    found = set(table.candidates(asked))
    places: dict[int, set[int]] = {}
    for place, key in enumerate(listed.tolist()):
        places.setdefault(key, set()).add(place)
    assert {(row, place) for row, key in enumerate(asked.tolist()) for place in places.get(key, ())} <= found
    assert all(int(asked[row]) >> 16 == int(listed[place]) >> 16 for row, place in found)


def test_keys_that_differ_below_the_place_are_candidates():
    """The lowest bits of a key make room for the place, so such a neighbour is a candidate and must be checked."""
    table = KeyTable(np.array([8, 16, 2**63], np.uint64))
    assert sorted(table.candidates(np.array([9, 17, 2**62], np.uint64))) == [(0, 0), (1, 1)]
