"""The cycles of a machine that is not primitive: how long they are, and how many of each length.

The steady states fall into one part for each irreducible factor p of the characteristic polynomial, the constant being
one more element. In the part of p a state comes again after period(p) 2^v cycles if p(S)^(2^v) takes it to 0, so the
kernels of these powers tell how many states have which length (Elspas 1959). Cycles of different parts run side by
side: lengths a and b give gcd(a, b) cycles of length lcm(a, b).
"""

from collections import Counter
from collections.abc import Iterable
from math import gcd, lcm

from auditor.array.orbits import augmented_step
from auditor.gf2 import matrix
from auditor.gf2.factorisation import factor
from auditor.gf2.order import order_in_field
from auditor.gf2.polynomial import degree
from auditor.machine.machine import LinearMachine
from auditor.notation import Matrix, Polynomial

_X, _TOGGLE = 0b10, 0b11
_LARGEST = 256  # elements
_MOST_LENGTHS = 1 << 12

CycleCounts = dict[int, int]  # length → cycles


def cycle_counts(machine: LinearMachine) -> CycleCounts | None:
    """Return the cycles of all steady states, free inputs at 0, shortest first.

    None where an order is not known, or where the machine or the answer is too large.
    """
    if machine.size > _LARGEST:
        return None
    step, linear = augmented_step(machine), list(machine.transition)
    together: CycleCounts = {1: 1}
    parts = dict(factor(matrix.characteristic_polynomial(linear))) | {_TOGGLE: 0}
    for p in sorted(parts):
        if p == _X:
            continue
        order = 1 if p == _TOGGLE else order_in_field(_X, p)
        if order is None:
            return None
        blocks = [degree(p)] if parts[p] == 1 else _kernels(linear, p)
        part = _affine_part(blocks, _kernels(step, p)) if p == _TOGGLE else _part(blocks, order)
        together = _side_by_side(together, part)
        if len(together) > _MOST_LENGTHS:
            return None
    return dict(sorted(together.items()))


def _kernels(rows: Matrix, p: Polynomial) -> list[int]:
    """Return the dimensions of the kernels of p(S)^(2^v), v = 0, 1, ... until they grow no more."""
    power = _evaluated(p, rows)
    found = [len(rows) - matrix.rank(power)]
    while True:
        power = matrix.multiply(power, power)
        found.append(len(rows) - matrix.rank(power))
        if found[-1] == found[-2]:
            return found[:-1]


def _evaluated(p: Polynomial, rows: Matrix) -> Matrix:
    """Return p(S), by Horner's rule."""
    result = [0] * len(rows)
    for k in range(degree(p), -1, -1):
        result = matrix.multiply(result, rows)
        if p >> k & 1:
            result = [row ^ 1 << i for i, row in enumerate(result)]
    return result


def _part(kernels: list[int], order: int) -> CycleCounts:
    """Return the cycles of the part of one factor other than x + 1: all but 0 have a multiple of its period."""
    return _of_fixed([(1, 1), *((order << v, 1 << dimension) for v, dimension in enumerate(kernels))])


def _affine_part(linear: list[int], augmented: list[int]) -> CycleCounts:
    """Return the cycles of the part of x + 1: the solutions with constant 1 of S^(2^v) z = z."""
    longest = max(len(linear), len(augmented))
    fixed = []
    for v in range(longest):
        one, other = (found[min(v, len(found) - 1)] for found in (linear, augmented))
        fixed.append((1 << v, (1 << other) - (1 << one)))
    return _of_fixed(fixed)


def _of_fixed(fixed: Iterable[tuple[int, int]]) -> CycleCounts:
    """Return the cycles of states of which so many are fixed after each of the lengths, each dividing the next."""
    counts: CycleCounts = {}
    before = 0
    for length, states in fixed:
        if states > before:
            counts[length] = (states - before) // length
        before = states
    return counts


def _side_by_side(one: CycleCounts, other: CycleCounts) -> CycleCounts:
    """Return the cycles of two parts that run independently."""
    counts: Counter[int] = Counter()
    for a, count_a in one.items():
        for b, count_b in other.items():
            counts[lcm(a, b)] += count_a * count_b * gcd(a, b)
    return dict(counts)
