"""Clock gates, clock multiplexers and resets that the draft opens, each behind a register of three bits."""

from pathlib import Path

import pytest

from tests.support.drafts import drafted, mode_of, proposed

LATCHED_GATE = """\
library (one) {
  cell (ff) {
    ff (IQ, IQN) { clocked_on : "CK"; next_state : "D"; clear : "!RN"; }
    pin (CK, D, RN) { direction : input; }
    pin (Q) { direction : output; function : "IQ"; }
  }
  cell (xor2) { pin (A, B) { direction : input; } pin (Y) { direction : output; function : "A ^ B"; } }
  cell (and2) { pin (A, B) { direction : input; } pin (Y) { direction : output; function : "A & B"; } }
  cell (mux2) { pin (A, B, S) { direction : input; } pin (Y) { direction : output; function : "(A & !S) | (B & S)"; } }
  cell (clock_gate) {
    latch (IQ, IQN) { enable : "!CK"; data_in : "EN | TE"; }
    pin (CK, EN, TE) { direction : input; }
    pin (GCK) { direction : output; function : "IQ & CK"; }
  }
}
"""
REGISTER = """\
  xor2 f (.A(q[2]), .B(q[1]), .Y(n));
  ff a (.CK(gck), .RN(r), .D(n), .Q(q[0]));
  ff b (.CK(gck), .RN(r), .D(q[0]), .Q(q[1]));
  ff c (.CK(clk), .RN(r), .D(q[1]), .Q(q[2]));
endmodule
"""
CASES: dict[str, tuple[str, dict[str, int]]] = {
    "latched gate": ("  assign r = rst_n; clock_gate g (.CK(clk), .EN(en), .TE(te), .GCK(gck));\n", {"en": 1}),
    "gate": ("  assign r = rst_n; and2 g (.A(clk), .B(en), .Y(gck));\n", {"en": 1}),
    "multiplexer": ("  assign r = rst_n; mux2 g (.A(te), .B(clk), .S(en), .Y(gck));\n", {"en": 1}),
    "two resets": ("  assign gck = clk; and2 g (.A(rst_n), .B(en), .Y(r));\n", {"en": 1, "rst_n": 1}),
    "stored reset": (
        "  assign gck = clk; ff s (.CK(clk), .RN(rst_n), .D(1'b1), .Q(r));\n",
        {"r": 1},
    ),
}


@pytest.mark.parametrize("case", CASES)
def test_what_keeps_the_register_still_is_opened(case: str, tmp_path: Path) -> None:
    """The mode holds exactly what opens the clock and releases the reset."""
    cells = tmp_path / "cells.lib"
    cells.write_text(LATCHED_GATE)
    body, mode = CASES[case]
    head = "module t (input clk, input rst_n, input en, input te, output [2:0] q);\n  wire n, gck, r;\n"
    found = drafted(tmp_path, head + body + REGISTER, cells)
    assert mode_of(found) == mode
    assert proposed(found).clock == "clk, rising edge"
    assert proposed(found).names == ("q[0]", "q[1]", "q[2]")
