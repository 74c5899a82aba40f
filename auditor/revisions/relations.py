"""Which relations between the states of two machines can hold for ever, and the state map that they make.

Beside each other the machines are one: x = (1, x1, x2). A relation is a row that is to vanish on it. If it holds at
every cycle, so do its images under the step. A set of relations closed under the step makes a one-to-one affine map
between the parts of both machines that it speaks of if none in its span binds one machine alone (v1 = 0 or v2 = 0
means v = 0). Then every stream of one is a stream of the other, state for state. All rows have bit 0 as the constant.
"""

from collections.abc import Sequence

from auditor.gf2 import matrix
from auditor.notation import Matrix, Vector

Leading = dict[int, Vector]  # rows by their bit length


class Relations:
    """Relations between an old and a new machine, given by their steps, closed under both steps at once."""

    def __init__(self, old_step: Sequence[Vector], new_step: Sequence[Vector]) -> None:
        self._old, self._new = len(old_step) - 1, len(new_step) - 1
        shift = self._old
        moved = [(row >> 1) << shift + 1 | row & 1 for row in new_step[1:]]
        self._step: Matrix = [*old_step, *moved]
        # The same relations twice, reduced with the new machine's bits above the old one's, and the other way round.
        self._by_new: Leading = {}
        self._by_old: Leading = {}

    @property
    def dimension(self) -> int:
        """The number of independent relations."""
        return len(self._by_new)

    def copy(self) -> "Relations":
        """Return relations that can grow on their own."""
        twin = Relations.__new__(Relations)
        twin._old, twin._new, twin._step = self._old, self._new, self._step
        twin._by_new, twin._by_old = self._by_new, self._by_old
        return twin

    def relate(self, old: Vector, new: Vector) -> bool:
        """Take a relation in, old row = new row for ever; refuse it if some state could then not be mapped."""
        pending = [old ^ ((new >> 1) << self._old + 1) ^ new & 1]
        by_new, by_old = self._by_new, self._by_old
        copied = False
        for relation in pending:
            rest = _reduce(relation, by_new)
            if not rest:
                continue
            other = _reduce(self._turned(rest), by_old)
            if rest.bit_length() <= self._old + 1 or other.bit_length() <= self._new + 1:
                return False
            if not copied:
                by_new, by_old, copied = dict(by_new), dict(by_old), True
            by_new[rest.bit_length()] = rest
            by_old[other.bit_length()] = other
            pending.append(matrix.row_times(rest, self._step))
        self._by_new, self._by_old = by_new, by_old
        return True

    def holds(self, old: Vector, new: Vector) -> bool:
        """Whether old row = new row follows from the relations."""
        return not _reduce(old ^ ((new >> 1) << self._old + 1) ^ new & 1, self._by_new)

    def to_new(self, old: Vector) -> Vector | None:
        """Return the new row that equals an old one, None where the relations do not bind it."""
        rest = _reduce((old >> 1) << self._new + 1 | old & 1, self._by_old)
        return None if rest.bit_length() > self._new + 1 else rest

    def to_old(self, new: Vector) -> Vector | None:
        """Return the old row that equals a new one, None where the relations do not bind it."""
        rest = _reduce((new >> 1) << self._old + 1 | new & 1, self._by_new)
        return None if rest.bit_length() > self._old + 1 else rest

    def _turned(self, relation: Vector) -> Vector:
        """Return a relation with the old machine's bits above the new one's."""
        old = relation >> 1 & ((1 << self._old) - 1)
        return old << self._new + 1 | (relation >> self._old + 1) << 1 | relation & 1

    def span(self) -> list[Vector]:
        """Return independent relations, over the constant, the old elements and the new ones above them."""
        return list(self._by_new.values())


def _reduce(vector: Vector, leading: Leading) -> Vector:
    """Return the vector without every leading bit that some row has; what is left may be reduced further below."""
    kept = 0
    while vector:
        row = leading.get(vector.bit_length())
        if row is None:
            top = 1 << vector.bit_length() - 1
            kept |= top
            vector ^= top
        else:
            vector ^= row
    return kept
