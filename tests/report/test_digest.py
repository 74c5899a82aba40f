"""What the writers take from the facts agrees with the plain definition."""

import random
from dataclasses import replace

import pytest

from auditor.phases.table import Phase, PhaseClass
from auditor.report.digest import Pair, channel_views, closest_pairs, cut_views
from auditor.report.facts import AuditFacts
from tests.support.facts import large_facts, refused_facts, small_facts


def _with_leads(modulus: int, half_turn: bool, count: int, seed: int) -> AuditFacts:
    draw = random.Random(seed)
    facts = large_facts(degree=16, channels=count, modulus=modulus)
    assert facts.phases
    phases = tuple(
        Phase(0, draw.randrange(modulus), "exact", modulus, not half_turn and draw.random() < 0.5, 0)
        for _ in range(count)
    )
    group = PhaseClass(0, modulus, tuple(range(count)), None, half_turn)
    return replace(facts, phases=replace(facts.phases, phases=phases, classes=(group,)))


def _all_pairs(facts: AuditFacts) -> list[Pair]:
    """Compare every channel with every other by stepping the stream bit by bit, as the definition says."""
    assert facts.phases
    group, phases = facts.phases.classes[0], facts.phases.phases
    modulus = group.modulus or 1
    # A stream of that period, and where asked one that is its complement after half of it.
    half = random.Random(1).getrandbits(modulus)
    if group.half_turn:
        half &= (1 << modulus // 2) - 1
        half |= (~half & ((1 << modulus // 2) - 1)) << modulus // 2
    bits = [half >> t & 1 for t in range(modulus)]

    def stream(k: int) -> list[int]:
        lead = phases[k].lead or 0
        return [bits[(t + lead) % modulus] ^ bool(phases[k].inverted) for t in range(modulus)]

    pairs = []
    for i in range(len(phases)):
        for j in range(i + 1, len(phases)):
            one, other = stream(i), stream(j)
            shifts = [
                (min(s, modulus - s), one != other[s:] + other[:s])
                for s in range(modulus)
                if len({a ^ b for a, b in zip(one, other[s:] + other[:s], strict=True)}) == 1
            ]
            cycles, complement = min(shifts)
            pairs.append(Pair(cycles, i, j, complement))
    return sorted(pairs)


@pytest.mark.parametrize(("modulus", "half_turn"), [(63, False), (64, True), (31, False), (30, True)])
@pytest.mark.parametrize("seed", range(4))
def test_the_closest_pairs_are_those_of_all_pairs(modulus, half_turn, seed):
    """The pairs found among near neighbours are the closest of all pairs, found by comparing shifted streams."""
    facts = _with_leads(modulus, half_turn, 12, seed)
    found, every = closest_pairs(facts, 5), _all_pairs(facts)
    assert [pair.cycles for pair in found] == [pair.cycles for pair in every[:5]]
    assert set(found) <= set(every)


def test_many_channels_in_lockstep_fill_the_list_and_no_more():
    """Of a hundred channels in step, the asked number of pairs with separation 0 is returned."""
    facts = _with_leads(63, False, 100, 1)
    assert facts.phases
    phases = tuple(replace(phase, lead=7, inverted=False) for phase in facts.phases.phases)
    found = closest_pairs(replace(facts, phases=replace(facts.phases, phases=phases)), 5)
    assert len(set(found)) == 5
    assert {(pair.cycles, pair.complement) for pair in found} == {(0, False)}


def test_pairs_with_undecided_leads_come_from_the_bounded_search():
    """A pair that the bounded search found is listed although neither lead is known."""
    facts = large_facts(channels=3)
    assert facts.phases
    phases = tuple(replace(phase, lead=None, kind="undecided", nearest=None) for phase in facts.phases.phases)
    table = replace(facts.phases, phases=phases, close_pairs=((2, 1, 9, True),), certified_at_least=9)
    assert closest_pairs(replace(facts, phases=table), 5) == [Pair(9, 1, 2, True)]


def test_nets_behind_a_spoiled_channel_are_no_channels():
    """Such a net is neither among the channels nor in a pair, although its lead is known."""
    facts = small_facts()
    assert [view.name for view in cut_views(facts)] == ["n42"]
    assert "n42" not in [view.name for view in channel_views(facts)]
    assert all(6 not in (pair.first, pair.second) for pair in closest_pairs(facts, 5))


def test_a_refused_machine_has_channels_but_no_pairs():
    """The channels are known from the cone alone, with the refusal of those that are refused themselves."""
    facts = refused_facts()
    assert [view.refusal is not None for view in channel_views(facts)] == [False] * 4 + [True, False]
    assert closest_pairs(facts, 5) == []
