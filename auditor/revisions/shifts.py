"""By how many cycles one row of an invertible step leads another, as phases find leads: logarithms, then proof."""

from collections.abc import Sequence
from dataclasses import dataclass

from auditor.errors import InternalError
from auditor.gf2 import matrix
from auditor.gf2.effort import Effort
from auditor.gf2.factorisation import factor
from auditor.gf2.order import order_of_x
from auditor.gf2.polynomial import inverse, multiply_modulo, power_modulo, remainder
from auditor.notation import Matrix, Polynomial, Vector
from auditor.phases.leads import coordinates

_X = 0b10
_WITHOUT_BOUNDS = Effort()
# Shifts of so many cycles, either way, are found by stepping.
NEAR = 64


@dataclass(frozen=True, slots=True)
class Shift:
    """row = base step^cycles + inverted. ``cycles`` None: there is such a shift or not, it is undecided."""

    cycles: int | None
    inverted: bool = False


def shifts(
    step: Matrix, pairs: Sequence[tuple[Vector, Vector]], effort: Effort = _WITHOUT_BOUNDS
) -> list[Shift | None]:
    """Return for each (base, row) by how many cycles the row leads the base, None where it is no shift of it.

    What is no near shift costs logarithms, all of them together.
    """
    found: dict[int, Shift | None] = {}
    for place, (base, row) in enumerate(pairs):
        if base <= 1 or row <= 1:
            found[place] = Shift(0, base != row) if base <= 1 and row <= 1 else None
        elif near := _near(base, row, step):
            found[place] = near
    while pending := [place for place in range(len(pairs)) if place not in found]:
        found |= _solve(step, pairs, pending, effort)
    return [found[place] for place in range(len(pairs))]


def _near(base: Vector, row: Vector, step: Matrix) -> Shift | None:
    """Return the shift if it is a short one, either way."""
    ahead, behind = base, row
    for cycles in range(NEAR):
        if ahead ^ row <= 1:
            return Shift(cycles, ahead != row)
        if behind ^ base <= 1:
            return Shift(-cycles, behind != base)
        ahead, behind = matrix.row_times(ahead, step), matrix.row_times(behind, step)
    return None


def _solve(
    step: Matrix, pairs: Sequence[tuple[Vector, Vector]], pending: Sequence[int], effort: Effort
) -> dict[int, Shift | None]:
    """Solve all pairs inside the module of the first pending base; the first itself is always among them."""
    span, row = matrix.Span(), pairs[pending[0]][0]
    while not (f := span.add(row >> 1)):
        row = matrix.row_times(row, step)
    factors = factor(f)
    found: dict[int, Shift | None] = {}
    quotients: dict[int, Polynomial] = {}
    for place in pending:
        below, above = (_unit(span, row) for row in pairs[place])
        if below is None or not all(remainder(below, g) for g, _ in factors):
            continue
        if above is None or not all(remainder(above, g) for g, _ in factors):
            found[place] = None
        else:
            quotients[place] = multiply_modulo(above, inverse(below, f), f)
    if not quotients:
        return found
    known = coordinates([1, *quotients.values()], factors, effort)
    period, whole = order_of_x(f), matrix.characteristic_polynomial(step)
    for number, place in enumerate(quotients, start=1):
        base, row = pairs[place]
        if known.signature(number) != known.signature(0):
            found[place] = None
        elif not known.decided or known.known_period != period:
            found[place] = Shift(None)
        else:
            cycles = known.difference(number, 0)
            reached = matrix.evaluate_on_row(power_modulo(_X, cycles, whole), base, step)
            if reached ^ row > 1:
                raise InternalError(f"a shift by {cycles} cycles is contradicted by the rows")
            found[place] = Shift(nearest(cycles, period), reached != row)
    return found


def _unit(span: matrix.Span, row: Vector) -> Polynomial | None:
    """Return q with row = base q(step), constants aside, for the base whose powers were added; None outside."""
    rest, combination = span.reduce(row >> 1)
    return None if rest else combination


def nearest(cycles: int, period: int) -> int:
    """Return the shift of least size that is the same modulo the period."""
    return cycles - period if 2 * cycles > period else cycles
