"""Directives: conditions, macros, includes; every line keeps its file; whatever is wrong is told in bounded time."""

import time
from pathlib import Path

import pytest

from auditor.errors import InputError, TroubleList
from auditor.verilog.preprocess import Preprocessor
from auditor.verilog.read import read_verilog
from auditor.verilog.statements import Module, Reading
from auditor.verilog.text import SourceText

_M = "module m(input a); endmodule\n"


def _resolved(text: str, defines: dict[str, str] | None = None) -> str:
    """Return the words of a text without directives."""
    troubles = TroubleList()
    source = Preprocessor(defines or {}, (), troubles, Reading()).run(text, Path("f.v"))
    assert not troubles.troubles
    assert source is not None
    assert source.text.count("\n") == text.count("\n")
    return " ".join(source.text.split())


def _messages(folder: Path, text: str) -> list[str]:
    (folder / "n.v").write_text(text)
    with pytest.raises(InputError) as caught:
        read_verilog([folder / "n.v"])
    return [str(trouble).replace(f"{folder}/", "") for trouble in caught.value.troubles]


def _read(folder: Path, text: str, **options: object) -> tuple[Module, Reading]:
    """Return the module ``m`` and what was met beside it; both lanes agree."""
    (folder / "n.v").write_text(text)
    reading = Reading()
    modules = read_verilog([folder / "n.v"], reading=reading, **options)  # type: ignore[arg-type]  # of read_verilog
    assert modules == read_verilog([folder / "n.v"], lane="grammar", **options)  # type: ignore[arg-type]  # likewise
    return modules["m"], reading


def test_a_text_without_a_backtick_is_not_touched() -> None:
    """It is the same object, with all its lines in one file."""
    text = "module m; endmodule\n"
    source = Preprocessor({}, (), TroubleList(), Reading()).run(text, Path("f.v"))
    assert isinstance(source, SourceText)
    assert source.text is text
    assert source.spans.between(1, 1) is None


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("`ifdef A\na\n`elsif B\nb\n`elsif C\nc\n`else\nd\n`endif\ne", "d e"),
        ("`define B\n`ifdef A\na\n`elsif B\nb\n`elsif B\nc\n`else\nd\n`endif", "b"),
        ("`ifndef A a `else b `endif", "a"),
        ("`ifdef A `ifdef B a `else b `endif `elsif C `else c `endif", "c"),
        ("`define A\n`undef A\n`ifdef A a `else b `endif", "b"),
        ("`define A\n`undefineall\n`ifdef A a `else b `endif", "b"),
        ("`define W 4\n`define R [`W-1:0]\nwire `R x;", "wire [4-1:0] x;"),
        ("`define f(x) x x\n`f(`f(`f(a)))", "a a a a a a a a"),
        ("`define f(x, y=b) x y\n`f( a ) `f(a,c)", "a b a c"),
        ("`define P A\nINV u(.`P (a));", "INV u(.A (a));"),
        ("`define E\n`E`E`E a", "a"),
        ("`define N \\a[0] \nINV u(.A(`N));", "INV u(.A(\\a[0] ));"),
        ('"`a" \\b`c /* `d */ // `e', '"`a" \\b`c /* `d */ // `e'),
        ('`ifdef A\nDon\'t "panic `x\n`undefined\n`include "none"\n`endif\na', "a"),
        ("`timescale 1 ns / 10ps // c\na", "// c a"),
        ("`celldefine `endcelldefine `resetall `default_nettype none `nounconnected_drive a", "a"),
        ('`line 7 "other.v" 1\n`begin_keywords "1364-2001" a\n`pragma once\n`end_keywords', "a"),
    ],
)
def test_directives_are_resolved(text: str, words: str) -> None:
    """Conditions, macros and their corners, as IEEE 1364-2005, clause 19, has them; no line moves."""
    assert _resolved(text) == words


def test_macros_from_outside_hold_from_the_start(tmp_path: Path) -> None:
    """``defines`` choose branches and have texts; a definition in the text replaces them, and that is noted."""
    text = "`ifdef SCAN\nmodule m(input [`W-1:0] a); endmodule\n`else\nnothing\n`endif\n`define W 5\n`define W 5\n"
    module, reading = _read(tmp_path, text, defines={"SCAN": "", "W": "3"})
    assert module.nets["a"].range == (2, 0)
    assert reading.notes == [f"{tmp_path / 'n.v'}:6: macro `W is defined anew, first by --define"]


def test_macros_of_one_file_are_known_to_the_next(tmp_path: Path) -> None:
    """The files of a run are one text in this, as the standard has it; a default net type ends with its file."""
    (tmp_path / "a.v").write_text("`define N m\n`default_nettype none\nmodule k(input a); endmodule")
    (tmp_path / "b.v").write_text("module `N(input a); INV u(.A(b)); endmodule")
    modules = read_verilog([tmp_path / "a.v", tmp_path / "b.v"])
    assert [(module.name, module.implicit_nets) for module in modules.values()] == [("k", False), ("m", True)]


