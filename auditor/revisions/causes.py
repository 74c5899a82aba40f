"""Which flip-flop is which and which gates changed what, in both cones, told by what gives the shortest answer."""

from collections.abc import Mapping, Sequence

from auditor.revisions.channels import pairs_by_name
from auditor.revisions.classify import Pair
from auditor.revisions.comparison import ChangedNet, MatchedBy
from auditor.revisions.encoding import Element
from auditor.revisions.nets import changed_nets
from auditor.revisions.places import matched_by_place
from auditor.revisions.revision import Revision
from auditor.revisions.structure import Matched


def named_channels(old: Revision, new: Revision) -> tuple[Pair, ...]:
    """Return the channels of one name."""
    return pairs_by_name([c.name for c in old.cone.channels], [c.name for c in new.cone.channels])


def matched_storage(old: Revision, new: Revision, elements: Mapping[int, Element]) -> Matched:
    """Return the matched elements by their numbers in the cones: by behaviour where there is one, else by name."""
    numbers = [{element.name: k for k, element in enumerate(r.cone.elements)} for r in (old, new)]
    found: dict[int, tuple[int, bool, MatchedBy]] = {}
    if old.machine and new.machine:
        for k, (other, inverted) in elements.items():
            found[numbers[1][new.machine.storage[k]]] = numbers[0][old.machine.storage[other]], inverted, "behaviour"
    taken = {other for other, _, _ in found.values()}
    for name, k in numbers[1].items():
        if k not in found and name in numbers[0] and numbers[0][name] not in taken:
            found[k] = numbers[0][name], False, "name"
    return found


def causes(old: Revision, new: Revision, matched: Matched, pairs: Sequence[Pair]) -> tuple[ChangedNet, ...]:
    """Return the gates that did it, told by the match of the flip-flops that needs the fewest.

    One inverter in the feedback can turn the whole register over: by behaviour every flip-flop then stores the
    complement and many channels changed; by name one gate did. Where names are new, places may tell.
    """
    numbers = {element.name: k for k, element in enumerate(old.cone.elements)}
    by_name = {k: (numbers[e.name], False) for k, e in enumerate(new.cone.elements) if e.name in numbers}
    by_behaviour = {k: (other, inverted) for k, (other, inverted, _) in matched.items()}
    turned = any(inverted for _, inverted in by_behaviour.values())
    matches = [by_name]
    if 2 * len(by_name) < len(new.cone.elements) and old.machine and new.machine:
        by_place = matched_by_place((old.machine, new.machine), (old.cone, new.cone), pairs)
        matches = [{k: (other, False) for k, other in by_place.items()}]
    # Of equally short answers the first is taken: behaviour comes last where it has to call flip-flops inverted.
    matches = [*matches, by_behaviour] if turned or matches == [by_name] else [by_behaviour, *matches]
    matches = [match for place, match in enumerate(matches) if match and match not in matches[:place]]
    told = [changed_nets(old.cone, new.cone, match, pairs or named_channels(old, new)) for match in matches]
    return min((nets for nets in told if nets), key=len, default=())
