"""Which channels must be inverted for all to agree: the inversions as unknowns that keep their value for ever.

Constants aside, the rows must make a map of the states. Each combination of them that vanishes then says of the
inversions in it what their sum is.
"""

from collections.abc import Sequence
from itertools import product

from auditor.gf2 import matrix
from auditor.notation import Matrix, Vector
from auditor.revisions.relations import Relations

_MOST_FREE = 8


def find_inversions(old_step: Matrix, new_step: Matrix, pairs: Sequence[tuple[Vector, Vector]]) -> Vector | None:
    """Return the pairs to invert, bit k the k-th, as few as can be; None where no inversions make all agree.

    Of more than ``_MOST_FREE`` free choices the rest are left uninverted.
    """
    linear = Relations([1, *(row & ~1 for row in old_step[1:])], [1, *(row & ~1 for row in new_step[1:])])
    if not all(linear.relate(old & ~1, new & ~1) for old, new in pairs):
        return None
    equations = _equations(old_step, new_step, pairs)
    masks, target = [mask for mask, _ in equations], sum(bit << k for k, (_, bit) in enumerate(equations))
    first = matrix.solve_columns(masks, target, len(pairs))
    if first is None:
        return None
    free = matrix.kernel(masks, len(pairs))[:_MOST_FREE]
    choices = (first ^ matrix.row_times(sum(bit << k for k, bit in enumerate(bits)), free)
               for bits in product((0, 1), repeat=len(free)))  # fmt: skip
    return min(choices, key=lambda choice: (choice.bit_count(), choice))


def _equations(old_step: Matrix, new_step: Matrix, pairs: Sequence[tuple[Vector, Vector]]) -> list[tuple[Vector, int]]:
    """Return (inversions, their sum) for every relation of the rows that vanishes but for constants.

    A row is packed with the constant in bit 0, the inversions above it, then the states of both machines.
    """
    low, size = len(pairs) + 1, len(old_step) - 1

    def packed(old: Vector, new: Vector) -> Vector:
        return ((new >> 1) << size | old >> 1) << low | (old ^ new) & 1

    step = [packed(row, 0) for row in old_step[1:]] + [packed(0, row) for row in new_step[1:]]
    pending = [packed(old, new) | 2 << place for place, (old, new) in enumerate(pairs)]
    leading: dict[int, Vector] = {}
    equations = []
    for row in pending:
        rest = row
        while rest >> low and (other := leading.get(rest.bit_length())) is not None:
            rest ^= other
        if rest >> low:
            leading[rest.bit_length()] = rest
            pending.append(matrix.row_times(rest >> low, step) ^ rest & (1 << low) - 1)
        elif rest:
            equations.append((rest >> 1, rest & 1))
    return equations
