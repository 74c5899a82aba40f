"""Directives of cell models: conditions, macros, includes, comments, and what is wrong in them."""

from pathlib import Path

import pytest

from auditor.cells.model_text import Preprocessor
from auditor.errors import TroubleList
from auditor.notation import SourcePlace


def resolved(text, defines=(), path=Path("m.v"), folders=()):
    """Return the words of a resolved text, those of a line joined, and the troubles as texts."""
    troubles = TroubleList()
    result = Preprocessor(dict(defines), folders).read(path, text, troubles)
    lines = [" ".join(line.split()) for line in result.text.split("\n")]
    assert len(lines) == len(result.places) or not result.places
    return [line for line in lines if line], [str(trouble) for trouble in troubles.troubles]


BRANCHES = "`ifdef A\na\n`elsif B\nb\n`else\nc\n`endif\nd"


@pytest.mark.parametrize(
    ("defines", "lines"),
    [({}, ["c", "d"]), ({"A": ""}, ["a", "d"]), ({"B": "1"}, ["b", "d"]), ({"A": "", "B": ""}, ["a", "d"])],
)
def test_the_first_branch_that_holds_is_kept(defines, lines):
    """One branch of a condition is kept, by what is defined."""
    assert resolved(BRANCHES, defines) == (lines, [])


def test_conditions_nest_and_stand_on_one_line():
    """A branch that does not count hides everything in it; a whole condition may stand on a line."""
    inner = '`ifdef NONE\n`ifndef NONE\nx\n`else\ny\n`endif\n`define N\n`include "none.v"\n`NONE\n`endif\nz'
    assert resolved(inner) == (["z"], [])
    assert resolved("a `ifdef N b `else c `endif d") == (["a c d"], [])
    assert resolved("`ifndef G\n`define G\n`ifdef G\nin\n`endif\n`endif\n`ifndef G\nagain\n`endif") == (["in"], [])


def test_macros_without_arguments():
    """Macros stand for text, also for other macros and for several lines, until they are forgotten."""
    assert resolved("`define D #1 // late\n`define E `D\nnot `E n(Y, A);") == (["not #1 n(Y, A);"], [])
    assert resolved("`define L a \\\n b\n`L c") == (["a", "b c"], [])
    assert resolved("`define D\n`undef D\n`ifdef D\nx\n`endif") == ([], [])
    assert resolved("x `D y", {"D": "#0.5"}) == (["x #0.5 y"], [])


def test_harmless_directives_and_comments_go():
    """Time scales and the like, comments and attributes leave blanks; signs in strings and escaped names do not."""
    text = (
        "`timescale 1ns/1ps\n`celldefine\n`default_nettype none\n`suppress_faults\n`resetall a /* x\n y */ b\n"
        '"// no" \\a//b (* keep = "*)" *) c @(*) d // end'
    )
    assert resolved(text) == (["a", "b", '"// no" \\a//b c @(*) d'], [])


def test_places_go_through_includes(tmp_path):
    """Every line says the file and line that it comes from, beside the including file or in a folder."""
    (tmp_path / "sub").mkdir()
    (tmp_path / "sub" / "a.vh").write_text("one\n`include <b.vh>\ntwo\n")
    (tmp_path / "b.vh").write_text("three")
    (tmp_path / "empty.vh").touch()
    text = 'zero\n`include "sub/a.vh"\n`include "empty.vh" // nothing\nfour'
    troubles = TroubleList()
    result = Preprocessor({}, [tmp_path]).read(tmp_path / "m.v", text, troubles)
    assert troubles.troubles == []
    found = [(p.file.removeprefix(f"{tmp_path}/"), p.line) for p in result.places]
    lines = result.text.split("\n")
    assert [(line, place) for line, place in zip(lines, found, strict=True) if line] == [
        ("zero", ("m.v", 1)),
        ("one", ("sub/a.vh", 1)),
        ("three", ("b.vh", 1)),
        ("two", ("sub/a.vh", 3)),
        ("four", ("m.v", 4)),
    ]


def test_definitions_hold_in_the_files_that_follow():
    """What one file defines the next one knows."""
    reader, troubles = Preprocessor({}, ()), TroubleList()
    reader.read(Path("a.v"), "`define D x", troubles)
    result = reader.read(Path("b.v"), "`D", troubles)
    assert (result.text, result.places) == ("x", [SourcePlace("b.v", 1)])


@pytest.mark.parametrize(
    ("text", "trouble"),
    [
        ("a\n`UNIT b `UNIT", "m.v:2: the macro `UNIT is not defined; define it: --define UNIT=VALUE"),
        (
            "`define F(x) x\n`F(1)",
            "m.v:2: the macro `F takes arguments, which is not read in cell models; write it out",
        ),
        ("`define A `B\n`define B `A\n`A", "m.v:3: the macro `A grows without end; mend its definition"),
        ("`ifdef A\n", "m.v:1: this condition is not ended; end it with `endif"),
        ("`ifdef\n`endif", "m.v:1: the condition names no macro; name it"),
        ("\n`endif", "m.v:2: `endif without `ifdef; leave it out or mend the conditions"),
        ("`else", "m.v:1: `else without `ifdef; leave it out or mend the conditions"),
        ("`elsif A", "m.v:1: `elsif without `ifdef or without a name; mend the conditions"),
        ("`define", "m.v:1: `define names no macro; name it"),
        ("`undef 1", "m.v:1: `undef names no macro; name it"),
        ('`include "none.vh"', "m.v:1: the included file none.vh is missing; put it beside this one"),
        ("`include none.vh", '`include is not followed by one file name in "", alone on its line; mend it'),
        ("a\n/* b\n", "m.v:2: a comment opens here and is not closed; close it with */"),
        ("` a", "m.v:1: the macro ` is not defined"),
    ],
)
def test_wrong_directives_are_told_once_with_their_line(text, trouble):
    """Each has one message that says where it is and what to do."""
    (told,) = resolved(text)[1]
    assert trouble in told


def test_includes_without_end(tmp_path):
    """A file that includes itself twice over ends at once with one message."""
    loop = tmp_path / "loop.v"
    loop.write_text('`include "loop.v"\n`include "loop.v"\n')
    (trouble,) = resolved(loop.read_text(), path=loop)[1]
    assert trouble.startswith(f"{loop}:1: files include each other without end, here loop.v")


def test_a_macro_that_doubles_is_stopped():
    """Forty macros that double each other do not fill the memory."""
    text = "".join(f"`define M{k} `M{k + 1} `M{k + 1}\n" for k in range(40)) + f"`define M40 {'x' * 2000}\n`M0\n"
    (trouble,) = resolved(text)[1]
    assert "the macro `M0 grows without end" in trouble
