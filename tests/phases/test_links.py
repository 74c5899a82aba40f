import random
from dataclasses import replace
from functools import partial

import pytest

from auditor.gf2.effort import Effort
from auditor.gf2.logarithm import logarithms
from auditor.gf2.matrix import row_times
from auditor.machine.machine import LinearMachine
from auditor.phases import find, leads
from auditor.phases.find import find_phases
from auditor.phases.overlap import overlap
from auditor.phases.separations import pairs_closer_than, separation
from auditor.phases.table import Infinite, PhaseTable
from tests.support.linear_machines import fibonacci, linear_machine


def random_machine(rng: random.Random) -> LinearMachine:
    """Return a few registers, some twice, and channels of which many are near shifts of each other."""
    transition: list[int] = []
    while len(transition) < 9:
        size = rng.choice([2, 3, 4, 5, 7])
        feedback = rng.getrandbits(size) | 1 << size - 1
        for _ in range(rng.choice([1, 1, 2])):
            block = [feedback] + [1 << k for k in range(size - 1)]
            transition += [row << len(transition) for row in block]
    size = len(transition)
    sources = [rng.getrandbits(size) for _ in range(2)]
    channels = []
    for _ in range(8):
        row = rng.choice(sources)
        for _ in range(rng.choice([0, 0, 1, 2, 3, 5, 8, 20, 50])):
            row = row_times(row, transition)
        channels.append((row, rng.getrandbits(1)))
    return linear_machine(transition, channels, rng.getrandbits(size) * rng.randrange(2))


@pytest.mark.parametrize("seed", range(5))
def test_what_is_told_without_large_primes_is_what_the_leads_tell(seed: int, monkeypatch: pytest.MonkeyPatch) -> None:
    """With larger primes withheld, nothing said contradicts the full answer, and no pair in the window is missed."""
    rng = random.Random(seed)
    undecided = 0
    for _ in range(30):
        machine, window = random_machine(rng), rng.choice([1, 2, 4, 8])
        full = find_phases(machine)
        with monkeypatch.context() as patch:
            patch.setattr(leads, "logarithms", partial(logarithms, max_prime_bits=rng.choice([1, 2, 3])))
            partly = find_phases(machine, window=window)
        assert full.window is None
        assert full.certified_at_least is None
        undecided += _compare(partly, full, window)
    assert undecided > 10


def _compare(partly: PhaseTable, full: PhaseTable, window: int) -> bool:
    everything = pairs_closer_than(full, 1 << 20)
    undecided = any(phase.kind == "undecided" for phase in partly.phases)
    if undecided:
        assert partly.certified_at_least == min([window, *(pair[2] for pair in everything)])
    else:
        assert partly == full
    for bound in range(10):
        known, expected = pairs_closer_than(partly, bound), [pair for pair in everything if pair[2] < bound]
        assert known == expected if partly.decides(bound) else set(known) <= set(expected)
    for group in partly.classes:
        assert len({full.phases[channel].group for channel in group.channels}) == 1
    for i, phase in enumerate(partly.phases):
        true = full.phases[i]
        assert phase.nearest == true.nearest or (
            phase.nearest is None and true.nearest is not None and true.nearest.separation >= window
        )
        for j in range(len(partly.phases)):
            _compare_pair(partly, full, i, j, window)
    return undecided


def _compare_pair(partly: PhaseTable, full: PhaseTable, i: int, j: int, window: int) -> None:
    told, true = separation(partly, i, j), separation(full, i, j)
    if told is None:
        assert true is None or isinstance(true, Infinite) or true >= window
    else:
        assert told == true
    told_cells, true_cells = overlap(partly, i, j, 3, 5), overlap(full, i, j, 3, 5)
    if told_cells is not None and true_cells is not None:
        assert told_cells == true_cells or partly.phases[i].group is None
        assert bool(told_cells.pairs) == bool(true_cells.pairs)


def test_register_stages_need_no_logarithms(monkeypatch: pytest.MonkeyPatch) -> None:
    """Stages of a register that logarithms are withheld from stand one cycle apart: chains of close pairs tell."""
    monkeypatch.setattr(leads, "logarithms", partial(logarithms, max_prime_bits=2))
    register = fibonacci((127, 126, 0))
    machine = linear_machine(register, [(1 << k, k % 2) for k in range(127)], registers=[range(127)])
    table = find_phases(machine)
    assert [phase.lag(2**127 - 1) for phase in table.phases] == list(range(127))
    assert [phase.inverted for phase in table.phases] == [bool(k % 2) for k in range(127)]
    assert (table.window, table.certified_at_least, table.close_pairs) == (None, None, ())


