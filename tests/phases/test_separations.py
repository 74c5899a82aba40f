import random
from itertools import combinations
from time import process_time

import pytest

from auditor.phases.separations import closest, gap, nearest_neighbours, pairs_closer_than, separation
from auditor.phases.table import Phase, PhaseClass, PhaseTable


def table_of(leads: list[int], modulus: int, half_turn: bool = False, seed: int = 0) -> PhaseTable:
    """Return one class with the given leads and random inversions."""
    rng = random.Random(seed)
    phases = tuple(Phase(0, lead, "exact", modulus, rng.random() < 0.5 and not half_turn, 0) for lead in leads)
    group = PhaseClass(0, modulus, tuple(range(len(leads))), None, half_turn)
    return PhaseTable((), (group,), phases, None)


@pytest.mark.parametrize("modulus", [1, 2, 7, 20, 1000])
@pytest.mark.parametrize("half_turn", [False, True])
def test_sorted_leads_give_what_all_pairs_give(modulus: int, half_turn: bool) -> None:
    """Close pairs, nearest neighbours and the minimum are those of comparing every channel with every other."""
    rng = random.Random(modulus)
    for _ in range(30):
        period = 2 * modulus if half_turn else modulus
        table = table_of([rng.randrange(period) for _ in range(rng.randint(2, 12))], period, half_turn)
        group, phases = table.classes[0], table.phases
        pairs = [(i, j, *gap(group, phases[i], phases[j])) for i, j in combinations(group.channels, 2)]
        pairs.sort(key=lambda pair: (pair[2], pair[:2]))
        for bound in (0, 1, 3, modulus // 2, modulus):
            assert pairs_closer_than(table, bound) == [pair for pair in pairs if pair[2] < bound]
        neighbours = nearest_neighbours(table.classes, phases, {}, ())
        for i in group.channels:
            mine = [(c, b if a == i else a, v) for a, b, c, v in pairs if i in (a, b)]
            near = neighbours[i]
            assert (near.separation, near.channel, near.complement) == min(mine)
        minimum = closest(group.channels, neighbours)
        assert minimum
        assert (*minimum.channels, minimum.cycles, minimum.complement) == pairs[0]


def test_separation_goes_the_shorter_way_round() -> None:
    """Leads 3 and 1020 of modulus 1023 are 6 cycles apart; a channel is no distance from itself."""
    table = table_of([3, 1020], 1023)
    assert separation(table, 0, 1) == separation(table, 1, 0) == 6
    assert separation(table, 1, 1) == 0


def test_a_shift_by_half_a_turn_is_a_complement() -> None:
    """Where half the modulus of 20 complements the stream, leads 0 and 13 are complements 3 cycles apart."""
    table = table_of([0, 13], 20, half_turn=True)
    assert gap(table.classes[0], *table.phases) == (3, True)
    assert gap(table.classes[0], *reversed(table.phases)) == (3, True)


def test_a_gap_without_leads_is_refused() -> None:
    """A distance is never made up for a phase that has no lead."""
    table = table_of([0, 1], 20)
    with pytest.raises(ValueError, match="two leads"):
        gap(table.classes[0], table.phases[0], Phase(0, None, "undecided", 1, None, 0))


def test_few_close_pairs_of_many_channels_are_found_quickly() -> None:
    """Two thousand leads on a circle of 2^127 - 1 do not cost two million comparisons."""
    rng = random.Random(5)
    leads = [rng.randrange(2**127 - 1) for _ in range(2000)]
    leads[1500] = leads[7] + 5
    table = table_of(leads, 2**127 - 1)
    start = process_time()
    assert [pair[:3] for pair in pairs_closer_than(table, 1 << 40)] == [(7, 1500, 5)]
    assert nearest_neighbours(table.classes, table.phases, {}, ())[7].channel == 1500
    assert process_time() - start < 1
