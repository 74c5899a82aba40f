"""Logarithms of many elements in one cyclic group by baby and giant steps (Shanks 1971), the baby table shared.

With m elements in a group of order q the table holds about sqrt(q m) / 2 entries and each element takes
sqrt(q / m) giant steps on average: 2^38 and m = 1,000 give 8 million and 16,000.
"""

from math import isqrt

import numpy as np

from auditor.errors import InternalError
from auditor.gf2.batch import BLOCK, Elements, Ring, geometric_block, progression
from auditor.gf2.calculus.work import Work
from auditor.gf2.keys import KeyTable, hash_keys
from auditor.gf2.polynomial import inverse, power_modulo
from auditor.notation import Polynomial


def shared_logarithms(
    ring: Ring, elements: Elements, generator: Polynomial, order: int, work: Work | None = None
) -> list[int]:
    """Return for each row the s, 0 <= s < order, with generator^s = row, in the group of that order.

    ``InternalError`` if a row is not in the group: the caller has tested that it is. ``OutOfWork`` where a limit is
    reached.
    """
    values = len(elements)
    size = max(1, min(KeyTable.LARGEST, order, isqrt(order * values) // 2))
    work = work or Work()
    work.spend(size)
    babies = progression(ring, ring.pack([1]), generator, size)
    table = KeyTable(np.concatenate([hash_keys(block) for block in babies]))
    giants = -(-order // size)
    together = max(1, min(giants, BLOCK // max(1, values)))
    giant = power_modulo(inverse(generator, ring.f), size, ring.f)
    block = geometric_block(ring, elements, giant, together)
    advance = ring.multiplier(power_modulo(giant, together, ring.f))
    found: dict[int, int] = {}
    open_rows = np.arange(values)
    for first in range(0, giants, together):
        work.spend(len(block))
        hits = {}
        for row, exponent in table.candidates(hash_keys(block)):
            step, position = divmod(row, len(open_rows))
            if ring.unpack(block[row : row + 1]) == [power_modulo(generator, exponent, ring.f)]:
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
