"""Cells from modules of gates, tables and other modules: every form that models take, and what is refused."""

import random
import re
from time import process_time

import pytest

from auditor.cells.function import truth_table
from auditor.cells.library import Function
from auditor.errors import InputError
from tests.support.cell_models import models, understood

MUX = "primitive mux (Q, A, B, S); output Q; input A, B, S; table 0?0:0; 1?0:1; ?01:0; ?11:1; endtable endprimitive\n"
FF = (
    "primitive ff (Q, D, C, N, VP, VG); output Q; reg Q; input D, C, N, VP, VG; table\n"
    "0 r ? 1 0 : ? : 0; 1 r ? 1 0 : ? : 1; ? f ? 1 0 : ? : -; * b ? 1 0 : ? : -;\n"
    "? ? * 1 0 : ? : x; ? ? ? * ? : ? : x; ? ? ? ? * : ? : x; endtable endprimitive\n"
)
GATE_TABLES = {
    "and": 0b10000000,
    "nand": 0b01111111,
    "or": 0b11111110,
    "nor": 0b00000001,
    "xor": 0b10010110,
    "xnor": 0b01101001,
}


@pytest.mark.parametrize("gate", GATE_TABLES)
def test_gates_with_three_inputs(gate):
    """The tables of the six gates, with strength, delay and without a name."""
    for form in (f"{gate} (Y, A, B, C);", f"{gate} (strong0, weak1) #(1:2:3, 2) g1 (Y, A, B, C);"):
        cell = understood(f"module m (Y, A, B, C); output Y; input A, B, C; {form} endmodule")
        assert truth_table(cell.pins["Y"].function) == GATE_TABLES[gate]


def test_buffers_pulls_and_three_states():
    """Several outputs of a buffer, constants by pulls and supplies, and the condition under which an output is Z."""
    text = """module m (Y, N, H, L, Z, W, T, A, E); output Y, N, H, L; output Z, W; output tri T; input A, E;
        wire a; supply1 one; buf (a, Y, A); not (N, a); pullup (H); pulldown (strong0) p (L);
        bufif0 (Z, A, E); notif1 #1 n1 (W, A, one); tri k = E; bufif1 (T, A, k); endmodule"""
    pins = understood(text).pins
    functions = {name: (pin.function.inputs, pin.function.program) for name, pin in pins.items() if pin.function}
    assert functions == {
        "Y": (("A",), ("$0",)),
        "N": (("A",), ("$0", "!")),
        "H": ((), ("1",)),
        "L": ((), ("0",)),
        "Z": (("A",), ("$0",)),
        "W": (("A",), ("$0", "!")),
        "T": (("A",), ("$0",)),
    }
    off = {name: pin.three_state for name, pin in pins.items() if pin.three_state}
    assert off == {
        "Z": Function(("E",), ("$0",)),
        "T": Function(("E",), ("$0", "!")),
        "W": Function((), ("0",)),
    }


TIMING = """`celldefine
module m (Q, QN, D, SI, SE, C, RN, VPWR, VGND);
  output Q, QN; input D, SI, SE, C, RN; inout VPWR, VGND; reg notifier; wire q, n, mux_out, late_D, late_C;
  mux m1 (mux_out, late_D, SI, SE);
  ff #0.1 f (q, mux_out, late_C, notifier, VPWR, VGND); buf (Q, q); not (QN, q);
  wire awake = VPWR === 1'b1, odd = some_function(D);
  specify
    specparam t = 1; (posedge C => (Q +: D)) = (0:0:0, 0:0:0); if (SE) (SE *> Q) = 1;
    $width (negedge C &&& awake, 1.0, 0, notifier); $setup (D, posedge C, 1, notifier);
    $setuphold (posedge C &&& awake, negedge D, 0:0:0, 0:0:0, notifier, awake, awake, late_C, late_D);
  endspecify
endmodule
`endcelldefine
"""


