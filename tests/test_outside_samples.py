"""The sample netlists: what their header comments promise, held against the descriptions they were mapped from."""

from dataclasses import replace
from pathlib import Path

import pytest

from auditor.audit import audit
from auditor.plan_file import read_plan
from auditor.report.facts import AuditFacts
from tests.support.audits import slugs
from tests.support.limpet import ECHO, LEVEL, SALINITY, SALINITY_INVERTED, SURGE, WAVE
from tests.support.machines import bits_of, shifted

SAMPLES = Path(__file__).parents[1] / "sample_netlists"

DESCRIBED = {
    "plain_register": LEVEL,
    "phase_shifter": ECHO,
    "phase_shifter_nand": ECHO,
    "galois_pipelined": SALINITY,
    "cellular_automaton": WAVE,
    "enabled_blocks": SURGE,
}
NEAREST = {
    "phase_shifter": 45918530,
    "phase_shifter_nand": 45918530,
    "galois_pipelined": 12092,
    "cellular_automaton": 4508,
}


def audited(name: str) -> AuditFacts:
    return audit(read_plan(SAMPLES / f"{name}.toml"))


@pytest.mark.parametrize("name", DESCRIBED)
def test_a_sample_is_the_machine_of_its_comment(name: str) -> None:
    """The register is primitive, and every lead is that of the description, by matrix powers."""
    machine, facts = DESCRIBED[name], audited(name)
    assert facts.phases is not None
    (register,) = facts.phases.registers
    assert register.primitive is True
    assert f"period {register.period}" in (SAMPLES / f"{name}.v").read_text()
    (only,) = facts.phases.classes
    reference = machine.channels[only.reference]
    for row, phase in zip(machine.channels, facts.phases.phases, strict=True):
        assert phase.lead is not None
        assert shifted(machine, reference, phase.lead) == row


@pytest.mark.parametrize("name", NEAREST)
def test_samples_that_must_pass(name: str) -> None:
    """The verdict is pass, without a finding above a note, and the nearest channels are as far as the comment says."""
    facts = audited(name)
    assert facts.verdict == "pass"
    assert [finding.slug for finding in facts.findings if finding.level != "note"] == []
    assert facts.phases is not None
    (only,) = facts.phases.classes
    assert only.minimum is not None
    assert only.minimum.cycles == NEAREST[name]
    text = " ".join((SAMPLES / f"{name}.v").read_text().replace("//", "").split())
    first, second = (facts.cone.channels[i].name for i in only.minimum.channels)
    assert f"{first} and {second}" in text
    assert str(NEAREST[name]) in text


def test_the_plain_register_fails_by_overlap() -> None:
    """Neighbouring chains of 64 scan cells share 63 identical pairs."""
    facts = audited("plain_register")
    assert facts.verdict == "fail"
    assert "windows-overlap" in slugs(facts)
    assert any(value in (63, "63") for f in facts.findings for value in f.figures.values())


def test_the_nand_version_is_the_same_function() -> None:
    """Taps, leads and XOR depth of the NAND version are those of the XOR version."""
    one, two = audited("phase_shifter"), audited("phase_shifter_nand")
    assert one.extraction.machine is not None
    assert two.extraction.machine is not None
    assert one.extraction.machine.transition == two.extraction.machine.transition
    assert [row.taps for row in one.extraction.machine.observed] == [
        row.taps for row in two.extraction.machine.observed
    ]
    assert one.phases is not None
    assert two.phases is not None
    assert one.phases.phases == two.phases.phases


def test_pipelined_channels_show_stage_and_inversion() -> None:
    """One pipeline stage on every channel; so[1], so[4], so[7], so[10] are the inverted ones; no reset into lock-up."""
    facts = audited("galois_pipelined")
    assert facts.extraction.machine is not None
    assert facts.phases is not None
    assert {row.pipeline_stages for row in facts.extraction.machine.observed} == {1}
    turned = facts.phases.classes[0].reference in SALINITY_INVERTED
    inverted = {i for i, phase in enumerate(facts.phases.phases) if phase.inverted != turned}
    assert inverted == SALINITY_INVERTED
    assert facts.phases.registers[0].reset is not None
    assert facts.phases.registers[0].reset.stuck is False


def test_the_completed_cycle_is_refused() -> None:
    """The element that the NOR feeds is refused by the gate that the comment names, and there is no machine."""
    facts = audited("completed_cycle")
    assert facts.verdict == "fail"
    assert facts.extraction.machine is None
    (refusal,) = facts.extraction.refusals
    assert (refusal.what, refusal.gate) == ("stage_0_ff", "u8")
    assert "n8=1" in refusal.cure.replace(" ", "")
    assert "not-affine" in slugs(facts)


def test_the_stated_cure_gives_the_register_without_the_nor() -> None:
    """With n8 forced to 1 the completed cycle is the maximal register of stages 8, 6, 5, 4, and the force is listed."""
    facts = audit(replace(read_plan(SAMPLES / "completed_cycle.toml"), mode={"n8": 1}))
    assert facts.phases is not None
    (register,) = facts.phases.registers
    assert (register.primitive, register.period) == (True, 255)
    assert tuple(bits_of(register.connection_polynomial)) == (0, 4, 5, 6, 8)
    assert "forced-net" in slugs(facts)


def test_the_enabled_blocks_fail_twice() -> None:
    """The reset state is the lock-up state, and so[7] is the complement of so[3]."""
    facts = audited("enabled_blocks")
    assert facts.verdict == "fail"
    assert {"resets-into-lock-up", "channels-in-lockstep"} <= slugs(facts)
    lockstep = [set(f.where) for f in facts.findings if f.slug == "channels-in-lockstep"]
    assert lockstep == [{"so[3]", "so[7]"}]
    assert facts.phases is not None
    assert facts.phases.phases[3].lead == facts.phases.phases[7].lead
    assert facts.phases.phases[3].inverted != facts.phases.phases[7].inverted
