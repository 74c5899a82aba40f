"""Nets that a cell and a constant drive."""

from pathlib import Path

from auditor.cells.library import Cell, CellLibrary, Function, Pin
from tests.support.cones import library, troubles_of


def test_a_cell_that_drives_a_tied_net_is_refused(tmp_path: Path) -> None:
    """A net tied in the text and driven by a cell or gate has two drivers, in the cone or not; a tie cell may agree."""
    body = """\
  km_dff a_ff (.CK(clk), .D(b), .Q(a));
  km_dff b_ff (.CK(clk), .D(a), .Q(b));
  km_buf out (.A(b), .Y(y));
  wire p, q, s, t; assign p = 1'b0; assign q = 1'b1; supply0 g;
  km_inv bad (.A(a), .Y(p));
  not also (q, b);
  km_dff ff (.CK(clk), .D(a), .Q(g));
  tie fits (.LO(s), .HI(t)); assign s = g; assign t = q;
  tie swapped (.LO(q), .HI());"""
    pins = {"LO": Pin("LO", "output", Function((), ("0",))), "HI": Pin("HI", "output", Function((), ("1",)))}
    known = CellLibrary({**library().cells, "tie": Cell("tie", pins)})
    remedy = "leave the cell or the tie out"
    assert troubles_of(tmp_path, body, cells=known) == [
        f"t.v:6: output Y of bad (km_inv) drives a net that is tied to 0 as well; {remedy}",
        f"t.v:7: output out of also (not) drives a net that is tied to 1 as well; {remedy}",
        f"t.v:8: output Q of ff (km_dff) drives a net that is tied to 0 as well; {remedy}",
        f"t.v:10: output LO of swapped (tie) drives a net that is tied to 1 as well; {remedy}",
    ]
