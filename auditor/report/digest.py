"""What several writers take from the facts in the same way: channels, closest pairs, the heaviest output."""

from collections.abc import Sequence
from dataclasses import replace
from typing import NamedTuple

from auditor.cone.cone import Load
from auditor.machine.machine import ObservedRow, Refusal
from auditor.phases.separations import gap
from auditor.phases.table import Phase, PhaseClass
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


def fed_channels(facts: AuditFacts) -> set[int]:
    """Return the numbers of the channels that feed chains in ``LinearMachine.observed``."""
    machine = facts.extraction.machine
    return {k for k, row in enumerate(machine.observed if machine else ()) if not row.cut_from}


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

    Pairs whose leads are undecided come from the bounded search of the phase table.
    """
    machine, table = facts.extraction.machine, facts.phases
    if machine is None or table is None:
        return []
    fed = fed_channels(facts)
    known = [Pair(c, min(i, j), max(i, j), complement) for i, j, c, complement in table.close_pairs if {i, j} <= fed]
    for group in table.classes:
        channels = tuple(k for k in group.channels if k in fed)
        known += _near_pairs(replace(group, channels=channels), table.phases, count)
    return sorted({(pair.first, pair.second): pair for pair in known}.values())[:count]


def _near_pairs(group: PhaseClass, phases: Sequence[Phase], count: int) -> list[Pair]:
    """Return pairs of near neighbours on the circle of the leads, the ``count`` closest ones among them.

    The circle is one turn: a shift by a turn gives the stream again or its complement. Of two channels with more than
    ``count`` others between them, ``count`` pairs between them are no farther apart; they need not be compared.
    """
    if not group.modulus or not group.turn:
        return []
    leads = [(phases[k].lead, k) for k in group.channels if phases[k].kind in {"exact", "from"}]
    ring = [k for _, k in sorted((lead % group.turn, k) for lead, k in leads if lead is not None)]
    pairs = []
    for at, i in enumerate(ring):
        for step in range(1, min(count + 1, len(ring) - 1) + 1):
            j = ring[(at + step) % len(ring)]
            cycles, complement = gap(group, phases[i], phases[j])
            pairs.append(Pair(cycles, min(i, j), max(i, j), complement))
    return pairs
