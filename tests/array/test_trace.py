"""Chains traced in gates, held against the gates simulated cycle by cycle."""

import random
from pathlib import Path

import numpy as np
import pytest

from auditor.array.scan_array import Chain, ScanArray
from auditor.array.trace import trace_chains
from auditor.cells.read import read_cells
from auditor.cone.cone import Cone
from auditor.cone.extract import extract_cone
from auditor.errors import InputError
from auditor.netlist.flatten import flatten
from auditor.replay.simulator import Simulator
from auditor.verilog.read import read_verilog
from tests.support.gates import CELLS

GENERATOR = """
module block (input ck, input ck2, input se, input pi, output so0, output so1, output mixed);
  wire q0, q1, q2, q3, fb, c0, c1;
  ff_plain g0 (.CK(ck), .D(fb), .Q(q0)); ff_plain g1 (.CK(ck), .D(q0), .Q(q1));
  ff_plain g2 (.CK(ck), .D(q1), .Q(q2)); ff_plain g3 (.CK(ck), .D(q2), .Q(q3));
  xor2 x0 (.A(q0), .B(q3), .Y(fb));
  xor2 x1 (.A(q0), .B(q2), .Y(c0)); xor2 x2 (.A(q1), .B(q3), .Y(c1));
"""
MODE = {"se": 1}
SHIFTS = 40


def cones(
    folder: Path, chains: str, outputs: tuple[str, ...], mode: dict[str, int], channels: tuple[str, ...] = ("c0", "c1")
) -> tuple[Cone, Cone]:
    """Return the cones of the scan outputs and of the channels."""
    path = folder / "block.v"
    path.write_text(GENERATOR + chains + "\nendmodule\n")
    library = read_cells((CELLS,))
    netlist = flatten(read_verilog((path,)), None, library.cells)
    return extract_cone(netlist, library, mode, outputs), extract_cone(netlist, library, mode, channels)


def traced(folder: Path, chains: str, outputs: tuple[str, ...] = ("so0",), mode: dict[str, int] = MODE) -> ScanArray:
    """Return the chains, every scan cell held against the simulated gates."""
    behind, cone = cones(folder, chains, outputs, mode)
    array = trace_chains(behind, cone)
    _check(behind, cone, array.chains)
    return array


def _check(behind: Cone, cone: Cone, chains: tuple[Chain, ...]) -> None:
    """Run the gates and compare what each cell stores with what its channel showed ``delay`` cycles before."""
    simulator = Simulator(behind, read_cells((CELLS,)), 1)
    draw = np.random.default_rng(5)
    rising = behind.clock_edge == "rising"
    simulator.toggle(0 if rising else 1)
    simulator.values[: len(behind.elements)] = draw.integers(0, 1 << 63, (len(behind.elements), 1), dtype=np.uint64)
    used = {chain.channel for chain in chains}
    wires = {channel.name: channel.wire for channel in cone.channels if channel.name in used}
    shown: dict[str, list[int]] = {name: [] for name in wires}
    for cycle in range(SHIFTS):
        simulator.settle()
        for name, wire in wires.items():
            shown[name].append(int(simulator.values[simulator.slots[wire], 0]))
        for chain in chains:
            for cell in chain.cells:
                if cycle >= cell.delay + len(behind.elements):
                    (element,) = (one for one in behind.elements if one.name == cell.name)
                    held = int(simulator.values[simulator.slots[element.wire], 0])
                    wanted = shown[chain.channel][cycle - cell.delay] ^ ((1 << 64) - 1 if cell.inverted else 0)
                    assert held == wanted, f"{cell.name} in cycle {cycle}"
        simulator.toggle(1 if rising else 0)
        simulator.toggle(0 if rising else 1)


def told(array: ScanArray) -> list[tuple[str, list[tuple[str, int, bool]]]]:
    """Return channel and cells of every chain."""
    return [(chain.channel, [tuple(cell) for cell in chain.cells]) for chain in array.chains]


