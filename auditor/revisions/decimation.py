"""Whether the new streams are every d-th bit of the old ones, or the old ones backwards (d = -1).

The streams y(d t) of a machine are those of its d-th power. Powers of two are cheap to add: squaring maps the roots of
every polynomial over GF(2) onto each other (Golomb 1967), so only odd factors have to be told apart by polynomials.
"""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import Literal

from auditor.gf2 import matrix
from auditor.gf2.effort import Effort
from auditor.gf2.factorisation import is_irreducible
from auditor.gf2.order import order_of_x
from auditor.gf2.polynomial import degree
from auditor.notation import Matrix, Polynomial, Vector
from auditor.revisions.align import RowPair, complete
from auditor.revisions.relations import Relations
from auditor.revisions.shifts import shifts
from auditor.revisions.steady import inverse

LARGEST_FACTOR = 64
_WITHOUT_BOUNDS = Effort()


@dataclass(frozen=True, slots=True)
class Decimation:
    """y_new(t) = y_old(factor t), all under one state map where ``one_map``, else each channel shifted by its own."""

    factor: int
    one_map: bool
    inverted: Mapping[int, bool]

    @property
    def name(self) -> Literal["reversed", "decimated"]:
        """The class."""
        return "reversed" if self.factor == -1 else "decimated"


def find_decimation(
    old_step: Matrix, new_step: Matrix, pairs: Sequence[RowPair], effort: Effort = _WITHOUT_BOUNDS
) -> Decimation | None:
    """Return the factor that maps all streams, the one of least size; None where there is none up to the bound."""
    first = next(((old, new) for old, new in pairs if old > 1 and new > 1), None)
    if first is None:
        return None
    target = _annihilator(first[1], new_step)
    loose: Decimation | None = None
    for factor, step in _powers(old_step):
        if _annihilator(first[0], step) != target:
            continue
        if found := _one_map(factor, step, new_step, pairs):
            return found
        if loose is None and factor != 1 and _up_to_shifts(step, new_step, pairs, target, effort):
            loose = Decimation(factor, False, {})
    return loose


def _powers(step: Matrix) -> Iterator[tuple[int, Matrix]]:
    """Yield the odd factors and the steps they stand for: 1, -1, 3, -3 ..."""
    backward = inverse(step)
    ahead, behind = step, backward
    twice_ahead, twice_behind = matrix.multiply(step, step), matrix.multiply(backward, backward)
    for factor in range(1, LARGEST_FACTOR, 2):
        yield factor, ahead
        yield -factor, behind
        ahead, behind = matrix.multiply(ahead, twice_ahead), matrix.multiply(behind, twice_behind)


def _annihilator(row: Vector, step: Matrix) -> Polynomial:
    """Return the polynomial of the row's linear part."""
    return matrix.annihilator(row >> 1, [other >> 1 for other in step[1:]])


def _one_map(factor: int, step: Matrix, new_step: Matrix, pairs: Sequence[RowPair]) -> Decimation | None:
    """Return a power of two times the factor under which one state map serves all channels."""
    for doublings in range(len(step)):
        if found := complete(step, new_step, pairs):
            return Decimation(factor << doublings if factor > 0 else -(-factor << doublings), True, found.inverted)
        step = matrix.multiply(step, step)
    return None


def _up_to_shifts(
    step: Matrix, new_step: Matrix, pairs: Sequence[RowPair], polynomial: Polynomial, effort: Effort
) -> bool:
    """Whether every channel is a shift of its decimated old self."""
    seed = next((old, new) for old, new in pairs if old > 1 and new > 1)
    relations = Relations(step, new_step)
    if not relations.relate(*seed) and not relations.relate(seed[0], seed[1] ^ 1):
        return False
    bases = [(relations.to_new(old), new) for old, new in pairs]
    known = [(base, new) for base, new in bases if base is not None]
    if len(known) < len(bases) or any((base > 1) != (new > 1) for base, new in known):
        return False
    if is_irreducible(polynomial) and order_of_x(polynomial) == (1 << degree(polynomial)) - 1:
        # All states but one lie on one cycle, so any two streams are shifts of each other.
        return all(relations.dimension == len(new_step) - 1 for _ in known)
    return all(shift is not None and shift.cycles is not None for shift in shifts(new_step, known, effort))
