"""One clock cycle out of its half-cycle steps, and a channel's taps pulled back to the feedback registers."""

from collections.abc import Collection, Iterator, Mapping

from auditor.cone.cone import Cone
from auditor.gf2.matrix import ones
from auditor.machine.machine import Tap
from auditor.notation import Vector


def compose_cycle(cone: Cone, data_rows: Mapping[int, Vector]) -> dict[int, Vector]:
    """Return each element's row over the state before the cycle, from what each takes at its own step.

    ``data_rows``  element number → row over the elements as they stand when it takes its data.
    Elements of steps 0 and 2 take their data together; the latches of steps 1 and 3 follow one another.
    """
    current = {number: 1 << number for number in data_rows}
    for step in range(4):
        if step % 2 == 0:
            taken = {
                number: _substitute(row, current)
                for number, row in data_rows.items()
                if cone.elements[number].step == step
            }
            current.update(taken)
        else:
            for number in _latches_in_order(cone, data_rows, step):
                current[number] = _substitute(data_rows[number], current)
    return current


def _substitute(row: Vector, current: Mapping[int, Vector]) -> Vector:
    """Replace every element of a row by what it holds now; inputs and the constant stay."""
    result = row
    for number in ones(row):
        if number in current and current[number] != 1 << number:
            result ^= current[number] ^ (1 << number)
    return result


def _latches_in_order(cone: Cone, data_rows: Mapping[int, Vector], step: int) -> Iterator[int]:
    """Yield the latches of a step so that each comes after those it reads; the cone has no loop among them."""
    latches = [number for number in data_rows if cone.elements[number].step == step]
    waiting = set(latches)
    while waiting:
        ready = [n for n in latches if n in waiting and not any(o in waiting and o != n for o in ones(data_rows[n]))]
        yield from ready
        waiting.difference_update(ready)


def pull_back(cone: Cone, data_rows: Mapping[int, Vector], registers: Collection[int], row: Vector) -> tuple[Tap, ...]:
    """Return the taps of a row: every element outside the registers is replaced by what it took, until none is left.

    An element read at its own step's value costs one cycle, unless what it took was already this cycle's: an
    element of an earlier step, or a latch of the same one.
    """
    state_bits = (1 << len(cone.elements)) - 1
    taps: set[tuple[int, int]] = set()
    pending = {(number, 0): 1 for number in ones(row & state_bits)}  # parity of every (element, delay) still to replace
    while pending:
        number, delay = next(iter(pending))
        if not pending.pop((number, delay)):
            continue
        if number in registers:
            taps ^= {(number, delay)}
            continue
        step = cone.elements[number].step
        for other in ones(data_rows[number] & state_bits):
            its = cone.elements[other].step
            same_cycle = its < step or (its == step and step % 2 == 1)
            item = (other, delay + (not same_cycle))
            pending[item] = pending.get(item, 0) ^ 1
    return tuple(Tap(number, delay) for number, delay in sorted(taps))
