import random

import pytest

from auditor.phases.find import find_phases
from auditor.phases.overlap import Overlap, overlap, shared_cells
from tests.support.brute_force import Columns, columns, random_transition
from tests.support.linear_machines import fibonacci, linear_machine


def equal_cells(streams: Columns, i: int, j: int, length_i: int, length_j: int) -> list[tuple[int, int, bool]]:
    """Return all (cell of chain i, cell of chain j, complement) that agree from every state, the chains being full."""
    last = streams.settled + max(length_i, length_j)
    found = []
    for cell in range(1, length_i + 1):
        for other in range(1, length_j + 1):
            rounds = [(streams.shown[i][t - cell], streams.shown[j][t - other]) for t in _cycles(streams, last)]
            for complement in (False, True):
                flip = streams.everything if complement else 0
                if all(mine == its ^ flip for mine, its in rounds):
                    found.append((cell, other, complement))
    return found


def _cycles(streams: Columns, first: int) -> range:
    return range(first, first + streams.period)


@pytest.mark.parametrize("seed", range(4))
def test_pairs_of_equal_scan_cells_are_counted_as_in_the_loaded_chains(seed: int) -> None:
    """The count and the first pair agree with chains loaded from every state, for all lengths and both directions."""
    rng = random.Random(seed)
    compared = 0
    while compared < 60:
        size = rng.randint(2, 5)
        channels = [(rng.getrandbits(size), rng.getrandbits(1)) for _ in range(4)]
        machine = linear_machine(random_transition(rng, size), channels, rng.getrandbits(size) * rng.randrange(2))
        table, streams = find_phases(machine), columns(machine)
        for i in range(4):
            for j in range(4):
                lengths = rng.randint(1, 9), rng.randint(1, 9)
                if i == j or streams.is_constant(i) or streams.is_constant(j):
                    continue
                if max(lengths) > streams.period:  # the columns at hand are too few to fill such chains
                    continue
                cells = equal_cells(streams, i, j, *lengths)
                first = Overlap(len(cells), cells[0][:2], cells[0][2]) if cells else Overlap(0, None)
                assert overlap(table, i, j, *lengths) == first
                compared += 1


def test_the_formula_for_one_distance() -> None:
    """Chains of 100 and 80 scan cells, chain 1 ahead by 30: its cell 31 holds what cell 1 of chain 2 holds."""
    assert shared_cells(30, 1023, 100, 80) == Overlap(70, (31, 1))
    assert shared_cells(-30, 1023, 100, 80) == Overlap(50, (1, 31))
    assert shared_cells(30 + 5 * 1023, 1023, 100, 80) == Overlap(70, (31, 1))
    assert shared_cells(500, 1023, 100, 80) == Overlap(0, None)


def test_chains_longer_than_the_period_meet_more_than_once() -> None:
    """With a period of 7 and 10 scan cells each, streams in step share 10 + 3 + 3 pairs."""
    assert shared_cells(0, 7, 10, 10) == Overlap(16, (1, 1))


def test_channels_of_two_classes_share_nothing() -> None:
    """Two registers: no pair of scan cells is equal for every state. A constant channel is not compared."""
    register = fibonacci((3, 2, 0))
    table = find_phases(linear_machine(register + [row << 3 for row in register], [(1, 0), (8, 0), (0, 1)]))
    assert overlap(table, 0, 1, 50, 50) == Overlap(0, None)
    assert overlap(table, 0, 2, 50, 50) is None
