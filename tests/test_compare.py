"""The command ``auditor compare`` on what users give it: options, names, modes, bad input."""

import io
import json
from pathlib import Path
from typing import Any

import pytest
from rich.console import Console

from auditor.cli import run
from auditor.compare import compare_plans
from auditor.plan import Plan
from auditor.report.comparison_terminal import print_comparisons

CELLS = Path(__file__).parents[1] / "sample_netlists" / "kelp90.lib"
REGISTER = """
  km_dffs ff_0 (.CK(ck), .SN(rn), .D(f), .Q(s0));
  km_dffc ff_1 (.CK(ck), .RN(rn), .D(s0), .Q(s1));
  km_dffc ff_2 (.CK(ck), .RN(rn), .D(s1), .Q(s2));
  km_dffc ff_3 (.CK(ck), .RN(rn), .D(s2), .Q(s3));
  km_xor2 u_f (.A(s2), .B(s3), .Y(f));
"""
SHIFTER = """
  km_xor2 u_a (.A(s0), .B(s2), .Y(a));
  km_xor2 u_b (.A(s1), .B(s3), .Y(b));
  km_xor2 u_c (.A(s0), .B(s1), .Y(c));
"""


def netlist(folder: Path, name: str, body: str = REGISTER + SHIFTER, ports: str = "a, b, c", more: str = "") -> Path:
    """Write a generator of four stages and return its path."""
    path = folder / f"{name}.v"
    wires = "s0, s1, s2, s3, f"
    path.write_text(f"module t (input ck, input rn{more}, output {ports});\n  wire {wires};\n{body}endmodule\n")
    return path


def compared(tmp_path: Path, *words: object) -> tuple[int, dict[str, Any]]:
    """Return the exit status and the JSON."""
    target = tmp_path / "compare.json"
    status = run(["compare", *map(str, words), "--cells", str(CELLS), "--json", str(target), "--quiet"])
    return status, json.loads(target.read_text()) if target.exists() else {}


def statuses(report: dict[str, Any]) -> dict[str, str]:
    """Return the status of each channel by its name."""
    return {c["new"] or c["old"]: c["status"] for c in report["compare"]["channels"]}


def test_a_netlist_is_identical_to_itself(tmp_path: Path) -> None:
    """The same file twice is one machine, and the map of its states the identity."""
    path = netlist(tmp_path, "old")
    status, report = compared(tmp_path, path, path)
    found = report["compare"]
    assert (status, found["class"], found["holds_from"], found["reset_shift"]) == (0, "identical", 0, "0")
    assert found["state_map"] == {"rows": [[0], [1], [2], [3]], "offset": []}
    assert found["witness"] is None
    assert found["changed_nets"] == []


def test_json_has_the_promised_names(tmp_path: Path) -> None:
    """Other programs rely on these names."""
    body = REGISTER + SHIFTER.replace(".B(s3)", ".B(s2)")
    _, report = compared(tmp_path, netlist(tmp_path, "old"), netlist(tmp_path, "new", body))
    found = report["compare"]
    assert {"class", "holds_from", "reset_shift", "state_map", "channels", "findings", "flip_flops", "changed_nets",
            "witness"} <= set(found)  # fmt: skip
    assert {"old", "new", "matched_by", "status", "shift", "inverted"} <= set(found["channels"][0])
    assert {"gained", "lost", "worse"} == set(found["findings"])
    assert {"net", "file", "line"} <= set(found["changed_nets"][0])
    assert {"old_state", "new_state", "cycle", "channel"} <= set(found["witness"])


def test_a_reset_that_moved_is_a_difference(tmp_path: Path) -> None:
    """The same machine from another reset state differs, by as many cycles as stepping takes."""
    body = REGISTER.replace("km_dffs ff_0 (.CK(ck), .SN(rn)", "km_dffc ff_0 (.CK(ck), .RN(rn)")
    body = body.replace("km_dffc ff_1 (.CK(ck), .RN(rn)", "km_dffs ff_1 (.CK(ck), .SN(rn)") + SHIFTER
    status, report = compared(tmp_path, netlist(tmp_path, "old"), netlist(tmp_path, "new", body))
    found = report["compare"]
    assert (status, found["class"], found["reset"]["agree"], found["reset_shift"]) == (1, "identical", False, "1")
    assert {f["new"]: f["after"]["reset"] for f in found["flip_flops"]} == {"ff_0": 0, "ff_1": 1, "ff_2": 0, "ff_3": 0}


