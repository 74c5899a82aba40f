"""How states of two machines with the same streams correspond: from which cycle, by which map, and if by names only."""

from collections.abc import Mapping, Sequence

from auditor.gf2 import matrix
from auditor.machine.machine import LinearMachine
from auditor.notation import Vector
from auditor.phases.streams import Streams
from auditor.revisions.comparison import StateMap
from auditor.revisions.relations import Relations
from auditor.revisions.steady import Steady, inverse

Element = tuple[int, bool]  # the old element, and whether the new one stores its complement


def related_from(
    old: Streams, new: Streams, pairs: Sequence[tuple[int, int]], inverted: Sequence[bool], last: int
) -> tuple[int, Relations]:
    """Return the first cycle from which the channels of both have the same streams, and the relations there.

    ``last`` is a cycle at which they are known to have. What holds at one cycle holds at all later ones.
    """

    def relations_at(cycle: int) -> Relations | None:
        settled = [matrix.power(streams.step, cycle) for streams in (old, new)]
        relations = Relations(old.step, new.step)
        for (i, j), complement in zip(pairs, inverted, strict=True):
            row, other = matrix.row_times(old.rows[i], settled[0]), matrix.row_times(new.rows[j], settled[1])
            if not relations.relate(row, other ^ complement):
                return None
        return relations

    low, high, best = 0, last, relations_at(last)
    if best is None:
        raise ValueError("streams that agree in the long run do not at the cycle where they should")
    while low < high:
        middle = (low + high) // 2
        if found := relations_at(middle):
            high, best = middle, found
        else:
            low = middle + 1
    return high, best


def matched_elements(
    old: Steady, new: Steady, relations: Relations, names: tuple[Sequence[str], Sequence[str]]
) -> dict[int, Element]:
    """Return new element → old element, for those that hold the same stream or its complement under a map.

    Of several old elements in step, one of the same name is taken, else the first that is left.
    """
    holders: dict[Vector, list[tuple[int, int]]] = {}
    for element in sorted(old.elements):
        image = relations.to_new(old.elements[element])
        if image is not None:
            holders.setdefault(image >> 1, []).append((element, image & 1))
    found: dict[int, Element] = {}
    by_name = sorted(new.elements, key=lambda k: (names[1][k] not in set(names[0]), k))
    for element in by_name:
        row = new.elements[element]
        candidates = holders.get(row >> 1, [])
        if candidates:
            same = [k for k, (other, _) in enumerate(candidates) if names[0][other] == names[1][element]]
            other, constant = candidates.pop(same[0] if same else 0)
            found[element] = other, bool((row & 1) ^ constant)
    return found


def state_map(
    machines: tuple[LinearMachine, LinearMachine],
    steadies: tuple[Steady, Steady],
    relations: tuple[Relations, Relations],
    since: int,
    matched: Mapping[int, Element],
) -> StateMap:
    """Return x_new = S x_old + p. ``relations``: of the steady parts, and of the whole machines at cycle ``since``.

    Where the map holds from cycle 0 it is that of all states; else that of states on a cycle.
    """
    places = {element: place for place, element in enumerate(steadies[1].streams.elements, start=1)}
    back = matrix.power(inverse(steadies[0].step), steadies[0].start)
    rows: list[Vector | None] = []
    offset = 0
    for element in range(machines[1].size):
        if since == 0:
            packed = relations[1].to_old(1 << places[element]) if element in places else None
        else:
            packed = _settled_row(steadies, relations[0], back, element)
        if element in matched and (since or packed is None):
            other, complement = matched[element]
            rows.append(1 << other)
            offset |= complement << element
        elif packed is None:
            rows.append(None)
        else:
            offset |= (packed & 1) << element
            rows.append(
                sum((packed >> place & 1) << k for place, k in enumerate(steadies[0].streams.elements, start=1))
            )
    return StateMap(tuple(rows), offset)