def test_every_statement_keeps_its_file_and_line(tmp_path: Path) -> None:
    """Includes within and outside modules, uses of macros over several lines, and an include without a line end."""
    (tmp_path / "sub").mkdir()
    (tmp_path / "sub" / "defs.vh").write_text(
        "`define INVS(n, o) INV n``_1(.A(a), \\\n  .Y(o)); INV n``_2(.A(o))\n// end"
    )
    (tmp_path / "sub" / "body.vh").write_text('\nwire z;\n`include "more.vh"\nINV b(\n .A(a)); // last')
    (tmp_path / "sub" / "more.vh").write_text("INV c(.A(z));")
    text = (
        '`include "defs.vh"\nmodule m(input a);\nINV d(.A(a)); `include <body.vh>\n`INVS(\n e,\n f // c\n);\n'
        "INV g(.A(~a)), \n h(.A(a));\nendmodule\nmodule k(input a);\nINV i(.A(a));\nendmodule\n"
    )
    (tmp_path / "n.v").write_text(text)
    reading = Reading()
    modules = read_verilog([tmp_path / "n.v"], include=[tmp_path / "none", tmp_path / "sub"], reading=reading)
    places = {
        i.name: str(m.place_of(i.line)).removeprefix(f"{tmp_path}/") for m in modules.values() for i in m.instances
    }
    assert places == {
        "d": "n.v:3", "c": "sub/more.vh:1", "b": "sub/body.vh:4", "e_1": "n.v:4", "e_2": "n.v:4", "g": "n.v:8",
        "h": "n.v:9", "i": "n.v:12",
    }  # fmt: skip
    assert [str(module.place).removeprefix(f"{tmp_path}/") for module in modules.values()] == ["n.v:2", "n.v:11"]
    assert str(modules["m"].place_of(modules["m"].nets["z"].line)) == f"{tmp_path}/sub/body.vh:2"
    assert modules["k"].spans is None
    assert [path.name for path in reading.included] == ["defs.vh", "body.vh", "more.vh"]


def test_troubles_name_the_included_file(tmp_path: Path) -> None:
    """What is wrong in an included file is told with its own line, and so is a net declared in two files."""
    (tmp_path / "b.vh").write_text("wire x;\nassign x = a +\n a;\n")
    text = 'module m(input a);\nwire y;\n`include "b.vh"\nwire y;\nwire x;\nwire 3;\nendmodule\n'
    assert _messages(tmp_path, text) == [
        "b.vh:2: found +, which is not structural; write it with ~ & | ^ ?: or as gates",
        "n.v:4: y is declared again, first on line 2; leave one of the declarations out",
        "n.v:5: x is declared again, first at b.vh:1; leave one of the declarations out",
        "n.v:6: syntax error at 3; mend the text, or give it as plain structural Verilog",
    ]


def test_an_included_file_may_be_empty_and_guarded(tmp_path: Path) -> None:
    """Files that include each other under guards are no loop, and each is listed once."""
    (tmp_path / "a.vh").write_text('`ifndef A\n`define A\n`include "b.vh"\nwire x;\n`endif')
    (tmp_path / "b.vh").write_text('`include "a.vh"\n`include "empty.vh"\n')
    (tmp_path / "empty.vh").write_text("")
    module, reading = _read(tmp_path, 'module m(input a);\n`include "a.vh"\n`include "a.vh"\nassign x = a;\nendmodule')
    (assign,) = module.assigns
    assert str(module.place_of(assign.line)) == f"{tmp_path}/n.v:4"
    assert str(module.place_of(module.nets["x"].line)) == f"{tmp_path}/a.vh:4"
    assert [path.name for path in reading.included] == ["a.vh", "b.vh", "empty.vh"]


