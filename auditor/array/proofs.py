"""What a net can do under the generator, decided by decision diagrams over the rows of the loaded bits.

A net depends on the generator if, for some setting of what the generator does not decide, it has one value in a state
and another in the reference state. Diagrams are over linear forms of the state, one variable a form, so that equal
scan cells are one. Whether some state fulfils a diagram is asked first by following its paths with the equations that
they state, then over independent forms (``Diagrams.freed``), where no path contradicts itself.
"""

from collections.abc import Mapping, Sequence
from contextlib import suppress
from dataclasses import dataclass, field

from auditor.array.equations import Equations, outside_lock_up
from auditor.cone.cone import Gate
from auditor.machine.diagrams import Diagrams, TooLargeError
from auditor.notation import Vector

NODE_LIMIT = 20_000  # new diagram nodes for one gate; ``--work-limit`` sets another
RENEWED_AT = 400_000  # nodes at which diagrams are begun anew: many nets share some, but not all of them
PROOFS = 1000  # node limits that all questions together may spend; what is asked later stays undecided
FIRST_STEPS, STEPS = 500, 20_000  # nodes passed in one search over paths


class _KnownTooLargeError(TooLargeError):
    """A net behind was too large even alone: trying again does not help."""


@dataclass(slots=True)
class Formulas:
    """Diagrams of wires over the forms of their sources; kept from one question to the next.

    ``gates``   output wire → gate        ``forms``  source wire → its form, bit 0 the constant
    ``fixed``   wires proved constant: they are not looked behind again
    """

    gates: Mapping[int, Gate]
    forms: Mapping[int, Vector]
    node_limit: int = NODE_LIMIT
    fixed: dict[int, int] = field(default_factory=dict)
    algebra: Diagrams = field(init=False)
    _known: dict[int, int] = field(default_factory=dict)
    _too_large: set[int] = field(default_factory=set)
    _spent: int = 0

    def __post_init__(self) -> None:
        self.algebra = Diagrams(self.node_limit)

    def diagram(self, wire: int) -> int:
        """Return the diagram of a wire; a failure is tried again with diagrams that hold nothing else.

        Raises ``TooLargeError`` past the node limit, and when all questions together have spent too much.
        """
        if self._spent + len(self.algebra.manager) > PROOFS * self.node_limit:
            raise TooLargeError("the work of all proofs is spent")
        if len(self.algebra.manager) > RENEWED_AT:
            self._renew()
        if self._known:
            try:
                return self._evaluate(wire)
            except _KnownTooLargeError:
                raise
            except TooLargeError:
                self._renew()
        return self._evaluate(wire, last=True)

    def fix(self, wire: int, value: int) -> None:
        """Take a wire as the constant that it was proved to be."""
        self.fixed[wire] = value
        self._known[wire] = self.algebra.constant(value)

    def _renew(self) -> None:
        self._spent += len(self.algebra.manager)
        self.algebra = Diagrams(self.node_limit)
        self._known.clear()

    def _evaluate(self, wire: int, last: bool = False) -> int:
        """Evaluate the gates behind a wire, sources first, without recursion."""
        known, stack = self._known, [wire]
        while stack:
            current = stack[-1]
            if current in known:
                stack.pop()
                continue
            if current in self._too_large:
                raise _KnownTooLargeError("a net behind it is too large")
            gate = self.gates.get(current)
            if current in self.fixed or gate is None:
                known[current] = self._source(current)
            elif missing := [other for other in reversed(gate.inputs) if other not in known]:
                stack += missing
            else:
                try:
                    known[current] = gate.function.evaluate([known[other] for other in gate.inputs], self.algebra)
                except TooLargeError:
                    if last:
                        self._too_large.add(current)
                    raise
        return known[wire]

    def _source(self, wire: int) -> int:
        if wire in self.fixed:
            return self.algebra.constant(self.fixed[wire])
        form = self.forms[wire]
        sign = -1 if form & 1 else 1
        return sign * (self.algebra.variable(form & ~1, wire) if form > 1 else self.algebra.constant(0))


@dataclass(frozen=True, slots=True)
class Reference:
    """One state outside lock-up, as a vector over the forms with bit 0 set, and the width of states among them.

    Forms are over z in bits 1 ... ``width`` - 1; what the generator does not decide has the bits from ``width`` on.
    """

    state: Vector
    width: int
    lock_ups: Sequence[Sequence[Vector]]

    def moves(self, formulas: Formulas, diagram: int) -> Vector | None:
        """Return a vector (state, free sources) for which a diagram is not what it is in the reference state.

        None proves that there is none outside lock-up. Raises ``TooLargeError`` where neither is found.
        """
        algebra = formulas.algebra
        difference = algebra.add(diagram, self.at_reference(algebra, diagram))
        with suppress(TooLargeError):
            return self._find(algebra, difference, FIRST_STEPS)
        with suppress(TooLargeError):  # where the sums are too large, the equations must do without
            difference = algebra.freed(difference)
        return self._find(algebra, difference, STEPS)

    def at_reference(self, algebra: Diagrams, diagram: int) -> int:
        """Return the diagram in the reference state, over free sources alone."""
        forms = {variable: algebra.forms[variable] for variable in algebra.support(diagram)}
        bits = {
            variable: (form & self.state).bit_count() & 1 for variable, form in forms.items() if not form >> self.width
        }
        return algebra.restricted(diagram, bits) if bits else diagram

    def _find(self, algebra: Diagrams, diagram: int, steps: int) -> Vector | None:
        """Follow the paths of a diagram to 1, without those whose equations contradict each other."""
        stack = [(diagram, Equations())]
        while stack:
            node, equations = stack.pop()
            if node == 1:
                found = outside_lock_up(equations, self.lock_ups)
                if found is not None:
                    return found.solution()
            elif node != -1:
                steps -= 1
                if steps < 0:
                    raise TooLargeError("too many paths")
                variable, low, high = algebra.branches(node)
                rest = equations.reduce(algebra.forms[variable])
                if rest > 1:
                    stack.append((high, equations.with_zero(rest ^ 1)))
                    stack.append((low, equations.with_zero(rest)))
                else:
                    stack.append((high if rest else low, equations))
        return None