def test_one_more_pipeline_stage_is_a_shift(tmp_path: Path) -> None:
    """A pipeline behind all channels delays all of them by one cycle, and the names of the register show it."""
    body = REGISTER + SHIFTER.replace(".Y(a)", ".Y(pa)").replace(".Y(b)", ".Y(pb)").replace(".Y(c)", ".Y(pc)")
    body += "".join(f"  km_dffc ff_{x} (.CK(ck), .RN(rn), .D(p{x}), .Q({x}));\n" for x in "abc")
    body = "  wire pa, pb, pc;\n" + body
    status, report = compared(tmp_path, netlist(tmp_path, "old"), netlist(tmp_path, "new", body))
    assert (status, report["compare"]["class"]) == (1, "shifted")
    assert {c["shift"] for c in report["compare"]["channels"]} == {"-1"}


def test_channels_that_lost_their_names_are_matched_by_what_they_carry(tmp_path: Path) -> None:
    """One renamed port is found by its stream; ports renamed throughout are matched in their order."""
    renamed = (REGISTER + SHIFTER).replace(".Y(b)", ".Y(x)")
    status, report = compared(tmp_path, netlist(tmp_path, "old"), netlist(tmp_path, "new", renamed, "a, x, c"))
    assert status == 0
    assert [(c["old"], c["new"], c["matched_by"]) for c in report["compare"]["channels"]] == [
        ("a", "a", "name"), ("b", "x", "behaviour"), ("c", "c", "name"),
    ]  # fmt: skip
    for name in "abc":
        renamed = renamed.replace(f".Y({name})", f".Y(p{name})")
    new = netlist(tmp_path, "new", renamed, "pa, x, pc")
    status, report = compared(tmp_path, netlist(tmp_path, "old"), new)
    assert status == 0
    assert {c["matched_by"] for c in report["compare"]["channels"]} == {"behaviour"}


def test_added_and_removed_channels_are_listed(tmp_path: Path) -> None:
    """A channel more or less is a difference, while those in common are said to be the same."""
    fewer = (REGISTER + SHIFTER).replace("  km_xor2 u_b (.A(s1), .B(s3), .Y(b));\n", "")
    status, report = compared(tmp_path, netlist(tmp_path, "old"), netlist(tmp_path, "new", fewer, "a, c"))
    assert (status, statuses(report)) == (1, {"a": "same", "b": "removed", "c": "same"})
    assert any("1 channel removed" in remark for remark in report["compare"]["remarks"])
    status, report = compared(tmp_path, netlist(tmp_path, "new", fewer, "a, c"), netlist(tmp_path, "old"))
    assert (status, statuses(report)) == (1, {"a": "same", "b": "added", "c": "same"})


def test_channels_that_moved_to_other_names_are_hinted_at(tmp_path: Path) -> None:
    """Where some names are kept but mean other channels, that is a difference; that all streams are there is said."""
    gates = "".join(f"  km_xor2 u_{i} (.A(s{i}), .B(s3), .Y(y[{i}]));\n" for i in range(3))
    old = netlist(tmp_path, "old", REGISTER + gates, "[2:0] y")
    new = netlist(
        tmp_path,
        "new",
        REGISTER + gates.replace("y[2]", "y[3]").replace("y[1]", "y[2]").replace("y[0]", "y[1]"),
        "[3:1] y",
    )
    status, report = compared(tmp_path, old, new)
    assert status == 1
    assert any("they may be renamed only" in remark for remark in report["compare"]["remarks"])


def test_no_channel_in_common_is_said(tmp_path: Path) -> None:
    """Without a name in common, and with other counts, the rest is still compared."""
    other = (REGISTER + SHIFTER).replace(".Y(a)", ".Y(x)").replace(".Y(b)", ".Y(y)")
    other = other.replace("  km_xor2 u_c (.A(s0), .B(s1), .Y(c));\n", "")
    status, report = compared(tmp_path, netlist(tmp_path, "old"), netlist(tmp_path, "new", other, "x, y"))
    found = report["compare"]
    assert (status, found["class"]) == (1, "different")
    assert any("No channel kept its name" in remark for remark in found["remarks"])
    assert [f["matched_by"] for f in found["flip_flops"]] == ["name"] * 4


