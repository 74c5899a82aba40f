"""The circuit under test in JSON and on the terminal."""

import io
import json
from pathlib import Path

from rich.console import Console

from auditor.audit import audit
from auditor.plan_file import read_plan
from auditor.report.capture_json import capture_part
from auditor.report.json_report import json_text
from auditor.report.terminal import print_audits

SAMPLES = Path(__file__).parents[2] / "sample_netlists"


def test_the_circuit_is_told_alike_in_both_writers() -> None:
    """Cones, nets and scopes of the JSON are those of the facts, and the page counts the same."""
    facts = audit(read_plan(SAMPLES / "limpet_alarm_straight.toml"))
    assert facts.capture is not None
    report = json.loads(json_text({"": facts}))
    assert report["capture"]["constants"] == {"scan_en": 0}
    assert report["capture"]["scan_cells"] == 32
    assert report["capture"]["simulated_patterns"] == "4000"
    assert report["asked"]["patterns"]["launch"] == "none"
    assert len(report["cones"]) == len(facts.capture.cones.cones)
    for cone in report["cones"]:
        assert cone.keys() >= {"net", "size", "rank", "combinations"}
        assert int(cone["combinations"]) == 1 << cone["rank"] >= int(cone["outside_lock_up"])
    by_net = {entry["net"]: entry for entry in report["frozen_nets"]}
    assert by_net["equal"] == {
        "net": "equal", "value": 1, "scope": "every-state", "proved_by": "decision-diagrams", "follows": True,
    }  # fmt: skip
    assert report["undecided_nets"] == []
    screen = io.StringIO()
    print_audits({"": facts}, Console(file=screen))
    every = sum(entry["scope"] == "every-state" for entry in report["frozen_nets"])
    assert f"frozen: {every} in every state outside lock-up" in screen.getvalue()
    short = sum(cells.short for cells in facts.capture.cones.sets)
    assert f"{short} short of rank, the worst takes 2^7 of 2^21" in screen.getvalue()
    assert "single-cycle tests only" in screen.getvalue()


def test_unasked_the_entries_are_empty() -> None:
    """Without a question the names are there and hold nothing."""
    plan = read_plan(SAMPLES / "plain_register.toml")
    assert capture_part(None, None, plan) == {"capture": None, "cones": [], "frozen_nets": [], "undecided_nets": []}
