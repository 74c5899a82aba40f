"""Findings on the circuit under test."""

from pathlib import Path

from auditor.array.circuit import CaptureFacts
from auditor.array.cone_ranks import rank_cones
from auditor.array.frozen import find_frozen
from auditor.array.toggling import Planned
from auditor.machine.machine import Extraction
from auditor.plan import Patterns, Plan
from auditor.risks.capture_rules import cone_short_of_rank, net_frozen
from auditor.risks.evidence import Evidence
from auditor.risks.questions import open_questions
from tests.support.circuits import under_test

# Three chains straight from a register of three stages: cell 2 of a chain and cell 1 of the next are twins.
HEAD = """module chip (input clk, input rst_n, input scan_en, input hold, output [2:0] po);
  wire [2:0] x; wire f; wire [2:0] si; assign si = x;
  km_xor2 u0 (.A(x[2]), .B(x[1]), .Y(f));
  km_dffs s1 (.CK(clk), .SN(rst_n), .D(f), .Q(x[0]));
  km_dffc s2 (.CK(clk), .RN(rst_n), .D(x[0]), .Q(x[1]));
  km_dffc s3 (.CK(clk), .RN(rst_n), .D(x[1]), .Q(x[2]));
"""
CELLS = "\n".join(
    f"  km_sdffc c{i}_{j} (.CK(clk), .RN(rst_n), .D(po[{i}]), .SI({f'q{i}_1' if j == 2 else f'si[{i}]'}), "
    f".SE(scan_en), .Q(q{i}_{j}));"
    for i in range(3)
    for j in (1, 2)
)


def examined(
    folder: Path, logic: str, planned: Planned | None = None, limit: int = 20_000, **stated: object
) -> Evidence:
    """Return the evidence on a chip with this logic."""
    made = under_test(folder, f"{HEAD}{CELLS}\n{logic}\nendmodule\n", 3, 2)
    nets = find_frozen(made.circuit, made.loading, planned, limit)
    capture = CaptureFacts(made.circuit, rank_cones(made.circuit, made.loading), nets)
    plan = Plan(netlists=(), **stated)  # type: ignore[arg-type]
    return Evidence(plan, made.cone, Extraction(made.machine, ()), None, None, capture)


TWINS = """  wire same; km_xnor2 g1 (.A(q0_2), .B(q1_1), .Y(same));
  km_nand2 g2 (.A(same), .B(hold), .Y(po[0])); km_inv g3 (.A(same), .Y(po[1])); km_inv g4 (.A(po[1]), .Y(po[2]));"""


def test_a_frozen_net_names_what_it_needs_and_what_lies_behind(tmp_path: Path) -> None:
    """The comparison of two twins is an error with its example; what it alone freezes is counted, not repeated."""
    (found,) = net_frozen(examined(tmp_path, TWINS))
    assert (found.slug, found.level, found.where) == ("net-frozen", "error", ("same",))
    assert found.says == (
        "Net same stays 1 in every state outside lock-up, although free scan cells would let it toggle: stuck-at-1 on "
        "it can never be excited, nor any fault that needs it at 0. 3 more frozen nets lie behind it."
    )
    assert found.figures == {
        "value": 1,
        "scope": "every-state",
        "proved_by": "decision-diagrams",
        "nets_behind": 3,
        "toggles_with": "c0_2 = 0, c1_1 = 1",
        "never_seen": "c0_2 + c1_1 = 1",
    }
    assert found.place is not None


def test_a_net_that_only_inputs_move_is_a_warning(tmp_path: Path) -> None:
    """Where an input takes part the generator leaves the net to it alone."""
    logic = """  wire n; km_inv g0 (.A(q1_1), .Y(n));
  km_oai21 g1 (.A1(q0_2), .A2(n), .B(hold), .Y(po[0]));
  km_inv g2 (.A(q2_1), .Y(po[1])); km_inv g3 (.A(q2_2), .Y(po[2]));"""
    (found,) = net_frozen(examined(tmp_path, logic))
    assert (found.level, found.where, found.figures["scope"]) == ("warning", ("po[0]",), "only-with-freedom")
    assert found.figures["value"] is None
    assert "only inputs and sources outside the chains move it" in found.says


def test_a_net_that_planned_patterns_miss_is_a_warning(tmp_path: Path) -> None:
    """Too few patterns leave a net at one value that another state of the generator would change."""
    logic = """  km_nand3 g1 (.A(q0_1), .B(q1_1), .C(q2_1), .Y(po[0]));
  km_inv g2 (.A(q2_1), .Y(po[1])); km_inv g3 (.A(q2_2), .Y(po[2]));"""
    (found,) = net_frozen(examined(tmp_path, logic, Planned((1,), 2, 2, 4)))
    assert (found.level, found.where, found.figures["proved_by"]) == ("warning", ("po[0]",), "simulation")
    assert found.says.startswith("Net po[0] stays 1 in all 4 planned patterns, although some state of the generator")


def test_cones_short_of_rank_come_once_for_each_set_of_cells(tmp_path: Path) -> None:
    """Several sinks with one cone are one finding, whose relation is among its scan cells."""
    evidence = examined(tmp_path, TWINS)
    found = list(cone_short_of_rank(evidence))
    (of_both,) = found
    assert set(of_both.where) == {"po[0]", "po[1]", "po[2]"}
    assert of_both.level == "warning"
    assert of_both.figures["size"] == 2
    assert of_both.figures["rank"] == 1
    assert of_both.figures["combinations"] == "2"
    assert of_both.figures["share_of_combinations"] == 0.5
    assert of_both.figures["never_seen"] == "c0_2 + c1_1 = 1"
    assert of_both.figures["random_rows_of_full_rank"] == 7 / 8 * 3 / 4  # two random rows of three bits
    assert of_both.says == (
        "The 2 bits that decide po[0] and 2 more take 2^1 of 2^2 combinations: a fault that needs another one is never "
        "detected, in particular one with c0_2 + c1_1 = 1."
    )


def test_what_stays_open_is_told(tmp_path: Path) -> None:
    """Nets past the work limit and planned patterns without a start are open questions; else there are none."""
    logic = """  km_nand3 g1 (.A(q0_2), .B(q1_1), .C(q2_1), .Y(po[0]));
  km_nor2 g2 (.A(po[0]), .B(q2_2), .Y(po[1])); km_inv g3 (.A(q2_2), .Y(po[2]));"""
    assert not open_questions(examined(tmp_path, logic))
    told = open_questions(examined(tmp_path, TWINS, limit=1, patterns=Patterns(3, 2)))
    assert told[0].startswith("Whether 1 of 6 nets behind scan cells toggle is not decided, such as po[0].")
    assert told[1].startswith("Which nets the planned patterns leave frozen is not decided")
