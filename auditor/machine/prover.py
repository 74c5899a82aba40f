"""Row by row from the sources to the sinks: every net becomes an affine row, or a diagram over the nearest ones.

A row is one int: bits 0 to n-1 the state, then k bits of free inputs, then the constant. XOR gates add rows; only
what lies between affine nets (an XOR made of NANDs, say) costs a diagram.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from functools import cache
from typing import NamedTuple

from auditor.cells.library import Function
from auditor.machine.diagrams import NODE_LIMIT, Diagrams, TooLargeError
from auditor.notation import Vector


class Crossing(NamedTuple):
    """A gate whose output is not affine: what it computes, of which wires."""

    function: Function
    wires: tuple[int, ...]


@dataclass(slots=True)
class Prover:
    """Holds what is known of every wire. A wire is in exactly one of ``rows``, ``crossings`` and ``too_large``.

    ``constant_bit``  the row whose only bit is the constant
    ``inputs``    the row of each free input → its wire
    ``instance_of``  the instance whose output or next state a wire is
    ``behind``        of an affine wire: the nearest affine wires behind it, over which it is an XOR
    ``diagrams``      of a wire in ``crossings``: its function over the nearest affine wires
    """

    constant_bit: Vector
    inputs: Mapping[Vector, int]
    node_limit: int = NODE_LIMIT
    rows: dict[int, Vector] = field(default_factory=dict)
    behind: dict[int, tuple[int, ...]] = field(default_factory=dict)
    diagrams: dict[int, int] = field(default_factory=dict)
    crossings: dict[int, Crossing] = field(default_factory=dict)
    too_large: dict[int, str] = field(default_factory=dict)
    instance_of: dict[int, int] = field(default_factory=dict)
    algebra: Diagrams = field(init=False)

    def __post_init__(self) -> None:
        self.algebra = Diagrams(self.node_limit)

    def add(self, output: int, function: Function, wires: Sequence[int], instance: int) -> None:
        """Prove the row of one gate whose inputs are all known."""
        self.instance_of[output] = instance
        if all(wire in self.rows for wire in wires) and (form := affine_form(function)) is not None:
            mask, constant = form
            chosen = [wire for k, wire in enumerate(wires) if mask >> k & 1]
            self._affine(output, chosen, constant)
            return
        unknown = [wire for wire in wires if wire in self.too_large]
        if unknown:
            self.too_large[output] = self.too_large[unknown[0]]
            return
        try:
            diagram = function.evaluate([self.diagram(wire) for wire in wires], self.algebra)
            chain = self.algebra.affine(diagram)
            if chain is None:
                diagram = self.algebra.freed(diagram)
                chain = self.algebra.affine(diagram)
        except TooLargeError as reason:
            self.too_large[output] = str(reason)
            return
        if chain is not None:
            self._affine(output, [self.algebra.wires[number] for number in sorted(chain[0])], chain[1], chain[0])
        else:
            self.diagrams[output] = diagram
            self.crossings[output] = Crossing(function, tuple(wires))

    def diagram(self, wire: int) -> int:
        """Return a wire's function: its own diagram, or the variable of its linear form, complemented as need be."""
        if wire in self.diagrams:
            return self.diagrams[wire]
        row = self.rows[wire]
        form = row & ~self.constant_bit
        sign = -1 if row & self.constant_bit else 1
        return sign * (self.algebra.variable(form, wire) if form else self.algebra.constant(0))

    def _affine(
        self, output: int, wires: Sequence[int], constant: int, variables: frozenset[int] | None = None
    ) -> None:
        """Note an affine wire. A variable stands for a form without constant, whatever its wire carries beside it."""
        row = self.constant_bit * constant
        if variables is None:
            for wire in wires:
                row ^= self.rows[wire]
        else:
            for number in variables:
                row ^= self.algebra.forms[number]
        self.rows[output] = row
        self.behind[output] = tuple(wires)


@cache
def affine_form(function: Function) -> tuple[int, int] | None:
    """Return (mask of inputs, constant) if a function is an XOR of its inputs whatever they carry, else None."""
    algebra = Diagrams()
    inputs = [algebra.variable(1 << k, k) for k in range(len(function.inputs))]
    try:
        chain = algebra.affine(function.evaluate(inputs, algebra))
    except TooLargeError:
        return None
    return chain and (sum(1 << number for number in chain[0]), chain[1])
