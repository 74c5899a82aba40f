"""The level alarm of the samples: what its comment promises without and with a phase shifter."""

from pathlib import Path

import pytest

from auditor.audit import audit
from auditor.plan_file import read_plan
from auditor.report.facts import AuditFacts

SAMPLES = Path(__file__).parents[2] / "sample_netlists"


@pytest.fixture(scope="module")
def straight() -> AuditFacts:
    return audit(read_plan(SAMPLES / "limpet_alarm_straight.toml"))


@pytest.fixture(scope="module")
def shifted() -> AuditFacts:
    return audit(read_plan(SAMPLES / "limpet_alarm_shifted.toml"))


def test_without_shifter_the_comparison_is_frozen(straight: AuditFacts) -> None:
    """Level and limit are always equal: so says every bit, the whole, and the alarm that waits for them to differ."""
    assert straight.verdict == "fail"
    assert straight.capture is not None
    names = straight.capture.circuit.wire_name
    frozen = {names(net.net): net.value for net in straight.capture.nets.frozen if net.scope == "every-state"}
    expected = {**{f"same[{k}]": 1 for k in range(7)}, **{f"above[{k}]": 0 for k in range(7)}, "equal": 1, "alarm": 0}
    assert expected.items() <= frozen.items()
    assert not straight.capture.nets.undecided
    origins = {finding.where for finding in straight.findings if finding.slug == "net-frozen"}
    assert origins == {(f"same[{k}]",) for k in range(7)}
    (never,) = [f.figures["never_seen"] for f in straight.findings if f.where == ("same[3]",)]
    assert never == "level_3_ff + limit_3_ff = 1"


def test_with_the_shifter_nothing_is_frozen(shifted: AuditFacts, straight: AuditFacts) -> None:
    """The same circuit behind a phase shifter passes: no frozen net, no cone short of rank, no finding at all."""
    assert shifted.verdict == "pass"
    assert not shifted.findings
    assert shifted.capture is not None
    assert straight.capture is not None
    assert shifted.capture.nets.examined == straight.capture.nets.examined
    assert not shifted.capture.nets.frozen
    assert not any(cells.short for cells in shifted.capture.cones.sets)
