"""Decision diagrams over affine nets: the proof that a function is affine, or that it is not.

A function is affine exactly when, in its reduced diagram, the two cofactors of every node are complements of each
other (or equal, but then a reduced diagram has no such node). With complement edges (Brace, Rudell, Bryant 1990)
the diagram of an affine function is one chain, so the test follows a single path. The variables stand for linear
forms of the state; where the forms under a function depend on each other, one is first replaced by the sum of
others, so that the remaining ones are free and the answer is exact both ways.
"""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field

from dd.bdd import BDD  # the plain layer: its ints need no reference counting

from auditor.errors import InternalError
from auditor.notation import Vector

NODE_LIMIT = 200_000  # new diagram nodes for one gate; ``--work-limit`` sets another
SUPPORT_LIMIT = 300  # affine nets under one function; the package recurses once a level


class TooLargeError(Exception):
    """A diagram passed the node or the support limit: the question is undecided."""


class _Manager(BDD):
    """The package's diagrams with a bound on their nodes, and without its last check for references kept."""

    most_nodes = 1 << 62

    def find_or_add(self, i: int, v: int, w: int) -> int:
        """Return the node of level i with cofactors v and w; raise ``TooLargeError`` rather than pass the bound."""
        if len(self) > self.most_nodes:
            raise TooLargeError("the decision diagrams of one gate grew past the work limit")
        return int(super().find_or_add(i, v, w))

    def __del__(self) -> None:
        """Leave without the check: nodes are ints here, and nobody counts references to them."""


@dataclass(slots=True)
class Diagrams:
    """Diagrams whose variables are linear forms. A diagram is an int of the package; minus is its complement.

    ``forms``    the linear form of each variable, by number; a form is a row without its constant bit
    ``wires``    the wire that first carried the form
    """

    node_limit: int = NODE_LIMIT
    manager: _Manager = field(default_factory=_Manager)
    forms: list[Vector] = field(default_factory=list)
    wires: list[int] = field(default_factory=list)
    _number: dict[Vector, int] = field(default_factory=dict)
    _supports: dict[int, frozenset[int]] = field(default_factory=dict)

    def variable(self, form: Vector, wire: int) -> int:
        """Return the diagram of a linear form; ``wire`` carries it."""
        if form not in self._number:
            self._number[form] = len(self.forms)
            self.manager.add_var(str(len(self.forms)))
            self.forms.append(form)
            self.wires.append(wire)
        return int(self.manager.var(str(self._number[form])))

    def constant(self, bit: int) -> int:
        """Return the diagram of 0 or 1."""
        return 1 if bit else -1

    def invert(self, a: int) -> int:
        """Return NOT a."""
        return -a

    def conjoin(self, a: int, b: int) -> int:
        """Return a AND b."""
        return self._combine(a, b, -1)

    def disjoin(self, a: int, b: int) -> int:
        """Return a OR b."""
        return self._combine(a, 1, b)

    def add(self, a: int, b: int) -> int:
        """Return a XOR b."""
        return self._combine(a, -b, b)

    def _combine(self, condition: int, then: int, otherwise: int) -> int:
        support = self.support(condition) | self.support(then) | self.support(otherwise)
        if len(support) > SUPPORT_LIMIT:
            raise TooLargeError(f"{len(support)} affine nets under one function")
        self.manager.most_nodes = len(self.manager) + self.node_limit
        try:
            return int(self.manager.ite(condition, then, otherwise))
        finally:
            self.manager.most_nodes = 1 << 62

    def support(self, diagram: int) -> frozenset[int]:
        """Return the numbers of the variables that a diagram depends on."""
        diagram = abs(diagram)
        if diagram not in self._supports:
            self._supports[diagram] = frozenset(map(int, self.manager.support(diagram)))
        return self._supports[diagram]

    def affine(self, diagram: int) -> tuple[frozenset[int], int] | None:
        """Return (variables, constant) if the diagram is their XOR plus the constant, else None."""
        chain = []
        constant = int(diagram < 0)
        node = abs(diagram)
        while node != 1:
            level, low, high = _inner(self.manager.succ(node))
            if low != -high:
                return None
            chain.append(int(self.manager.var_at_level(level)))
            constant ^= int(low < 0)
            node = abs(low)
        return frozenset(chain), constant ^ 1

    def freed(self, diagram: int) -> int:
        """Return the same function over variables whose forms are independent of each other."""
        replacements = self._dependent(sorted(self.support(diagram)))
        if not replacements:
            return diagram
        substitution = {}
        for number, parts in replacements.items():
            total = -1
            for part in parts:
                total = self.add(total, int(self.manager.var(str(part))))
            substitution[str(number)] = total
        return int(self.manager.let(substitution, diagram))

    def with_constant(self, diagram: int, variable: int, bit: int) -> int:
        """Return the cofactor of a diagram under variable = bit."""
        return int(self.manager.let({str(variable): bool(bit)}, diagram))

    def restricted(self, diagram: int, bits: Mapping[int, int]) -> int:
        """Return the cofactor of a diagram under variable = bit for several variables."""
        return int(self.manager.let({str(variable): bool(bit) for variable, bit in bits.items()}, diagram))

    def constant_of(self, diagram: int) -> int | None:
        """Return the bit of a diagram that is constant, else None."""
        return int(diagram > 0) if abs(diagram) == 1 else None

    def branches(self, diagram: int) -> tuple[int, int, int]:
        """Return the first variable of a diagram that is no constant, and the cofactors for 0 and for 1."""
        level, low, high = _inner(self.manager.succ(abs(diagram)))
        sign = 1 if diagram > 0 else -1
        return int(self.manager.var_at_level(level)), sign * low, sign * high

    def _dependent(self, variables: Iterable[int]) -> dict[int, list[int]]:
        """Return each variable whose form is the sum of forms of earlier variables, with those variables."""
        pivots: dict[int, tuple[Vector, int]] = {}  # leading bit → reduced form, mask of the variables summed in it
        order = list(variables)
        dependent = {}
        for place, number in enumerate(order):
            form, mask = self.forms[number], 1 << place
            while form and (lead := form.bit_length()) in pivots:
                form ^= pivots[lead][0]
                mask ^= pivots[lead][1]
            if form:
                pivots[form.bit_length()] = (form, mask)
            else:
                dependent[number] = [order[k] for k in range(place) if mask >> k & 1]
        return dependent


def _inner(fork: tuple[int, int | None, int | None]) -> tuple[int, int, int]:
    """Return (level, low, high) of a node that is not the terminal."""
    level, low, high = fork
    if low is None or high is None:
        raise InternalError("a decision diagram ends before its terminal")
    return level, low, high
