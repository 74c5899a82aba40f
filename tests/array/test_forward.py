"""Chains traced from the channels on, held against the trace back from the scan outputs that the netlist has."""

import random
from pathlib import Path

import pytest

from auditor.array.forward import chain_ends
from auditor.array.scan_array import ScanArray
from auditor.array.trace import trace_chains
from auditor.audit import audit
from auditor.cells.read import read_cells
from auditor.cone.extract import extract_cone
from auditor.cone.wiring import connect
from auditor.errors import InputError
from auditor.netlist.flatten import flatten
from auditor.plan import Options, merge
from auditor.plan_file import read_plan
from auditor.verilog.read import read_verilog
from tests.support.gates import CELLS

SAMPLES = Path(__file__).parents[2] / "sample_netlists"

# The channels are c0, c1 and q0: the last is a register element itself, which the next one reads.
GENERATOR = """
module block (input ck, input ck2, input se, input pi, output so0, output so1, output so2);
  wire q0, q1, q2, q3, fb, c0, c1;
  ff_plain g0 (.CK(ck), .D(fb), .Q(q0)); ff_plain g1 (.CK(ck), .D(q0), .Q(q1));
  ff_plain g2 (.CK(ck), .D(q1), .Q(q2)); ff_plain g3 (.CK(ck), .D(q2), .Q(q3));
  xor2 x0 (.A(q0), .B(q3), .Y(fb));
  xor2 x1 (.A(q0), .B(q2), .Y(c0)); xor2 x2 (.A(q1), .B(q3), .Y(c1));
"""
MODE = {"se": 1}


def both_ways(
    folder: Path, chains: str, outputs: tuple[str, ...] = (), mode: dict[str, int] = MODE
) -> tuple[ScanArray, ScanArray | None]:
    """Return the chains traced from the channels on, and back from the outputs where any are given."""
    path = folder / "block.v"
    path.write_text(GENERATOR + chains + "\nendmodule\n")
    library = read_cells((CELLS,))
    netlist = flatten(read_verilog((path,)), None, library.cells)
    cone = extract_cone(netlist, library, mode, ("c0", "c1", "q0"))
    ends = chain_ends(connect(netlist, library), cone)
    forward = trace_chains(extract_cone(netlist, library, mode, ends), cone)
    return forward, trace_chains(extract_cone(netlist, library, mode, outputs), cone) if outputs else None


def refusal(folder: Path, chains: str, mode: dict[str, int] = MODE) -> list[str]:
    """Return what is found wrong with the chains."""
    with pytest.raises(InputError) as caught:
        both_ways(folder, chains, mode=mode)
    return [trouble.found for trouble in caught.value.troubles]


def names(array: ScanArray) -> list[tuple[str, list[str]]]:
    """Return channel and names of the cells of every chain."""
    return [(chain.channel, [cell.name for cell in chain.cells]) for chain in array.chains]


@pytest.mark.parametrize("seed", range(25))
def test_random_chains_are_the_same_both_ways(tmp_path: Path, seed: int) -> None:
    """Cells of both edges, latches, scan cells, multiplexers, inverters and complementary outputs in any order."""
    rng = random.Random(seed)
    lines = []
    for number, channel in enumerate(("c0", "c1", "q0")):
        before = channel
        for k in range(rng.randint(1, 8)):
            wire, cell = f"w{number}_{k}", f"s{number}_{k}"
            if rng.random() < 0.3:
                lines.append(f"wire {wire}_i; inv i{number}_{k} (.A({before}), .Y({wire}_i));")
                before = f"{wire}_i"
            if rng.random() < 0.3:
                lines.append(f"wire {wire}_m; mux2 m{number}_{k} (.A(pi), .B({before}), .S(se), .Y({wire}_m));")
                before = f"{wire}_m"
            kind = rng.choice(("ff_plain", "ff_scan", "ff_falling", "latch_low", "latch_high"))
            clock, output = ("G", "Q") if "latch" in kind else ("CK", rng.choice(("Q", "QN")))
            data = f".D(pi), .SI({before}), .SE(se)" if kind == "ff_scan" else f".D({before})"
            lines.append(f"wire {wire}; {kind} {cell} (.{clock}(ck), {data}, .{output}({wire}));")
            before = wire
        lines.append(f"ff_plain t{number} (.CK(ck), .D({before}), .Q(so{number}));")
    forward, backward = both_ways(tmp_path, "\n".join(lines), ("so0", "so1", "so2"))
    assert forward == backward
    assert [chain.channel for chain in forward.chains] == ["c0", "c1", "q0"]


