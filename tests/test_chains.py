"""Chains as a user gives them: on the command line, from a file, traced in the gates; and what is wrong with them."""

import json
from pathlib import Path

import pytest

from auditor.cli import run
from tests.support.gates import CELLS

NETLIST = """
module block (input ck, input ck2, input se, input pi, output so);
  wire q0, q1, q2, q3, fb, c0, c1, a0, a1, a2, b0, b1;
  ff_plain g0 (.CK(ck), .D(fb), .Q(q0)); ff_plain g1 (.CK(ck), .D(q0), .Q(q1));
  ff_plain g2 (.CK(ck), .D(q1), .Q(q2)); ff_plain g3 (.CK(ck), .D(q2), .Q(q3));
  xor2 x0 (.A(q0), .B(q3), .Y(fb));
  xor2 x1 (.A(q0), .B(q2), .Y(c0)); xor2 x2 (.A(q1), .B(q3), .Y(c1));
  ff_scan s0 (.CK(ck), .D(pi), .SI(c0), .SE(se), .Q(a0));
  ff_scan s1 (.CK(ck), .D(a0), .SI(a0), .SE(se), .QN(a1));
  ff_scan s2 (.CK(ck), .D(a0), .SI(a1), .SE(se), .Q(a2));
  ff_scan r0 (.CK(ck), .D(pi), .SI(c1), .SE(se), .Q(b0));
  ff_scan r1 (.CK(CLOCK), .D(pi), .SI(b0), .SE(se), .Q(b1));
  xor2 x3 (.A(a2), .B(b1), .Y(so));
endmodule
"""


def audited(folder: Path, *words: str, clock: str = "ck") -> int:
    """Run the command on the block and return the exit status; the report goes to report.json."""
    (folder / "block.v").write_text(NETLIST.replace("CLOCK", clock))
    common = ["audit", str(folder / "block.v"), "--cells", str(CELLS), "--channels", "c0", "--channels", "c1"]
    return run([*common, "--mode", "se=1", *words, "--json", str(folder / "report.json"), "--quiet"])


def report(folder: Path) -> dict[str, object]:
    """Return the report."""
    return json.loads((folder / "report.json").read_text())


def test_chains_are_traced_from_a_scan_output(tmp_path: Path) -> None:
    """Two chains behind an XOR of their ends; c1 is c0 a cycle later, so the overlap shows cell by cell."""
    assert audited(tmp_path, "--scan-outputs", "so") == 1
    array = report(tmp_path)["array"]
    assert array["known_from"] == "netlist"
    assert [(chain["channel"], chain["length"]) for chain in array["chains"]] == [("c0", 3), ("c1", 2)]
    assert array["chains"][0]["cells"] == [
        {"name": "s0", "delay": 1, "inverted": False},
        {"name": "s1", "delay": 2, "inverted": False},
        {"name": "s2", "delay": 3, "inverted": True},
    ]
    assert array["twins"]["count"] == "2"
    assert array["twins"]["examples"][0]["cells"] == [["c0", "s1"], ["c1", "r0"]]
    assert array["twins"]["examples"][0]["complement"] is False
    assert report(tmp_path)["asked"]["scan_outputs"] == ["so"]


def test_chains_are_traced_from_the_channels_on(tmp_path: Path) -> None:
    """The option and the plan's key find the chains that the trace back from the scan output finds."""
    plan = tmp_path / "plan.toml"
    plan.write_text('[chains]\ntrace = "forward"\n')
    arrays = []
    for words in (("--scan-outputs", "so"), ("--trace", "forward"), ("--plan", str(plan))):
        assert audited(tmp_path, *words) == 1
        arrays.append(report(tmp_path)["array"])
    assert arrays[0] == arrays[1] == arrays[2]


def test_a_length_and_a_file_give_the_same_chains(tmp_path: Path) -> None:
    """Lengths from the command line and from a file lead to the same figures."""
    (tmp_path / "chains.csv").write_text("channel,length\nc0,5\nc1,5\n")
    found = []
    for words in (("--chain-length", "5"), ("--chains", str(tmp_path / "chains.csv"))):
        assert audited(tmp_path, *words) == 1
        found.append({key: value for key, value in report(tmp_path)["array"].items() if key != "known_from"})
    assert found[0] == found[1]
    assert any(source["role"] == "chains" for source in report(tmp_path)["inputs"])


@pytest.mark.parametrize(
    ("words", "message"),
    [
        (("--chains", "none.csv"), "the chains cannot be read: No such file or directory"),
        (("--scan-outputs", "sx"), "behind the scan outputs: channel sx does not exist in block"),
        (("--scan-outputs", "c0"), "no scan output leads back to a channel"),
        (("--relations", "5"), "--relations is 5"),
        (("--trace", "backward"), "--trace backward is no way to trace the chains"),
        (("--trace", "forward", "--chain-length", "5"), "the chains are told by --chain-length and by --trace"),
        (("--chains", "a.csv", "--chain-length", "5"), "the chains are told by --chain-length and by --chains"),
    ],
)
def test_what_is_wrong_is_told(
    tmp_path: Path, words: tuple[str, ...], message: str, capsys: pytest.CaptureFixture[str]
) -> None:
    """Exit status 2 and a message."""
    assert audited(tmp_path, *words) == 2
    assert message in capsys.readouterr().err


def test_a_foreign_clock_is_refused_by_name(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """A scan cell on another clock ends the run with both clocks."""
    assert audited(tmp_path, "--scan-outputs", "so", clock="ck2") == 2
    assert (
        "2 clocks inside the cone: ck (8 elements, such as g0), ck2 (1 elements, such as r1)" in capsys.readouterr().err
    )


def test_a_refused_channel_takes_no_part(tmp_path: Path) -> None:
    """A channel behind an AND gate has no row: its chain is listed, the others are looked at."""
    text = NETLIST.replace("CLOCK", "ck").replace("xor2 x2 (.A(q1)", "and2 x2 (.A(q1)")
    (tmp_path / "block.v").write_text(text)
    words = ["audit", str(tmp_path / "block.v"), "--cells", str(CELLS), "--channels", "c0", "--channels", "c1"]
    words += ["--mode", "se=1", "--chain-length", "4", "--json", str(tmp_path / "report.json"), "--quiet"]
    assert run(words) == 1
    array = report(tmp_path)["array"]
    assert [chain["channel"] for chain in array["chains"]] == ["c0", "c1"]
    assert array["twins"]["count"] == "0"
