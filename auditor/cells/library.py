"""What every cell does: the noun of this room.

A cell is known only from a description (Liberty, Verilog cell models, the gate primitives of the language, a cell
table), never from its name. Functions are postfix programs, so that one text serves every algebra: bit-parallel
simulation, three values, decision diagrams; and no depth of parentheses can exhaust a stack.
"""

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Generic, Literal, Protocol, TypeVar

from auditor.notation import SourcePlace

V = TypeVar("V")


class Algebra(Protocol, Generic[V]):
    """The values over which a function is evaluated."""

    def constant(self, bit: int) -> V:
        """Return the value of the literal 0 or 1."""

    def invert(self, a: V) -> V:
        """Return NOT a."""

    def conjoin(self, a: V, b: V) -> V:
        """Return a AND b."""

    def disjoin(self, a: V, b: V) -> V:
        """Return a OR b."""

    def add(self, a: V, b: V) -> V:
        """Return a XOR b."""


_INVERT, _CONJOIN, _DISJOIN, _ADD, _CONSTANT_0, _CONSTANT_1 = -1, -2, -3, -4, -5, -6
_STEPS = {"!": _INVERT, "&": _CONJOIN, "|": _DISJOIN, "^": _ADD, "0": _CONSTANT_0, "1": _CONSTANT_1}


def _step(word: str) -> int:
    """Return a word of a program as a number: the index of an operand, or a negative code."""
    return int(word[1:]) if word[0] == "$" else _STEPS[word]


@dataclass(frozen=True, slots=True)
class Function:
    """A Boolean function in postfix form.

    ``program`` holds the operators ``! & | ^``, the literals ``0 1`` and, for an operand, ``$`` and its index in
    ``inputs``: A & !B is inputs ("A", "B"), program ("$0", "$1", "!", "&").
    """

    inputs: tuple[str, ...]
    program: tuple[str, ...]
    # The program as numbers, made when it is first evaluated.
    _steps: tuple[int, ...] = field(default=(), init=False, repr=False, compare=False)

    def evaluate(self, values: tuple[V, ...] | list[V], algebra: Algebra[V]) -> V:
        """Return the function of ``values``, which stand in the order of ``inputs``."""
        if not self._steps:
            object.__setattr__(self, "_steps", tuple(map(_step, self.program)))
        stack: list[V] = []
        push, pop = stack.append, stack.pop
        for step in self._steps:
            if step >= 0:
                push(values[step])
            elif step == _INVERT:
                push(algebra.invert(pop()))
            elif step <= _CONSTANT_0:
                push(algebra.constant(_CONSTANT_0 - step))
            else:
                b, a = pop(), pop()
                if step == _CONJOIN:
                    push(algebra.conjoin(a, b))
                elif step == _DISJOIN:
                    push(algebra.disjoin(a, b))
                else:
                    push(algebra.add(a, b))
        return pop()


@dataclass(frozen=True, slots=True)
class Pin:
    """A pin of a cell.

    ``function``     of an output: over input pins and state variables; None where it is not described
    ``three_state``  the output is Z where this is 1
    ``capacitance_ff``  of an input, in fF; ``limit_ff`` the largest load of an output, in fF; None if not given
    """

    name: str
    direction: Literal["input", "output", "inout", "internal", "power"]
    function: Function | None = None
    three_state: Function | None = None
    capacitance_ff: float | None = None
    limit_ff: float | None = None


@dataclass(frozen=True, slots=True)
class Storage:
    """One stored bit of a cell.

    ``variable``     the state variable in the polarity stored at Q: the one that follows the data un-inverted
    ``kind``         a flip-flop takes ``data`` at the rising edge of ``clock``; a latch follows it while ``clock`` is 1
    ``data``         over pins and ``variable`` itself (an enable or a scan multiplexer is part of it)
    ``clear``, ``preset``  asynchronous conditions, active at 1, that force ``variable`` to 0 and to 1
    ``both``         the value of ``variable`` while both are active: "0", "1", or "" where it is not defined

    Inverted storage and inverted state variables of the description are already resolved: every function here
    and in the pins speaks of ``variable`` alone.
    """

    variable: str
    kind: Literal["flip-flop", "latch"]
    clock: Function
    data: Function
    clear: Function | None = None
    preset: Function | None = None
    both: Literal["0", "1", ""] = ""


@dataclass(frozen=True, slots=True)
class Cell:
    """A library cell: its pins by name, its stored bits, its area in the library's unit.

    ``not_understood`` says in words why the behaviour could not be taken from the description, or is empty. Such a
    cell counts as unknown inside the cone and as a load outside it.
    """

    name: str
    pins: Mapping[str, Pin]
    storage: tuple[Storage, ...] = ()
    area: float | None = None
    place: SourcePlace | None = None
    not_understood: str = ""


@dataclass(frozen=True, slots=True)
class CellLibrary:
    """All cells known to an audit, by name; ``notes`` are sentences for the report's assumptions."""

    cells: Mapping[str, Cell]
    notes: tuple[str, ...] = ()
