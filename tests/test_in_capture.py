"""What the generator does while the chip captures: proved under the constants of capture where they decide it."""

from dataclasses import replace
from pathlib import Path

import pytest

from auditor.audit import audit
from auditor.errors import InputError
from auditor.plan import Patterns, Plan
from auditor.report.facts import AuditFacts
from tests.support.cones import SAMPLES
from tests.support.gates import CELLS

NETLIST = """\
module t (input clk, input run, output y);
  wire a, b, c, f;
  km_dffec a_ff (.CK(clk), .RN(1'b1), .EN(run), .D(f), .Q(a));
  km_dffec b_ff (.CK(clk), .RN(1'b1), .EN(run), .D(a), .Q(b));
  km_dffec c_ff (.CK(clk), .RN(1'b1), .EN(run), .D(b), .Q(c));
  km_xor2 g (.A(c), .B(b), .Y(f));
  km_buf o (.A(c), .Y(y));
endmodule
"""


def audited(folder: Path, capture: dict[str, int] | None, stated: str | None, netlist: str = NETLIST) -> AuditFacts:
    """Audit a register with an enable whose planned test has a capture cycle."""
    path, chains = folder / "t.v", folder / "chains.csv"
    path.write_text(netlist)
    chains.write_text("channel,cell\ny,s1\ny,s2\n")
    plan = Plan(
        netlists=(path,),
        cells=(SAMPLES / "kelp90.lib",),
        mode={"run": 1},
        patterns=Patterns(count=3, shift_cycles=2, capture_cycles=1, generator_in_capture=stated),
    )
    if capture is None:
        return audit(plan)
    scanned = netlist.replace(
        "endmodule", "  km_dff s1 (.CK(clk), .D(y), .Q(s));\n  km_dff s2 (.CK(clk), .D(s), .Q(t));\nendmodule"
    )
    path.write_text(scanned)
    return audit(replace(plan, capture=capture, chain_file=chains))


@pytest.mark.parametrize(("run", "proved", "clocks"), [(0, "holds", 2), (1, "advances", 3)])
def test_the_netlist_says_what_the_plan_leaves_out(tmp_path: Path, run: int, proved: str, clocks: int) -> None:
    """Under the constants of capture the enable decides, and the clocks of a pattern follow from it."""
    facts = audited(tmp_path, {"run": run}, None)
    assert facts.plan.patterns is not None
    assert facts.plan.patterns.generator_in_capture == proved
    assert facts.plan.patterns.clocks_per_pattern == clocks
    assert not any(sentence.startswith(f"the generator {proved} in capture") for sentence in facts.assumed)


def test_a_plan_that_the_netlist_contradicts_is_refused(tmp_path: Path) -> None:
    """A statement that the proof refutes ends the audit instead of giving figures for another test."""
    with pytest.raises(InputError) as caught:
        audited(tmp_path, {"run": 1}, "holds")
    assert str(caught.value) == (
        "the plan says that the generator holds in capture, but under [capture] all of it advances; "
        "mend generator_in_capture or the constants of [capture]"
    )


@pytest.mark.parametrize(
    ("capture", "stated", "sentence"),
    [
        (None, None, "the generator holds in capture: no constants of [capture] are stated"),
        (None, "advances", "the generator advances in capture, as the plan says: no constants of [capture] are stated"),
        ({}, "holds", "the generator holds in capture, as the plan says: the constants of [capture] prove neither"),
    ],
)
def test_what_is_not_proved_is_listed_as_assumed(
    tmp_path: Path, capture: dict[str, int] | None, stated: str | None, sentence: str
) -> None:
    """Without constants, or with constants that leave the enable open, the statement is an assumption."""
    assert sentence in audited(tmp_path, capture, stated).assumed


OUTPUT = "  km_buf o (.A(c), .Y(y));"
LATCHED = "  km_{} o (.CK(clk), {}.D(c), .Q(y));"
OTHER_CLOCK = "  wire gck;\n  km_mux2 m (.D0(clk2), .D1(clk), .S(run), .Y(gck));\nendmodule"


@pytest.mark.parametrize(
    ("netlist", "run"),
    [
        (NETLIST.replace(OUTPUT, LATCHED.format("dff", "")), 0),
        (
            NETLIST.replace(".EN(run)", ".EN(1'b1)").replace(OUTPUT, LATCHED.format("dffec", ".RN(1'b1), .EN(run), ")),
            0,
        ),
        (
            NETLIST.replace(".EN(run)", ".EN(1'b1)")
            .replace("(.CK(clk)", "(.CK(gck)")
            .replace("input clk,", "input clk, input clk2,")
            .replace("endmodule", OTHER_CLOCK),
            0,
        ),
    ],
    ids=["pipeline advances", "pipeline holds", "other clock"],
)
def test_a_generator_that_does_so_in_part_is_not_proved(tmp_path: Path, netlist: str, run: int) -> None:
    """A pipeline that does not what the register does, or a clock of capture that is another, proves neither."""
    assert (
        "the generator holds in capture: the constants of [capture] prove neither"
        in audited(tmp_path, {"run": run}, None, netlist).assumed
    )


@pytest.mark.parametrize(("run", "proved"), [(0, "holds"), (1, "advances")])
def test_a_pipeline_that_does_what_the_register_does_is_proved(tmp_path: Path, run: int, proved: str) -> None:
    """A stage behind the register under the same enable moves with it."""
    netlist = NETLIST.replace(OUTPUT, LATCHED.format("dffec", ".RN(1'b1), .EN(run), "))
    assert audited(tmp_path, {"run": run}, None, netlist).plan.patterns == Patterns(3, 2, 1, proved)


def test_lock_up_behind_a_held_register_holds(tmp_path: Path) -> None:
    """A latch that is open while the register rests shows the same in every cycle."""
    path, chains = tmp_path / "t.v", tmp_path / "chains.csv"
    path.write_text(
        "module t (input ck, input run, output y);\n  wire a, b, f, s;\n"
        "  ff_enable a_ff (.CK(ck), .EN(run), .D(f), .Q(a));\n  ff_enable b_ff (.CK(ck), .EN(run), .D(a), .Q(b));\n"
        "  xor2 g (.A(a), .B(b), .Y(f));\n  latch_high lock_up (.G(ck), .D(b), .Q(y));\n"
        "  ff_plain s1 (.CK(ck), .D(y), .Q(s));\nendmodule\n"
    )
    chains.write_text("channel,cell\ny,s1\n")
    plan = Plan(
        netlists=(path,),
        cells=(CELLS,),
        mode={"run": 1},
        channels=("y",),
        chain_file=chains,
        patterns=Patterns(3, 1, 1),
    )
    for run, proved in ((0, "holds"), (1, "advances")):
        assert audit(replace(plan, capture={"run": run})).plan.patterns == Patterns(3, 1, 1, proved)
