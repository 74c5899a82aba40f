"""By how many cycles one row of an invertible step leads another, as phases find leads: logarithms, then proof."""

from collections.abc import Sequence
from dataclasses import dataclass

from auditor.errors import InternalError
from auditor.gf2 import matrix
from auditor.gf2.effort import Effort
from auditor.gf2.factorisation import factor
from auditor.gf2.order import order_of_x
from auditor.gf2.polynomial import inverse, multiply, multiply_modulo, power_modulo, remainder
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


class _Module:
    """The rows that one row generates under a step, its constants aside."""

    def __init__(self, base: Vector, step: Matrix) -> None:
        self.span, self.rows = matrix.Span(), list[Vector]()
        row = base
        while not (annihilator := self.span.add(row >> 1)):
            self.rows.append(row)
            row = matrix.row_times(row, step)
        self.annihilator: Polynomial = annihilator
        # With its constant the row is annihilated by (x + 1) times as much, so one more row is kept.
        self.rows.append(row)
        self._whole = multiply(0b11, annihilator)

    def at(self, cycles: int) -> Vector:
        """Return base step^cycles, constant included."""
        return matrix.row_times(power_modulo(_X, cycles, self._whole), self.rows)

    def unit(self, row: Vector) -> Polynomial | None:
        """Return q with row = base q(step), constants aside, None where the row lies outside."""
        rest, combination = self.span.reduce(row >> 1)
        return None if rest else combination


def shifts(
    step: Matrix,
    pairs: Sequence[tuple[Vector, Vector]],
    hints: Sequence[int | None] = (),
    effort: Effort = _WITHOUT_BOUNDS,
) -> list[Shift | None]:
    """Return for each (base, row) by how many cycles the row leads the base, None where it is no shift of it.

    ``hints`` are tried first, one a pair. What is no near shift and no hint costs logarithms, all of them together.
    """
    found: dict[int, Shift | None] = {}
    modules = {base: _Module(base, step) for base, row in pairs if base > 1 and row > 1}
    for place, (base, row) in enumerate(pairs):
        hint = hints[place] if place < len(hints) else None
        if base <= 1 or row <= 1:
            found[place] = Shift(0, base != row) if base <= 1 and row <= 1 else None
        elif hint is not None and (base_at := modules[base].at(hint)) ^ row <= 1:
            found[place] = Shift(hint, base_at != row)
        elif near := _near(base, row, step):
            found[place] = near
    while pending := [place for place in range(len(pairs)) if place not in found]:
        found |= _solve(modules, pairs, pending, effort)
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
    modules: dict[Vector, _Module], pairs: Sequence[tuple[Vector, Vector]], pending: Sequence[int], effort: Effort
) -> dict[int, Shift | None]:
    """Solve all pairs inside the module of the first pending base; the first itself is always among them."""
    module = modules[pairs[pending[0]][0]]
    f = module.annihilator
    factors = factor(f)
    found: dict[int, Shift | None] = {}
    quotients: dict[int, Polynomial] = {}
    for place in pending:
        below, above = (module.unit(row) for row in pairs[place])
        if below is None or not all(remainder(below, g) for g, _ in factors):
            continue
        if above is None or not all(remainder(above, g) for g, _ in factors):
            found[place] = None
        else:
            quotients[place] = multiply_modulo(above, inverse(below, f), f)
    if not quotients:
        return found
    known = coordinates([1, *quotients.values()], factors, effort)
    period = order_of_x(f)
    for number, place in enumerate(quotients, start=1):
        base, row = pairs[place]
        if known.signature(number) != known.signature(0):
            found[place] = None
        elif not known.decided or known.known_period != period:
            found[place] = Shift(None)
        else:
            cycles = known.difference(number, 0)
            reached = modules[base].at(cycles)
            if reached ^ row > 1:
                raise InternalError(f"a shift by {cycles} cycles is contradicted by the rows")
            found[place] = Shift(_nearest(cycles, period), reached != row)
    return found


def _nearest(cycles: int, period: int) -> int:
    """Return the shift of least size that is the same modulo the period."""
    return cycles - period if 2 * cycles > period else cycles
