"""A random machine, drawn as gates by a random recipe, audited: the same machine comes back, always."""

import random
import tempfile
from pathlib import Path

from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from auditor.machine.machine import LinearMachine
from auditor.report.facts import AuditFacts
from tests.support import machines
from tests.support.audits import audit_block
from tests.support.gates import Block, Recipe, draw
from tests.support.xors import FORMS

RECIPES = st.builds(
    Recipe,
    forms=st.lists(st.sampled_from(FORMS), min_size=1, max_size=4).map(tuple),
    styles=st.lists(st.sampled_from(("cells", "primitives", "assigns")), min_size=1, max_size=3).map(tuple),
    all_storage=st.booleans(),
    complemented=st.booleans(),
    enable=st.sampled_from(("", "multiplexer", "gates")),
    scan_multiplexer=st.booleans(),
    buffers=st.booleans(),
    clock=st.sampled_from(("direct", "buffered", "gated", "inverted")),
    reset=st.sampled_from(("none", "some", "all")),
    reset_high=st.booleans(),
    names=st.sampled_from(("plain", "random", "escaped")),
    vectors=st.booleans(),
    hierarchy=st.booleans(),
    shuffled=st.booleans(),
    half_cycles=st.booleans(),
)
SHAPES = st.tuples(st.integers(1, 9), st.integers(1, 5), st.lists(st.integers(0, 3), max_size=3), st.integers(0, 2**32))
MODERATE = settings(
    max_examples=60, deadline=None, derandomize=True, database=None, suppress_health_check=[HealthCheck.too_slow]
)


def drawn(shape: tuple[int, int, list[int], int], recipe: Recipe) -> Block:
    """Draw a random machine of a shape: elements, channels, pipeline depths, seed."""
    size, channels, depths, seed = shape
    rng = random.Random(seed)
    machine = machines.random_machine(rng, size, channels)
    return draw(machines.with_pipelines(machine, depths[:channels]), recipe, rng)


def audited(block: Block) -> AuditFacts:
    with tempfile.TemporaryDirectory() as folder:
        return audit_block(Path(folder), block)


def by_name(row: int, names: tuple[str, ...]) -> set[str]:
    """Return the names of the elements that a row reads."""
    return {names[k] for k in machines.bits_of(row)}


def found_machine(facts: AuditFacts) -> LinearMachine:
    machine = facts.extraction.machine
    assert machine is not None, facts.extraction.refusals
    return machine


def channel_truth(block: Block, i: int) -> tuple[set[str], int]:
    """Return the elements that channel i reads and its constant; half-cycle storage behind it stands for its sum."""
    late = [name for name, channel in block.half_cycle.items() if channel == i]
    if late:
        return {late[-1]}, 0
    return by_name(block.machine.channels[i], block.names), block.machine.constants >> i & 1


@MODERATE
@given(SHAPES, RECIPES)
def test_the_same_machine_comes_back(shape: tuple[int, int, list[int], int], recipe: Recipe) -> None:
    """Elements, next states, constants, channels and resets are those of the machine that was drawn."""
    block = drawn(shape, recipe)
    facts = audited(block)
    found, truth = found_machine(facts), block.machine
    seen = machines.bits_of(machines.visible(truth))
    assert set(found.storage) == {block.names[k] for k in seen} | set(block.half_cycle)
    assert found.free_inputs == ()
    for k in seen:
        element = found.storage.index(block.names[k])
        assert by_name(found.transition[element], found.storage) == by_name(truth.rows[k], block.names)
        assert found.offset >> element & 1 == truth.offset >> k & 1
        reset = found.reset_state >> element & 1 if found.reset_known >> element & 1 else None
        assert reset == block.resets[k]
    assert tuple(row.name for row in found.observed) == block.channels
    for i, observed in enumerate(found.observed):
        assert observed.row is not None
        shown = by_name(observed.row.state, found.storage), observed.row.constant
        assert shown == channel_truth(block, i)
    assert {found.storage[k] for k in found.half_cycle} == set(block.half_cycle)
    for name, i in block.half_cycle.items():
        element, row = found.storage.index(name), truth.channels[i]
        assert by_name(found.transition[element], found.storage) == by_name(truth.pulled_back(row), block.names)
        taken = (row & truth.offset).bit_count() + (truth.constants >> i)
        assert found.offset >> element & 1 == taken % 2


