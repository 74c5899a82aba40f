"""Spreading codes of two navigation systems, audited as phase shifters: published delays from the gates alone."""

import random
from itertools import combinations
from pathlib import Path

import pytest

from tests.support.audits import audit_block, slugs
from tests.support.gates import ANYTHING, Block, Recipe, draw
from tests.support.machines import Machine, fibonacci, row_of, with_channels
from tests.support.published import BEIDOU_B1I, BEIDOU_G2_STAGES, GPS_CA, GPS_G1_STAGES, GPS_G2_STAGES

RECIPES = {
    "cells": Recipe(),
    "nands": Recipe(forms=("four_nands",), hierarchy=True, shuffled=True),
    "anything": ANYTHING,
}


def selectors(register: Machine, stages: list[tuple[int, ...]], recipe: Recipe) -> Block:
    """Draw a register whose channels add the stages (counted from 1) of each selector."""
    machine = with_channels(register, [[s - 1 for s in selector] for selector in stages])
    return draw(machine, recipe, random.Random(200))


@pytest.mark.parametrize("recipe", RECIPES.values(), ids=RECIPES)
def test_every_gps_code_delay_comes_from_the_gates(tmp_path: Path, recipe: Recipe) -> None:
    """IS-GPS-200, Table 3-Ia: the lag of each of 37 tap selectors against stage 10 is the printed code delay."""
    block = selectors(fibonacci(GPS_G2_STAGES, 10), [taps for taps, _ in GPS_CA.values()] + [(10,)], recipe)
    facts = audit_block(tmp_path, block, reference=block.channels[-1])
    assert facts.phases is not None
    (only,) = facts.phases.classes
    assert only.modulus == 1023
    lags = [phase.lag(1023) for phase in facts.phases.phases]
    assert lags == [delay for _, delay in GPS_CA.values()] + [0]


def test_gps_selectors_as_a_phase_shifter_are_as_close_as_the_table_says(tmp_path: Path) -> None:
    """PRN 34 and 37 are in lockstep; 26, 78, 165 and 234 of 666 pairs are closer than 2, 10, 100 and 200 chips."""
    block = selectors(fibonacci(GPS_G2_STAGES, 10), [taps for taps, _ in GPS_CA.values()], Recipe())
    facts = audit_block(tmp_path, block)
    assert facts.phases is not None
    found = [phase.lead for phase in facts.phases.phases if phase.lead is not None]
    apart = [min((a - b) % 1023, (b - a) % 1023) for a, b in combinations(found, 2)]
    assert [sum(d < limit for d in apart) for limit in (2, 10, 100, 200)] == [26, 78, 165, 234]
    assert len(apart) == 666
    assert "channels-in-lockstep" in slugs(facts)
    (lockstep,) = (f.where for f in facts.findings if f.slug == "channels-in-lockstep")
    prn = list(GPS_CA)
    assert set(lockstep) == {block.channels[prn.index(34)], block.channels[prn.index(37)]}


def test_gold_codes_are_no_shifts_of_each_other(tmp_path: Path) -> None:
    """The 37 complete C/A codes (both registers added) form 36 classes: PRN 34 and 37 are one code (Gold, 1967)."""
    first, second = fibonacci(GPS_G1_STAGES, 10), fibonacci(GPS_G2_STAGES, 10)
    both = Machine((*first.rows, *(row << 10 for row in second.rows)))
    machine = with_channels(both, [[9, *(9 + stage for stage in taps)] for taps, _ in GPS_CA.values()])
    facts = audit_block(tmp_path, draw(machine, Recipe(), random.Random(200)))
    assert facts.phases is not None
    assert [register.primitive for register in facts.phases.registers] == [True, True]
    assert {c.modulus for c in facts.phases.classes} == {1023}
    prn = list(GPS_CA)
    shared = [c.channels for c in facts.phases.classes if len(c.channels) > 1]
    assert len(facts.phases.classes) == 36
    assert shared == [(prn.index(34), prn.index(37))]


@pytest.mark.parametrize("recipe", RECIPES.values(), ids=RECIPES)
def test_every_beidou_advance_comes_from_the_gates(tmp_path: Path, recipe: Recipe) -> None:
    """B1I interface control document: the lead of each of 63 selectors against stage 11 is the listed advance."""
    block = selectors(fibonacci(BEIDOU_G2_STAGES, 11), [taps for taps, _ in BEIDOU_B1I.values()] + [(11,)], recipe)
    facts = audit_block(tmp_path, block, reference=block.channels[-1])
    assert facts.phases is not None
    assert [phase.lead for phase in facts.phases.phases] == [advance for _, advance in BEIDOU_B1I.values()] + [0]
    assert {phase.kind for phase in facts.phases.phases} == {"exact"}
    assert row_of(BEIDOU_G2_STAGES) >> 1 == block.machine.rows[0]
