"""A short mutation run, and the proof of the forms it rewrites gates into."""

import random
from itertools import product
from pathlib import Path

import pytest

from tests.mutations import run, run_case
from tests.support.damages import DAMAGES
from tests.support.gate_truth import GATES, streams
from tests.support.machines import fibonacci, with_channels
from tests.support.mapped import Mapped, mapped
from tests.support.rewrites import REWRITES, XOR_FORMS, draw_xor

SHORT = 8
SEED = 7


def test_a_short_run_has_no_false_alarm_and_no_miss(tmp_path: Path) -> None:
    """Rewritten generators are the same, damaged ones differ and the damage is named; a second run goes on behind."""
    log = tmp_path / "log.csv"
    cases = [*run(SHORT // 2, SEED, log)]
    assert len(cases) < len([*run(SHORT, SEED, log)])
    lines = log.read_text().splitlines()
    again = [*run(SHORT, SEED, log)]
    assert log.read_text().splitlines() == lines, "a finished run makes nothing anew"
    assert sum(case.kind == "rewrite" for case in again) == SHORT
    for case in again:
        if case.kind == "rewrite" or case.truth == "differs":
            assert case.right, case
            assert case.located != "no", case


def test_the_report_is_one_of_a_long_run_without_a_wrong_answer() -> None:
    """The run in reports/ has 500 cases of each kind, no false alarm and no miss."""
    text = (Path(__file__).parents[1] / "reports" / "mutations.md").read_text(encoding="utf-8")
    assert "* 500 rewrites that keep the function: 0 false alarms." in text
    assert "* 500 damages: 0 missed," in text


def test_a_case_can_be_made_again(tmp_path: Path) -> None:
    """Seed and number are all that a case depends on."""
    assert run_case(SEED, 5, tmp_path) == run_case(SEED, 5, tmp_path)


@pytest.mark.parametrize("form", XOR_FORMS)
@pytest.mark.parametrize("inverted", [False, True])
def test_each_form_of_a_gate_is_that_gate(form: str, inverted: bool) -> None:
    """All values of the inputs give the XOR, or its complement."""
    for a, b in product((0, 1), repeat=2):
        netlist = Mapped(1)
        draw_xor(netlist, form, "a", "b", "y", inverted)
        values = {"a": a, "b": b}
        for gate in netlist.instances:
            values[gate.pins["Y"]] = GATES[gate.cell]({p: values[n] for p, n in gate.pins.items() if p != "Y"})
        assert values["y"] == a ^ b ^ inverted


@pytest.mark.parametrize("name", REWRITES)
def test_each_rewrite_keeps_the_streams(name: str) -> None:
    """On a small generator each rewrite by itself changes the text and keeps every bit from reset."""
    machine = with_channels(fibonacci((4, 3), 4), [(0, 2), (1, 3)], 1)
    changed = 0
    for seed in range(20):
        rng = random.Random(seed)
        netlist = mapped(machine, 9, rng)
        if name in ("De Morgan", "retimed pipeline"):
            (REWRITES["other cells"] if name == "De Morgan" else _pipelined)(netlist, rng)
        before = netlist.text()
        REWRITES[name](netlist, rng)
        changed += netlist.text() != before
        assert streams(netlist.text(), 40) == streams(before, 40)
    assert changed > 5


def _pipelined(netlist: Mapped, rng: random.Random) -> None:
    from tests.support.rewrites import pipelined

    pipelined(netlist, rng)


@pytest.mark.parametrize("name", DAMAGES)
def test_each_damage_is_one_that_shows(name: str) -> None:
    """Each damage changes the streams of some generator."""
    machine = with_channels(fibonacci((8, 6, 5, 4), 8), [(0, 2), (1, 3, 6), (4, 7)], 2)
    shown = 0
    for seed in range(8):
        rng = random.Random(seed)
        netlist = mapped(machine, 9, rng, enabled=True)
        REWRITES["inverted storage"](netlist, rng)
        before = netlist.text()
        if DAMAGES[name](netlist, rng):
            shown += streams(netlist.text(), 100) != streams(before, 100)
    assert shown
