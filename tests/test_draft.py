"""The draft from text to plan: where a register is clear, the plan audits as it stands and finds the truth."""

import random
import tomllib
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path

import pytest

from auditor.audit import audit
from auditor.cli import run
from auditor.drafting.text import plan_text
from auditor.plan_file import read_plan
from auditor.report.facts import AuditFacts
from tests.support import machines
from tests.support.audits import channel_names
from tests.support.buried import bury
from tests.support.drafts import drafted, mode_of, proposed
from tests.support.gates import ANYTHING, CELLS, Block, Recipe, draw
from tests.support.machines import Machine

ROOT = Path(__file__).parents[1]
SAMPLES = ROOT / "sample_netlists"
LIBRARIES = ROOT.parent / "shared" / "cells"

RECIPES = {
    "plain": Recipe(),
    "enable": Recipe(enable="multiplexer"),
    "enable in gates": Recipe(enable="gates", forms=("xor_gate", "nands")),
    "scan": Recipe(scan_multiplexer=True),
    "enable and scan": Recipe(enable="gates", scan_multiplexer=True, reset="some"),
    "every flip-flop": Recipe(all_storage=True, reset="some", complemented=True),
    "gated clock": Recipe(clock="gated", enable="multiplexer"),
    "inverted clock": Recipe(clock="inverted", all_storage=True, half_cycles=True),
    "anything": ANYTHING,
}


def kept_and_audited(folder: Path, netlist: Path, cells: Path) -> AuditFacts:
    """Draft by the command line, keep the plan and audit it without editing."""
    plan = folder / "plan.toml"
    with pytest.MonkeyPatch.context() as patch, plan.open("w") as kept:
        patch.setattr("sys.stdout", kept)
        assert run(["draft", str(netlist), "--cells", str(cells)]) == 0
    return audit(read_plan(plan))


def described(facts: AuditFacts, name: str) -> tuple[frozenset[str], int, int]:
    """Return a channel by its taps, constant and pipeline stages."""
    machine = facts.extraction.machine
    assert machine is not None
    (row,) = (row for row in machine.observed if row.name == name)
    assert row.row is not None
    return frozenset(machine.storage[tap.element] for tap in row.taps), row.row.constant, row.pipeline_stages


@pytest.mark.parametrize("sample", sorted(path.stem for path in SAMPLES.glob("*.toml")))
def test_the_draft_of_a_sample_audits_as_its_plan_does(sample: str, tmp_path: Path) -> None:
    """Registers, channels and taps of a sample under its draft are those under the plan that a person wrote.

    A plan of several modes is met in one of them; a register that its plan refuses is met without the gate.
    """
    stated = read_plan(SAMPLES / f"{sample}.toml")
    facts = kept_and_audited(tmp_path, stated.netlists[0], stated.cells[0])
    assert facts.extraction.machine is not None
    truths = [audit(plan) for plan in stated.by_mode().values()]
    if truths[0].extraction.machine is None:
        assert facts.cone.forced
        truths = [audit(replace(stated, mode=facts.mode))]
    matching = [
        truth for truth in truths if truth.phases and facts.phases and truth.phases.registers == facts.phases.registers
    ]
    assert matching
    names = [channel.name for channel in matching[0].cone.channels]
    assert sorted(channel_names(facts)) == sorted(names)
    assert [described(facts, name) for name in names] == [described(matching[0], name) for name in names]


@pytest.mark.skipif(not LIBRARIES.exists(), reason="the published cell libraries are not here")
@pytest.mark.parametrize("netlist", sorted(path.stem for path in (ROOT / "tests" / "mapped").glob("*.v")))
def test_the_draft_of_a_mapped_block_audits(netlist: str, tmp_path: Path) -> None:
    """A block mapped to a published library passes under its draft, with all channels that it has."""
    library = "sky130hd_tt.lib.gz" if "sky130hd" in netlist else "sg13g2_stdcell_typ_1p20V_25C.lib.gz"
    facts = kept_and_audited(tmp_path, ROOT / "tests" / "mapped" / f"{netlist}.v", LIBRARIES / library)
    assert facts.verdict == "pass"
    assert len(facts.cone.channels) == (12 if "salinity" in netlist else 16)
    assert facts.phases is not None
    assert [register.primitive for register in facts.phases.registers] == [True]


