"""What the two netlists are made of: cells, area, XOR figures, and each flip-flop with its loads."""

from collections import Counter
from collections.abc import Mapping

from auditor.revisions.comparison import FlipFlopChange, FlipFlopFacts, MatchedBy, Structure
from auditor.revisions.revision import Revision

# New element of the cone → old one, whether it stores the complement, and how they were matched.
Matched = Mapping[int, tuple[int, bool, MatchedBy]]


def structure(revision: Revision) -> Structure:
    """Return the size of a revision's cone."""
    cone = revision.cone
    instances = {gate.instance for gate in (*cone.gates, *cone.clock_gates)}
    instances |= {element.instance for element in cone.elements}
    cells = Counter(cone.netlist.cell_of(instance).name for instance in sorted(instances))
    known = [revision.library.cells[name].area if name in revision.library.cells else None for name in cells]
    area = None
    if known and None not in known:
        area = sum((one or 0.0) * count for one, count in zip(known, cells.values(), strict=True))
    classes = revision.phases.classes if revision.phases else ()
    return Structure(
        cells=dict(sorted(cells.items())),
        area=area,
        xor_inputs=sum(row.xor_inputs for row in revision.observed),
        xor_depth=max((row.xor_depth for row in revision.observed), default=0),
        smallest_separation=min((group.minimum.cycles for group in classes if group.minimum), default=None),
    )


def flip_flop_changes(old: Revision, new: Revision, matched: Matched) -> tuple[FlipFlopChange, ...]:
    """Return every storage element: those of the new cone in order, then those that are gone."""
    before, after = _facts(old), _facts(new)
    names = [[element.name for element in revision.cone.elements] for revision in (old, new)]
    changes = []
    for number, name in enumerate(names[1]):
        other, inverted, by = matched.get(number, (None, False, None))
        facts = before.get(other) if other is not None else None
        old_name = names[0][other] if other is not None else None
        changes.append(FlipFlopChange(old_name, name, by, inverted, facts, after.get(number)))
    kept = {other for other, _, _ in matched.values()}
    changes += [
        FlipFlopChange(name, None, None, False, before.get(number), None)
        for number, name in enumerate(names[0])
        if number not in kept
    ]
    return tuple(changes)


def _facts(revision: Revision) -> dict[int, FlipFlopFacts]:
    machine = revision.machine
    xor = dict(zip(machine.storage, machine.xor_fan_out, strict=True)) if machine else {}
    found = {}
    for load in revision.cone.loads:
        element = revision.cone.elements[load.element]
        fan_out = sum(load.direct), sum(load.leaf), xor.get(element.name)
        found[load.element] = FlipFlopFacts(element.cell, element.reset, *fan_out)
    return found
