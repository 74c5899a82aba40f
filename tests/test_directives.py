"""A netlist with directives, audited whole: included files are inputs, wired or pulled nets are never guessed."""

import hashlib
import json
from pathlib import Path

import pytest

from auditor.audit import audit
from auditor.cli import run
from auditor.errors import InputError
from auditor.plan import Plan
from auditor.report.facts import AuditFacts

SAMPLES = Path(__file__).parents[1] / "sample_netlists"
CELLS = (SAMPLES / "kelp90.lib",)

_HEAD = "module top(input clk, input rst_n, input e, output [3:0] so);\nwire [3:0] q;\nassign so = q;\n"
_REGISTER = (
    "`STAGE(0, n) `STAGE(1, q[0]) `STAGE(2, q[1]) `STAGE(3, q[2])\n"
    "`ifdef TAPS\n`include `NOT_A_NAME\n`else\nkm_xor2 x(.A(q[3]), .B(q[2]), .Y(n));\n`endif\n"
)
_MACRO = "`define STAGE(k, d) km_dffs s``k(.CK(clk), .SN(rst_n), .D(d), .Q(q[k]));\n"


def _facts_of(folder: Path, extra: str = "") -> AuditFacts:
    netlist = folder / "n.v"
    netlist.write_text(f'`include "stage.vh"\n{_HEAD}{extra}{_REGISTER}endmodule\n')
    return audit(Plan(netlists=(netlist,), cells=CELLS))


def test_included_files_are_inputs_with_their_digests(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """The register is found through macros of an included file, which is listed behind the netlist."""
    (tmp_path / "inc").mkdir()
    (tmp_path / "inc" / "stage.vh").write_text(_MACRO)
    (tmp_path / "n.v").write_text(f'`include "stage.vh"\n{_HEAD}wire n;\n{_REGISTER}endmodule\n')
    words = ["audit", str(tmp_path / "n.v"), "--cells", str(CELLS[0]), "--include", str(tmp_path / "inc")]
    assert run([*words, "--define", "UNUSED=1", "--json", "-"]) in (0, 1)
    report = json.loads(capsys.readouterr().out)
    digest = hashlib.sha256(_MACRO.encode()).hexdigest()
    assert [entry["role"] for entry in report["inputs"]] == ["netlist", "include", "cells"]
    assert digest in report["inputs"][1].values()
    assert len(report["machine"]["storage"]) == 4


def test_macros_of_the_command_line_choose_branches(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """With TAPS defined the other branch is read, whose fault is told with its line."""
    (tmp_path / "stage.vh").write_text(_MACRO)
    (tmp_path / "n.v").write_text(f'`include "stage.vh"\n{_HEAD}wire n;\n{_REGISTER}endmodule\n')
    assert run(["audit", str(tmp_path / "n.v"), "--cells", str(CELLS[0]), "--define", "TAPS"]) == 2
    assert f"{tmp_path / 'n.v'}:8: directive `include is not complete" in capsys.readouterr().err


def test_a_redefinition_is_told_among_the_assumptions(tmp_path: Path) -> None:
    """The reader learns which text of a macro was taken."""
    (tmp_path / "stage.vh").write_text("`define STAGE 1\n" + _MACRO)
    assumed = _facts_of(tmp_path, "wire n;\n").assumed
    assert any("stage.vh:2: macro `STAGE is defined anew" in told for told in assumed)


@pytest.mark.parametrize(
    ("extra", "found"),
    [
        ("wor n; km_inv i(.A(e), .Y(n));\n", "net n has 2 drivers: i.Y"),
        ("wand n; assign n = e;\n", "net e has 2 drivers: input port e"),
    ],
)
def test_wired_nets_with_several_drivers_are_refused(tmp_path: Path, extra: str, found: str) -> None:
    """A wired net is a plain one as long as one gate drives it; inside the cone anything else is an error."""
    (tmp_path / "stage.vh").write_text(_MACRO)
    with pytest.raises(InputError, match=found):
        _facts_of(tmp_path, extra)


def test_without_a_default_net_type_every_net_is_declared(tmp_path: Path) -> None:
    """`default_nettype none makes a net that is declared nowhere an error; without it the net is a wire."""
    (tmp_path / "stage.vh").write_text(_MACRO)
    assert _facts_of(tmp_path).extraction.machine is not None
    (tmp_path / "stage.vh").write_text(f"`default_nettype none\n{_MACRO}")
    with pytest.raises(InputError, match="net n is not declared"):
        _facts_of(tmp_path)


def test_a_pulled_net_that_nothing_drives_is_refused(tmp_path: Path) -> None:
    """The pull of tri1 is not taken for a driver: the net is named."""
    text = f"{_MACRO}{_HEAD}wire n; tri1 p; km_xor2 y(.A(p), .B(q[0]), .Y(n));\n`STAGE(0, n)\nendmodule\n"
    (tmp_path / "n.v").write_text(text)
    with pytest.raises(InputError, match="net p inside the cone has no driver"):
        audit(Plan(netlists=(tmp_path / "n.v",), cells=CELLS, channels=("so[0]",)))


def test_models_beside_a_netlist_may_be_behavioural(tmp_path: Path) -> None:
    """A flip-flop that the library describes may have a model in the netlist's own text: only its ports count there."""
    model = (
        "module km_dffs(CK, SN, D, Q);\ninput CK, SN, D; output Q; reg Q;\n"
        "always @(posedge CK or negedge SN) if (!SN) Q <= 1; else Q <= D;\nendmodule\n"
    )
    (tmp_path / "stage.vh").write_text(model + _MACRO)
    machine = _facts_of(tmp_path, "wire n;\n").extraction.machine
    assert machine is not None
    assert len(machine.storage) == 4
