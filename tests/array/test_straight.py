"""The register without its phase shifter: which elements feed the chains, and what the network costs in gates."""

import re
from pathlib import Path

import pytest

from auditor.array.scan_array import Chain
from auditor.array.straight import straight_chains, straight_elements, straight_machine
from auditor.audit import audit
from auditor.cells.read import read_cells
from auditor.machine.machine import Tap
from auditor.plan_file import read_plan
from tests.support.evidence import evidence
from tests.support.linear_machines import fibonacci, linear_machine

SAMPLES = Path(__file__).parents[2] / "sample_netlists"


def test_only_registers_that_channels_tap_take_part() -> None:
    """Two registers beside each other, of which the channels tap the second; a pipeline element is no register."""
    first, second = fibonacci((3, 1, 0)), [row << 3 for row in fibonacci((4, 1, 0))]
    machine = linear_machine([*first, *second, 1 << 4], [(1 << 4, 0), (1 << 6 | 1 << 3, 0)])
    machine = evidence(machine).machine
    assert machine is not None
    assert machine.observed[0].taps == (Tap(4, 0),)
    assert straight_elements(machine) == [3, 4, 5, 6]


def test_chains_take_the_elements_in_turn() -> None:
    """Five chains on three elements: the fourth is fed as the first."""
    machine = linear_machine(fibonacci((3, 1, 0)), [(1, 0)] * 5)
    chains = straight_chains(machine, [0, 1, 2], [Chain(f"c{k}", k + 1) for k in range(5)])
    assert [chain.channel for chain in chains] == ["q[0]", "q[1]", "q[2]", "q[0]", "q[1]"]
    assert [chain.length for chain in chains] == [1, 2, 3, 4, 5]
    rows = [one.row.state for one in straight_machine(machine, [0, 2]).observed if one.row]
    assert rows == [1, 4]


@pytest.mark.parametrize("sample", ["phase_shifter", "phase_shifter_nand"])
def test_the_network_is_counted_by_function_and_weighed_by_gates(sample: str) -> None:
    """Sixteen channels of three taps are 32 two-input XORs, whatever gates; register and network are all the area."""
    facts = audit(read_plan(SAMPLES / f"{sample}.toml"))
    assert facts.array is not None
    bare, cells = facts.array.bare, read_cells((SAMPLES / "kelp90.lib",)).cells
    assert bare is not None
    assert bare.xors == 32
    assert bare.area is not None
    assert bare.register_area is not None
    instances = re.findall(r"^  (km_\w+) ", (SAMPLES / f"{sample}.v").read_text(), re.MULTILINE)
    assert bare.area + bare.register_area == pytest.approx(sum(cells[name].area or 0 for name in instances))
    if sample == "phase_shifter":
        assert bare.area == 32 * (cells["km_xor2"].area or 0)