def test_a_timing_model():
    """Late copies from timing checks, a notifier, supplies wanted by the table, and nets that no output needs."""
    cell = understood(MUX + FF + TIMING)
    (bit,) = cell.storage
    assert (bit.kind, bit.clock, bit.variable) == ("flip-flop", Function(("C",), ("$0",)), "q")
    assert set(bit.data.inputs) == {"D", "SI", "SE"}
    assert cell.pins["QN"].function == Function(("q",), ("$0", "!"))
    directions = {name: pin.direction for name, pin in cell.pins.items()}
    assert directions == {
        **dict.fromkeys(("Q", "QN"), "output"),
        **dict.fromkeys(("D", "SI", "SE", "C", "RN"), "input"),
        **dict.fromkeys(("VPWR", "VGND"), "power"),
    }


@pytest.mark.parametrize(
    "instance",
    [
        "base b (Q, , D, , C);",
        "base #(1) b (.D(D), .Q(Q), .C(C), .QN(), .unused());",
        "base b (.C(C), .D(D), .Q(Q));",
        "wire t; base b (.C(C), .D(~(~D)), .Q(t)); buf (Q, t);",
    ],
)
def test_a_wrapper_around_a_base_module(instance):
    """Positional and named pins, open ones, expressions: the wrapper does what the base does."""
    base = """module base (Q, QN, D, unused, C); output Q, QN; input D, unused, C; supply1 VP; supply0 VG; wire q;
        ff f (q, D, C, , VP, VG); buf (Q, q); not (QN, q); endmodule """
    wrapper = f"module m (Q, D, C, VP); output Q; input D, C; inout VP; {instance} endmodule "
    for text in (FF + base + wrapper, wrapper + base + FF):
        cell = understood(text, "m")
        (bit,) = cell.storage
        assert (bit.variable, bit.data, bit.clock) == ("b.q", Function(("D",), ("$0",)), Function(("C",), ("$0",)))
        assert cell.pins["Q"].function == Function(("b.q",), ("$0",))
        assert cell.pins["VP"].direction == "power"


def test_z_goes_through_a_wrapper():
    """An output that can be Z inside stays so outside, and cannot feed logic."""
    base = "module base (Z, A, E); output Z; input A, E; bufif1 (Z, A, E); endmodule "
    cell = understood(base + "module m (Z, A, E); output Z; input A, E; base b (Z, A, E); endmodule")
    assert cell.pins["Z"].three_state == Function(("E",), ("$0", "!"))
    text = base + "module m (Y, A, E); output Y; input A, E; wire z; base b (z, A, E); not (Y, z); endmodule"
    assert models(text)["m"].not_understood == "its model uses b.Z inside, which can be Z"


def test_inverted_storage_is_settled():
    """Data inverted on the way in and out: the state kept is the one that follows D."""
    text = """module m (Q, D, C); output Q; input D, C; supply1 h; supply0 l; wire n, q;
        not (n, D); ff f (q, n, C, , h, l); not (Q, q); endmodule"""
    cell = understood(FF + text)
    (bit,) = cell.storage
    assert bit.data == Function(("D",), ("$0",))
    assert cell.pins["Q"].function == Function((bit.variable,), ("$0",))


def test_two_stored_bits_in_a_row():
    """A synchroniser: the second bit takes the first, each with its own clock."""
    text = """module m (Q, D, C); output Q; input D, C; supply1 h; supply0 l; wire a, cn;
        ff f1 (a, D, C, , h, l); not (cn, C); ff f2 (Q, a, cn, , h, l); endmodule"""
    cell = understood(FF + text)
    data = {bit.variable: bit.data.inputs for bit in cell.storage}
    assert data == {"a": ("D",), "Q.state": ("a",)}


def test_headers_of_both_kinds_and_escaped_names():
    """Declarations in the header, ranges, escaped names and a label behind the end."""
    text = r"module \my+cell (output reg [1:0] Y, input wire \a.b , input [1:0] D, E); parameter p = 3; "
    text += r"localparam q = 1; integer i; initial begin Y = 0; end always @(posedge \a.b ) Y <= D & E; endmodule : m"
    cell = understood(text)
    assert (cell.name, list(cell.pins)) == (r"my+cell", ["Y[0]", "Y[1]", "a.b", "D[0]", "D[1]", "E[0]", "E[1]"])
    assert cell.storage[1].data.inputs == ("D[1]", "E[1]")


