"""What each feedback register does when it is left alone: polynomials, period, lock-up states, reset.

A register is looked at by itself: its block A_RR of A and a_R of a. Its affine step x -> A_RR x + a_R is linear on
(x, 1): the augmented matrix has the rows [A_RR | a_R] and [0 | 1], the constant as the last element.
"""

from auditor.gf2 import matrix
from auditor.gf2.factorisation import factor
from auditor.gf2.order import is_primitive, order_of_x
from auditor.gf2.polynomial import degree, least_common_multiple, reciprocal
from auditor.machine.machine import LinearMachine
from auditor.notation import Matrix, Polynomial, Vector
from auditor.phases.table import Factor, RegisterFacts, ResetFacts

SHOWN_LOCK_UP_STATES = 16


def register_facts(machine: LinearMachine) -> tuple[RegisterFacts, ...]:
    """Return the facts of every feedback register, in the machine's order."""
    return tuple(_facts(machine, elements) for elements in machine.registers)


def _facts(machine: LinearMachine, elements: tuple[int, ...]) -> RegisterFacts:
    """Return the facts of one register.

    Where A_RR is singular its characteristic polynomial is x^k g. Its reciprocal is that of g: the connection
    polynomial has degree n - k, the cycling degree, and a constant term, so the transient part does not show in it.
    """
    block = [gather(machine.transition[i], elements) for i in elements]
    offset = gather(machine.offset, elements)
    size = len(elements)
    step = [row | (offset >> i & 1) << size for i, row in enumerate(block)] + [1 << size]

    characteristic = matrix.characteristic_polynomial(block)
    connection = reciprocal(characteristic)
    cycling_degree = degree(connection)
    period = order_of_x(without_transient(minimal_polynomial(step)))
    factors = tuple(Factor(p, count, is_primitive(p)) for p, count in factor(characteristic))
    lock_up_count, lock_up_states = _lock_up(block, offset, size)
    return RegisterFacts(
        elements=elements,
        cycling_degree=cycling_degree,
        characteristic_polynomial=characteristic,
        connection_polynomial=connection,
        factors=factors,
        period=period,
        maximum_period=(1 << cycling_degree) - 1,
        primitive=_is_primitive(factors, period, (1 << cycling_degree) - 1),
        lock_up_count=lock_up_count,
        lock_up_states=lock_up_states,
        reset=_reset(machine, elements, step),
    )


def gather(vector: Vector, elements: tuple[int, ...]) -> Vector:
    """Return the bits of a vector at the given elements: bit k of the result is bit elements[k]."""
    return sum((vector >> element & 1) << k for k, element in enumerate(elements))


def without_transient(p: Polynomial) -> Polynomial:
    """Return p without its factor x^k, which only says how long the transient lasts."""
    return p >> (p & -p).bit_length() - 1


def minimal_polynomial(rows: Matrix) -> Polynomial:
    """Return the polynomial p of least degree with p(A) = 0.

    It is the least common multiple of the annihilators of the unit rows. A row in the space that earlier rows
    and their images span is annihilated already, and need not be followed.
    """
    span, result = matrix.Span(), 1
    for i in range(len(rows)):
        row = 1 << i
        if not span.reduce(row)[0]:
            continue
        own = matrix.annihilator(row, rows)
        result = least_common_multiple(result, own)
        for image in matrix.krylov(row, rows, degree(own)):
            span.add(image)
    return result


def _is_primitive(factors: tuple[Factor, ...], period: int | None, maximum: int) -> bool | None:
    """Return whether the register runs through all states but one; a single offset bit can spoil degree 1 only."""
    if period is not None:
        return period == maximum
    cycling = [f for f in factors if f.polynomial & 1]
    return None if len(cycling) == 1 and cycling[0].multiplicity == 1 else False


def _lock_up(block: Matrix, offset: Vector, size: int) -> tuple[int, tuple[Vector, ...]]:
    """Return the number of solutions of (A + I) x = a, and the smallest of them, ascending.

    In an echelon basis of the kernel, no other basis vector nor the first solution has a bit where one has its
    leading bit. Sums of basis vectors are then ordered as the numbers of the combinations.
    """
    fixed = [row ^ 1 << i for i, row in enumerate(block)]
    first = matrix.solve_columns(fixed, offset, size)
    if first is None:
        return 0, ()
    basis: list[Vector] = []
    for vector in matrix.kernel(fixed, size):
        reduced = _reduce(vector, basis)
        leading = reduced.bit_length() - 1
        basis = [other ^ reduced if other >> leading & 1 else other for other in basis] + [reduced]
    basis.sort()
    first = _reduce(first, basis)
    count = 1 << len(basis)
    smallest = (matrix.row_times(mask, basis) ^ first for mask in range(min(count, SHOWN_LOCK_UP_STATES)))
    return count, tuple(smallest)


def _reduce(vector: Vector, echelon: list[Vector]) -> Vector:
    for other in echelon:
        if vector >> other.bit_length() - 1 & 1:
            vector ^= other
    return vector


def _reset(machine: LinearMachine, elements: tuple[int, ...], step: Matrix) -> ResetFacts | None:
    known = gather(machine.reset_known, elements)
    if not known:
        return None
    state = gather(machine.reset_state, elements) & known
    unknown = tuple(k for k in range(len(elements)) if not known >> k & 1)
    if unknown:
        return ResetFacts(state, unknown, stuck=None, period=None)
    column = state | 1 << len(elements)
    orbit = matrix.annihilator(column, matrix.transpose(step, len(step)))
    return ResetFacts(state, (), matrix.apply(step, column) == column, order_of_x(without_transient(orbit)))