def test_a_refused_machine_is_told_and_its_gate_named(tmp_path: Path) -> None:
    """Where one revision is not affine the gates are run from reset, and the difference is theirs."""
    body = REGISTER.replace("km_xor2 u_f", "km_nand2 u_f") + SHIFTER
    status, report = compared(tmp_path, netlist(tmp_path, "old"), netlist(tmp_path, "new", body))
    found = report["compare"]
    assert (status, found["class"]) == (1, "different")
    assert found["witness"]["confirmed_by_replay"]
    assert any("NEW is no linear machine" in remark for remark in found["remarks"])
    assert [(n["instance"], n["next_states"]) for n in found["changed_nets"]] == [("u_f", ["ff_0"])]
    assert set(statuses(report).values()) == {"refused"}


def test_two_refused_machines_that_do_not_differ_are_undecided(tmp_path: Path) -> None:
    """A machine that is not affine is never said to be the same, even beside itself."""
    path = netlist(tmp_path, "old", REGISTER.replace("km_xor2 u_f", "km_nand2 u_f") + SHIFTER)
    status, report = compared(tmp_path, path, path)
    assert (status, report["compare"]["class"]) == (3, "undecided")


def test_a_channel_that_is_not_affine_is_compared_by_its_gates(tmp_path: Path) -> None:
    """The channels that have rows are the same; the one that has none any more is found by running the gates."""
    body = REGISTER + SHIFTER.replace("km_xor2 u_b", "km_nor2 u_b")
    status, report = compared(tmp_path, netlist(tmp_path, "old"), netlist(tmp_path, "new", body))
    assert (status, statuses(report)) == (1, {"a": "same", "b": "refused", "c": "same"})
    assert [n["instance"] for n in report["compare"]["changed_nets"]] == ["u_b"]


def test_free_inputs_must_act_alike(tmp_path: Path) -> None:
    """Two machines that run alike by themselves differ where an open input does something else."""
    into = "  km_xor2 u_i (.A({}), .B(i), .Y(g));\n"
    old = REGISTER.replace(".D(s0)", ".D(g)") + SHIFTER + "  wire g;\n" + into.format("s0")
    new = REGISTER.replace(".D(s1)", ".D(g)") + SHIFTER + "  wire g;\n" + into.format("s1")
    paths = netlist(tmp_path, "old", old, more=", input i"), netlist(tmp_path, "new", new, more=", input i")
    assert compared(tmp_path, paths[0], paths[0])[0] == 0
    renamed = netlist(tmp_path, "renamed", old.replace(".B(i)", ".B(j)"), more=", input j")
    assert compared(tmp_path, paths[0], renamed)[0] == 0
    status, report = compared(tmp_path, *paths)
    assert status == 1
    assert any("Free inputs" in remark for remark in report["compare"]["remarks"])


def test_options_of_one_side(tmp_path: Path) -> None:
    """--old-... and --new-... reach one revision, all others both; further netlists may be added."""
    scanned = (
        REGISTER.replace(".D(f)", ".D(g)") + "  wire g;\n  km_mux2 u_m (.D0(f), .D1(si), .S(se), .Y(g));\n" + SHIFTER
    )
    new = netlist(tmp_path, "new", scanned, more=", input si, input se")
    status, report = compared(
        tmp_path,
        netlist(tmp_path, "old"),
        new,
        "--new-mode",
        "se=0",
        "--new-netlist",
        CELLS.parent / "plain_register.v",
        "--new-top=t",
    )
    assert (status, report["compare"]["class"]) == (0, "identical")
    assert report["mode"] == {"old": {}, "new": {"se": 0}}
    assert [f["role"] for f in report["new"]["inputs"]] == ["netlist", "netlist", "cells"]


@pytest.mark.parametrize(
    ("words", "told"),
    [
        ([], "no revision is named"),
        (["a.v"], "one revision is named"),
        (["a.v", "b.v", "c.v"], "3 revisions are named"),
        (["a.v", "b.v", "--old-json", "x"], "--old-json asks for a report of one revision"),
        (["a.v", "b.v", "--new-cell", "x"], "--cell is no option of auditor compare"),
        (["a.v", "b.v", "--use-draft"], "--use-draft guesses"),
        (["a.v", "b.v", "--top"], "--top has no value"),
        (["a.v", "nowhere.toml"], "nowhere.toml"),
    ],
)
def test_wrong_use_is_answered(words: list[str], told: str, capsys: pytest.CaptureFixture[str]) -> None:
    """Wrong words give exit status 2 and say what is wrong."""
    assert run(["compare", *words]) == 2
    assert told in capsys.readouterr().err


