"""Cones from a CSV file: their ranks against every state of a small register, and what can be wrong with the file."""

import json
import random
from pathlib import Path

import pytest

from auditor.array.cone_ranks import rank_cones
from auditor.array.given_cones import rank_given_cones
from auditor.array.scan_array import Chain, ScanArray, ScanCell
from auditor.cli import run
from auditor.errors import InputError
from auditor.plan import Patterns, Plan
from tests.array.test_frozen import chain_cells, draw
from tests.support.circuits import under_test
from tests.support.gates import CELLS

NETLIST = """
module block (input ck, output c0, output c1);
  wire q0, q1, q2, q3, fb;
  ff_plain g0 (.CK(ck), .D(fb), .Q(q0)); ff_plain g1 (.CK(ck), .D(q0), .Q(q1));
  ff_plain g2 (.CK(ck), .D(q1), .Q(q2)); ff_plain g3 (.CK(ck), .D(q2), .Q(q3));
  xor2 x0 (.A(q0), .B(q3), .Y(fb));
  xor2 x1 (.A(q0), .B(q2), .Y(c0)); xor2 x2 (.A(q1), .B(q3), .Y(c1));
endmodule
"""
LENGTH = 6


def audited(folder: Path, *words: str, lines: str) -> int:
    """Run the command on the block with these cones; the report goes to report.json."""
    (folder / "block.v").write_text(NETLIST)
    (folder / "cones.csv").write_text(lines)
    common = ["audit", str(folder / "block.v"), "--cells", str(CELLS), "--cones", str(folder / "cones.csv")]
    return run([*common, *words, "--json", str(folder / "report.json")])


def errors(capsys: pytest.CaptureFixture[str]) -> str:
    """Return the troubles that were told, each in a line."""
    return capsys.readouterr().err.replace("\n  remedy: ", "; ")


def load(state: int) -> dict[str, int]:
    """Return what every scan cell holds after the chains were filled, the register at ``state`` before."""
    q = [state >> k & 1 for k in range(4)]
    held: dict[str, int] = {}
    for left in range(LENGTH, 0, -1):
        held |= {f"c0/{left}": q[0] ^ q[2], f"c1/{left}": q[1] ^ q[3]}
        q = [q[0] ^ q[3], q[0], q[1], q[2]]
    return held


