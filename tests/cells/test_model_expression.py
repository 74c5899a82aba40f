"""Expressions of cell models against the same expressions evaluated as Verilog defines them."""

from itertools import product
from time import process_time

import pytest

from auditor.cells.function import truth_table
from tests.support.cell_models import models, outputs, understood


def assigned(expression, declarations="input a, b, c; input [1:0] v, w; output Y;"):
    """Return the text of a module whose output is this expression."""
    return f"module m (a, b, c, v, w, Y); {declarations} assign Y = {expression};\nendmodule"


# Each with the same value written in Python over single bits; v and w are vectors of bits 1 and 0.
EXPRESSIONS = {
    "a & b | c": lambda a, b, c, **_: a & b | c,
    "a | b & c": lambda a, b, c, **_: a | (b & c),
    "a ^ b & c | a": lambda a, b, c, **_: (a ^ (b & c)) | a,
    "~a ^ b": lambda a, b, **_: (1 - a) ^ b,
    "a ~^ b": lambda a, b, **_: 1 - (a ^ b),
    "a ^~ b ^ c": lambda a, b, c, **_: 1 - (a ^ b) ^ c,
    "!(a && b) || c": lambda a, b, c, **_: (1 - (a & b)) | c,
    "a == b && c": lambda a, b, c, **_: int(a == b) & c,
    "a & b == c": lambda a, b, c, **_: a & int(b == c),
    "a != b === c": lambda a, b, c, **_: int(int(a != b) == c),
    "a !== 1'b1": lambda a, **_: int(a != 1),
    "a ? b : c": lambda a, b, c, **_: b if a else c,
    "a ? b : c ? a : b": lambda a, b, c, **_: b if a else a if c else b,
    "a ? b ? c : a : b": lambda a, b, c, **_: (c if b else a) if a else b,
    "a | b ? b & c : ~c": lambda a, b, c, **_: b & c if a | b else 1 - c,
    "&v": lambda v1, v0, **_: v1 & v0,
    "~|v & ~&w": lambda v1, v0, w1, w0, **_: (1 - (v1 | v0)) & (1 - (w1 & w0)),
    "^{a, v}": lambda a, v1, v0, **_: a ^ v1 ^ v0,
    "~^v": lambda v1, v0, **_: 1 - (v1 ^ v0),
    "!v": lambda v1, v0, **_: 1 - (v1 | v0),
    "v == w": lambda v1, v0, w1, w0, **_: int((v1, v0) == (w1, w0)),
    "v == {b, 1'h0}": lambda v1, v0, b, **_: int((v1, v0) == (b, 0)),
    "v == 2'd2": lambda v1, v0, **_: int((v1, v0) == (1, 0)),
    "v[1] & w[0]": lambda v1, w0, **_: v1 & w0,
    "|(v & w)": lambda v1, v0, w1, w0, **_: (v1 & w1) | (v0 & w0),
    "|(v[1:0] ^ {2{a}})": None,
    "((((a))))": lambda a, **_: a,
    "- a": None,
    "a + b": None,
    "a b": None,
    "(a": None,
    "a ? b": None,
    "{a, }": None,
    "": None,
    "1'bx & a": None,
    "$signed(a)": None,
    "v[a]": None,
    "v[2]": None,
    "a[0]": None,
}


@pytest.mark.parametrize("text", EXPRESSIONS)
def test_expressions(text):
    """All inputs: the function is the expression; what is not read is refused in words with its line."""
    expected = EXPRESSIONS[text]
    if expected is None:
        (cell,) = models(assigned(text)).values()
        assert "m.v:1" in cell.not_understood
        return
    cell = understood(assigned(text))
    for bits in product((0, 1), repeat=7):
        a, b, c, v1, v0, w1, w0 = bits
        pins = {"a": a, "b": b, "c": c, "v[1]": v1, "v[0]": v0, "w[1]": w1, "w[0]": w0}
        assert outputs(cell, pins)["Y"] == expected(a=a, b=b, c=c, v1=v1, v0=v0, w1=w1, w0=w0)


def test_vectors_bit_by_bit():
    """Vectors of either direction are assigned bit by bit, short values filled with 0."""
    text = "module m (A, Y, Z); input [0:1] A; output [1:0] Y; output [2:0] Z; "
    text += "assign Y = ~A, {Z[2:1], Z[0]} = A; endmodule"
    pins = understood(text).pins
    tables = {name: (pin.function.inputs, truth_table(pin.function)) for name, pin in pins.items() if pin.function}
    assert tables == {
        "Y[0]": (("A[1]",), 0b01),
        "Y[1]": (("A[0]",), 0b01),
        "Z[0]": (("A[1]",), 0b10),
        "Z[1]": (("A[0]",), 0b10),
        "Z[2]": ((), 0),
    }


def test_depth_and_length_are_bounded():
    """Parentheses cost no stack, and an endless expression is refused in time."""
    start = process_time()
    assert understood(assigned("(" * 900 + "a" + ")" * 900)).pins["Y"].function.program == ("$0",)
    assert understood(assigned("^".join("a" * 400))).pins["Y"].function.inputs == ("a",)
    (cell,) = models(assigned("^".join("a" * 100_000))).values()
    assert "more than 2000 words" in cell.not_understood
    assert process_time() - start < 10