def test_scan_multiplexers_and_inversions_are_passed(tmp_path: Path) -> None:
    """Scan flip-flops, a scan multiplexer of gates, an inverter and a complementary output."""
    chains = """
  wire a0, a1n, a1, m, n;
  ff_scan s0 (.CK(ck), .D(pi), .SI(c0), .SE(se), .Q(a0));
  inv i0 (.A(a0), .Y(n));
  ff_scan s1 (.CK(ck), .D(pi), .SI(n), .SE(se), .QN(a1n));
  mux2 m0 (.A(pi), .B(a1n), .S(se), .Y(m));
  ff_plain s2 (.CK(ck), .D(m), .Q(a1));
  buffer b0 (.A(a1), .Y(so0));"""
    assert told(traced(tmp_path, chains)) == [("c0", [("s0", 1, False), ("s1", 2, True), ("s2", 3, False)])]


def test_lock_up_latches_and_the_other_edge_count_as_half_cycles(tmp_path: Path) -> None:
    """A latch open in the clock's low half adds no cycle; a cell of the falling edge has its neighbour's bit."""
    chains = """
  wire a, b, l, d, e;
  ff_plain s0 (.CK(ck), .D(c0), .Q(a));
  latch_low k0 (.G(ck), .D(a), .Q(l));
  ff_plain s1 (.CK(ck), .D(l), .Q(b));
  ff_falling s2 (.CK(ck), .D(b), .Q(d));
  ff_falling s3 (.CK(ck), .D(d), .Q(e));
  ff_plain s4 (.CK(ck), .D(e), .Q(so0));"""
    found = told(traced(tmp_path, chains))
    assert [name for name, _, _ in found[0][1]] == ["s0", "s1", "s2", "s3", "s4"]
    assert [delay for _, delay, _ in found[0][1]] == [1, 2, 2, 3, 4]


def test_a_first_cell_of_the_other_edge_sees_the_register_moved(tmp_path: Path) -> None:
    """It takes what the channel will show in the next cycle: delay 0 with the clock parked."""
    chains = """
  wire a;
  ff_falling s0 (.CK(ck), .D(c0), .Q(a));
  ff_plain s1 (.CK(ck), .D(a), .Q(so0));"""
    assert [delay for _, delay, _ in told(traced(tmp_path, chains))[0][1]] == [0, 1]


def test_a_compactor_is_the_stop_and_a_channel_may_feed_two_chains(tmp_path: Path) -> None:
    """Three chains behind an XOR tree, two of them from one channel."""
    chains = """
  wire a, b, d, t;
  ff_plain s0 (.CK(ck), .D(c0), .Q(a)); ff_plain s1 (.CK(ck), .D(c1), .Q(b));
  ff_plain s2 (.CK(ck), .D(c0), .Q(d));
  xor2 y0 (.A(a), .B(b), .Y(t)); xnor2 y1 (.A(t), .B(d), .Y(so0));"""
    found = told(traced(tmp_path, chains))
    assert sorted(found) == [("c0", [("s0", 1, False)]), ("c0", [("s2", 1, False)]), ("c1", [("s1", 1, False)])]


@pytest.mark.parametrize("seed", range(25))
def test_random_chains_hold_what_the_gates_hold(tmp_path: Path, seed: int) -> None:
    """Cells of both edges, latches, inverters and complementary outputs in any order."""
    rng = random.Random(seed)
    lines, outputs = [], []
    for number, channel in enumerate(("c0", "c1")):
        before = channel
        for k in range(rng.randint(1, 8)):
            wire, cell = f"w{number}_{k}", f"s{number}_{k}"
            if rng.random() < 0.3:
                lines.append(f"wire {wire}_i; inv i{number}_{k} (.A({before}), .Y({wire}_i));")
                before = f"{wire}_i"
            kind = rng.choice(("ff_plain", "ff_plain", "ff_falling", "latch_low", "latch_high"))
            pin, output = ("G", "Q") if "latch" in kind else ("CK", rng.choice(("Q", "QN")))
            lines.append(f"wire {wire}; {kind} {cell} (.{pin}(ck), .D({before}), .{output}({wire}));")
            before = wire
        lines.append(f"wire e{number}; ff_plain t{number} (.CK(ck), .D({before}), .Q(e{number}));")
        outputs.append(f"e{number}")
    array = traced(tmp_path, "\n".join(lines), tuple(outputs))
    assert [chain.channel for chain in array.chains] == ["c0", "c1"]


