"""The channels' streams as rows of the autonomous machine, and the proof that one is a shift of another.

The free inputs are left at 0. An affine form travels as one int: bit 0 is the constant, bits 1 ... w are elements.
What feedback registers see comes first: steady rows see nothing else, so they stay short however many pipeline
registers stand behind.
The constant is an element of its own that keeps its value: the matrix has the rows [1 | 0] and [a | A].
"""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from auditor.errors import InternalError
from auditor.gf2 import matrix
from auditor.gf2.polynomial import power_modulo
from auditor.machine.machine import LinearMachine
from auditor.notation import Matrix, Polynomial, Vector

_X = 0b10


@dataclass(frozen=True, slots=True)
class Streams:
    """Rows by channel number, refused channels left out; ``steady`` rows are those after the transient.

    ``elements``  the machine's elements in the order of the bits 1 ... w
    """

    elements: tuple[int, ...]
    step: Matrix
    transient: int
    rows: dict[int, Vector]
    steady: dict[int, Vector]

    def linear_step(self) -> Matrix:
        """Return A alone, for rows whose constant is shifted out."""
        return [row >> 1 for row in self.step[1:]]


@dataclass(frozen=True, slots=True)
class Alignment:
    """y_i(t) = y_j(t + s) + ``inverted`` for every state and every t >= ``valid_from``, not earlier."""

    valid_from: int
    inverted: bool


def read_streams(machine: LinearMachine) -> Streams:
    """Return the streams of all channels that have a row."""
    raw = {i: observed.row for i, observed in enumerate(machine.observed) if observed.row is not None}
    seen = reached(machine.transition, (row.state for row in raw.values()))
    looping = (element for register in machine.registers for element in register if element in seen)
    core = reached(machine.transition, (1 << element for element in looping))
    place = {element: k for k, element in enumerate([*sorted(core), *sorted(seen - core)], start=1)}

    def packed(state: Vector, constant: int) -> Vector:
        return sum((1 << place[element] for element in matrix.ones(state)), constant)

    step = [1] + [packed(machine.transition[i], machine.offset >> i & 1) for i in place]
    rows = {i: packed(row.state, row.constant) for i, row in raw.items()}
    settled = matrix.power(step, machine.transient)
    steady = {i: matrix.row_times(row, settled) for i, row in rows.items()}
    return Streams(tuple(place), step, machine.transient, rows, steady)


def reached(transition: Sequence[Vector], rows: Iterable[Vector]) -> set[int]:
    """Return the elements that the rows see, directly or through next states."""
    found: set[int] = set()
    pending = list(rows)
    while pending:
        new = set(matrix.ones(pending.pop())) - found
        found |= new
        pending += [transition[element] for element in new]
    return found


class Orbit:
    """One channel's rows at every cycle: row step^s for any s, without s steps."""

    def __init__(self, streams: Streams, channel: int) -> None:
        self._streams = streams
        self._rows: list[Vector] = []
        row, span = streams.rows[channel], matrix.Span()
        while not (relation := span.add(row)):
            self._rows.append(row)
            row = matrix.row_times(row, streams.step)
        self._annihilator: Polynomial = relation

    def at(self, cycle: int) -> Vector:
        """Return the channel's row that many cycles later."""
        return matrix.row_times(power_modulo(_X, cycle, self._annihilator), self._rows)

    def align(self, channel: int, shift: int) -> Alignment:
        """Prove that a channel is this one shifted, from which cycle on, and whether complemented.

        ``InternalError`` if it is not: every lead passes through here before anybody sees it.
        """
        streams = self._streams
        difference = streams.rows[channel] ^ self.at(shift)
        for cycle in range(streams.transient + 1):
            if difference <= 1:
                return Alignment(cycle, bool(difference))
            difference = matrix.row_times(difference, streams.step)
        raise InternalError(f"channel {channel} was given the lead {shift}, but its rows contradict it")