def test_ranks_are_those_of_all_states(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """Without names and without [capture]: combinations of 40 drawn cones, and those outside lock-up, one by one."""
    rng, loads = random.Random(5), [load(state) for state in range(16)]
    cones = {f"n{k}": rng.sample(sorted(loads[0]), rng.randint(1, 5)) for k in range(40)}
    lines = "net,cell\n" + "".join(f"{net},{cell}\n" for net, cells in cones.items() for cell in cells)
    audited(tmp_path, "--chain-length", str(LENGTH), lines=lines)
    report = json.loads((tmp_path / "report.json").read_text())
    seen = {net: [tuple(held[cell] for cell in cells) for held in loads] for net, cells in cones.items()}
    assert report["cones"] == [
        {
            "net": net,
            "known_from": "given",
            "size": len(cones[net]),
            "rank": len(set(values)).bit_length() - 1,
            "combinations": str(len(set(values))),
            "outside_lock_up": str(len(set(values[1:]))),
        }
        for net, values in seen.items()
    ]
    short = {net for net, values in seen.items() if len(set(values)) < 1 << len(cones[net])}
    findings = [one for one in report["findings"] if one["slug"] == "cone-short-of-rank"]
    assert {name for one in findings for name in one["where"]} == short
    for one in findings:
        told, total = one["figures"]["never_seen"].split(" = ")
        assert {sum(held[cell] for cell in told.split(" + ")) & 1 for held in loads} == {1 - int(total)}
    assert 5 < len(short) < 35
    assert any(one["role"] == "cones" for one in report["inputs"])
    assert "40 cones with" in capsys.readouterr().out


@pytest.mark.parametrize("seed", range(6))
@pytest.mark.parametrize("launch", ["none", "shift"])
def test_given_cones_rank_as_those_of_the_circuit(tmp_path: Path, seed: int, launch: str) -> None:
    """Given by the names of their scan cells, cones have the sets and the dimension that the circuit gives them."""
    text, _, channels, length, _ = draw(seed)
    made = under_test(tmp_path, text, channels, length)
    facts = rank_cones(made.circuit, made.loading, two_cycles=launch == "shift")
    lines = [f"{c.name},{made.cells[k].name}\n" for c in facts.cones for k in facts.sets[c.cells].cells]
    (tmp_path / "cones.csv").write_text("net,cell\n" + "".join(lines))
    named = [tuple(ScanCell(f"c{i}_{j}", j, False) for j in range(1, length + 1)) for i in range(channels)]
    scan = ScanArray(tuple(Chain(f"si[{i}]", length, cells) for i, cells in enumerate(named)), "file")
    asked = Plan(netlists=(), cone_file=tmp_path / "cones.csv", patterns=Patterns(5, length, launch=launch))
    given = rank_given_cones(asked, made.machine, scan)
    assert given is not None
    assert given.cones.dimension == facts.dimension
    found = [given.cones.sets[cone.cells] for cone in given.cones.cones]
    expected = [facts.sets[cone.cells] for cone in facts.cones]
    assert [(s.size, s.rank, s.occurring, s.constant) for s in found] == [
        (s.size, s.rank, s.occurring, s.constant) for s in expected
    ]


def test_cells_that_the_shift_does_not_fill_are_free(tmp_path: Path) -> None:
    """A scan cell deeper than the shift is no loaded bit of its cone; without cones nothing is asked."""
    logic = "  km_nand3 g (.A(q0), .B(q1), .C(q2), .Y(y)); assign d0 = y; assign d1 = q0; assign d2 = q1;"
    made = under_test(tmp_path, chain_cells(logic, 3), 3, 1)
    (tmp_path / "cones.csv").write_text("net,cell\nn,si[0]/1\nn,si[0]/3\n")
    scan = ScanArray(tuple(Chain(f"si[{i}]", 4) for i in range(3)), "length")
    asked = Plan(netlists=(), cone_file=tmp_path / "cones.csv", patterns=Patterns(5, 2))
    given = rank_given_cones(asked, made.machine, scan)
    assert given is not None
    assert given.names == ("si[0]/1",)
    assert [(cone.name, cone.others) for cone in given.cones.cones] == [("n", 1)]
    assert rank_given_cones(Plan(netlists=()), made.machine, None) is None


def test_wrong_lines_are_told_together(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """Unknown cells, places beyond the chain, repeated and broken lines: each with its place and what to do."""
    lines = "net,cell\nn,c0/1\nn,c0/7\nn,c0/0\nn,c2/1\nn,c0/1\nn\n,c0/1\nm,c1/x\n"
    assert audited(tmp_path, "--chain-length", "6", lines=lines) == 2
    told = errors(capsys)
    for message in (
        "cones.csv:3: c0/7 is no scan cell; give a place from 1 to 6 after c0/",
        "cones.csv:4: c0/0 is no scan cell; give a place from 1 to 6 after c0/",
        "cones.csv:5: c2/1 is no scan cell; name a cell, or its place in a chain as in c0/1",
        "cones.csv:6: scan cell c0/1 stands twice in the cone of n; remove one of the lines",
        "cones.csv:7: the line is not a net and a scan cell; write net,cell",
        "cones.csv:8: the line is not a net and a scan cell; write net,cell",
        "cones.csv:9: c1/x is no scan cell; give a place from 1 to 6 after c1/",
    ):
        assert message in told


@pytest.mark.parametrize(
    ("lines", "message"),
    [
        ("", "cones.csv:1: the file of the cones is empty; write net,cell, then a line for each scan cell of a cone"),
        ("cell,net\nc0/1,n\n", "cones.csv:1: the cones have the header cell,net; write net,cell, then"),
        ("net,cell\n", "cones.csv:1: the file names no cone; add a line for each scan cell of a cone"),
        ('net,cell\n"n,c0/1\n', "cones.csv: the cones are no CSV:"),
    ],
)
def test_a_wrong_file_is_told(tmp_path: Path, lines: str, message: str, capsys: pytest.CaptureFixture[str]) -> None:
    """An empty file, another header, a header alone, and what is no CSV."""
    assert audited(tmp_path, "--chain-length", "6", lines=lines) == 2
    assert message in errors(capsys)


def test_names_are_suggested_and_several_chains_told(tmp_path: Path) -> None:
    """A mistyped name gets a near one; a place behind a channel with two chains is ambiguous."""
    logic = "  km_nand3 g (.A(q0), .B(q1), .C(q2), .Y(y)); assign d0 = y; assign d1 = q0; assign d2 = q1;"
    made = under_test(tmp_path, chain_cells(logic, 3), 3, 1)
    chains = tuple(Chain("si[0]", 1, (ScanCell(f"u_core.r{k}_ff", 1, False),)) for k in range(2))
    (tmp_path / "cones.csv").write_text("net,cell\nn,u_core.r1_f\nn,si[0]/1\n")
    asked = Plan(netlists=(), cone_file=tmp_path / "cones.csv")
    with pytest.raises(InputError) as caught:
        rank_given_cones(asked, made.machine, ScanArray(chains, "netlist"))
    assert [str(trouble).replace(f"{tmp_path}/", "") for trouble in caught.value.troubles] == [
        "cones.csv:2: u_core.r1_f is no scan cell; did you mean u_core.r1_ff or u_core.r0_ff?",
        "cones.csv:3: si[0] feeds 2 chains; give the scan cell by its name",
    ]


def test_chains_and_file_must_be_there(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """Cones without chains, and a file that is not there, are wrong use."""
    assert audited(tmp_path, lines="net,cell\nn,c0/1\n") == 2
    assert "cones are given, but the chains are not known; tell the chains:" in errors(capsys)
    gone = ("--chain-length", "6", "--cones", str(tmp_path / "none.csv"))
    assert audited(tmp_path, *gone, lines="net,cell\n") == 2
    assert "the cones cannot be read: No such file or directory; give --cones a CSV file" in errors(capsys)
