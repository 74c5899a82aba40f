"""What the table of a user-defined primitive means once some of its inputs are known to stay at one level."""

from collections.abc import Mapping, Sequence

from auditor.cells.compose import NotUnderstood
from auditor.cells.library import Function
from auditor.cells.model import AT_0, AT_1, AT_X, Primitive, Row
from auditor.cells.storage import Described
from auditor.cells.transitions import MOST_INPUTS, Transitions, recognise
from auditor.cells.truth import TableSpace, function_between

STATE = "its state"  # the variable of ``primitive_storage``: no input can be named so
_BIT = {"0": AT_0, "1": AT_1, "x": AT_X}


def wanted_level(primitive: Primitive, j: int) -> str:
    """Return the one level at which input j lets the table say anything: the mark of a supply; "" if there is none."""
    telling = [row.fields[j] for row in primitive.rows if row.after != "x"]
    for level, bit in (("0", AT_0), ("1", AT_1)):
        if telling and all(fields == bit for fields in telling):
            return level
    return ""


def primitive_function(primitive: Primitive, levels: Mapping[str, str]) -> tuple[Function, Function]:
    """Return the output of a table without state over the inputs that ``levels`` (0, 1 or x) does not fix.

    The second function is 1 where the table leaves the output unknown. Raises ``NotUnderstood``.
    """
    free, rows, space = _free(primitive, levels, 0)
    ones = zeros = 0
    for row in rows:
        if row.after == "1":
            ones |= _met(row, free, space)
        elif row.after == "0":
            zeros |= _met(row, free, space)
    names = [primitive.inputs[j] for j in free]
    known = ones | zeros
    return function_between(names, ones, zeros), function_between(names, space.mask & ~known, known)


def primitive_storage(primitive: Primitive, levels: Mapping[str, str]) -> Described:
    """Return the flip-flop or latch of a table with state, its variable being ``STATE``.

    Raises ``NotUnderstood`` where it is neither.
    """
    free, rows, space = _free(primitive, levels, 1)
    state = space.columns[-1]
    by_level = _outcome([row for row in rows if row.edge is None], free, space)
    decided = by_level[0] | by_level[1] | by_level[2]
    ones, zeros = [], []
    for j in free:
        by_edge = _outcome([row for row in rows if row.edge == j], free, space)
        # Levels count before edges (IEEE 1364-2005, 8.8).
        ones.append((by_level[1] | by_edge[1] & ~decided) & ~by_level[2])
        zeros.append((by_level[0] | by_edge[0] & ~decided) & ~by_level[2])
    names = tuple(primitive.inputs[j] for j in free)
    bit = recognise(Transitions(names, tuple(ones), tuple(zeros)), STATE)
    if bit is None or not state:
        raise NotUnderstood(f"the table of {primitive.name} at {primitive.place} is neither a flip-flop nor a latch")
    return bit


def _free(primitive: Primitive, levels: Mapping[str, str], states: int) -> tuple[list[int], list[Row], TableSpace]:
    """Return the inputs that are not fixed, the rows that can be met, and the space of those inputs and the state."""
    fixed = {j: _BIT[levels[name]] for j, name in enumerate(primitive.inputs) if name in levels}
    free = [j for j in range(len(primitive.inputs)) if j not in fixed]
    if len(free) > MOST_INPUTS:
        raise NotUnderstood(f"the table of {primitive.name} at {primitive.place} has more than {MOST_INPUTS} inputs")
    rows = [
        row for row in primitive.rows if row.edge not in fixed and all(row.fields[j] & bit for j, bit in fixed.items())
    ]
    return free, rows, TableSpace(len(free) + states)


def _met(row: Row, free: Sequence[int], space: TableSpace) -> int:
    """Return the places at which a row is met, its edge being taken for the level to which it goes."""
    met = space.mask
    fields = [row.fields[j] for j in free]
    for column, levels in zip(space.columns, [*fields, row.before], strict=False):
        met &= (column if levels & AT_1 else 0) | (space.mask & ~column if levels & AT_0 else 0)
    return met


def _outcome(rows: Sequence[Row], free: Sequence[int], space: TableSpace) -> tuple[int, int, int]:
    """Return where the rows give 0, 1 and unknown."""
    zeros = ones = unknown = 0
    state = space.columns[-1]
    for row in rows:
        met = _met(row, free, space)
        zeros |= met if row.after == "0" else met & ~state if row.after == "-" else 0
        ones |= met if row.after == "1" else met & state if row.after == "-" else 0
        unknown |= met if row.after == "x" else 0
    return zeros, ones, unknown
