"""Which channel of one revision is which of the other, and what each was and is."""

from collections.abc import Mapping, Sequence

from auditor.notation import Vector
from auditor.phases.separations import separation
from auditor.phases.table import Infinite
from auditor.revisions.align import complete
from auditor.revisions.classify import Pair, Relation
from auditor.revisions.comparison import ChannelChange, ChannelFacts, MatchedBy
from auditor.revisions.permutation import find_permutation
from auditor.revisions.relations import Relations
from auditor.revisions.revision import Revision
from auditor.revisions.steady import Steady


def pairs_by_name(old: Sequence[str], new: Sequence[str]) -> tuple[Pair, ...]:
    """Return the channels of one name, in the old order."""
    numbers = {name: number for number, name in enumerate(new)}
    return tuple((number, numbers[name]) for number, name in enumerate(old) if name in numbers)


def pairs_by_behaviour(old: Steady, new: Steady) -> tuple[Pair, ...]:
    """Return channels paired by what they carry, where no names help: in the order given, else in any that fits."""
    ours, theirs = sorted(old.rows), sorted(new.rows)
    if len(ours) != len(theirs):
        return ()
    rows = [(old.rows[i], new.rows[j]) for i, j in zip(ours, theirs, strict=True)]
    if complete(old.step, new.step, rows):
        return tuple(zip(ours, theirs, strict=True))
    relations = find_permutation(old, new, rows)
    return pairs_under(relations, old.rows, new.rows) if relations else ()


def pairs_under(relations: Relations, old: Mapping[int, Vector], new: Mapping[int, Vector]) -> tuple[Pair, ...]:
    """Return (old, new) channels that carry one stream under a map, complements last, each channel once."""
    pairs, free = dict[int, int](), dict(sorted(new.items()))
    for complement in (0, 1):
        holders: dict[Vector, list[int]] = {}
        for channel, row in free.items():
            holders.setdefault(row, []).append(channel)
        for channel, row in sorted(old.items()):
            image = relations.to_new(row) if row > 1 and channel not in pairs else None
            if image is not None and holders.get(image ^ complement):
                pairs[channel] = holders[image ^ complement].pop(0)
                del free[pairs[channel]]
    return tuple(sorted(pairs.items()))


def channel_facts(revision: Revision, channel: int) -> ChannelFacts | None:
    """Return what the audit says of a channel, None where the machine was refused."""
    machine, phase = revision.machine, revision.phase(channel)
    if machine is None:
        return None
    row = machine.observed[channel]
    storage = machine.storage
    taps = tuple(storage[t.element] + (f"(t-{t.delay})" if t.delay else "") for t in row.taps)
    nearest = phase.nearest if phase else None
    apart = separation(revision.phases, channel, nearest.channel) if revision.phases and nearest else None
    return ChannelFacts(
        taps=taps,
        inverted=phase.inverted if phase else None,
        lead=phase.lead if phase else None,
        nearest=machine.observed[nearest.channel].name if nearest else None,
        separation=None if isinstance(apart, Infinite) else apart,
    )


def changes(
    old: Revision, new: Revision, related: Mapping[Pair, Relation], matched_by: Mapping[Pair, MatchedBy]
) -> tuple[ChannelChange, ...]:
    """Return every channel: those of both revisions in the new order, then those that are gone."""
    by_new = {j: (i, j) for i, j in related}
    listed = []
    for j, channel in enumerate(new.cone.channels):
        if j not in by_new:
            listed.append(ChannelChange(None, channel.name, None, "added", after=channel_facts(new, j)))
            continue
        pair, relation = by_new[j], related[by_new[j]]
        carries = None if relation.carries is None else old.cone.channels[relation.carries].name
        listed.append(
            ChannelChange(
                old.cone.channels[pair[0]].name, channel.name, matched_by[pair], relation.status, relation.shift,
                relation.inverted, carries, channel_facts(old, pair[0]), channel_facts(new, j),
            )
        )  # fmt: skip
    kept = {i for i, _ in related}
    for i, channel in enumerate(old.cone.channels):
        if i not in kept:
            listed.append(ChannelChange(channel.name, None, None, "removed", before=channel_facts(old, i)))
    return tuple(listed)
