"""Published registers and published counts through the whole audit: scan chains, seeds and what a shifter buys."""

import json
import random
from itertools import combinations
from math import gcd
from pathlib import Path

from auditor.audit import audit
from auditor.plan import Patterns
from auditor.plan_file import read_plan
from auditor.report.facts import AuditFacts
from auditor.report.json_report import as_json
from tests.support.audits import audit_block, slugs
from tests.support.gates import CELLS, Recipe, draw
from tests.support.machines import fibonacci, with_channels
from tests.support.published import BEIDOU_B1I, BEIDOU_G2_STAGES, GPS_CA, GPS_G2_STAGES


def shared(apart: int, length: int, period: int) -> int:
    """Return the pairs of scan cells that two chains share whose streams are so far apart."""
    return sum(max(0, length - abs(e)) for e in (apart, apart - period))


def audited(
    folder: Path, stages: tuple[int, ...], size: int, selectors: list[tuple[int, ...]], length: int
) -> AuditFacts:
    """Audit a register whose channels add the stages of each selector, with chains of one length."""
    machine = with_channels(fibonacci(stages, size), [[stage - 1 for stage in taps] for taps in selectors])
    block = draw(machine, Recipe(), random.Random(37))
    return audit_block(folder, block, chain_length=length, patterns=Patterns(200, length))


def test_gps_selectors_as_a_shifter_for_37_chains(tmp_path: Path) -> None:
    """IS-GPS-200, Table 3-Ia: twins follow from the printed code delays; 1023 loads of 50 clocks differ."""
    facts = audited(tmp_path, GPS_G2_STAGES, 10, [taps for taps, _ in GPS_CA.values()], 50)
    assert facts.array is not None
    twins, loads = facts.array.twins, facts.array.loads
    delays = [delay for _, delay in GPS_CA.values()]
    counts = [shared((a - b) % 1023, 50, 1023) for a, b in combinations(delays, 2)]
    assert twins is not None
    assert (twins.pairs, twins.chain_pairs, twins.nearest) == (sum(counts), sum(map(bool, counts)), 0)
    assert loads is not None
    assert (loads.distinct, loads.exact) == (1023 // gcd(1023, 50), True)
    assert "scan-cells-twinned" in slugs(facts)


def test_beidou_selectors_as_a_shifter_for_63_chains(tmp_path: Path) -> None:
    """B1I interface control document: 17, 74 and 245 of 1953 pairs of channels are closer than 2, 10 and 100 chips."""
    advances = [advance for _, advance in BEIDOU_B1I.values()]
    assert len(list(combinations(advances, 2))) == 1953
    for length, pairs in ((2, 17), (10, 74), (100, 245)):
        facts = audited(tmp_path, BEIDOU_G2_STAGES, 11, [taps for taps, _ in BEIDOU_B1I.values()], length)
        assert facts.array is not None
        assert facts.array.twins is not None
        assert facts.array.twins.chain_pairs == pairs
        counts = [shared((a - b) % 2047, length, 2047) for a, b in combinations(advances, 2)]
        assert facts.array.twins.pairs == sum(counts)


def test_a_phase_shifter_takes_the_twins_away(tmp_path: Path) -> None:
    """Sixteen chains fed straight from neighbouring stages share bits; three-tap channels need 2 XORs each."""
    rng = random.Random(16)
    machine = with_channels(fibonacci((16, 15, 13, 4), 16), [rng.sample(range(16), 3) for _ in range(8)])
    facts = audit_block(tmp_path, draw(machine, Recipe(), rng), chain_length=30)
    assert facts.array is not None
    bare, twins = facts.array.bare, facts.array.twins
    assert bare is not None
    assert twins is not None
    assert bare.twins is not None
    neighbours = sum((8 - d) * (30 - d) for d in range(1, 8))
    assert (bare.elements, bare.twins.pairs, bare.twins.nearest) == (8, neighbours, 1)
    assert twins.pairs < bare.twins.pairs
    assert bare.xors == 16


PLAN = """\
[netlist]
files = ["block.v"]
cells = ["{cells}"]

[mode]
{mode}

[channels]
names = [{channels}]

[chains]
file = "chains.csv"

[patterns]
count = 100
shift_cycles = 9
twin_window = 3

[array]
relations = 4

[seeds]
good = "1f"
other = "2b"
stuck = "0"
"""


def test_a_whole_plan_from_files_to_json(tmp_path: Path) -> None:
    """Chains from a file, a window across patterns, sums of four, seeds: all of it arrives in the report."""
    machine = with_channels(fibonacci((9, 5), 9), [[0, 3], [1], [2, 4, 5]])
    block = draw(machine, Recipe(), random.Random(9))
    (tmp_path / "block.v").write_text(block.text)
    names = ", ".join(f'"{name}"' for name in block.channels)
    mode = "\n".join(f'"{net}" = {value}' for net, value in block.mode.items())
    (tmp_path / "plan.toml").write_text(PLAN.format(cells=CELLS.as_posix(), mode=mode, channels=names))
    first, second, _ = block.channels
    lines = [f"{first},u{k},{k},{k % 2}" for k in range(1, 10)] + [f"{second},v{k},{k + 1},0" for k in range(1, 6)]
    (tmp_path / "chains.csv").write_text("\n".join(["channel,cell,delay,inverted", *lines]))
    facts = audit(read_plan(tmp_path / "plan.toml"))
    report = as_json({"": facts})
    array = report["array"]
    assert [chain["length"] for chain in array["chains"]] == [9, 5]
    assert array["chains"][0]["cells"][1] == {"name": "u2", "delay": 2, "inverted": False}
    assert array["known_from"] == "file"
    assert array["relations"]["four"]["complete"]
    assert array["twins"]["across_patterns"]["window"] == 3
    assert report["without_shifter"]["network"]["two_input_xors"] == 3
    assert [seed["lock_up_registers"] for seed in report["seeds"]] == [[], [], [0]]
    assert {"path": str(tmp_path / "chains.csv"), "role": "chains"}.items() <= next(
        source for source in report["inputs"] if source["role"] == "chains"
    ).items()
    assert {"seed-in-lock-up", "seeds-overlap"} <= slugs(facts)
    json.dumps(report, allow_nan=False)
