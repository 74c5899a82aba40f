"""Scan chains and seeds on the screen and in the JSON: the same facts, bounded, whatever the names hold."""

import io
import json
from dataclasses import replace

from rich.console import Console

from auditor.array.orbits import state_after
from auditor.array.scan_array import Chain, ScanArray, ScanCell
from auditor.plan import Patterns
from auditor.report.array_json import array_part
from auditor.report.array_tables import say_array
from auditor.report.facts import AuditFacts
from auditor.report.page import Page
from tests.support.evidence import evidence
from tests.support.facts import small_facts
from tests.support.linear_machines import fibonacci, linear_machine

MACHINE = linear_machine(fibonacci((5, 2, 0)), [(1, 0), (1 << 3, 1)], reset_known=31, reset_state=1)
CHAINS = ScanArray((Chain("c0", 9), Chain("c1", 5)), "file")


def facts_of(scan: ScanArray | None, **stated: object) -> AuditFacts:
    """Return facts whose machine, plan and array are those of the evidence."""
    told = evidence(MACHINE, scan=scan, **stated)  # type: ignore[arg-type]  # fields of the plan
    return replace(
        small_facts(), plan=told.plan, cone=told.cone, extraction=told.extraction, phases=told.phases, array=told.array
    )


def screen(facts: AuditFacts) -> str:
    """Return the section as a pipe gets it, runs of blanks as one."""
    console = Console(file=io.StringIO(), width=80)
    page = Page(console)
    say_array(page, facts)
    page.show()
    return "\n".join(" ".join(line.split()) for line in console.file.getvalue().splitlines())  # type: ignore[attr-defined]


def test_the_section_tells_every_figure() -> None:
    """Chains, twins, sums of three and four, patterns, and the figures without the shifter."""
    facts = facts_of(CHAINS, patterns=Patterns(40, 9, twin_window=1), relations=4)
    assert facts.array is not None
    three, four, twins = facts.array.three, facts.array.four, facts.array.twins
    assert three is not None
    assert four is not None
    assert twins is not None
    text = screen(facts)
    assert "chains 2 of 5 to 9 scan cells, 14 in all, from the file of the chains" in text
    assert "twins 5 in 1 pair of chains in every pattern" in text
    assert f"{twins.across} in {twins.across_chains} pair" in text
    assert f"sums of three {three.places} sets of constant sum, {three.relations} relation" in text
    assert f"sums of four {four.places} set" in text
    assert "patterns 40 planned; 31 = 2^5 - 1 differ from reset" in text
    assert "twins between chains 5 5" in text
    assert "smallest separation within the chains 3 1" in text


def test_without_chains_there_is_no_section() -> None:
    """Neither chains nor seeds: nothing is said, and the JSON says null."""
    facts = replace(small_facts(), array=None)
    assert screen(facts) == ""
    assert array_part(None, 8) == {"array": None, "without_shifter": None, "seeds": []}


def test_seeds_stand_in_a_table() -> None:
    """State, period, the nearest seed and what the tests share; a seed in lock-up is marked."""
    seeds = {"zero": 0, "first": 5, "second": state_after(MACHINE, 5, 8)}
    facts = facts_of(None, seeds=seeds, patterns=Patterns(5, 4))
    lines = screen(facts).splitlines()
    assert "zero 00 1 - - 1 -" in lines
    assert "in lock-up" in lines
    assert "first 05 31 second 8 31 3" in lines
    assert "2 pairs of seeds run through different cycles and never meet." in lines
    told = array_part(facts.array, 5)["seeds"]
    assert [seed["name"] for seed in told] == ["zero", "first", "second"]
    assert told[1]["reaches"] == [{"seed": "second", "cycles": "8", "overlap": "12", "repeated_patterns": "3"}]
    assert told[0]["lock_up_registers"] == [0]


def test_the_json_has_counts_examples_and_cells() -> None:
    """Cells are listed where they are known, not where the chain is a length; counts are decimal strings."""
    cells = tuple(ScanCell(f"u{k}", k, k == 2) for k in range(1, 6))
    told = array_part(facts_of(ScanArray((Chain("c0", 9), Chain("c1", 5, cells)), "netlist"), relations=4).array, 5)
    array = told["array"]
    assert [(chain["length"], len(chain["cells"])) for chain in array["chains"]] == [(9, 0), (5, 5)]
    assert array["chains"][1]["cells"][1] == {"name": "u2", "delay": 2, "inverted": True}
    assert (array["twins"]["count"], array["twins"]["nearest"]) == ("5", "3")
    example = array["twins"]["examples"][0]
    assert (example["cells"], example["complement"]) == ([["c0", "4"], ["c1", "u1"]], True)
    assert array["relations"]["three"]["complete"] is True
    assert len(array["relations"]["three"]["examples"][0]["cells"]) == 3
    assert array["distinct_patterns"] is None
    assert told["without_shifter"]["twins"] == "5"
    assert told["without_shifter"]["network"]["two_input_xors"] == 0
    json.dumps(told, allow_nan=False)
