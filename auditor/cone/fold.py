"""A cell function on the wires of one instance, with the constants of the mode folded in."""

from collections.abc import Mapping
from functools import cache
from typing import NamedTuple

from auditor.cells.function import restrict, support
from auditor.cells.library import Function

OPEN_PIN = -1  # the wire of an input pin that is connected to nothing


class Folded(NamedTuple):
    """``function`` over ``wires``: every wire matters, none is constant and none stands twice."""

    function: Function
    wires: tuple[int, ...]

    @property
    def constant(self) -> int | None:
        """Return 0 or 1 if nothing is left to depend on."""
        return None if self.wires else int(self.function.program[0])

    @property
    def connected(self) -> tuple[int, ...]:
        """Return the wires without the mark of an open pin."""
        return tuple(wire for wire in self.wires if wire != OPEN_PIN)


def fold(function: Function, wire_of: Mapping[str, int], known: Mapping[int, int]) -> Folded:
    """Put a cell function on wires: ``wire_of`` gives the wire of an input name, ``known`` the constant wires."""
    wires: list[int] = []
    codes: list[int] = []
    for name in function.inputs:
        wire = wire_of.get(name, OPEN_PIN)
        if wire in known:
            codes.append(-1 - known[wire])
        else:
            if wire not in wires:
                wires.append(wire)
            codes.append(wires.index(wire))
    folded, kept = _fold_shape(function, tuple(codes))
    return Folded(folded, tuple(wires[k] for k in kept))


@cache
def _fold_shape(function: Function, codes: tuple[int, ...]) -> tuple[Function, tuple[int, ...]]:
    """Fold one pattern of constants (codes -1, -2 for 0, 1) and repeated wires (equal codes >= 0).

    A netlist repeats few patterns, hence the cache. Returns the function and the codes that it still depends on.
    """
    distinct = sorted(set(codes))
    place = {code: k for k, code in enumerate(distinct)}
    program = tuple(f"${place[codes[int(word[1:])]]}" if word[0] == "$" else word for word in function.program)
    merged = Function(tuple(str(code) for code in distinct), program)
    bound = restrict(merged, {str(code): -1 - code for code in distinct if code < 0})
    needed = set(support(bound))
    bound = restrict(bound, {name: 0 for name in bound.inputs if name not in needed})
    kept = tuple(int(name) for name in bound.inputs)
    return renumber(bound), kept


def renumber(function: Function) -> Function:
    """Name the inputs by their position, so that equal functions on different wires are equal."""
    return Function(tuple(map(str, range(len(function.inputs)))), function.program)
