"""Linear equations over GF(2) that grow one at a time, and states that fulfil them outside lock-up.

A form is an int whose bit 0 is its constant; an equation says that a form is 0.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field

from auditor.notation import Vector


@dataclass(frozen=True, slots=True)
class Equations:
    """A consistent system: one equation for each leading bit, no two of them led by the same."""

    by_leading_bit: Mapping[int, Vector] = field(default_factory=dict)

    def reduce(self, form: Vector) -> Vector:
        """Return the form under the equations: 0 or 1 where they decide it."""
        known = self.by_leading_bit
        rest, aside = form, 0
        while rest > 1:
            equation = known.get(rest.bit_length())
            if equation is None:
                leading = 1 << rest.bit_length() - 1
                aside |= leading
                rest ^= leading
            else:
                rest ^= equation
        return aside | rest

    def with_zero(self, reduced: Vector) -> "Equations":
        """Return the system with one more equation; the form must be reduced and not decided."""
        return Equations({**self.by_leading_bit, reduced.bit_length(): reduced})

    def solution(self) -> Vector:
        """Return a vector, bit 0 set, in which all equations hold; bits that none of them leads are 0."""
        vector = 1
        for _, equation in sorted(self.by_leading_bit.items()):
            leading = 1 << equation.bit_length() - 1
            if (equation & vector).bit_count() & 1:
                vector |= leading
        return vector


def outside_lock_up(equations: Equations, lock_ups: Sequence[Sequence[Vector]]) -> Equations | None:
    """Return the equations with one form of each register's lock-up held at 1, None where no state is left.

    Registers are gone through in turn, back and forth where an earlier choice leaves a later one none.
    """
    stack = [(equations, 0)]
    while stack:
        system, register = stack.pop()
        if register == len(lock_ups):
            return system
        for form in reversed(lock_ups[register]):
            rest = system.reduce(form)
            if rest == 1:
                stack.append((system, register + 1))
                break
            if rest:
                stack.append((system.with_zero(rest ^ 1), register + 1))
    return None
