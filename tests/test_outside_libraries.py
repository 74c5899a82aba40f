"""Blocks that a synthesis tool mapped to two published cell libraries, audited with the libraries as published.

The netlists in ``mapped/`` are the tool's own text (Yosys 0.70) of register descriptions that are repeated here as
abstract machines: what the audit says is compared with those. The libraries lie outside the repository.
"""

from dataclasses import dataclass
from pathlib import Path

import pytest

from auditor.audit import audit
from auditor.plan import Plan
from auditor.report.facts import AuditFacts
from tests.support.limpet import ECHO, SALINITY, SALINITY_INVERTED
from tests.support.machines import Machine, shifted

MAPPED = Path(__file__).with_name("mapped")
LIBRARIES = Path(__file__).parents[2] / "shared" / "cells"
SKY130 = LIBRARIES / "sky130hd_tt.lib.gz"
SG13G2 = LIBRARIES / "sg13g2_stdcell_typ_1p20V_25C.lib.gz"

pytestmark = pytest.mark.skipif(not LIBRARIES.exists(), reason="the published cell libraries are not here")


@dataclass(frozen=True)
class Described:
    """What was mapped: the machine, which channels are inverted, pipeline stages and the mode."""

    machine: Machine
    inverted: frozenset[int]
    pipeline_stages: int
    mode: dict[str, int]


ECHO_BLOCK = Described(ECHO, frozenset(), 0, {})
SALINITY_BLOCK = Described(SALINITY, SALINITY_INVERTED, 1, {"scan_en": 0})
CASES = {
    "echo_sky130hd": (ECHO_BLOCK, SKY130),
    "echo_sg13g2": (ECHO_BLOCK, SG13G2),
    "salinity_sg13g2": (SALINITY_BLOCK, SG13G2),
    "salinity_sky130hd_without_xor": (SALINITY_BLOCK, SKY130),
}


def audited(name: str) -> AuditFacts:
    described, cells = CASES[name]
    return audit(Plan(netlists=(MAPPED / f"{name}.v",), cells=(cells,), mode=described.mode, chain_length=100))


@pytest.mark.parametrize("name", CASES)
def test_a_mapped_block_is_the_described_machine(name: str) -> None:
    """Period, every lead (by matrix powers of the description), inversions and pipeline stages are as described."""
    described, facts = CASES[name][0], audited(name)
    machine = described.machine
    assert facts.phases is not None
    assert facts.extraction.machine is not None
    (register,) = facts.phases.registers
    assert register.primitive is True
    assert register.period == (1 << machine.size) - 1
    (only,) = facts.phases.classes
    assert only.channels == tuple(range(len(machine.channels)))
    reference = machine.channels[only.reference]
    for i, phase in enumerate(facts.phases.phases):
        assert phase.lead is not None
        assert shifted(machine, reference, phase.lead) == machine.channels[i]
        assert phase.inverted == ((i in described.inverted) != (only.reference in described.inverted))
    stages = {row.pipeline_stages for row in facts.extraction.machine.observed}
    assert stages == {described.pipeline_stages}
    assert facts.verdict == "pass"


@pytest.mark.parametrize("name", CASES)
def test_a_mapped_block_has_the_described_taps(name: str) -> None:
    """The taps of every channel are as many as described, and its register resets to no lock-up state."""
    described, facts = CASES[name][0], audited(name)
    assert facts.extraction.machine is not None
    assert facts.phases is not None
    counts = [len(row.taps) for row in facts.extraction.machine.observed]
    assert counts == [row.bit_count() for row in described.machine.channels]
    reset = facts.phases.registers[0].reset
    assert reset is not None
    assert reset.unknown == ()
    assert reset.stuck is False
