"""``always`` blocks: what they store, and what is refused.

The templates for edges are those of IEEE 1364.1-2002 (register transfer level synthesis).
"""

from itertools import product

import pytest

from tests.support.cell_models import models, outputs, step, understood


def block(body, inputs="C, D, E, R, S", outputs="reg Q"):
    """Return a module with this body."""
    return f"module m ({inputs}, Q); input {inputs}; output Q; {outputs};\n{body}\nendmodule\n"


FLIP_FLOPS = {
    "plain": ("always @(posedge C) Q <= D;", 1, lambda v, _q: v["D"], None),
    "falling, delay": ("always @(negedge C) Q <= #1 D;", 0, lambda v, _q: v["D"], None),
    "enable": ("always @(posedge C) if (E) Q <= D;", 1, lambda v, q: v["D"] if v["E"] else q, None),
    "scan and synchronous reset": (
        "always @(posedge C) begin : named if (!R) Q <= 1'b0; else if (E == 1'b1) Q <= S; else Q <= D; end",
        1,
        lambda v, _q: 0 if not v["R"] else v["S"] if v["E"] else v["D"],
        None,
    ),
    "clear": (
        "always @(posedge C or negedge R) if (~R) Q <= 0; else Q <= D;",
        1,
        lambda v, _q: v["D"],
        lambda v: 0 if not v["R"] else None,
    ),
    "clear named first": (
        "always @(posedge R, posedge C) begin if (R) Q <= 1'b0; else begin Q <= D; end end",
        1,
        lambda v, _q: v["D"],
        lambda v: 0 if v["R"] else None,
    ),
    "preset over clear": (
        "always @(posedge C or posedge S or posedge R) if (S) Q <= 1; else if (R) Q <= 0; else if (E) Q <= D;",
        1,
        lambda v, q: v["D"] if v["E"] else q,
        lambda v: 1 if v["S"] else 0 if v["R"] else None,
    ),
    "blocking values on the way": (
        "reg t; always @(posedge C) begin t = D ^ E; if (S) t = ~t; Q <= t & R; end",
        1,
        lambda v, _q: (v["D"] ^ v["E"] ^ v["S"]) & v["R"],
        None,
    ),
    "toggle": ("always @(posedge C) Q <= D ? ~Q : Q;", 1, lambda v, q: q ^ v["D"], None),
}


@pytest.mark.parametrize(("body", "edge", "data", "forced"), FLIP_FLOPS.values(), ids=FLIP_FLOPS)
def test_flip_flops(body, edge, data, forced):
    """From every input and state, after every single change, Q is what the block says."""
    cell = understood(block(body))
    assert cell.storage[0].kind == "flip-flop"
    names = "CDERS"
    for bits, changed, q in product(product((0, 1), repeat=5), names, (0, 1)):
        before = dict(zip(names, bits, strict=True))
        now = {**before, changed: 1 - before[changed]}
        forced_before, forced_now = (forced(pins) if forced else None for pins in (before, now))
        if forced_before not in (None, q):
            continue
        expected = data(now, q) if changed == "C" and now["C"] == edge else q
        expected = expected if forced_now is None else forced_now
        state = next(s for s in (0, 1) if outputs(cell, before, s)["Q"] == q)
        assert outputs(cell, now, step(cell, before, now, state))["Q"] == expected


LATCHES = {
    "waits for all": ("always @(C or D) if (C) Q = D;", lambda v, q: v["D"] if v["C"] else q),
    "star": ("always @* if (!C) Q <= D;", lambda v, q: q if v["C"] else v["D"]),
    "clear": ("always @(*) if (R) Q = 0; else if (C) Q = D;", lambda v, q: 0 if v["R"] else v["D"] if v["C"] else q),
    "two gates": ("always @(C, D, E) if (C && E) Q <= D;", lambda v, q: v["D"] if v["C"] & v["E"] else q),
    "function": ("always @(D or E or S) begin Q = D; if (S) Q = E; end", lambda v, _q: v["E"] if v["S"] else v["D"]),
}


