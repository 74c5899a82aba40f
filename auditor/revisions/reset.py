"""How both machines run from reset: whether the channels agree cycle by cycle, and how far apart they are if not."""

from collections.abc import Sequence

from auditor.gf2 import matrix
from auditor.gf2.effort import Effort
from auditor.gf2.factorisation import factor
from auditor.gf2.polynomial import remainder
from auditor.machine.machine import LinearMachine
from auditor.notation import Matrix, Vector
from auditor.phases.leads import coordinates
from auditor.phases.streams import Streams
from auditor.revisions.comparison import FromReset
from auditor.revisions.relations import Relations
from auditor.revisions.shifts import NEAR
from auditor.revisions.steady import Steady

_WITHOUT_BOUNDS = Effort()


class _Run:
    """One machine from reset: ``state`` has bit 0 at 1, then the elements of the streams; ``unknown`` likewise."""

    def __init__(self, machine: LinearMachine, streams: Streams, channels: Sequence[int]) -> None:
        self.rows = [streams.rows[channel] for channel in channels]
        self.step = streams.step
        self.state = 1
        self.unknown = 0
        for place, element in enumerate(streams.elements, start=1):
            if machine.reset_known >> element & 1:
                self.state |= (machine.reset_state >> element & 1) << place
            else:
                self.unknown |= 1 << place

    def known_from(self, last: int) -> int | None:
        """Return the first cycle, up to ``last``, from which no channel depends on an element without reset."""
        rows = self.rows
        for cycle in range(last + 1):
            if not any(row & self.unknown for row in rows):
                return cycle
            rows = [matrix.row_times(row, self.step) for row in rows]
        return None

    def advance(self) -> None:
        """Go one cycle on."""
        self.state = matrix.apply(self.step, self.state)

    def outputs(self) -> Vector:
        """Return the channels' values, bit k of the k-th."""
        return matrix.apply(self.rows, self.state)


def from_reset(
    machines: tuple[LinearMachine, LinearMachine],
    steadies: tuple[Steady, Steady],
    pairs: Sequence[tuple[int, int]],
    relations: Relations | None,
    effort: Effort = _WITHOUT_BOUNDS,
) -> FromReset:
    """Compare the streams of the pairs from reset; ``relations`` is the state map for the shift between them."""
    old, new = (
        _Run(machine, steady.streams, [pair[side] for pair in pairs])
        for side, (machine, steady) in enumerate(zip(machines, steadies, strict=True))
    )
    start = steadies[0].start
    since = [run.known_from(start) for run in (old, new)]
    if None in since:
        which = " and ".join(name for name, known in zip(("OLD", "NEW"), since, strict=True) if known is None)
        return FromReset(None, f"reset leaves elements of {which} open that the channels depend on")
    known = max(cycle or 0 for cycle in since)
    first, last, settled = _differences(old, new, known, start)
    if first is None:
        return FromReset(True, known_from=known, agree_from=known, shift=0)
    if settled:
        return FromReset(False, known_from=known, agree_from=last + 1, shift=0, first=first)
    shift = _shift(machines, steadies, relations, effort) if relations else None
    return FromReset(False, known_from=known, shift=shift, first=first)


def _differences(old: _Run, new: _Run, known: int, start: int) -> tuple[tuple[int, int] | None, int, bool]:
    """Return the first (cycle, channel) that differs, the last cycle that does, and whether none does in the long run.

    From ``start`` on the states of both together are followed until one depends on those before: if all these agree,
    so do all that follow.
    """
    first, last, span, settled, cycle = None, -1, matrix.Span(), True, 0
    width = new.state.bit_length() + len(new.step)
    while True:
        difference = old.outputs() ^ new.outputs() if cycle >= known else 0
        if difference:
            first = first or (cycle, (difference & -difference).bit_length() - 1)
            last, settled = cycle, settled and cycle < start
        if cycle >= start and (not settled or span.add(old.state << width | new.state)):
            return first, last, settled
        old.advance()
        new.advance()
        cycle += 1


def _shift(
    machines: tuple[LinearMachine, LinearMachine],
    steadies: tuple[Steady, Steady],
    relations: Relations,
    effort: Effort,
) -> int | None:
    """Return s with y_new(t) = y_old(t + s) in the long run, by a logarithm of one state against the other."""
    new = steadies[1]
    rows = [relations.to_old(1 << k) for k in range(1, new.width + 1)]
    here = _coordinates(machines[1], new)
    reset = _coordinates(machines[0], steadies[0])
    if any(row is None for row in rows):
        return None
    there = 1 | matrix.apply([row or 0 for row in rows], reset) << 1
    # A state is a column, so the powers of the step act on it from the other side.
    columns = matrix.transpose(new.step, new.width + 1)
    return _steps(there, here, columns, effort)


def _coordinates(machine: LinearMachine, steady: Steady) -> Vector:
    """Return the coordinates of the reset state."""
    state = 1
    for place, element in enumerate(steady.streams.elements, start=1):
        state |= (machine.reset_known & machine.reset_state) >> element << place & 1 << place
    return matrix.apply(steady.basis, state)


def _steps(start: Vector, target: Vector, step: Matrix, effort: Effort) -> int | None:
    """Return the least s in size with start step^s = target, None where there is none or it is undecided."""
    ahead, behind = start, target
    for steps in range(NEAR):
        if ahead == target:
            return steps
        if behind == start:
            return -steps
        ahead, behind = matrix.row_times(ahead, step), matrix.row_times(behind, step)
    span, row = matrix.Span(), start
    while not (annihilator := span.add(row)):
        row = matrix.row_times(row, step)
    rest, unit = span.reduce(target)
    factors = factor(annihilator)
    if rest or not all(remainder(unit, g) for g, _ in factors):
        return None
    found = coordinates([1, unit], factors, effort)
    if not found.decided or found.signature(0) != found.signature(1) or found.known_period != found.period:
        return None
    steps = found.difference(1, 0)
    return steps - found.known_period if 2 * steps > found.known_period else steps