def drawn(recipe: Recipe, seed: int) -> Block:
    """Draw a random register with random channels: a Fibonacci, a Galois register or any matrix."""
    rng = random.Random(seed)
    size = rng.randint(5, 14)
    tap = rng.randint(1, size - 1)
    machine = (
        machines.fibonacci([size, tap], size),
        machines.galois(sorted({0, size, tap})),
        machines.random_machine(rng, size, 1),
    )[seed % 3]
    rows = tuple(rng.randrange(1, 1 << size) for _ in range(rng.randint(1, 5)))
    machine = Machine(machine.rows, rows, machine.offset, rng.getrandbits(len(rows)))
    return draw(machines.with_pipelines(machine, [rng.randint(0, 2) for _ in rows]), recipe, rng)


@pytest.mark.parametrize("seed", range(3))
@pytest.mark.parametrize("recipe", RECIPES)
def test_the_mode_of_a_random_block_is_found(recipe: str, seed: int, tmp_path: Path) -> None:
    """No drafted constant differs from the drawn mode, and the audit under the draft gives the machine of that mode."""
    block = drawn(RECIPES[recipe], seed)
    found = drafted(tmp_path, block.text, top=block.top)
    assert mode_of(found).items() <= block.mode.items()
    assert set(proposed(found).names) == set(block.channels)
    netlist = tmp_path / "netlist.v"
    plan = tmp_path / "plan.toml"
    plan.write_text(plan_text(found, [str(netlist)], [str(CELLS)]))
    under_draft, truth = audit(read_plan(plan)), audit(replace(read_plan(plan), mode=block.mode))
    assert under_draft.extraction.machine is not None
    assert under_draft.extraction.machine == truth.extraction.machine


@pytest.mark.parametrize("ring", [False, True])
@pytest.mark.parametrize("seed", range(3))
def test_a_generator_is_found_in_a_chip(seed: int, ring: bool, tmp_path: Path) -> None:
    """The register, its mode and its chains are found though scan path, logic and compactor lie around it."""
    buried = bury(seed, ring=ring)
    found = drafted(tmp_path, buried.text)
    mode = mode_of(found)
    assert {name: mode[name] for name in ("scan_en", "load", "clean_n")} == {"scan_en": 0, "load": 0, "clean_n": 1}
    assert proposed(found).names == buried.channels
    assert proposed(found).chain_lengths == (12,) * 6
    (register,) = (found.candidates[k] for k in proposed(found).registers)
    assert register.facts is not None
    assert register.facts.primitive
    assert [c.size for c in found.candidates if c.facts and c.compacts] == [8]
    plan = tmp_path / "plan.toml"
    plan.write_text(plan_text(found, ["netlist.v"], [str(CELLS)]))
    facts = audit(read_plan(plan))
    machine = facts.extraction.machine
    assert machine is not None
    for name, row in zip(buried.channels, buried.machine.channels, strict=True):
        assert described(facts, name)[0] == {f"g{k}_ff" for k in machines.bits_of(row)}