@pytest.mark.parametrize(
    ("text", "messages"),
    [
        ("\n`FOO\n`FOO `BAR\n" + _M, [
            "n.v:2: macro `FOO is not defined; give --define FOO=VALUE or the file that defines it",
            "n.v:3: macro `BAR is not defined; give --define BAR=VALUE or the file that defines it"]),
        ("`define WIDTH 3\n`WIDHT\n" + _M, ["n.v:2: macro `WIDHT is not defined; did you mean WIDTH?"]),
        ('\n`include "none.vh"\n' + _M, [
            "n.v:2: there is no file none.vh to include; give its folder with --include DIR"]),
        ("`include none\n" + _M, ["n.v:1: directive `include is not complete; mend or remove it"]),
        ('`include "n.v"\n' + _M, ["n.v:1: n.v includes itself, here through n.v; break the circle"]),
        ("`ifdef X\n`else\n`else\n`endif\n`endif\n`ifdef Y\n" + _M, [
            "n.v:3: `else without an open `ifdef; remove it or mend what stands before it",
            "n.v:5: `endif without an open `ifdef; remove it or mend what stands before it",
            "n.v:6: a condition begins here and never ends; end it with `endif"]),
        ("`define a `b\n`define b (`a)\n`a\n" + _M, [
            "n.v:3: macro `a is part of its own text; mend its definition"]),
        ("`define f(a,b) a\n`f(1)\n`f\n`f(1\n", [
            "n.v:2: macro `f is given 1 argument; give it what it takes: a, b",
            "n.v:3: macro `f is used without its arguments; write `f(a, b)",
            "n.v:4: macro `f is used without its arguments; write `f(a, b)"]),
        ("`define f(a,1) a\n`define g(a\n`define 3\n`define ifdef x\n" + _M, [
            "n.v:1: found 1 among the parameters of macro `f; write names there",
            "n.v:2: the parameters of macro `g are not ended; end them with )",
            "n.v:3: directive `define is not complete; mend or remove it",
            "n.v:4: `ifdef is a directive and no name for a macro; give the macro another name"]),
        ("`unconnected_drive pull1\n`default_nettype wand\n`timescale 1ns\n" + _M + "`", [
            "n.v:1: `unconnected_drive pull1 drives pins that are open; tie these pins and remove it",
            "n.v:2: `default_nettype wand makes undeclared nets more than wires; declare the nets",
            "n.v:3: directive `timescale is not complete; mend or remove it",
            "n.v:5: found ` alone; mend the text"]),
        (_M + "`pragma protect begin\nxx", ["n.v:2: the text is encrypted from here on; give it in the clear"]),
    ],
)  # fmt: skip
def test_wrong_directives_are_named(tmp_path: Path, text: str, messages: list[str]) -> None:
    """Each has its place, what was found, and what to do; an undefined macro is told once."""
    assert _messages(tmp_path, text) == messages


def _doubling(leaf: str) -> str:
    """Return macros of which each is the next one twice."""
    return "".join(f"`define m{k} `m{k + 1} `m{k + 1}\n" for k in range(60)) + f"`define m60 {leaf}\n`m0\n"


@pytest.mark.parametrize(
    ("text", "message"),
    [
        (_doubling("x"), "n.v:62: macros make too much text here"),
        (_doubling(""), "n.v:62: macros make too much text here"),
        ("`define f(x) `f(x x)\n`f(1)\n", "n.v:2: macros make too much text here"),
        (
            "".join(f"`define m{k} `m{k + 1}\n" for k in range(9999)) + "`m0\n",
            "n.v:10000: macro `m256 stands more than",
        ),
        ('`include "d0.vh"\n', "files or 134217728 characters are included"),
    ],
)
def test_what_grows_without_end_is_stopped(tmp_path: Path, text: str, message: str) -> None:
    """Macros and includes that double at every step, or go ever deeper, end soon with one trouble."""
    for k in range(40):
        (tmp_path / f"d{k}.vh").write_text(f'`include "d{k + 1}.vh"\n' * 2)
    (tmp_path / "d40.vh").write_text("")
    start = time.process_time()
    (found,) = _messages(tmp_path, text + _M)
    assert message in found
    assert time.process_time() - start < 10


def test_conditions_may_be_nested_deep(tmp_path: Path) -> None:
    """Thirty thousand open conditions need no recursion."""
    module, _ = _read(tmp_path, "`ifndef X\n" * 30_000 + _M + "`endif\n" * 30_000)
    assert module.place.line == 30_001


def test_arguments_may_be_nested_deep_and_recursion_is_not_blamed_on_them(tmp_path: Path) -> None:
    """A macro in its own argument is no recursion."""
    text = "`define i(x) x\nmodule m(input a); INV u(.A(" + "`i(" * 200 + "a" + ")" * 200 + ")); endmodule"
    module, _ = _read(tmp_path, text)
    assert module.instances[0].connections == (("A", "a"),)


def test_escaped_names_may_hold_every_character(tmp_path: Path) -> None:
    """All printable characters may stand in an escaped name (IEEE 1364-2005, 3.7.1), signs of comments too."""
    every = "".join(map(chr, range(33, 127)))
    names = [f"{every}", "/*", "//", "(*", "`ifdef", '"', "a;b", "endmodule", "\\", "{}"]
    text = "`timescale 1ns/1ns\nmodule m(input a);\n"
    text += "".join(f"wire \\{name} ; INV \\{name}_ (.\\{name} (\\{name} ));\n" for name in names)
    module, _ = _read(tmp_path, text + "endmodule")
    assert list(module.nets) == ["a", *names]
    assert [instance.name for instance in module.instances] == [f"{name}_" for name in names]
    assert [instance.connections[0] for instance in module.instances] == [(name, name) for name in names]


def test_a_long_line_is_read_in_time_and_memory_that_grow_with_it(tmp_path: Path) -> None:
    """Megabytes in one line take ten times what a tenth of them takes, with some room for noise."""
    times = []
    for count in (10_000, 100_000):
        text = "`define A a\nmodule m(input `A); " + "".join(f"INV u{k}(.A(a), .Y(y[{k}])); " for k in range(count))
        (tmp_path / "n.v").write_text(text + "wire [9:0] y; endmodule")
        start = time.process_time()
        (module,) = read_verilog([tmp_path / "n.v"]).values()
        times.append(time.process_time() - start)
        assert len(module.instances) == count
        assert {instance.line for instance in module.instances} == {2}
    assert times[1] < 30 * times[0]
