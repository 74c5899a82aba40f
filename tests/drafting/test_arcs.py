"""Arcs: which net depends on which, through gates and storage, under constants."""

from pathlib import Path

from auditor.cone.wiring import Wiring
from auditor.drafting.arcs import GATE, find_arcs
from tests.support.drafts import wired

TEXT = """\
module t (input clk, input se, input si, input d, output q, output y);
  wire n;
  ff_scan a_ff (.CK(clk), .D(n), .SI(si), .SE(se), .Q(q));
  mux2 m (.A(q), .B(d), .S(se), .Y(n));
  black_box b (.I(q), .O(y));
endmodule
"""


def told(wiring: Wiring, known: dict[int, int]) -> set[tuple[str, str, str]]:
    """Return the arcs by names: source, target, element or nothing."""
    arcs, names = find_arcs(wiring, known), wiring.netlist.net_names
    return {
        (names[s], names[t], "" if e == GATE else wiring.netlist.instance_names[e])
        for s, t, e in zip(arcs.source.tolist(), arcs.target.tolist(), arcs.element.tolist(), strict=True)
    }


def test_arcs_go_from_data_to_output(tmp_path: Path) -> None:
    """Data pins reach the output through storage, the clock does not; an unknown cell passes nothing."""
    wiring, _ = wired(tmp_path, TEXT)
    through = {("n", "q", "a_ff"), ("si", "q", "a_ff"), ("se", "q", "a_ff")}
    assert told(wiring, {0: 0, 1: 1}) == through | {("q", "n", ""), ("d", "n", ""), ("se", "n", "")}


def test_a_constant_cuts_arcs(tmp_path: Path) -> None:
    """With the select at a value only what it selects is left."""
    wiring, _ = wired(tmp_path, TEXT)
    select = wiring.netlist.net_of_name["se"]
    assert told(wiring, {select: 0}) == {("n", "q", "a_ff"), ("q", "n", "")}
    assert told(wiring, {select: 1}) == {("si", "q", "a_ff"), ("d", "n", "")}
