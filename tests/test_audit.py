"""Whole audits: several modes of one plan, free inputs, registers in several instances."""

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
from auditor.report.json_report import as_json
from auditor.report.terminal import print_audits
from tests.support.audits import audit_text, slugs

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


def test_the_troubles_of_cells_and_netlists_come_together(tmp_path: Path) -> None:
    """A library that is not there hides no netlist that is not there or does not end; inside modules none is judged."""
    (tmp_path / "open.v").write_text("module a (input x);\n")
    (tmp_path / "model.v").write_text("module b (input x, output reg y);\n  always @(x) y = x;\nendmodule\n")
    netlists = tuple(tmp_path / name for name in ("none.v", "open.v", "model.v"))
    with pytest.raises(InputError) as caught:
        audit_modes(Plan(netlists=netlists, cells=(tmp_path / "none.lib",)))
    found = [(Path(str(t.place.file)).name, t.found) for t in caught.value.troubles if t.place]
    assert found == [
        ("none.lib", "no such file"),
        ("none.v", "there is no such file"),
        ("open.v", "the file ends inside module a"),
    ]


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
    assert " ".join(lines[3].split()) == "calm pass 836 1 note degree 14, primitive"
    assert " ".join(lines[4].split()) == "storm fail infinite 6 errors, 1 warning, 1 note degree 14, period 585"
    at = lines.index("Mode calm")
    assert lines[at + 1] == "Verdict pass: selected_taps, 1 note"
    assert lines[lines.index("Mode storm") + 1].startswith("Verdict fail: selected_taps, 6 errors")
    assert lines.count("Cautions") == 1


OPEN_REGISTER = """\
module open_register (input clk, rst_n, seed, load, outside, beside, output [2:0] so);
  wire [1:4] q;
  wire gated, sum, next, third;
  ff_set    q1 (.CK(clk), .SN(rst_n), .D(next), .Q(q[1]));
  ff_clear  q2 (.CK(clk), .RN(rst_n), .D(q[1]), .Q(q[2]));
  ff_clear  q3 (.CK(clk), .RN(rst_n), .D(third), .Q(q[3]));
  ff_clear  q4 (.CK(clk), .RN(rst_n), .D(q[3]), .Q(q[4]));
  xor  u1 (sum, q[4], q[3]);
  and2 u2 (.A(seed), .B(load), .Y(gated));
  xor  u3 (next, sum, gated);
  xor  u4 (third, q[2], outside);
  assign so[0] = q[1];
  xor  u5 (so[1], q[4], beside);
  assign so[2] = beside;
endmodule
"""


def test_free_inputs_stay_in_the_machine_and_answers_are_for_them_at_0(tmp_path: Path) -> None:
    """A serial seed, an external XOR input of the register and one behind it are rows of B and D and are listed.

    Periods and leads are those of the same register with the inputs held at 0.
    """
    names = ("seed", "outside", "beside")
    left = audit_text(tmp_path, OPEN_REGISTER, mode={"load": 1})
    held = audit_text(tmp_path, OPEN_REGISTER, mode={"load": 1, **dict.fromkeys(names, 0)})
    machine, autonomous = left.extraction.machine, held.extraction.machine
    assert machine is not None
    assert autonomous is not None
    assert set(machine.free_inputs) == set(names)
    column = {name: 1 << machine.free_inputs.index(name) for name in names}
    assert dict(zip(machine.storage, machine.input_matrix, strict=True)) == {
        "q1": column["seed"], "q2": 0, "q3": column["outside"], "q4": 0
    }  # fmt: skip
    assert [observed.row and observed.row.inputs for observed in machine.observed] == [0, *[column["beside"]] * 2]
    assert (machine.transition, machine.offset) == (autonomous.transition, autonomous.offset)
    assert left.phases is not None
    assert held.phases is not None
    assert left.phases.registers == held.phases.registers
    assert left.phases.phases[:2] == held.phases.phases[:2]

    found = {finding.where: finding.figures for finding in left.findings if finding.slug == "free-input"}
    assert found == {
        ("seed",): {"elements": 4, "channels": 2},
        ("outside",): {"elements": 4, "channels": 2},
        ("beside",): {"elements": 0, "channels": 2},
    }
    assert as_json({"": left})["machine"]["free_inputs"] == list(machine.free_inputs)
    screen = io.StringIO()
    print_audits({"": left}, Console(file=screen))
    assert "seed; periods, leads and separations are given for all of them at 0" in screen.getvalue()


def test_a_seed_that_the_mode_switches_off_is_no_free_input(tmp_path: Path) -> None:
    """With the load held off the seed is cut away, and nothing is said of it."""
    facts = audit_text(tmp_path, OPEN_REGISTER, mode={"load": 0, "outside": 0, "beside": 0})
    assert facts.extraction.machine is not None
    assert facts.extraction.machine.free_inputs == ()
    assert "free-input" not in slugs(facts)


TWINS = """\
module twins (input clk, rst_n, output [1:0] so);
  part first (.clk(clk), .rst_n(rst_n), .so(so[0]));
  part_set second (.clk(clk), .rst_n(rst_n), .so(so[1]));
endmodule
module part (input clk, rst_n, output so);
  wire [1:3] q;
  wire next;
  ff_set    q1 (.CK(clk), .SN(rst_n), .D(next), .Q(q[1]));
  ff_clear  q2 (.CK(clk), .RN(rst_n), .D(q[1]), .Q(q[2]));
  ff_clear  q3 (.CK(clk), .RN(rst_n), .D(q[2]), .Q(q[3]));
  xor u1 (next, q[3], q[2]);
  assign so = q[3];
endmodule
module part_set (input clk, rst_n, output so);
  wire [1:3] q;
  wire next;
  ff_set    q1 (.CK(clk), .SN(rst_n), .D(next), .Q(q[1]));
  ff_clear  q2 (.CK(clk), .RN(rst_n), .D(q[1]), .Q(q[2]));
  ff_set    q3 (.CK(clk), .SN(rst_n), .D(q[2]), .Q(q[3]));
  xor u1 (next, q[3], q[2]);
  assign so = q[3];
endmodule
"""


@pytest.mark.parametrize(("length", "level"), [(1, "note"), (2, "note"), (3, "error")])
def test_registers_of_two_instances_are_run_from_their_resets(tmp_path: Path, length: int, level: str) -> None:
    """A register that resets to 101 is two steps ahead of its twin that resets to 100: 100, 010, 101."""
    facts = audit_text(tmp_path, TWINS, chain_length=length)
    (finding,) = [finding for finding in facts.findings if finding.slug == "registers-in-step"]
    assert (finding.level, finding.figures["shift"], finding.figures["separation"]) == (level, "2", "2")
    assert finding.where == ("first.q1", "first.q2", "first.q3", "second.q1", "second.q2", "second.q3")
