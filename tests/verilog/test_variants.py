"""Parameters: each module is read once for every set of values that its instances give."""

from pathlib import Path

import pytest

from auditor.netlist.flatten import flatten
from auditor.verilog.statements import Range
from tests.support.verilog_text import messages_of, modules_of

_SIZED = (
    "module s #(parameter N=2, parameter [1:0] K = N) (input [N-1:0] a, output y);\n"
    "localparam L = N + 1; wire [L-1:0] w; INV u(.A(K), .Y(w)); endmodule\n"
)
_HEAD = "module m(input [3:0] v, output y);\n"


@pytest.mark.parametrize(
    ("instance", "name", "width"),
    [
        ("s u(.a(v[1:0]), .y(y));", "s", 2),
        ("s #(4) u(.a(v), .y(y));", "s #(N=4)", 4),
        ("s #4 u(.a(v), .y(y));", "s #(N=4)", 4),
        ("s #(.K(1), .N(3)) u(.a(v[2:0]), .y(y));", "s #(K=1, N=3)", 3),
        ("s #(.N(2'd3)) u(.a(v[2:0]), .y(y));", "s #(N=2'b11)", 3),
        ("s u(.a(v), .y(y)); defparam u.N = 2 * 2;", "s #(N=4)", 4),
        ("defparam u.K = 1, u.N = 1;\ns u(.a(v[0]), .y(y));", "s #(K=1, N=1)", 1),
        ("parameter P = 3; s #(.N(P)) u(.a(v[P-1:0]), .y(y));", "s #(N=3)", 3),
        ("s #() u(.a(v[1:0]), .y(y));", "s", 2),
    ],
)
def test_values_reach_the_ranges_of_the_module(tmp_path: Path, instance: str, name: str, width: int) -> None:
    """By order, by name and by defparam; what depends on the parameter follows, and the netlist is flat and whole."""
    modules = modules_of(tmp_path, _SIZED + _HEAD + instance + "\nendmodule")
    (given,) = modules["m"].instances
    assert given.cell == name
    assert list(modules) == (["s", "m"] if name == "s" else ["m", name])
    assert (modules[name].nets["a"].range, modules[name].nets["w"].range) == (Range(width - 1, 0), Range(width, 0))
    assert flatten(modules, "m").instance_names == ["u.u"]


def test_a_module_is_read_once_for_every_set_of_values(tmp_path: Path) -> None:
    """Instances with equal values share a variant; one under its own values stays; values go down the hierarchy."""
    text = (
        "module mid #(parameter W=1) (input [W:0] v); s #(.N(W+1)) u(.a(v)); endmodule\n"
        "module m(input [3:0] v); mid #(3) a(v); mid #(3) b(v); mid c(v[1:0]); s d(.a(v[1:0])); endmodule"
    )
    modules = modules_of(tmp_path, _SIZED + text)
    assert list(modules) == ["s", "mid", "m", "s #(N=2)", "mid #(W=3)", "s #(N=4)"]
    assert sorted(flatten(modules, None).instance_names) == ["a.u.u", "b.u.u", "c.u.u", "d.u"]


def test_a_module_that_nobody_uses_under_its_own_values_is_no_top(tmp_path: Path) -> None:
    """Neither it nor what only it instantiates is left as a candidate."""
    text = (
        "module mid #(parameter W=1) (input [W:0] v); s #(.N(W+1)) u(.a(v)); endmodule\n"
        "module m(input [3:0] v); mid #(3) a(v); s #(1) d(.a(v[0])); endmodule"
    )
    modules = modules_of(tmp_path, _SIZED + text)
    assert list(modules) == ["m", "mid #(W=3)", "s #(N=1)", "s #(N=4)"]


def test_a_cell_that_no_module_describes_is_another_one_under_values(tmp_path: Path) -> None:
    """What it does may depend on them, so that a library cell of the plain name does not describe it."""
    text = _HEAD + 'X #(.INIT(1\'b0)) a(y); X #(  "no",\n3) b(y); X c(y); X d(y); defparam d.Q = 1;\nendmodule'
    cells = [instance.cell for instance in modules_of(tmp_path, text)["m"].instances]
    assert cells == ["X #(.INIT(1'b0))", 'X #( "no", 3)', "X", "X #(Q=1)"]


def test_what_a_primitive_is_given_is_a_delay(tmp_path: Path) -> None:
    """A primitive that the text defines is a cell, its table is passed over, and its instances need no name."""
    text = (
        "primitive P(y, a);\noutput y; input a;\ntable 0 : 1; 1 : 0; endtable\nendprimitive\n"
        + _HEAD
        + "P #1 u(y, v[0]);\nP (y, v[1]);\nP #(1, 2) w(y, v[1]);\nendmodule"
    )
    module = modules_of(tmp_path, text)["m"]
    assert [(instance.cell, instance.name, instance.line) for instance in module.instances] == [
        ("P", "u", 6), ("P", "P$1", 7), ("P", "w", 8)]  # fmt: skip


@pytest.mark.parametrize(
    ("text", "messages"),
    [
        ("s #(.XYZ(2)) u(.a(v));", ["n.v:4: s has no parameter XYZ; use one of N, K"]),
        ("s #(1,2,3) u(.a(v));", ["n.v:4: s is given 3 parameters and has 2; leave some out"]),
        ("s #(v) u(.a(v));", ["n.v:4: found v where a constant number should stand; write a number there"]),
        ("s ok(.a(v));\ndefparam okk.N = 2, a.b.N = 3;", [
            "n.v:5: defparam a.b.N names no parameter of an instance of this module; set it where the instance stands",
            "n.v:5: defparam names okk, which is no instance of module m; did you mean ok?"]),
        ("s #(2) u(.a(v));\ndefparam u.K = 2;", [
            "n.v:5: u is given parameters where it stands and by defparam; give all where it stands"]),
        ("s u(.a(v));\ndefparam u.L = 2;", ["n.v:5: s has no parameter L; use one of N, K"]),
        ("m #(2) u(.a(v));", ["n.v:4: m is given 1 parameters and has 0; leave some out"]),
    ],
)  # fmt: skip
def test_wrong_values_are_named(tmp_path: Path, text: str, messages: list[str]) -> None:
    """Unknown parameters, too many, and instances that are not there."""
    assert messages_of(tmp_path, _SIZED + _HEAD + text + "\nendmodule") == messages


def test_a_module_that_asks_for_ever_more_of_itself_is_stopped(tmp_path: Path) -> None:
    """Variants are bounded."""
    text = "module r #(parameter N=1) (input a); r #(N + 1) u(a); endmodule\nmodule m(input a); r u(a); endmodule"
    assert messages_of(tmp_path, text) == ["n.v:1: r is given more than 1000 sets of values; give them fewer"]
