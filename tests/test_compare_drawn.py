"""Comparisons of machines drawn in random gates: any drawing of one machine is that machine, any other is not."""

import random
from dataclasses import replace
from pathlib import Path

import pytest

from auditor.compare import compare
from auditor.report.facts import AuditFacts
from auditor.revisions.comparison import ALIKE
from tests.support import stream_sets
from tests.support.audits import audit_block
from tests.support.gates import ANYTHING, draw
from tests.support.machines import Machine, fibonacci, random_machine, with_channels

RECIPE = replace(ANYTHING, half_cycles=True)


def drawn(folder: Path, machine: Machine, seed: int, name: str) -> AuditFacts:
    """Audit a drawing of a machine: any cells, names, latches between, storage inverted or not, some of it reset."""
    (folder / name).mkdir(exist_ok=True)
    return audit_block(folder / name, draw(machine, RECIPE, random.Random(seed)))


@pytest.mark.parametrize("seed", range(8))
def test_two_drawings_of_a_machine_are_one(seed: int, tmp_path: Path) -> None:
    """Whatever the cells, names and encodings, the class is identical or re-encoded, and holds for every state."""
    rng = random.Random(seed)
    register = fibonacci((7, 6), 7)
    machine = with_channels(register, [rng.sample(range(7), 3) for _ in range(4)], rng.getrandbits(4))
    found = compare(drawn(tmp_path, machine, seed, "old"), drawn(tmp_path, machine, seed + 100, "new"))
    assert found.parts[0] in ALIKE
    assert len(found.parts) == 1
    assert {change.status for change in found.channels} == {"same"}
    assert (found.outcome == "same") == (found.reset.agree is not False)


@pytest.mark.parametrize("seed", range(16))
def test_two_machines_are_one_only_if_their_streams_are(seed: int, tmp_path: Path) -> None:
    """Small machines of any structure, one of them touched: the same is said exactly where brute force says so."""
    rng = random.Random(seed)
    old = random_machine(rng, rng.randint(3, 5), 2)
    if not all(old.channels):
        return
    rows = list(old.channels)
    rows[rng.randrange(2)] ^= 1 << rng.randrange(old.size)
    new = replace(old, channels=tuple(rows)) if all(rows) and rng.random() < 0.7 else old
    recipe = replace(RECIPE, names="plain", vectors=False, half_cycles=False)
    sides = []
    for name, machine, number in (("old", old, seed), ("new", new, seed + 100)):
        (tmp_path / name).mkdir()
        sides.append(audit_block(tmp_path / name, draw(machine, recipe, random.Random(number))))
    if None in (sides[0].extraction.machine, sides[1].extraction.machine):
        return
    found = compare(*sides)
    start = max(facts.extraction.machine.transient for facts in sides if facts.extraction.machine)
    by_brute_force = stream_sets.same_from(old, new, start)
    assert (found.parts[0] in ALIKE and len(found.parts) == 1) == (by_brute_force is not None)
    if by_brute_force is not None:
        assert found.holds_from == by_brute_force
