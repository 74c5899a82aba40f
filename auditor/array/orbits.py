"""Where the generator runs from a given state: the machine seen from its states in place of its channels.

The states x(0), x(1), ... from a start are the rows x(0) S^t of the machine whose step is the transpose of S. Two
starts run through one cycle if and only if these rows are shifts of each other: a channel each, whose class, lead and
modulus are the cycle, the place on it and its length. The constant is one more element, which keeps its value.
"""

from collections.abc import Sequence
from functools import reduce
from operator import or_

from auditor.gf2 import matrix
from auditor.gf2.polynomial import power_modulo
from auditor.machine.machine import AffineRow, LinearMachine, ObservedRow
from auditor.notation import Matrix, Vector

_X = 0b10


def augmented_step(machine: LinearMachine) -> Matrix:
    """Return the rows [A | a] and [0 | 1], the constant as the last element."""
    n = machine.size
    return [row | (machine.offset >> i & 1) << n for i, row in enumerate(machine.transition)] + [1 << n]


def start_machine(machine: LinearMachine, starts: Sequence[Vector]) -> LinearMachine:
    """Return the machine of which channel k is the run from ``starts[k]``, n bits each; free inputs are 0."""
    n = machine.size
    rows = [AffineRow(start | 1 << n, 0, 0) for start in starts]
    return LinearMachine(
        storage=(*machine.storage, "1"),
        free_inputs=(),
        transition=tuple(matrix.transpose(augmented_step(machine), n + 1)),
        input_matrix=(0,) * (n + 1),
        offset=0,
        observed=tuple(ObservedRow(str(k), row, None, (), 0, 0) for k, row in enumerate(rows)),
        registers=(),
        half_cycle=frozenset(),
        reset_known=0,
        reset_state=0,
        transient=machine.transient,
        cycling_degree=machine.cycling_degree + 1,
        xor_fan_out=(0,) * (n + 1),
    )


def next_state(machine: LinearMachine, state: Vector) -> Vector:
    """Return the state one cycle later, free inputs at 0."""
    return matrix.apply(machine.transition, state) ^ machine.offset


def state_after(machine: LinearMachine, state: Vector, cycles: int) -> Vector:
    """Return the state that many cycles later, without so many steps: x^cycles modulo what annihilates the run."""
    step = augmented_step(machine)
    column, span = state | 1 << machine.size, matrix.Span()
    run: list[Vector] = []
    while not (annihilator := span.add(column)):
        run.append(column)
        column = matrix.apply(step, column)
    return matrix.row_times(power_modulo(_X, cycles, annihilator), run) & ((1 << machine.size) - 1)


def reset_start(machine: LinearMachine) -> Vector | None:
    """Return the state that reset gives, None where it leaves out an element that is felt beyond the transient."""
    felt = reduce(or_, matrix.power(machine.transition, machine.transient), 0)
    return None if felt & ~machine.reset_known else machine.reset_state