def test_cycles_are_counted_as_the_generator_counts_them(tmp_path: Path) -> None:
    """A small register of the other edge feeds the only chain that is traced: its cycle is still the large one's."""
    chains = """
  wire r0, r1, rf, a, b;
  ff_falling h0 (.CK(ck), .D(rf), .Q(r0)); ff_falling h1 (.CK(ck), .D(r0), .Q(r1));
  xor2 x4 (.A(r0), .B(r1), .Y(rf));
  ff_falling s0 (.CK(ck), .D(r1), .Q(a)); ff_plain s1 (.CK(ck), .D(a), .Q(b));
  ff_falling s2 (.CK(ck), .D(b), .Q(so0));"""
    behind, cone = cones(tmp_path, chains, ("so0",), MODE, ("c0", "r1"))
    assert (behind.clock_edge, cone.clock_edge) == ("falling", "rising")
    (chain,) = trace_chains(behind, cone).chains
    # At the rising edge that opens a cycle s1 takes what s0 holds; s0 and s2 follow half a cycle later.
    assert [(cell.name, cell.delay) for cell in chain.cells] == [("s0", 1), ("s1", 2), ("s2", 2)]


WRONG = {
    "not shifting": (
        "ff_scan s0 (.CK(ck), .D(pi), .SI(c0), .SE(se), .Q(so0));",
        {},
        "scan cell s0 does not shift under the mode: it takes a function of se, c0, pi",
    ),
    "other source": (
        "wire a; ff_plain s0 (.CK(ck), .D(pi), .Q(a)); ff_plain s1 (.CK(ck), .D(a), .Q(so0));",
        MODE,
        "the chain that ends at s1 begins at pi, which is no channel",
    ),
    "gate inside": (
        "wire a, b; ff_plain s0 (.CK(ck), .D(c0), .Q(a)); and2 n0 (.A(a), .B(pi), .Y(b)); "
        "ff_plain s1 (.CK(ck), .D(b), .Q(so0));",
        MODE,
        "in the chain that ends at s1 the gate n0 adds or selects between several nets",
    ),
    "ring": (
        "wire a, b, m; ff_plain s0 (.CK(ck), .D(b), .Q(a)); ff_plain s1 (.CK(ck), .D(a), .Q(b)); buffer b0 (.A(b), "
        ".Y(so0)); ff_plain s2 (.CK(ck), .D(c0), .Q(m));",
        MODE,
        "the chain that ends at s1 closes on itself and no channel feeds it",
    ),
}


@pytest.mark.parametrize("case", WRONG)
def test_what_is_no_chain_is_named(tmp_path: Path, case: str) -> None:
    """The cell or the gate at which the way back ends is told."""
    chains, mode, found = WRONG[case]
    with pytest.raises(InputError) as caught:
        trace_chains(*cones(tmp_path, chains, ("so0",), mode))
    assert [trouble.found for trouble in caught.value.troubles] == [found]


def test_a_clock_that_is_not_the_generators_is_refused_by_name(tmp_path: Path) -> None:
    """Both clocks and an element of each are named."""
    with pytest.raises(InputError) as caught:
        cones(tmp_path, "ff_plain s0 (.CK(ck2), .D(c0), .Q(so0));", ("so0",), MODE)
    (trouble,) = caught.value.troubles
    assert trouble.found == "2 clocks inside the cone: ck (4 elements, such as g0), ck2 (1 elements, such as s0)"