def test_cells_without_outputs_are_fine():
    """A tap or a filler has pins and nothing to understand; unused inout pins are supplies."""
    cell = understood("module tap (VPWR, A); inout VPWR; input A; endmodule")
    assert {name: pin.direction for name, pin in cell.pins.items()} == {"VPWR": "power", "A": "input"}


def module(body, ports="Y, A, B"):
    return f"module m ({ports}); output Y; input A, B;\n{body}\nendmodule\n"


@pytest.mark.parametrize(
    ("text", "reason"),
    [
        (module(""), "its model at m.v:1 gives no function"),
        (module("wire n; not (n, A);"), "nothing drives Y in its model"),
        (module("and (Y, A, n);"), "nothing drives n in its model"),
        (module("not (Y, A); buf (Y, B);"), "its model at m.v:2 drives the net Y twice"),
        (module("nor (Y, A, n); nor (n, B, Y);"), "the functions of its pins"),
        (module("assign Y = n; assign n = Y;"), "the functions of its pins"),
        (module("nmos (Y, A, B);"), "the gate nmos with 2 inputs at m.v:2 is not read"),
        (module("not (Y, A, );"), "an expression is missing at m.v:2"),
        (module("wand Y; and (Y, A, B);"), "Y of its model at m.v:1 is wand, which is not read"),
        (module("none n (Y, A);"), "its model holds none at m.v:2, which no model file defines"),
        (module("m n (Y, A);"), "its model holds itself at m.v:2: m holds m"),
        (
            module("k n (Y);") + "module k (Y); output Y; m n (Y); endmodule",
            "its model holds itself at m.v:4: m holds k holds m",
        ),
        (module("k n (Y, A);") + "module k (Y); output Y; endmodule", "k at m.v:2 has 2 connections, 1 ports"),
        (module("k n (.Z(Y));") + "module k (Y); output Y; endmodule", "k at m.v:2 has no port Z"),
        (module("k n (.Y);") + "module k (Y); output Y; endmodule", "its model is not read at m.v:2: a pin"),
        (module("k n (.*);") + "module k (Y); output Y; endmodule", "its model is not read at m.v:2: a pin"),
        (module("not n[1:0] (Y, A);"), "its model is not read at m.v:2: an array of gates is not read in cell models"),
        (module("function f; input x; f = x; endfunction"), "its model is not read at m.v:2: function is not read"),
        (module("assign Y = A"), "its model is not read at m.v:2: , or ; is missing"),
        (module("not (Y, A;"), "its model is not read at m.v:2: a bracket is not closed"),
        (
            module("wire [w:0] x; not (Y, A);"),
            "its model is not read at m.v:2: the range [w : 0] is not made of numbers",
        ),
        (module("? (Y, A);"), "its model is not read at m.v:2: ? is not read in cell models"),
        (module("wire [99999:0] x; assign Y = &x;"), "x of its model at m.v:1 has more than 4096 bits"),
        (module("not (1'b1, A);"), "1'b1 at m.v:2 cannot be driven"),
        ("module m (Y); assign Y = 1; endmodule", "the port Y of its model at m.v:1 has no direction"),
        ("module m (.Y(y)); output y; endmodule", "its model is not read at m.v:1"),
    ],
)
def test_what_is_not_understood_says_where(text, reason):
    """A model that gives no function keeps its pins, where it has any, and says why with file and line."""
    cell = models(text)["m"]
    assert cell.not_understood.startswith(reason)
    assert cell.storage == ()
    assert all(pin.function is None for pin in cell.pins.values())
    if text.startswith("module m (Y, A, B)"):
        assert list(cell.pins) == ["Y", "A", "B"]


