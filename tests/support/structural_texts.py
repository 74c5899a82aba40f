"""Random structural Verilog for property tests: hierarchy, vectors, escaped names, gates, arrays, plain assigns.

Among them the forms that few netlists have and all may: directives and macros, attributes, strengths, delays, kinds of
nets, parameters by all three ways, connections by name alone.
"""

from hypothesis import strategies as st

CELLS = """
module AND2(input A, input B, output Y); endmodule
module DFF(input D, CK, output Q, QN); endmodule
module MEM(input [3:0] A, output [1:0] Y); endmodule
"""
_LEAF = """
module leaf(a, v, y, w);
  input a; input [{left}:{right}] v; output y; output [1:0] w;
  wire n;
  AND2 g(.A(a), .B(v[{left}]), .Y(n));
  DFF f(.D(n), .CK(v[{right}]), .Q(w[0]), .QN());
  {through}
  not i(y, n);
endmodule
module wrap(input a, input [{left}:{right}] v, output y, output [1:0] w);
  leaf inner({implied});
endmodule
"""
_SIZED = """
module sized #(parameter N = 3, parameter FIRST = 0) (input [N-1:0] v, output y);
  localparam LAST = N - 1;
  AND2 g(.A(v[FIRST]), .B(v[LAST]), .Y(y));
endmodule
"""
_PROLOGUE = """`timescale 1ns / 1ps
`define SAME(x) x
`define PAIR(x, y = 1'b0) {x, \\
  y}
`ifdef NEVER
module never; this is no Verilog endmodule
`elsif SAME
`celldefine
`else
`undefined_here
`endif
"""
_IMPLIED = (".*", ".a, .v(v), .y, .w", ".w(w), .*", ".*, .a", "a, v, y, w")
_DRIVES = ("", "", "(strong0, strong1) ", "#1 ", "(supply1, strong0) #(1, 2) ")
_KINDS = ("wire", "wire", "tri", "uwire", "wand", "wor", "triand", "trior", "wire #3")


@st.composite
def structural_texts(draw: st.DrawFn) -> str:
    """Draw a text of one top, one inner module and three cells without content.

    No net is assigned twice, and outputs go to nets that nothing else drives, so that no two constants meet.
    """
    left, right = draw(st.sampled_from([(2, 0), (0, 2), (5, 3), (-1, 1), (1, -1)]))
    implied = draw(st.sampled_from(_IMPLIED))
    drive = draw(st.sampled_from(_DRIVES))
    through = draw(st.sampled_from(["assign w[1] = a;", "buf b(w[1], a);", f"assign {{w[1]}} = v[{right}];"]))
    lines = ["  input clk; input [3:0] d; input s; output [7:4] q; output o;", "  wire [7:0] t;", r"  wire \t[3] ;"]
    sources = _Sources(draw)
    assigned = draw(st.lists(st.sampled_from(range(8)), unique=True, max_size=4))
    if assigned:
        lines.append(f"  assign {drive}" + ",\n    ".join(f"t[{bit}] = {sources.value(1)}" for bit in assigned) + ";")
    for number in range(draw(st.integers(1, 6))):
        outputs = [f"x{number}", f"z{number}"]
        kind = draw(st.sampled_from(_KINDS))
        lines.append(f"  wire [1:0] x{number}; {kind} z{number};")
        lines.append("  " + _instance(draw, sources, number, outputs))
        sources.nets += [(outputs[0], 2), (outputs[1], 1)]
    header = "module top(clk, d, s, q, o);\n"
    leaf = _LEAF.format(left=left, right=right, through=through, implied=implied)
    order = draw(st.permutations([CELLS, leaf, _SIZED]))
    return _PROLOGUE + "\n".join(order) + header + "\n".join(lines) + "\nendmodule\n"


class _Sources:
    """Values of a wanted width over the nets there are so far."""

    def __init__(self, draw: st.DrawFn) -> None:
        self.draw = draw
        self.nets: list[tuple[str, int]] = [("clk", 1), ("s", 1), ("d", 4), ("t", 8), (r"\t[3] ", 1)]

    def value(self, width: int) -> str:
        """Return an expression of exactly this width, without operators."""
        options = [name for name, has in self.nets if has == width]
        options += [f"d[{width - 1}:0]", f"t[{width + 2}:3]"] if width > 1 else ["d[2]", "t [ 7 ]", f"q[{6}]"]
        options.append(f"{width} 'b {self.draw(st.integers(0, 2**width - 1)):b}")
        options.append(f"`SAME({options[0]})")
        if width == 2:
            options.append("`PAIR(s)")
        if width > 1:
            part = self.draw(st.integers(1, width - 1))
            options.append(f"{{{self.value(part)}, {self.value(width - part)}}}")
            options.append(f"{{{width}{{{self.value(1)}}}}}")
        return self.draw(st.sampled_from(options))


def _instance(draw: st.DrawFn, sources: _Sources, number: int, outputs: list[str]) -> str:
    wide, single = outputs
    one, vector = sources.value, sources.value(3)
    name = draw(st.sampled_from([f"u{number}", rf"\u[{number}] ", rf"\u.{number}/x "]))
    return draw(
        st.sampled_from(
            [
                f"leaf {name}(.a({one(1)}), .v({vector}), .y({single}), .w({wide}));",
                f"leaf {name}({one(1)}, {vector}, {single}, {wide});",
                f"leaf {name}(.w(), .v({vector}), .a({one(1)}));",
                f"wrap {name}({one(1)}, {vector}, , {wide});",
                f"(* keep, n = 2 *) sized {name}((* open *) .v({vector}), .y({single}));",
                f"sized #(.N(4), .FIRST(1)) {name}(.v({one(4)}), .y({single}));",
                f"sized #(2) {name}({one(2)}, {single});",
                f"sized {name}({one(2)}, {single}); defparam {name}.FIRST = 1, {name}.N = 2;",
                f"AND2 {name} ( .A ( {one(1)} ), .B({one(1)}),\n .Y({single}) );",
                f"AND2 {name}[1:0] (.A({one(2)}), .B({one(1)}), .Y({wide}));",
                f"MEM {name} (.A({one(4)}), .Y({wide}));",
                f"DFF {name} ({one(1)}, {one(1)}, {single}, );",
                f"nand {name}({single}, {one(1)}, {one(1)}), {name.strip()}b ({wide}[0], {one(1)}, {one(1)});",
                f"and (strong1, strong0) #(1, 2) {name}({single}, {one(1)}, {one(1)});",
                f"bufif1 {name}({single}, {one(1)}, {one(1)});",
            ]
        )
    )