@pytest.mark.parametrize(("body", "following"), LATCHES.values(), ids=LATCHES)
def test_latches_and_functions(body, following):
    """A net that keeps its value somewhere is a latch, one that never does a function."""
    cell = understood(block(body))
    assert [bit.kind for bit in cell.storage] == ([] if "Q = E" in body else ["latch"])
    for bits, state in product(product((0, 1), repeat=5), (0, 1)):
        pins = dict(zip("CDERS", bits, strict=True))
        after = step(cell, pins, pins, state) if cell.storage else 0
        assert outputs(cell, pins, after)["Q"] == following(pins, outputs(cell, pins, state)["Q"])


def test_a_clear_comes_out_as_such():
    """Asynchronous conditions are over their own pins, and the data are the data alone."""
    (bit,) = understood(block(FLIP_FLOPS["preset over clear"][0])).storage
    assert (bit.clear.inputs, bit.preset.inputs, bit.both) == (("R",), ("S",), "1")
    assert set(bit.data.inputs) == {"D", "E", bit.variable}
    (bit,) = understood(block(LATCHES["clear"][0])).storage
    assert (bit.clear.inputs, bit.data.inputs, bit.clock.inputs) == (("R",), ("D",), ("C",))


def test_several_bits_in_one_block():
    """A vector and two names: each bit is storage of its own."""
    text = "module m (C, D, Q, P); input C; input [1:0] D; output reg [1:0] Q; output reg P;"
    cell = understood(text + " always @(posedge C) begin Q <= D; {P} <= ^Q; end endmodule")
    assert [bit.variable for bit in cell.storage] == ["Q[0].state", "Q[1].state", "P.state"] or len(cell.storage) == 3
    data = {bit.variable: set(bit.data.inputs) for bit in cell.storage}
    assert data == {
        "Q[0].state": {"D[0]"},
        "Q[1].state": {"D[1]"},
        "P.state": {"Q[0].state", "Q[1].state"},
    }


@pytest.mark.parametrize(
    ("body", "reason"),
    [
        ("always @(C) if (C) Q = D;", "the always block at m.v:2 does not wait for D"),
        ("always #5 Q = ~Q;", "the always block at m.v:2 does not begin with @(...)"),
        ("always @(posedge C or D) Q <= D;", "the always block at m.v:2 waits for edges and levels"),
        ("always @(posedge C or negedge C) Q <= D;", "the always block at m.v:2 waits for both edges of a net"),
        ("always @(posedge C or posedge R) Q <= D;", "the always block at m.v:2 makes Q neither"),
        ("always @* if (C) Q = ~Q;", "the always block at m.v:2 makes Q neither"),
        ("always @(posedge C) begin Q = D; Q <= E; end", "assigns Q with = and with <="),
        ("always @(posedge C) while (D) Q <= E;", "while at m.v:2 is no assignment, if or begin"),
        ("always @(posedge C) case (D) 1: Q <= E; endcase", "case at m.v:2 is no assignment, if or begin"),
        ("always @(posedge C) Q <= D + E;", "the expression at m.v:2 is not read"),
        ("always @(posedge C) Q <= $random;", "is not read"),
        ("always @(posedge C) begin Q <= D;", "its model is not read at m.v:2: a statement is not ended"),
        ("always @(posedge C)" + " if (D)" * 200 + " Q <= E;", "is nested too deep"),
        ("always @(posedge C) Q <= D; always @(posedge E) Q <= R;", "its model at m.v:2 drives the net Q twice"),
        ("always @(posedge C) (Q <= D);", "( at m.v:2 is no assignment, if or begin"),
    ],
)
def test_what_is_refused(body, reason):
    """Everything else is said in words with its line."""
    (cell,) = models(block(body)).values()
    assert reason in cell.not_understood
    assert cell.storage == ()
    assert [pin.name for pin in cell.pins.values()] == ["C", "D", "E", "R", "S", "Q"]
