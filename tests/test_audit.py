"""Several modes of one plan: each audited by itself, read once, troubles of all told together."""

import io
from dataclasses import replace
from pathlib import Path

import pytest
from rich.console import Console

import auditor.audit
from auditor.audit import audit, audit_modes
from auditor.errors import InputError
from auditor.plan import Plan
from auditor.plan_file import read_plan
from auditor.report.facts import worst
from auditor.report.terminal import print_audits

SAMPLES = Path(__file__).parents[1] / "sample_netlists"


def selected_taps() -> Plan:
    """Return the plan of the sample whose feedback a pin chooses."""
    return read_plan(SAMPLES / "selected_taps.toml")


def test_each_setting_of_programmable_taps_is_audited() -> None:
    """The connection polynomials are those of the two settings in the comment of the sample, in the plan's order."""
    audits = audit_modes(selected_taps())
    assert list(audits) == ["calm", "storm"]
    found = {}
    for name, facts in audits.items():
        assert facts.phases is not None
        (register,) = facts.phases.registers
        found[name] = (register.connection_polynomial, register.primitive, register.period)
    calm, storm = (sum(1 << stage for stage in stages) for stages in ((14, 5, 3, 1, 0), (14, 9, 3, 1, 0)))
    assert found == {"calm": (calm, True, 2**14 - 1), "storm": (storm, False, 585)}
    assert {name: facts.verdict for name, facts in audits.items()} == {"calm": "pass", "storm": "fail"}
    assert worst(audits) == "fail"


def test_a_mode_among_several_is_audited_as_if_it_were_alone() -> None:
    """Findings, leads and rows of a named mode are those of a plan with that mode only."""
    plan = selected_taps()
    together = audit_modes(plan)
    for name, mode in plan.modes.items():
        alone = audit(replace(plan, modes={}, mode=mode))
        assert alone.phases == together[name].phases
        assert alone.extraction == together[name].extraction
        assert alone.findings == together[name].findings
        assert alone.plan == together[name].plan


def test_cells_and_netlist_are_read_once(monkeypatch: pytest.MonkeyPatch) -> None:
    """However many modes there are, the files are opened and the netlist is flattened one time."""
    called: list[str] = []

    def counted(name: str) -> None:
        verb = getattr(auditor.audit, name)

        def noted(*given: object) -> object:
            called.append(name)
            return verb(*given)

        monkeypatch.setattr(auditor.audit, name, noted)

    for name in ("read_cells", "read_verilog", "flatten"):
        counted(name)
    stages: list[str] = []
    audit_modes(selected_taps(), stages.append)
    assert sorted(called) == ["flatten", "read_cells", "read_verilog"]
    assert stages[:2] == ["cells", "netlist"]
    assert {"mode calm: cone", "mode storm: cone", "mode storm: risks"} <= set(stages)


def test_the_troubles_of_all_modes_come_together() -> None:
    """Each trouble names the modes it is in; one that several modes share is told once."""
    plan = replace(selected_taps(), modes={"a": {"storn": 1}, "b": {"storm": 1}, "c": {"storn": 1, "stage_q": 0}})
    with pytest.raises(InputError) as caught:
        audit_modes(plan)
    found = [trouble.found for trouble in caught.value.troubles]
    assert len(found) == 2
    assert sum(text.startswith("mode a, c: ") and "storn" in text for text in found) == 1
    assert sum(text.startswith("mode c: ") and "stage_q" in text for text in found) == 1


def test_a_mode_that_leaves_the_choice_open_is_undecidable_for_itself_only() -> None:
    """An open select pin refuses the machine of its mode, a finding; the other modes keep their machines."""
    audits = audit_modes(replace(selected_taps(), modes={"open": {}, "calm": {"storm": 0}}))
    assert audits["open"].extraction.machine is None
    assert "not-affine" in {finding.slug for finding in audits["open"].findings}
    assert audits["calm"].verdict == "pass"
    assert worst(audits) == "fail"


def test_a_plan_without_named_modes_has_one_audit_without_a_name() -> None:
    """The one mode of a plan stands under the empty name; ``audit`` refuses a plan of several."""
    plan = selected_taps()
    assert list(audit_modes(replace(plan, modes={}, mode={"storm": 0}))) == [""]
    with pytest.raises(InputError, match="several modes"):
        audit(plan)


def test_the_screen_puts_the_modes_side_by_side_first() -> None:
    """One line with the verdict over all, a row for each mode, then the page of each under its name."""
    screen = io.StringIO()
    print_audits(audit_modes(selected_taps()), Console(file=screen))
    lines = screen.getvalue().splitlines()
    assert lines[0] == "Verdict fail: selected_taps, 2 modes"
    assert " ".join(lines[3].split()) == "calm pass 836 no findings degree 14, primitive"
    assert " ".join(lines[4].split()) == "storm fail infinite 6 errors, 1 warning degree 14, period 585"
    at = lines.index("Mode calm")
    assert lines[at + 1] == "Verdict pass: selected_taps, no findings"
    assert lines[lines.index("Mode storm") + 1].startswith("Verdict fail: selected_taps, 6 errors")
    assert lines.count("Cautions") == 1
