"""The class of small random machines against the sets of their streams from all states, walked by brute force."""

import random

import pytest

from auditor.machine.machine import LinearMachine
from auditor.phases.streams import read_streams
from auditor.revisions.classify import Classified, Question, classify
from auditor.revisions.encoding import related_from
from auditor.revisions.reset import from_reset
from auditor.revisions.steady import Steady, settle
from auditor.revisions.witness import followed_witness
from tests.support import stream_sets
from tests.support.linear_machines import linear_machine
from tests.support.machines import Machine, bits_of, random_machine, rank, sum_rows, with_pipelines

SEEDS = range(160)


def as_proved(machine: Machine, reset: int | None = None) -> LinearMachine:
    """Return the machine as an audit gives it."""
    channels = [(row, machine.constants >> i & 1) for i, row in enumerate(machine.channels)]
    known = 0 if reset is None else (1 << machine.size) - 1
    return linear_machine(machine.rows, channels, machine.offset, reset_known=known, reset_state=reset or 0)


def recoded(machine: Machine, rng: random.Random) -> Machine:
    """Return the machine with its state in another basis, moved by a vector: x' = S x + p."""
    n = machine.size
    basis = [0]
    while rank(basis) < n:
        basis = [rng.getrandbits(n) for _ in range(n)]
    back = inverse(basis, n)
    moved = rng.getrandbits(n)

    def times(row: int, rows: list[int] | tuple[int, ...]) -> int:
        return sum_rows(rows[k] for k in bits_of(row))

    def apply(rows: list[int], state: int) -> int:
        return sum((row & state).bit_count() % 2 << i for i, row in enumerate(rows))

    rows = [times(times(row, machine.rows), back) for row in basis]
    channels = [times(row, back) for row in machine.channels]
    offset = apply(rows, moved) ^ apply(basis, machine.offset) ^ moved
    return Machine(tuple(rows), tuple(channels), offset, machine.constants ^ apply(channels, moved))


def inverse(rows: list[int], n: int) -> list[int]:
    """Return the inverse by elimination."""
    wide = [row | 1 << n + i for i, row in enumerate(rows)]
    for column in range(n):
        pivot = next(i for i in range(column, n) if wide[i] >> column & 1)
        wide[column], wide[pivot] = wide[pivot], wide[column]
        wide = [row ^ wide[column] if i != column and row >> column & 1 else row for i, row in enumerate(wide)]
    return [row >> n for row in wide]


def changed(machine: Machine, rng: random.Random) -> Machine:
    """Return the machine after one or more of the changes that have a class, or another machine."""
    count = len(machine.channels)
    how = rng.choice(("recode", "invert", "permute", "shift", "pipeline", "other", "tap", "mix"))
    if how == "other":
        return random_machine(rng, rng.randint(2, 5), count)
    if how == "pipeline":
        return with_pipelines(machine, [rng.randint(0, 1) for _ in range(count)])
    if how == "shift":
        constants = sum((row & machine.offset).bit_count() % 2 << i for i, row in enumerate(machine.channels))
        rows = tuple(map(machine.pulled_back, machine.channels))
        return Machine(machine.rows, rows, machine.offset, machine.constants ^ constants)
    if how == "tap":
        rows = list(machine.channels)
        rows[rng.randrange(count)] ^= 1 << rng.randrange(machine.size)
        return Machine(machine.rows, tuple(rows), machine.offset, machine.constants)
    if how in ("recode", "mix"):
        machine = recoded(machine, rng)
    if how in ("invert", "mix"):
        machine = Machine(machine.rows, machine.channels, machine.offset, machine.constants ^ rng.getrandbits(count))
    if how in ("permute", "mix"):
        order = rng.sample(range(count), count)
        constants = sum((machine.constants >> k & 1) << i for i, k in enumerate(order))
        machine = Machine(machine.rows, tuple(machine.channels[k] for k in order), machine.offset, constants)
    return machine


class Compared:
    """Two random machines and what the room says about them."""

    def __init__(self, seed: int) -> None:
        rng = random.Random(seed)
        self.old = random_machine(rng, rng.randint(2, 4), rng.randint(1, 3), affine=rng.random() < 0.7)
        self.new = changed(self.old, rng)
        self.machines = as_proved(self.old), as_proved(self.new)
        self.start = max(machine.transient for machine in self.machines)
        self.pairs = tuple((i, i) for i in range(len(self.old.channels)))
        streams = [read_streams(machine) for machine in self.machines]
        self.streams = streams[0], streams[1]
        channels = range(len(self.pairs))
        self.steadies: tuple[Steady, Steady] = (
            settle(self.machines[0], self.start, channels, streams[0]),
            settle(self.machines[1], self.start, channels, streams[1]),
        )
        self.found: Classified = classify(Question(*self.steadies, self.pairs, (), 2))
        self.same_from = stream_sets.same_from(self.old, self.new, self.start)