def test_a_compactor_and_the_circuit_are_the_stop(tmp_path: Path) -> None:
    """Four chains, two of them from one channel, end at the XORs of their last cells; gates of the circuit are none."""
    chains = """
  wire a, b, d, e, t, u, v;
  ff_scan s0 (.CK(ck), .D(u), .SI(c0), .SE(se), .Q(a)); ff_plain s1 (.CK(ck), .D(c1), .Q(b));
  ff_plain s2 (.CK(ck), .D(c0), .Q(d)); ff_scan s3 (.CK(ck), .D(a), .SI(b), .SE(se), .Q(e));
  and2 n0 (.A(a), .B(pi), .Y(u)); ff_plain s4 (.CK(ck), .D(q0), .Q(v));
  xor2 y0 (.A(a), .B(e), .Y(t)); xnor2 y1 (.A(t), .B(d), .Y(so0)); buffer y2 (.A(v), .Y(so1));"""
    forward, backward = both_ways(tmp_path, chains, ("so0", "so1"))
    assert backward is not None
    assert set(forward.chains) == set(backward.chains)
    assert sorted(names(forward)) == [("c0", ["s0"]), ("c0", ["s2"]), ("c1", ["s1", "s3"]), ("q0", ["s4"])]


def test_a_chain_that_branches_is_refused_by_name(tmp_path: Path) -> None:
    """The cell and those that take its bit, one of them through an inverter, are named."""
    chains = """
  wire a, n; ff_plain s0 (.CK(ck), .D(c0), .Q(a)); inv i0 (.A(a), .Y(n));
  ff_plain s1 (.CK(ck), .D(a), .Q(so0)); ff_plain s2 (.CK(ck), .D(n), .Q(so1));"""
    assert refusal(tmp_path, chains) == ["scan cell s0 has several next cells: s1, s2"]


def test_without_a_shifting_cell_there_is_no_chain(tmp_path: Path) -> None:
    """The scan enable is left open: the first cell takes a function of several nets."""
    chain = "ff_scan s0 (.CK(ck), .D(pi), .SI(c0), .SE(se), .Q(so0));"
    assert names(both_ways(tmp_path, chain)[0]) == [("c0", ["s0"])]
    assert refusal(tmp_path, chain, {}) == ["no channel leads into a scan cell"]


def test_a_last_cell_that_nothing_reads_is_refused_by_name(tmp_path: Path) -> None:
    """Its stored bit has no net at which the chain could end."""
    assert refusal(tmp_path, "ff_plain s0 (.CK(ck), .D(c0));") == ["scan cell s0 has no connected output"]


def test_a_clock_that_is_not_the_generators_is_refused_by_name(tmp_path: Path) -> None:
    """As on the way back, both clocks and an element of each are named."""
    assert refusal(tmp_path, "ff_plain s0 (.CK(ck2), .D(c0), .Q(so0));") == [
        "2 clocks inside the cone: ck (4 elements, such as g0), ck2 (1 elements, such as s0)"
    ]


@pytest.mark.parametrize("sample", ["straight", "shifted"])
def test_the_samples_have_the_same_chains_both_ways(sample: str) -> None:
    """Four chains of eight scan cells, whichever way they are traced."""
    plan = read_plan(SAMPLES / f"limpet_alarm_{sample}.toml")
    forward_plan = merge(plan, Options(trace_forward=True))
    assert (forward_plan.scan_outputs, forward_plan.trace_forward) == ((), True)
    forward, backward = audit(forward_plan).array, audit(plan).array
    assert forward is not None
    assert backward is not None
    assert forward.scan is not None
    assert forward.scan == backward.scan
    assert [chain.length for chain in forward.scan.chains] == [8] * 4
