"""What the generator puts into the scan cells: each loaded bit as a row, and whole sequences of patterns at once.

An affine form travels as one int: bit 0 is the constant, bit 1 + k is element k, free inputs are at 0. The base of
all rows is one state: that of ``reach`` cycles before the capture, when the deepest scan cell took its bit.

    cell with delay d:   y(t - d) + inverted  =  [e | c] S^(reach - d) applied to (1, x(t - reach)),   S = [1 0; a A]

Steady rows have S^T in front, T the transient: over all states x = S^T z the rows are over z, which is free.
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from auditor.array.circuit import LoadedCell
from auditor.cells.words import Words
from auditor.gf2 import matrix
from auditor.machine.machine import LinearMachine
from auditor.notation import Matrix, Vector


@dataclass(frozen=True, slots=True)
class Loading:
    """The rows of every loaded bit, scan cells first, then elements of the generator.

    ``step``     S, n + 1 rows           ``reach``  the largest delay
    ``rows``     over the base state     ``steady``  over z      ``before``  as ``steady``, a cycle earlier
    ``lock_ups`` by register: forms over z that are all 0 exactly in its lock-up states; none where it has none
    """

    step: Matrix
    reach: int
    rows: tuple[Vector, ...]
    steady: tuple[Vector, ...]
    before: tuple[Vector, ...]
    lock_ups: tuple[tuple[Vector, ...], ...]

    @property
    def width(self) -> int:
        """The bits of a row: n + 1."""
        return len(self.step)


def find_loading(machine: LinearMachine, cells: Sequence[LoadedCell], elements: Sequence[int]) -> Loading:
    """Return the rows of scan cells, whose channels all have rows, and of elements that the circuit reads directly."""
    step = [1] + [_augmented(row, machine.offset >> i) for i, row in enumerate(machine.transition)]
    reach = max((cell.delay for cell in cells), default=0)
    observed: dict[int, Vector] = {}
    for cell in cells:
        row = machine.observed[cell.channel].row
        if row is None:
            raise ValueError(f"channel {machine.observed[cell.channel].name} has no row")
        observed[cell.channel] = _augmented(row.state, row.constant)
    settle = machine.transient
    streams = {channel: matrix.krylov(row, step, reach + settle + 1) for channel, row in observed.items()}
    own = {k: matrix.krylov(2 << k, step, reach + settle + 1) for k in elements}

    def bits(earlier: int) -> tuple[Vector, ...]:
        """Return all rows at ``earlier`` cycles after the base state, counted without the delays."""
        scanned = (streams[cell.channel][earlier + reach - cell.delay] ^ cell.inverted for cell in cells)
        return (*scanned, *(own[k][earlier + reach] for k in elements))

    # A cycle earlier over the same z needs one step more in front of all others.
    ahead = [matrix.row_times(row, step) for row in bits(settle)]
    return Loading(step, reach, bits(0), tuple(ahead), bits(settle), _lock_ups(machine, step))


def _augmented(state: Vector, constant: int) -> Vector:
    return state << 1 | constant & 1


def _lock_ups(machine: LinearMachine, step: Matrix) -> tuple[tuple[Vector, ...], ...]:
    """Return, for each register that has lock-up states, independent forms that are all 0 in them and nowhere else.

    A register that stands still after the transient, whatever its state, is left out: it holds a setting. So is one
    that another feeds: no state of its own keeps it. The others are stuck where (A_RR + I) x = a_R, and stay so: it
    does not matter at which cycle one looks; ``step`` is gone through as often as the steady rows are.
    """
    found = []
    for register in machine.registers:
        inside = sum(1 << k for k in register)
        if any(machine.transition[k] & ~inside for k in register):
            continue
        span, forms = matrix.Span(), []
        for k in register:
            form = _augmented(machine.transition[k] ^ 1 << k, machine.offset >> k)
            for _ in range(machine.transient + 1):
                form = matrix.row_times(form, step)
            if not span.add(form):
                forms.append(form)
        if forms and span.reduce(1)[0]:
            found.append(tuple(forms))
    return tuple(found)


@dataclass(slots=True)
class States:
    """Generator states side by side: ``columns[k]`` has a bit a lane, bit j that of element k - 1 (0: the constant)."""

    columns: list[int]
    lanes: int

    def moved(self, rows: Matrix) -> "States":
        """Return the states under a matrix of augmented rows."""
        return States([_sum(row, self.columns) for row in rows], self.lanes)

    def values(self, rows: Sequence[Vector]) -> Words:
        """Return (rows, words): the value of each row in every lane."""
        return _packed_product(rows, self.columns, self.lanes)


def _sum(row: Vector, columns: Sequence[int]) -> int:
    total = 0
    for k in matrix.ones(row):
        total ^= columns[k]
    return total


def sequence(loading: Loading, state: Vector, first: int, clocks: int, lanes: int) -> Iterator[States]:
    """Yield the base states of successive patterns, ``lanes`` (a power of two) at a time, without end.

    ``state`` is the state at cycle 0, ``first`` the base cycle of the first pattern, ``clocks`` those of a pattern.
    """
    start = state << 1 | 1
    jump = matrix.power(loading.step, first)
    block = States([(row & start).bit_count() & 1 for row in jump], 1)
    jump = matrix.power(loading.step, clocks)
    while block.lanes < lanes:
        later = block.moved(jump)
        pairs = zip(block.columns, later.columns, strict=True)
        block = States([now | then << block.lanes for now, then in pairs], 2 * block.lanes)
        jump = matrix.multiply(jump, jump)
    while True:
        yield block
        block = block.moved(jump)


def _packed_product(rows: Sequence[Vector], columns: Sequence[int], lanes: int) -> Words:
    """Return every row's sum of columns, by a table of all sums for each eight columns (the four Russians, 1970)."""
    words, groups = (lanes + 63) // 64, (len(columns) + 7) // 8
    size = 8 * groups
    packed = b"".join(row.to_bytes(groups, "little") for row in rows)
    chosen: npt.NDArray[np.uint8] = np.frombuffer(packed, dtype=np.uint8).reshape(len(rows), groups)
    filled = b"".join(column.to_bytes(8 * words, "little") for column in columns).ljust(8 * words * size, b"\0")
    values = np.frombuffer(filled, dtype="<u8").reshape(size, words).astype(np.uint64)
    total = np.zeros((len(rows), words), dtype=np.uint64)
    for group in range(groups):
        table = np.zeros((1, words), dtype=np.uint64)
        for column in values[8 * group : 8 * group + 8]:
            table = np.vstack([table, table ^ column])
        total ^= table[chosen[:, group]]
    return total
