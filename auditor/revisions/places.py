"""Flip-flops matched by where they stand: which channels and which flip-flops read them, and what they read.

For revisions whose names are all new and whose streams have nothing in common, as after a changed feedback: there
neither names nor behaviour tell a flip-flop, but most of them are still read by the same channels.
"""

from collections.abc import Mapping, Sequence

from auditor.cone.cone import Cone
from auditor.gf2.matrix import ones
from auditor.machine.machine import LinearMachine
from auditor.notation import Vector

Place = tuple[tuple[int, ...], ...]
# All of a place, who reads the element, what it reads.
_KINDS = (slice(0, 3), slice(0, 2), slice(2, 3))


def matched_by_place(
    machines: tuple[LinearMachine, LinearMachine], cones: tuple[Cone, Cone], pairs: Sequence[tuple[int, int]]
) -> dict[int, int]:
    """Return new element → old element, by their numbers in the cones, for those with a place of their own.

    A place is the pairs of channels that read an element, the matched elements that read it and the matched ones that
    it reads. Elements whose place is the only one of its kind on both sides are matched, and so on until none is left.
    Where one reads something else now, who reads it has to do, or else what it reads.
    """
    channels = [_channels(machine, [pair[side] for pair in pairs]) for side, machine in enumerate(machines)]
    known: tuple[dict[int, int], dict[int, int]] = {}, {}
    kinds = list(_KINDS)
    while kinds:
        places = [_places(machine, readers, labels, kinds[0])
                  for machine, readers, labels in zip(machines, channels, known, strict=True)]  # fmt: skip
        fresh = [place for place in places[0] if place in places[1]]
        for place in fresh:
            known[0][places[0][place]] = known[1][places[1][place]] = len(known[0])
        kinds = list(_KINDS) if fresh else kinds[1:]
    numbers = [{element.name: k for k, element in enumerate(cone.elements)} for cone in cones]
    old_of = {label: numbers[0][machines[0].storage[k]] for k, label in known[0].items()}
    return {numbers[1][machines[1].storage[k]]: old_of[label] for k, label in known[1].items()}


def _channels(machine: LinearMachine, channels: Sequence[int]) -> list[tuple[int, ...]]:
    """Return for each element the places among the pairs of the channels that read it."""
    rows: list[Vector] = [row.state if (row := machine.observed[k].row) else 0 for k in channels]
    return [tuple(k for k, row in enumerate(rows) if row >> element & 1) for element in range(machine.size)]


def _places(
    machine: LinearMachine, channels: Sequence[tuple[int, ...]], labels: Mapping[int, int], kind: slice
) -> dict[Place, int]:
    """Return place → element for the unmatched elements that have a place of their own; ``kind`` is the part asked."""
    reads = [sorted(labels[k] for k in ones(row) if k in labels) for row in machine.transition]
    read_by: list[list[int]] = [[] for _ in machine.transition]
    for element, row in enumerate(machine.transition):
        if element in labels:
            for k in ones(row):
                read_by[k].append(labels[element])
    found: dict[Place, list[int]] = {}
    for element in range(machine.size):
        whole: Place = channels[element], tuple(sorted(read_by[element])), tuple(reads[element])
        place = whole[kind]
        if element not in labels and any(place):
            found.setdefault(place, []).append(element)
    return {place: elements[0] for place, elements in found.items() if len(elements) == 1}
