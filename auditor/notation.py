"""The conventions of the whole project on one page, and the few types that every stage shares.

State       x(t) is a column of n bits, one per storage element, settled just before the edge that clocks
            the feedback register.      x(t+1) = A x(t) + B u(t) + a
Channel     the serial stream that feeds one scan chain.   y_i(t) = c_i x(t) + d_i u(t) + e_i
Vector      a Python int; bit k is element k.  A matrix is a list of such row ints.
Polynomial  a Python int; bit k is the coefficient of x^k.  x^4 + x + 1 is 0b10011.

            characteristic polynomial   det(xI - A): degree n, says how the state moves
            connection polynomial       its reciprocal: the taps as tables of stage numbers print them

                 x^4 + x + 1                                x^4 + x^3 + 1
                 characteristic  <---- reciprocal ---->     connection

Lead        channel i leads the reference by s if c_i A^T = c_ref A^(T+s), where T is the transient
            (the nilpotency index of A).  Lag = -s modulo the modulus.
Inverted    v in y_i(t) = y_ref(t+s) + v.
Separation  min(d, M - d) for two channels of one class, d the difference of leads, M the modulus.
Half cycle  a cycle has four steps: 0 flip-flops at the register's edge, 1 the latches that this edge
            opens, 2 flip-flops at the other edge, 3 the latches that the other edge opens.
State hex   bit k is storage[k] as stored at Q; fixed width.
"""

import re
from dataclasses import dataclass
from typing import TypeAlias

Vector: TypeAlias = int
Matrix: TypeAlias = list[int]
Polynomial: TypeAlias = int

_DIGITS = re.compile(r"(\d{1,1000})")  # longer runs are cut: Python does not take a number of any length


@dataclass(frozen=True, slots=True, order=True)
class SourcePlace:
    """A line of a file that the user gave; lines count from 1, line 0 is the file as a whole."""

    file: str
    line: int = 0

    def __str__(self) -> str:
        return f"{self.file}:{self.line}" if self.line else self.file


def natural_order(name: str) -> tuple[tuple[int, int | str], ...]:
    """Sort key under which q[2] comes before q[10]: runs of digits compare as numbers."""
    return tuple((0, int(part)) if part.isdecimal() else (1, part) for part in _DIGITS.split(name) if part)


def state_hex(state: Vector, width: int) -> str:
    """Return a state of ``width`` elements as fixed-width hexadecimal, element 0 in the last digit's bit 0."""
    return f"{state:0{max(1, (width + 3) // 4)}x}"
