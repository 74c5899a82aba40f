"""What several writers take from the facts in the same way: channels, closest pairs, the heaviest output."""

from typing import NamedTuple

from auditor.cone.cone import Load
from auditor.machine.machine import ObservedRow, Refusal
from auditor.phases.table import Phase
from auditor.report.facts import AuditFacts


class ChannelView(NamedTuple):
    """A channel with its row and phase; both are None where the whole machine was refused."""

    name: str
    row: ObservedRow | None
    phase: Phase | None
    refusal: Refusal | None


class Pair(NamedTuple):
    """Two channels of one class, by their numbers in ``LinearMachine.observed``, and how far apart they are."""

    cycles: int
    first: int
    second: int
    complement: bool


def channel_views(facts: AuditFacts) -> list[ChannelView]:
    """Return every channel that feeds a chain, in the order in which the channels were given."""
    machine = facts.extraction.machine
    if machine is None:
        refusals = {refusal.what: refusal for refusal in facts.extraction.refusals}
        return [ChannelView(c.name, None, None, refusals.get(c.name)) for c in facts.cone.channels]
    return [view for view in _observed(facts) if view.row and not view.row.cut_from]


def cut_views(facts: AuditFacts) -> list[ChannelView]:
    """Return the affine nets behind the gates that spoil a channel."""
    return [view for view in _observed(facts) if view.row and view.row.cut_from]


def _observed(facts: AuditFacts) -> list[ChannelView]:
    machine, phases = facts.extraction.machine, facts.phases
    if machine is None:
        return []
    known = phases.phases if phases else (None,) * len(machine.observed)
    return [ChannelView(r.name, r, phase, r.refusal) for r, phase in zip(machine.observed, known, strict=True)]


def heaviest_output(load: Load) -> int | None:
    """Return which output pin carries the most of its limit; without limits, the greatest capacitance.

    None where the element has no output pin with a known capacitance.
    """

    def weight(pin: int) -> tuple[bool, float]:
        capacitance, limit = load.capacitance_ff[pin] or 0.0, load.limit_ff[pin]
        return (True, capacitance / limit) if limit else (False, capacitance)

    known = [pin for pin, capacitance in enumerate(load.capacitance_ff) if capacitance is not None]
    return max(known, key=weight, default=None)


def closest_pairs(facts: AuditFacts, count: int) -> list[Pair]:
    """Return the ``count`` pairs of channels with the smallest separations, nearest first.

    On the circle of a class's leads, a pair with more than ``count`` channels between its two has ``count`` pairs
    between them that are no farther apart; so only near neighbours on the circle are compared. Pairs of undecided
    leads come from the bounded search.
    """
    machine, table = facts.extraction.machine, facts.phases
    if machine is None or table is None:
        return []
    found: dict[tuple[int, int], Pair] = {}
    for i, j, cycles, complement in table.close_pairs:
        found[min(i, j), max(i, j)] = Pair(cycles, min(i, j), max(i, j), complement)
    for group in table.classes:
        circle = sorted(_known_leads(facts, group.channels)) if group.modulus else []
        for at, (lead, i) in enumerate(circle):
            for step in range(1, min(count + 1, len(circle) - 1) + 1):
                other, j = circle[(at + step) % len(circle)]
                ahead = (other - lead) % (group.modulus or 1)
                cycles = min(ahead, (group.modulus or 1) - ahead)
                complement = table.phases[i].inverted != table.phases[j].inverted
                found[min(i, j), max(i, j)] = Pair(cycles, min(i, j), max(i, j), complement)
    true = {k for k, row in enumerate(machine.observed) if not row.cut_from}
    return sorted(pair for pair in found.values() if {pair.first, pair.second} <= true)[:count]


def _known_leads(facts: AuditFacts, channels: tuple[int, ...]) -> list[tuple[int, int]]:
    """Return (lead, channel) of the channels whose lead is known modulo the class modulus."""
    phases = facts.phases.phases if facts.phases else ()
    leads = ((phases[k].lead, k) for k in channels if phases[k].kind in {"exact", "from"})
    return [(lead, k) for lead, k in leads if lead is not None]
