"""Functions on words against their truth tables."""

import numpy as np

from auditor.cells.function import truth_table
from auditor.cells.library import Function
from auditor.cells.words import in_batches

XNOR = Function(("a", "b"), ("$0", "$1", "^", "!"))
MUX = Function(("a", "b", "s"), ("$0", "$2", "!", "&", "$1", "$2", "&", "|"))
ONE = Function((), ("1",))


def test_batches_agree_with_truth_tables() -> None:
    """Every lane of every gate has the bit of its function's truth table, gates of later levels read earlier ones."""
    places = [
        (1, XNOR, (0, 1), 3),
        (1, XNOR, (1, 2), 4),
        (2, MUX, (3, 4, 0), 5),
        (2, MUX, (1, 3, 2), 6),
        (1, ONE, (), 7),
    ]
    batches = in_batches(places[::-1])
    assert [len(batch.outputs) for batch in batches] == [1, 2, 2]
    rng = np.random.default_rng(1)
    values = np.zeros((8, 2), dtype=np.uint64)
    values[:3] = rng.integers(0, 2**64, (3, 2), dtype=np.uint64)
    for batch in batches:
        values[batch.outputs] = batch.value(values)
    for lane in range(128):
        bits = [int(row[lane // 64]) >> lane % 64 & 1 for row in values]
        for _, function, inputs, output in places:
            index = sum(bits[slot] << k for k, slot in enumerate(inputs))
            assert bits[output] == truth_table(function) >> index & 1