def test_a_model_that_cannot_be_read_spoils_no_other():
    """Only the cells that hold it are not understood."""
    text = "module bad (Y); output Y; task t; endtask endmodule module m (Y); output Y; assign Y = 1; endmodule "
    cells = models(text + "module k (Y); output Y; bad b (Y); endmodule")
    assert [bool(cell.not_understood) for cell in cells.values()] == [True, False, True]


@pytest.mark.parametrize(
    ("text", "trouble"),
    [
        (
            "module m (Y);\nmodule k; endmodule",
            "m.v:2: module stands inside the module that begins at line 1; end that",
        ),
        ("endmodule", "m.v:1: endmodule ends nothing; leave it out or mend what stands before it"),
        ("\nmodule m;", "m.v:2: the module that begins here is not ended; end it with endmodule"),
        ("module m; endprimitive endmodule", "m.v:1: endprimitive stands inside the module that begins at line 1"),
        ("module m; endmodule\nwire x;", "m.v:2: wire stands outside a module or primitive; leave it out"),
        ("wire x;\nmodule m; endmodule", "m.v:1: wire stands outside a module or primitive; leave it out"),
        ("module 3; endmodule", "m.v:1: module without a name; name it"),
    ],
)
def test_what_has_no_shape_is_an_error(text, trouble):
    """What belongs to no module or primitive is told with its line."""
    with pytest.raises(InputError) as caught:
        models(text)
    assert trouble in str(caught.value)


def test_words_in_strings_and_names_end_nothing():
    """The word endmodule inside a string or an escaped name is no end."""
    text = r'module m (Y, \endmodule ); output Y; input \endmodule ; initial $display("endmodule"); '
    text += r"not (Y, \endmodule ); endmodule"
    assert understood(text).pins["Y"].function == Function(("endmodule",), ("$0", "!"))


def test_growth_is_bounded():
    """Modules that double each other thirty times, and a chain of thousands of gates, end in time."""
    start = process_time()
    chain = "".join(
        f"module d{k} (Y, A); output Y; input A; wire n; d{k + 1} a (n, A); d{k + 1} b (Y, n); endmodule "
        for k in range(30)
    )
    cell = models(chain + "module d30 (Y, A); output Y; input A; not (Y, A); endmodule", only="d0")["d0"]
    assert cell.not_understood == "its model has more than 20000 gates"
    gates = "".join(f"not (n{k + 1}, n{k});" for k in range(5000))
    cell = understood(f"module m (Y, A); output Y; input A; assign n0 = A; {gates} buf (Y, n5000); endmodule")
    assert cell.pins["Y"].function == Function(("A",), ("$0",))
    doubled = "".join(f"xor (n{k + 1}, n{k}, n{k});" for k in range(60))
    cell = models(f"module m (Y, A); output Y; input A; assign n0 = A; {doubled} buf (Y, n60); endmodule")["m"]
    assert "has more than 100000 terms" in cell.not_understood
    assert process_time() - start < 10


def test_damaged_texts_are_read_or_refused():
    """Words dropped, doubled, exchanged: each text gives cells, perhaps not understood, or an error with its places."""
    process = (
        "module p (Q, D, C); output reg [1:0] Q; input [1:0] D; input C; always @(posedge C or negedge D[0]) begin "
    )
    process += "if (~D[0]) Q <= 2'b01; else Q <= #1 D[1] ? {Q[0], ^D} : ~D & Q; end endmodule\n"
    words = re.findall(r"\w+|\s+|.", "`define X 1\n" + MUX + FF + process + TIMING, re.DOTALL)
    signs = [word for word in words if word.strip()]
    chance, refused = random.Random(7), 0
    for _ in range(300):
        damaged = list(words)
        for _ in range(chance.randint(1, 4)):
            at = chance.randrange(len(damaged))
            damaged[at : at + chance.randint(0, 1)] = chance.choices(signs, k=chance.randint(0, 2))
        troubles = ()
        try:
            models("".join(damaged))
        except InputError as error:
            troubles = error.troubles
        refused += bool(troubles)
        assert all(trouble.place and trouble.place.line for trouble in troubles)
    assert 50 < refused < 250