@pytest.mark.parametrize("seed", SEEDS)
def test_class_is_that_of_the_sets_of_streams(seed: int) -> None:
    """Same, inverted and permuted are said where the sets of all streams are, and nowhere else."""
    case = Compared(seed)
    inversions = stream_sets.inversions(case.old, case.new, case.start)
    orders = stream_sets.orders(case.old, case.new, case.start)
    parts = case.found.parts
    told = sum(bool(relation.inverted) << i for i, relation in enumerate(case.found.found))
    assert (parts == ()) == (case.same_from is not None)
    assert (parts == ("inverted",)) == (case.same_from is None and bool(inversions))
    if parts == ("inverted",):
        assert told in inversions
        assert told.bit_count() == inversions[0].bit_count(), "more channels are inverted than need be"
    agreeing = sum(relation.status in ("same", "inverted") for relation in case.found.found)
    if not inversions and orders and 2 * agreeing <= len(case.pairs):
        assert {"permuted", "reversed", "decimated"} & set(parts)
    if parts == ("permuted",):
        order = [r.carries if r.carries is not None else i for i, r in enumerate(case.found.found)]
        assert tuple(order) in orders


@pytest.mark.parametrize("seed", SEEDS)
def test_first_cycle_is_that_of_the_sets_of_streams(seed: int) -> None:
    """Where the streams are the same in the long run, the cycle from which they are is the true one."""
    case = Compared(seed)
    if case.same_from is None:
        with pytest.raises(ValueError, match="do not at the cycle"):
            related_from(*case.streams, case.pairs, [False] * len(case.pairs), case.start)
    else:
        since, _ = related_from(*case.streams, case.pairs, [False] * len(case.pairs), case.start)
        assert since == case.same_from


@pytest.mark.parametrize("seed", SEEDS)
def test_witness_is_a_state_that_cannot_be_followed(seed: int) -> None:
    """A witness is given exactly where the sets differ; its states agree up to its cycle and no better state exists."""
    case = Compared(seed)
    witness = followed_witness(case.machines, case.streams, case.pairs, case.start)
    assert (witness is None) == (case.same_from is not None)
    if witness is None:
        return
    cycles = witness.cycle + 1
    shown = [
        stream_sets.shown(case.old, witness.old_state, cycles),
        stream_sets.shown(case.new, witness.new_state, cycles),
    ]
    channel = int(witness.old_channel[1:])
    assert (shown[0][-1] ^ shown[1][-1]) >> channel & 1
    assert shown[0][case.start : -1] == shown[1][case.start : -1]
    led, other = (0, case.new) if "OLD longer" in witness.start else (1, case.old)
    ours = shown[led][case.start :]
    theirs = [stream_sets.shown(other, state, cycles)[case.start :] for state in range(1 << other.size)]
    assert ours not in theirs


@pytest.mark.parametrize("seed", SEEDS)
def test_reset_is_compared_as_stepping_does(seed: int) -> None:
    """From reset, agreement, the first difference, the cycle from which it ends and the shift are those of stepping."""
    case = Compared(seed)
    rng = random.Random(seed)
    states = [rng.getrandbits(machine.size) for machine in (case.old, case.new)]
    machines = as_proved(case.old, states[0]), as_proved(case.new, states[1])
    found = from_reset(machines, case.steadies, case.pairs, case.found.relations)
    length = 300
    old, new = stream_sets.shown(case.old, states[0], length), stream_sets.shown(case.new, states[1], length)
    differences = [cycle for cycle in range(length) if old[cycle] != new[cycle]]
    assert found.agree == (not differences)
    if differences:
        assert found.first is not None
        assert found.first[0] == differences[0]
        assert found.agree_from == (differences[-1] + 1 if differences[-1] < length // 2 else None)
    if case.same_from is not None and found.agree_from is None:
        shifts = [s for s in range(-64, 65) if new[100:200] == old[100 + s : 200 + s]]
        assert found.shift in shifts if shifts else found.shift is None


def test_unknown_reset_is_no_comparison() -> None:
    """A register that reset leaves open is not compared from reset; a pipeline is, once it has filled."""
    case = Compared(0)
    assert from_reset(case.machines, case.steadies, case.pairs, None).agree is None
    plain = Machine((2, 1), (1,))
    piped = with_pipelines(plain, [1])
    known = linear_machine(piped.rows, [(piped.channels[0], 0)], reset_known=0b011, reset_state=0b01)
    steady = settle(known, known.transient, [0])
    found = from_reset((known, known), (steady, steady), [(0, 0)], None)
    assert (found.agree, found.known_from) == (True, 1)
