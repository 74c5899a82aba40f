"""What is taken from plan and chains before the circuit under test is looked at."""

from dataclasses import replace
from pathlib import Path

import pytest

from auditor.array.examine import examine_capture, loaded_cells, planned_test
from auditor.array.scan_array import Chain, ScanArray, ScanCell
from auditor.errors import InputError
from auditor.machine.machine import ObservedRow
from auditor.plan import Patterns, Plan
from tests.support.circuits import under_test
from tests.support.cones import library
from tests.support.mapped_circuit import chip

TEXT = chip((5, 3), [[0], [1]], 3, 30, 3, widths=(3, 4), outputs=6)
CHAINS = tuple(Chain(f"si[{i}]", 3, tuple(ScanCell(f"c{i}_{j}", j, False) for j in range(1, 4))) for i in range(2))
PATTERNS = Patterns(10, 3)


def plan(**stated: object) -> Plan:
    return Plan(netlists=(), **stated)  # type: ignore[arg-type]


def test_nothing_is_examined_unasked(tmp_path: Path) -> None:
    """Without constants of capture, none included, nobody asks; with them cones and nets are there."""
    made = under_test(tmp_path, TEXT, 2, 3)
    scan, told = ScanArray(CHAINS, "file"), list[str]()
    assert examine_capture(plan(), made.cone.netlist, library(), made.machine, scan, told.append) is None
    assert not told
    asked = plan(capture={"scan_en": 0}, patterns=PATTERNS)
    facts = examine_capture(asked, made.cone.netlist, library(), made.machine, scan, told.append)
    assert facts is not None
    assert facts.cones.cones
    assert facts.nets.examined
    assert facts.nets.patterns == 10
    assert not facts.cones.two_cycles
    assert told == ["circuit under test", "ranks of cones", "frozen nets"]


def test_a_launch_by_shift_asks_for_two_cycles(tmp_path: Path) -> None:
    """The plan's launch decides whether cones see one load or two."""
    made = under_test(tmp_path, TEXT, 2, 3)
    asked = plan(capture={}, patterns=replace(PATTERNS, launch="shift"))
    scan = ScanArray(CHAINS, "file")
    facts = examine_capture(asked, made.cone.netlist, library(), made.machine, scan, lambda _: None)
    assert facts is not None
    assert facts.cones.two_cycles


@pytest.mark.parametrize("scan", [None, ScanArray((Chain("si[0]", 3),), "length")])
def test_scan_cells_must_be_known_by_name(tmp_path: Path, scan: ScanArray | None) -> None:
    """A circuit under test cannot be seen from lengths alone."""
    made = under_test(tmp_path, TEXT, 2, 3)
    with pytest.raises(InputError, match="no scan cell is known by name; give --scan-outputs, or --chains"):
        examine_capture(plan(capture={}), made.cone.netlist, library(), made.machine, scan, lambda _: None)


def test_only_cells_that_the_shift_fills_are_loaded(tmp_path: Path) -> None:
    """Cells deeper than the shift, and those of a refused channel, hold nothing of the generator."""
    machine = under_test(tmp_path, TEXT, 2, 3).machine
    scan = ScanArray(CHAINS, "file")
    assert [cell.name for cell in loaded_cells(scan, machine, 2)] == ["c0_1", "c0_2", "c1_1", "c1_2"]
    first, second = machine.observed
    refused = replace(machine, observed=(ObservedRow(first.name, None, None, (), 0, 0), second))
    cells = loaded_cells(scan, refused, None)
    assert [cell.name for cell in cells] == ["c1_1", "c1_2", "c1_3"]
    assert {cell.channel for cell in cells} == {1}


def test_planned_patterns_start_where_the_generator_runs(tmp_path: Path) -> None:
    """Seeds come before reset; a start in lock-up, an unknown one, or a free input leaves no sequence to simulate."""
    machine = under_test(tmp_path, TEXT, 2, 3).machine
    asked = plan(patterns=PATTERNS)
    from_reset = planned_test(asked, machine)
    assert from_reset is not None
    assert from_reset.starts == (machine.reset_state,)
    seeded = planned_test(plan(patterns=PATTERNS, seeds={"a": 3, "stuck": 0, "b": 5}), machine)
    assert seeded is not None
    assert seeded.starts == (3, 5)
    assert planned_test(plan(), machine) is None
    assert planned_test(asked, replace(machine, reset_known=machine.reset_known & ~1)) is None
    assert planned_test(asked, replace(machine, reset_state=0)) is None
    assert planned_test(asked, replace(machine, input_matrix=(1, 0, 0, 0, 0))) is None