def _settled_row(
    steadies: tuple[Steady, Steady], relations: Relations, back: Sequence[Vector], element: int
) -> Vector | None:
    """Return what a new element holds on a cycle, as a row over the old elements at the same time."""
    old, new = steadies
    row = relations.to_old(new.elements[element]) if element in new.elements else None
    return None if row is None else matrix.row_times(matrix.row_times(row, back), old.basis)


def only_renamed(
    machines: tuple[LinearMachine, LinearMachine], matched: Mapping[int, Element], pairs: Sequence[tuple[int, int]]
) -> bool:
    """Whether the machines are the same but for names: every row of one is a row of the other, renamed."""
    old, new = machines
    complete = len(matched) == old.size == new.size and not any(complement for _, complement in matched.values())
    if not complete or len(old.free_inputs) != len(new.free_inputs) or old.half_cycle != _moved(new, matched):
        return False
    moved = {other: element for element, (other, _) in matched.items()}
    places = _input_places(old, new)
    inputs = {k: places[1].index(place) for k, place in enumerate(places[0]) if place in places[1]}

    def renamed(row: Vector, places: Mapping[int, int]) -> Vector:
        return sum(1 << places[k] for k in matrix.ones(row) if k in places)

    for element, (other, _) in matched.items():
        if renamed(old.transition[other], moved) != new.transition[element]:
            return False
        if renamed(old.input_matrix[other], inputs) != new.input_matrix[element]:
            return False
        if (old.offset >> other ^ new.offset >> element) & 1:
            return False
    for i, j in pairs:
        row, image = old.observed[i].row, new.observed[j].row
        if row is None or image is None or row.constant != image.constant:
            return False
        if renamed(row.state, moved) != image.state or renamed(row.inputs, inputs) != image.inputs:
            return False
    return True


def _moved(machine: LinearMachine, matched: Mapping[int, Element]) -> frozenset[int]:
    """Return the new machine's half-cycle elements by their old numbers."""
    return frozenset(matched[element][0] for element in machine.half_cycle)


def _input_places(old: LinearMachine, new: LinearMachine) -> tuple[list[int], list[int]]:
    """Return a common number for every free input of both: by name, or in order where they only got other names."""
    if len(old.free_inputs) == len(new.free_inputs) and set(old.free_inputs) != set(new.free_inputs):
        return list(range(len(old.free_inputs))), list(range(len(new.free_inputs)))
    names = list(dict.fromkeys([*old.free_inputs, *new.free_inputs]))
    return [names.index(name) for name in old.free_inputs], [names.index(name) for name in new.free_inputs]


def inputs_act_alike(
    machines: tuple[LinearMachine, LinearMachine],
    streams: tuple[Streams, Streams],
    pairs: Sequence[tuple[int, int]],
) -> bool:
    """Whether free inputs of one name, or of one place where names differ, do the same to every channel for ever.

    The differences of the channels' rows and all that follow from them must not see the inputs' columns.
    """
    old, new = machines
    places = _input_places(old, new)

    def by_name(row: Vector, side: int) -> Vector:
        return sum(1 << places[side][k] for k in matrix.ones(row))

    shift = len(streams[0].step) - 1
    step = [row & ~1 for row in streams[0].step[1:]] + [(row >> 1) << shift + 1 for row in streams[1].step[1:]]
    columns = [by_name(old.input_matrix[k], 0) for k in streams[0].elements]
    columns += [by_name(new.input_matrix[k], 1) for k in streams[1].elements]
    span, pending = matrix.Span(), list[Vector]()
    for i, j in pairs:
        row, other = old.observed[i].row, new.observed[j].row
        if row is None or other is None or by_name(row.inputs, 0) != by_name(other.inputs, 1):
            return False
        pending.append(streams[0].rows[i] >> 1 ^ (streams[1].rows[j] >> 1) << shift)
    for difference in pending:
        if not span.reduce(difference)[0]:
            continue
        span.add(difference)
        if matrix.row_times(difference, columns):
            return False
        pending.append(matrix.row_times(difference, step) >> 1)
    return True
