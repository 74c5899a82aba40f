"""Second road to the polynomials: the gates are clocked, and Berlekamp-Massey reads the recurrence off the stream."""

import random
from pathlib import Path

import numpy as np
import pytest

from auditor.replay.simulator import Simulator
from auditor.report.facts import AuditFacts
from tests.support.audits import audit_block
from tests.support.gates import ANYTHING, Recipe, draw
from tests.support.machines import (
    automaton,
    berlekamp_massey,
    fibonacci,
    galois,
    product,
    random_machine,
    remainder,
    with_channels,
    with_pipelines,
)

STATES = 8
REGISTERS = {
    "fibonacci-23": fibonacci((23, 18), 23),
    "distributed-24": galois((24, 7, 2, 1, 0)),
    "automaton-16": automaton("1101010101010101"),
}


def clocked(facts: AuditFacts, cycles: int) -> list[list[list[int]]]:
    """Clock the gates from random states and return, by channel and state, the bits that the channel shows."""
    cone = facts.cone
    simulator = Simulator(cone, facts.library, 1)
    before_edge = 0 if cone.clock_edge == "rising" else 1
    simulator.toggle(before_edge)
    size = len(cone.elements)
    simulator.values[:size] = np.random.default_rng(1).integers(0, 2**64, (size, 1), dtype=np.uint64)
    slots = simulator.slot_of(channel.wire for channel in cone.channels)
    shown = []
    for _ in range(cycles):
        simulator.settle()
        shown.append([int(word) for word in simulator.values[slots][:, 0]])
        simulator.toggle(1 - before_edge)
        simulator.toggle(before_edge)
    return [[[words[i] >> lane & 1 for words in shown] for lane in range(STATES)] for i in range(len(cone.channels))]


@pytest.mark.parametrize("name", REGISTERS)
def test_the_stream_of_the_gates_has_the_reported_polynomial(tmp_path: Path, name: str) -> None:
    """Massey (1969): the shortest recurrence of every stream is the reported characteristic polynomial."""
    machine = with_channels(REGISTERS[name], [[0], [1, 5, 9], [2, 3]])
    recipe = Recipe(forms=("xor_gate", "four_nands"), styles=("cells", "assigns"), all_storage=True)
    facts = audit_block(tmp_path, draw(machine, recipe, random.Random(5)))
    assert facts.phases is not None
    reported = facts.phases.registers[0].characteristic_polynomial
    for streams in clocked(facts, 2 * machine.size + 8):
        assert {berlekamp_massey(stream) for stream in streams} == {reported}


@pytest.mark.parametrize("seed", range(8))
def test_streams_of_any_block_obey_the_reported_registers(tmp_path: Path, seed: int) -> None:
    """A recurrence divides (x + 1) times a power of x times the registers' polynomials, however the block is made."""
    rng = random.Random(seed)
    machine = with_pipelines(random_machine(rng, rng.randint(3, 10), 3), [0, 1, 2])
    facts = audit_block(tmp_path, draw(machine, ANYTHING, rng))
    assert facts.phases is not None
    registers = [register.characteristic_polynomial for register in facts.phases.registers]
    everything = product([0b11, 1 << machine.size, *registers])
    for streams in clocked(facts, 2 * everything.bit_length()):
        assert [remainder(everything, berlekamp_massey(stream)) for stream in streams] == [0] * STATES