def test_a_large_register_is_certified_without_its_leads(monkeypatch: pytest.MonkeyPatch) -> None:
    """Of channels 5 and 600 cycles apart behind a register of degree 127, a window of 100 finds the first pair."""
    monkeypatch.setattr(leads, "logarithms", partial(logarithms, max_prime_bits=2))
    register = fibonacci((127, 126, 0))
    reference, row = 0b1011, 1 << 3 | 1 << 50 | 1 << 90
    rows = [row]
    for _ in range(605):
        rows.append(row_times(rows[-1], register))
    channels = [(reference, 0), (rows[0], 0), (rows[5], 1), (rows[605], 0)]
    table = find_phases(linear_machine(register, channels, registers=[range(127)]), window=100)
    assert [phase.kind for phase in table.phases] == ["exact", "undecided", "undecided", "undecided"]
    assert {phase.group for phase in table.phases} == {0}
    assert table.close_pairs == ((2, 1, 5, True),)
    assert (table.certified_at_least, table.window) == (5, 100)
    assert pairs_closer_than(table, 100) == [(1, 2, 5, True)]
    assert (table.decides(100), table.decides(101)) == (True, False)
    assert (separation(table, 1, 2), separation(table, 1, 3)) == (5, None)
    found = overlap(table, 1, 2, 20, 10)
    assert found
    # Channel 2 leads by 5: scan cell 6 of its chain holds what scan cell 1 of the other holds.
    assert (found.pairs, found.example, found.complement) == (5, (1, 6), True)
    assert overlap(table, 1, 3, 101, 10) is None


def test_a_limit_says_why_a_lead_is_undecided() -> None:
    """Leads that a limit leaves out have a reason; progress names the field, and the limit changes nothing else."""
    register, heard = fibonacci((59, 57, 55, 52, 0)), list[str]()
    machine = linear_machine(register, [(1 << 5, 0), (0b111 << 20, 1), (1 << 6, 0)], registers=[range(59)])
    limited = find_phases(machine, effort=Effort(work_limit=1000, progress=heard.append))
    because = "the limit on work is reached"
    assert [(phase.kind, phase.no_lead_because) for phase in limited.phases] == [
        ("exact", ""),
        ("undecided", because),
        ("exact", ""),
    ]
    assert limited.phases[1].lead_modulus == 179951  # 2^59 - 1 = 179951 x 3203431780337
    assert limited.certified_at_least == 1
    assert all(phrase.startswith("leads of 3 channels in a field of degree 59") for phrase in heard)
    assert find_phases(machine).phases[2] == limited.phases[2]


def test_an_unknown_period_leaves_membership_open() -> None:
    """Behind a register of degree 521 only channels within the window of the reference are surely of its class."""
    register = fibonacci((521, 32, 0))
    rows = [1 << 9 | 1 << 20]
    for _ in range(40):
        rows.append(row_times(rows[-1], register))
    channels = [(rows[0], 0), (rows[3], 1), (rows[40], 0)]
    machine = linear_machine(register, channels, registers=[range(521)])
    table = find_phases(machine, window=8)
    assert [(phase.group, phase.kind) for phase in table.phases] == [
        (0, "exact"),
        (0, "undecided"),
        (None, "undecided"),
    ]
    assert (table.classes[0].modulus, table.classes[0].channels) == (None, (0, 1))
    assert pairs_closer_than(table, 8) == [(0, 1, 3, True)]
    assert separation(table, 0, 2) is None
    assert replace(table, window=None).decides(9)


def test_many_channels_narrow_the_window_and_the_table_says_so(monkeypatch: pytest.MonkeyPatch) -> None:
    """A search that would not end in some seconds is made smaller; what lies beyond it is not called decided."""
    monkeypatch.setattr(leads, "logarithms", partial(logarithms, max_prime_bits=2))
    monkeypatch.setattr(find, "_SEARCH_LIMIT", 3 * 3 * 50)
    register = fibonacci((127, 126, 0))
    channels = [(0b1011, 0), (1 << 60 | 1 << 7, 0), (1 << 90 | 1 << 8 | 1, 0)]
    table = find_phases(linear_machine(register, channels, registers=[range(127)]), window=1 << 60)
    assert (table.window, table.certified_at_least, table.decides(51)) == (50, 50, False)