def test_nothing_clear_is_an_answer(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """A counter is no register: exit status 3, a text that is a plan of files only, and what was tried."""
    lines = ["module counter (input clk, output [3:0] q);", "  wire [3:0] n, c, wrap;", "  assign c[0] = 1'b1;"]
    for k in range(4):
        lines += [
            f"  xor2 x{k} (.A(q[{k}]), .B(c[{k}]), .Y(n[{k}]));",
            f"  and2 w{k} (.A(n[{k}]), .B(ten), .Y(wrap[{k}]));",
        ]
        lines.append(f"  ff_plain f{k} (.CK(clk), .D(wrap[{k}]), .Q(q[{k}]));")
    lines += [f"  and2 a{k} (.A(q[{k}]), .B(c[{k}]), .Y(c[{k + 1}]));" for k in range(3)]
    lines += ["  wire ten;", "  nand2 t (.A(q[3]), .B(q[0]), .Y(ten));", "endmodule"]
    netlist = tmp_path / "counter.v"
    netlist.write_text("\n".join([lines[0], "  wire ten;", *(line for line in lines[1:] if line != "  wire ten;")]))
    assert run(["draft", str(netlist), "--cells", str(CELLS)]) == 3
    text = capsys.readouterr().out
    assert set(tomllib.loads(text)) == {"netlist"}
    assert "None is clear" in text


def test_a_draft_is_the_same_every_time(tmp_path: Path) -> None:
    """Two drafts of one chip are the same text."""
    text = bury(5, ring=True).text
    first, second = (plan_text(drafted(tmp_path, text), ["n.v"], ["c.lib"]) for _ in range(2))
    assert first == second


def test_a_draft_never_passes(capsys: pytest.CaptureFixture[str]) -> None:
    """With --use-draft a sound block is undecided, and every guess is listed."""
    sample, cells = SAMPLES / "galois_pipelined.v", SAMPLES / "kelp90.lib"
    assert run(["audit", str(sample), "--cells", str(cells), "--use-draft"]) == 3
    screen = capsys.readouterr().out
    assert "drafted: scan_en = 0" in screen
    assert screen.count("is a channel: ") == 12


def test_what_is_stated_is_not_guessed(capsys: pytest.CaptureFixture[str]) -> None:
    """A constant and channels that are stated are used as they are and not listed as guesses."""
    words = ["audit", str(SAMPLES / "galois_pipelined.v"), "--cells", str(SAMPLES / "kelp90.lib"), "--use-draft"]
    assert run([*words, "--mode", "scan_en=0", "--channels", "so"]) == 0
    assert "drafted" not in capsys.readouterr().out


WRONG: dict[str, tuple[Callable[[Path], list[str]], str]] = {
    "no netlist": (lambda folder: [], "no netlist is given"),  # noqa: ARG005 - one shape for all
    "no such file": (lambda folder: [str(folder / "none.v")], "no such file"),
    "unknown option": (lambda folder: ["--cell", "x"], "no option of auditor draft"),  # noqa: ARG005
    "unknown mode pin": (lambda folder: [str(SAMPLES / "plain_register.v"), "--mode", "q=1"], "does not exist"),  # noqa: ARG005
}


@pytest.mark.parametrize("case", WRONG)
def test_wrong_use_is_told(case: str, tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """Wrong use of the command is exit status 2 with a remedy, and nothing on standard output."""
    words, told = WRONG[case]
    assert run(["draft", *words(tmp_path), "--cells", str(SAMPLES / "kelp90.lib")]) == 2
    said = capsys.readouterr()
    assert told in said.err
    assert "remedy" in said.err
    assert said.out == ""


def test_an_open_mode_names_the_command(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """Where the mode leaves a clock or a next state open, the message names the draft command for these files."""
    sample, cells = SAMPLES / "galois_pipelined.v", SAMPLES / "kelp90.lib"
    command = f"auditor draft {sample} --cells {cells}"
    assert run(["audit", str(sample), "--cells", str(cells)]) == 1
    assert command in capsys.readouterr().err
    gated = tmp_path / "gated.v"
    gated.write_text(
        draw(
            machines.with_channels(machines.fibonacci([7, 6], 7), [[0, 3]]), Recipe(clock="gated"), random.Random(1)
        ).text
    )
    assert run(["audit", str(gated), "--cells", str(CELLS)]) == 2
    assert f"auditor draft {gated} --cells {CELLS}" in capsys.readouterr().err