@MODERATE
@given(SHAPES, RECIPES)
def test_registers_taps_and_leads_come_back(shape: tuple[int, int, list[int], int], recipe: Recipe) -> None:
    """Feedback registers, taps with delays and the transient are the drawn ones; every lead holds when stepped."""
    block = drawn(shape, recipe)
    facts = audited(block)
    found, truth = found_machine(facts), block.machine
    registers = {frozenset(by_name(row, block.names)) for row in machines.registers(truth)}
    assert {frozenset(found.storage[k] for k in register) for register in found.registers} == registers
    assert found.transient == max(machines.transient(truth), 1 if block.half_cycle else 0)
    for i, observed in enumerate(found.observed):
        taps = {(found.storage[tap.element], tap.delay) for tap in observed.taps}
        assert taps == {(block.names[k], delay) for k, delay in machines.taps(truth, i)}
        if not block.half_cycle and truth.channels[i] & machines.sum_or(machines.registers(truth)) == truth.channels[i]:
            assert observed.xor_inputs == block.xor_inputs[i]
            assert observed.xor_depth == block.xor_depth[i]
    check_leads(facts, truth)


@settings(MODERATE, max_examples=25)
@given(SHAPES, RECIPES, st.integers(0, 4))
def test_a_spoiled_channel_is_refused_alone(
    shape: tuple[int, int, list[int], int], recipe: Recipe, spoiled: int
) -> None:
    """A channel behind an AND of two different sums has no row, the AND is named; the other channels keep theirs."""
    size, channels, _, seed = shape
    rng = random.Random(seed)
    machine = machines.random_machine(rng, size + 1, channels)
    spoiled %= channels
    block = draw(machine, recipe, rng, spoiled_channels={spoiled})
    found = found_machine(audited(block))
    observed = {row.name: row for row in found.observed if not row.cut_from}
    for i, name in enumerate(block.channels):
        row = observed[name]
        if i == spoiled:
            assert row.row is None
            assert row.refusal is not None
            assert row.refusal.gate == block.spoilers[name]
            assert not row.refusal.undecided
        else:
            assert row.row is not None
            assert by_name(row.row.state, found.storage) == channel_truth(block, i)[0]


@MODERATE
@given(st.integers(2, 9), st.integers(0, 2**32), RECIPES)
def test_a_spoiled_register_is_refused(size: int, seed: int, recipe: Recipe) -> None:
    """An element of a ring whose next state is an AND of two different sums refuses the machine, by name and gate."""
    rng = random.Random(seed)
    ring = machines.with_channels(machines.fibonacci((size, rng.randint(1, size - 1)), size), [[0]])
    spoiled = rng.randrange(size)
    block = draw(ring, recipe, rng, spoiled_elements={spoiled})
    extraction = audited(block).extraction
    assert extraction.machine is None
    name = block.names[spoiled]
    assert [(refusal.what, refusal.gate) for refusal in extraction.refusals] == [(name, block.spoilers[name])]


def check_leads(facts: AuditFacts, truth: machines.Machine) -> None:
    """Step the streams from random states: every stated lead and inversion must show, and no channel may miss one."""
    assert facts.phases is not None
    phases, rng = facts.phases, random.Random(0)
    for group in phases.classes:
        for i in group.channels:
            phase = phases.phases[i]
            assert phase.lead is not None
            assert machines.lead_by_stepping(truth, i, group.reference) is not None
            for _ in range(4):
                state, late = rng.getrandbits(truth.size), phase.valid_from
                mine = truth.stream(i, state, late + 40)[late:]
                theirs = truth.stream(group.reference, state, late + phase.lead + 40)[late + phase.lead :]
                assert [a ^ b for a, b in zip(mine, theirs, strict=True)] == [int(phase.inverted or 0)] * 40
    references = [group.reference for group in phases.classes]
    for i in references:
        for j in references:
            stepped = machines.lead_by_stepping(truth, i, j)
            assert i == j or stepped is None or _constants_differ(truth, i, j, stepped)


def _constants_differ(truth: machines.Machine, i: int, j: int, lead: int) -> bool:
    """Tell whether two channels whose rows are shifts have streams that are neither equal nor complements."""
    late = machines.transient(truth)
    mine, theirs = truth.stream(i, 0, late + 60)[late:], truth.stream(j, 0, late + lead + 60)[late + lead :]
    return len({a ^ b for a, b in zip(mine, theirs, strict=True)}) == 2
