"""Every class on a pair of sample netlists, through the command line."""

import json
import re
from pathlib import Path
from typing import Any

import pytest

from auditor.cli import run
from auditor.gf2 import matrix
from tests.support.gate_truth import streams

ROOT = Path(__file__).parents[2]
OLD = ROOT / "sample_netlists" / "phase_shifter.v"
REVISIONS = ROOT / "sample_netlists" / "revisions"
CELLS = ROOT / "sample_netlists" / "kelp90.lib"

CLASSES = {
    "renamed": "identical",
    "re_encoded": "re-encoded",
    "shifted": "shifted",
    "permuted": "permuted",
    "inverted": "inverted",
    "reversed": "reversed",
    "decimated": "decimated",
    "moved_tap": "different",
    "moved_feedback": "different",
}


def compared(tmp_path: Path, old: Path, new: Path, *options: str) -> tuple[int, dict[str, Any]]:
    """Return the exit status and the JSON of a comparison."""
    target = tmp_path / "compare.json"
    status = run(["compare", str(old), str(new), "--cells", str(CELLS), "--json", str(target), "--quiet", *options])
    return status, json.loads(target.read_text()) if target.exists() else {}


def simulated(path: Path, cycles: int) -> list[tuple[int, ...]]:
    """Return the streams from reset by the independent simulator."""
    return streams(re.sub(r"\bclk\b", "ck", re.sub(r"\brst_n\b", "rn", path.read_text())), cycles)


@pytest.mark.parametrize("name", CLASSES)
def test_class_and_exit_status(name: str, tmp_path: Path) -> None:
    """Each sample revision is of its class; the status is 0 for those whose streams are the same, else 1."""
    status, report = compared(tmp_path, OLD, REVISIONS / f"{name}.v")
    found = report["compare"]
    assert found["class"] == CLASSES[name]
    assert status == (0 if name in ("renamed", "re_encoded") else 1)
    assert (simulated(OLD, 200) == simulated(REVISIONS / f"{name}.v", 200)) == found["reset"]["agree"] == (status == 0)


def test_there_is_a_pair_for_every_sample() -> None:
    """Each sample revision is in the list."""
    assert {path.stem for path in REVISIONS.glob("*.v")} == set(CLASSES)


def test_the_moved_tap_is_found_by_instance_and_line(tmp_path: Path) -> None:
    """The one gate that was rewired is named with its line, and the one channel that it moves."""
    _, report = compared(tmp_path, OLD, REVISIONS / "moved_tap.v")
    found = report["compare"]
    (net,) = found["changed_nets"]
    line = (REVISIONS / "moved_tap.v").read_text().splitlines()[net["line"] - 1]
    assert line.startswith("  km_xnor2 u8 (.A(stage[6])")
    assert (net["net"], net["instance"], net["channels"], net["next_states"]) == ("n6", "u8", ["so[2]"], [])
    assert [c["new"] for c in found["channels"] if c["status"] != "same"] == ["so[2]"]


def test_the_moved_feedback_is_found_by_its_row(tmp_path: Path) -> None:
    """A feedback tap is named with the storage element whose next state it moves."""
    _, report = compared(tmp_path, OLD, REVISIONS / "moved_feedback.v")
    (net,) = report["compare"]["changed_nets"]
    assert (net["instance"], net["next_states"]) == ("u2", ["stage_0_ff"])


def test_figures_of_the_classes(tmp_path: Path) -> None:
    """Shift, factor, order and inversion are those that the samples were made with."""
    found = {name: compared(tmp_path, OLD, REVISIONS / f"{name}.v")[1]["compare"] for name in CLASSES}
    assert {channel["shift"] for channel in found["shifted"]["channels"]} == {"1"}
    assert found["shifted"]["reset_shift"] == "1"
    assert (found["decimated"]["factor"], found["decimated"]["one_map"]) == (3, True)
    assert found["reversed"]["factor"] == -1
    carried = {c["new"]: c["carries"] for c in found["permuted"]["channels"] if c["status"] == "permuted"}
    assert carried == {"so[3]": "so[4]", "so[4]": "so[9]", "so[9]": "so[3]"}
    assert [c["new"] for c in found["inverted"]["channels"] if c["inverted"]] == ["so[5]", "so[13]"]


def test_a_moved_channel_leads_by_its_shift(tmp_path: Path) -> None:
    """The shift of the moved channel is the difference of its leads in the two audits."""
    _, report = compared(tmp_path, OLD, REVISIONS / "moved_tap.v")
    (moved,) = [c for c in report["compare"]["channels"] if c["status"] != "same"]
    difference = int(moved["after"]["lead"]) - int(moved["before"]["lead"])
    assert (int(moved["shift"]) - difference) % (2**32 - 1) == 0


@pytest.mark.parametrize("name", ["renamed", "re_encoded", "permuted", "inverted"])
def test_state_map_takes_one_machine_to_the_other(name: str, tmp_path: Path) -> None:
    """A2 S = S A1 and A2 p + a2 = S a1 + p, on the machines that two audits print."""
    machines = []
    for path in (OLD, REVISIONS / f"{name}.v"):
        target = tmp_path / "audit.json"
        run(["audit", str(path), "--cells", str(CELLS), "--json", str(target), "--quiet"])
        machines.append(json.loads(target.read_text())["machine"])
    _, report = compared(tmp_path, OLD, REVISIONS / f"{name}.v")
    found = report["compare"]["state_map"]

    def rows(lists: list[list[int]]) -> list[int]:
        return [sum(1 << k for k in row) for row in lists]

    s, p = rows(found["rows"]), sum(1 << k for k in found["offset"])
    (a1, o1), (a2, o2) = ((rows(m["transition"]), sum(1 << k for k in m["offset"])) for m in machines)
    assert matrix.multiply(a2, s) == matrix.multiply(s, a1)
    assert matrix.apply(a2, p) ^ o2 == matrix.apply(s, o1) ^ p
    assert matrix.rank(s) == len(s)


def test_a_witness_is_true_by_another_simulator(tmp_path: Path) -> None:
    """Where the witness starts from reset, the independent simulator sees the difference in that cycle first."""
    for name in ("moved_tap", "moved_feedback", "inverted", "shifted"):
        _, report = compared(tmp_path, OLD, REVISIONS / f"{name}.v")
        witness = report["compare"]["witness"]
        assert witness["confirmed_by_replay"]
        old, new = simulated(OLD, witness["cycle"] + 1), simulated(REVISIONS / f"{name}.v", witness["cycle"] + 1)
        channel = int(re.findall(r"\d+", witness["channel"])[0])
        assert old[-1][channel] != new[-1][channel]
        assert old[:-1] == new[:-1]


def test_same_input_gives_the_same_bytes(tmp_path: Path) -> None:
    """Two comparisons of the same files are the same text."""
    texts = []
    for _ in range(2):
        compared(tmp_path, OLD, REVISIONS / "re_encoded.v")
        texts.append((tmp_path / "compare.json").read_bytes())
    assert texts[0] == texts[1]