def test_help_is_printed(capsys: pytest.CaptureFixture[str]) -> None:
    """--help explains the command."""
    assert run(["compare", "--help"]) == 0
    assert "usage: auditor compare OLD NEW" in capsys.readouterr().out


def plan(folder: Path, name: str, modes: str, body: str = REGISTER + SHIFTER) -> Path:
    """Write a netlist and a plan with modes for it."""
    netlist(folder, name, body)
    path = folder / f"{name}.toml"
    path.write_text(f'[netlist]\nfiles = ["{name}.v"]\n{modes}')
    return path


def test_modes_of_plans_are_compared_by_name(tmp_path: Path) -> None:
    """Modes of one name are compared; one that only one plan has leaves the outcome undecided."""
    both = "[mode.fast]\nrn = 1\n[mode.slow]\nrn = 1\n"
    status, report = compared(tmp_path, plan(tmp_path, "old", both), plan(tmp_path, "new", both))
    assert (status, [m["name"] for m in report["modes"]]) == (0, ["fast", "slow"])
    status, report = compared(tmp_path, plan(tmp_path, "old", both), plan(tmp_path, "new", "[mode.fast]\nrn = 1\n"))
    assert (status, report["modes_of_one_plan"]) == (3, ["slow"])


def test_modes_that_do_not_fit_are_an_error(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """Without a mode in common nothing can be compared, and both lists are told."""
    old, new = plan(tmp_path, "old", "[mode.fast]\nrn = 1\n"), plan(tmp_path, "new", "")
    assert compared(tmp_path, old, new)[0] == 2
    told = capsys.readouterr().err
    assert "no mode is in both: OLD has fast, NEW has one without a name" in told


def test_an_unreadable_revision_is_an_error(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """A revision from which no machine can be formed ends the comparison, with its file and line."""
    broken = netlist(tmp_path, "new", REGISTER.replace("km_xor2 u_f", "km_odd u_f") + SHIFTER)
    assert compared(tmp_path, netlist(tmp_path, "old"), broken)[0] == 2
    assert "km_odd" in capsys.readouterr().err


def test_findings_gained_lost_and_worse(tmp_path: Path) -> None:
    """A moved tap that comes too close to another channel is a finding gained; the way back it is lost."""
    close = REGISTER + SHIFTER.replace("u_b (.A(s1), .B(s3)", "u_b (.A(s1), .B(s2)")
    paths = netlist(tmp_path, "old"), netlist(tmp_path, "new", close)
    _, report = compared(tmp_path, *paths, "--limit", "separation=2")
    gained = {(f["slug"], *f["where"]) for f in report["compare"]["findings"]["gained"]}
    assert ("windows-overlap", "b", "c") in gained
    _, report = compared(tmp_path, *reversed(paths), "--limit", "separation=2")
    assert ("windows-overlap", "b", "c") in {(f["slug"], *f["where"]) for f in report["compare"]["findings"]["lost"]}


def screen(old: Path, new: Path) -> str:
    """Return the page."""
    text = io.StringIO()
    plans = [Plan(netlists=(path,), cells=(CELLS,)) for path in (old, new)]
    print_comparisons(compare_plans(*plans), Console(file=text, width=100, force_terminal=True, color_system=None))
    return text.getvalue()


def test_screen_counts_what_did_not_change(tmp_path: Path) -> None:
    """Of two thousand channels only those that changed are listed."""
    gates = "".join(f"  km_xor2 u_{i} (.A(s{i % 3}), .B(s3), .Y(y[{i}]));\n" for i in range(400))
    old = netlist(tmp_path, "old", REGISTER + gates, "[399:0] y")
    new = netlist(tmp_path, "new", REGISTER + gates.replace("u_7 (.A(s1)", "u_7 (.A(s0)"), "[399:0] y")
    page = screen(old, new)
    assert "399 channels carry the same stream" in page
    assert len(page.splitlines()) < 60
    assert "u_7" in page


def test_screen_is_harmless(tmp_path: Path) -> None:
    """A name that carries a command for the terminal is spelled out."""
    body = (REGISTER + SHIFTER).replace("u_b", "\\u\x1b[31m ")
    page = screen(
        netlist(tmp_path, "old", body), netlist(tmp_path, "new", body.replace(".B(s3), .Y(b)", ".B(s2), .Y(b)"))
    )
    assert "\x1b[31m" not in page
