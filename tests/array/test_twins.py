"""Twin scan cells against enumeration, and against the formula on leads."""

import random
from itertools import combinations, product

import pytest

from auditor.array.rows import chain_rows
from auditor.array.scan_array import Chain, ScanCell
from auditor.array.twins import find_twins
from auditor.phases.find import find_phases
from auditor.phases.overlap import overlap
from tests.support.linear_machines import fibonacci, galois, linear_machine
from tests.support.scan_cells import columns_of, moving, random_array


@pytest.mark.parametrize("seed", range(60))
def test_counts_are_those_of_enumeration(seed: int) -> None:
    """Pairs between chains, inside a chain and across patterns: equal or complementary columns over all states."""
    rng = random.Random(seed)
    machine, chains = random_array(rng)
    window, clocks = rng.randint(0, 3), rng.randint(1, 8)
    here, everything = columns_of(machine, chains)
    columns = moving(here, everything)
    pairs = [(a, b) for a, b in combinations(sorted(columns), 2) if columns[a] == columns[b]]
    across = 0
    for later in range(1, window + 1):
        moved = moving(columns_of(machine, chains, later * clocks)[0], everything)
        across += sum(columns[a] == moved[b] for a, b in product(columns, moved))
    found = find_twins(chain_rows(machine, chains), window, clocks)
    assert found is not None
    between = [(a, b) for a, b in pairs if a.chain != b.chain]
    assert found.pairs == len(between)
    assert found.chain_pairs == len({(a.chain, b.chain) for a, b in between})
    assert found.twinned == tuple(sorted({place.chain for pair in between for place in pair}))
    assert found.repeats == len(pairs) - len(between)
    assert found.across == across
    for twin in found.examples:
        if not twin.later:
            a, b = twin.example
            assert here[a] ^ here[b] == (everything if twin.complement else 0)


@pytest.mark.parametrize("seed", range(5))
def test_counts_are_those_of_the_formula_on_leads(seed: int) -> None:
    """Channels of one register at chosen leads: the sum over e congruent to the difference, pair by pair."""
    rng = random.Random(seed)
    register = fibonacci((9, 4, 0))  # period 511
    machine = linear_machine(register, [(rng.randrange(1, 512), rng.getrandbits(1)) for _ in range(8)])
    table = find_phases(machine)
    lengths = [rng.choice((5, 60, 700)) for _ in range(8)]
    found = find_twins(chain_rows(machine, [Chain(f"c{i}", length) for i, length in enumerate(lengths)]))
    assert found is not None
    shared = [overlap(table, i, k, lengths[i], lengths[k]) for i, k in combinations(range(8), 2)]
    assert found.pairs == sum(one.pairs for one in shared if one)
    alone = [overlap(table, i, i, length, length) for i, length in enumerate(lengths)]
    assert found.repeats == sum((one.pairs - length) // 2 for one, length in zip(alone, lengths, strict=True) if one)


def test_a_register_of_many_words_is_compared_bit_by_bit() -> None:
    """Rows of 130 bits are told apart although their keys have 64: neighbours of one register are one cycle apart."""
    machine = linear_machine(galois((130, 3, 0)), [(1 << 20, 0), (1 << 21, 1), (1 << 90, 0)])
    found = find_twins(chain_rows(machine, [Chain(f"c{i}", 40) for i in range(3)]))
    assert found is not None
    assert (found.pairs, found.chain_pairs, found.nearest) == (39, 1, 1)
    assert found.between is not None
    assert found.between.complement


def test_two_cells_filled_at_one_time_are_twins_of_each_other() -> None:
    """Scan cells of one chain with equal delays hold the same bit."""
    machine = linear_machine(fibonacci((5, 2, 0)), [(1, 0)])
    cells = tuple(ScanCell(name, delay, name == "b") for name, delay in (("a", 1), ("b", 1), ("c", 2)))
    found = find_twins(chain_rows(machine, [Chain("c0", 3, cells)]))
    assert found is not None
    assert (found.pairs, found.repeats, found.repeating) == (0, 1, 1)
    assert found.inside is not None
    assert found.inside.complement


def test_a_constant_chain_has_no_twins() -> None:
    """Constant channels are told elsewhere and take no part."""
    machine = linear_machine(fibonacci((5, 2, 0)), [(0, 1), (0, 0), (1, 0)])
    found = find_twins(chain_rows(machine, [Chain(f"c{i}", 9) for i in range(3)]))
    assert found is not None
    assert (found.pairs, found.repeats, found.nearest) == (0, 0, None)
