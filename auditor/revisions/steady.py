"""The observable part of a machine that cycles, in coordinates of its own, so small and invertible.

A row is one int as in ``phases.streams``: bit 0 is the constant, bits 1 ... w are coordinates. At cycle t the
coordinates hold what the channels show from cycle t + ``start`` on, where every state lies on a cycle.
"""

from collections.abc import Collection, Mapping
from dataclasses import dataclass

from auditor.gf2 import matrix
from auditor.machine.machine import LinearMachine
from auditor.notation import Matrix, Vector
from auditor.phases.streams import Streams, read_streams


@dataclass(frozen=True, slots=True)
class Steady:
    """The part of one machine that its channels see in the long run.

    ``streams``  the rows it was made of         ``start``  the cycle from which it stands for the machine
    ``step``     (w + 1,) rows of the next coordinates, the constant first; invertible
    ``basis``    (w + 1,) the coordinates as rows of the streams, the constant first
    ``rows``     channel → its row                ``elements``  element → its row, where the channels see it
    """

    streams: Streams
    start: int
    step: Matrix
    basis: Matrix
    rows: Mapping[int, Vector]
    elements: Mapping[int, Vector]

    @property
    def width(self) -> int:
        """w, the number of coordinates."""
        return len(self.step) - 1


def settle(machine: LinearMachine, start: int, channels: Collection[int], streams: Streams | None = None) -> Steady:
    """Return what these channels of a machine see from cycle ``start`` on, which must not be within the transient."""
    streams = streams or read_streams(machine)
    settled = matrix.power(streams.step, start)
    rows = {i: matrix.row_times(streams.rows[i], settled) for i in channels}
    span, basis = matrix.Span(), [1]
    pending = [row & ~1 for row in rows.values()]
    for row in pending:
        if span.reduce(row)[0]:
            span.add(row)
            basis.append(row)
            pending.append(matrix.row_times(row, streams.step) & ~1)

    def placed(row: Vector) -> Vector | None:
        rest, combination = span.reduce(row & ~1)
        return None if rest else combination << 1 | row & 1

    step = [1] + [_known(placed(matrix.row_times(row, streams.step))) for row in basis[1:]]
    seen = {element: placed(settled[place]) for place, element in enumerate(streams.elements, start=1)}
    return Steady(
        streams=streams,
        start=start,
        step=step,
        basis=basis,
        rows={i: _known(placed(row)) for i, row in rows.items()},
        elements={element: row for element, row in seen.items() if row is not None and row > 1},
    )


def _known(row: Vector | None) -> Vector:
    if row is None:
        raise ValueError("a row lies outside the space that it was put into")
    return row


def inverse(step: Matrix) -> Matrix:
    """Return the inverse of an invertible matrix."""
    span = matrix.Span(step)
    return [span.reduce(1 << i)[1] for i in range(len(step))]
