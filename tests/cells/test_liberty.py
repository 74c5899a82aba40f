"""The Liberty reader: every form that real files have, every way in which a file is broken."""

import gzip
import time
from pathlib import Path

import pytest

from auditor.cells.liberty import parse_liberty, read_liberty
from auditor.errors import InputError

REAL = Path(__file__).parents[3] / "shared" / "cells"
PLAIN = """library (small) {
  cell (AND2) {
    area : 1.5;
    pin (A) { direction : input; capacitance : 0.001; }
    pin (Y) { direction : output; function : "A & B"; timing () { cell_rise (t) { values ("1, 2", "3, 4"); } } }
  }
}
"""


def shape(group):
    """Return a group as nested plain data, without lines."""
    return (group.kind, group.arguments, group.attributes, [shape(inner) for inner in group.groups])


def message(text, file="f.lib"):
    with pytest.raises(InputError) as caught:
        parse_liberty(text, file)
    return str(caught.value)


def cell_of(body):
    """Return the only cell of a library whose cell has this body."""
    (library,) = parse_liberty(f"library (l) {{ cell (X) {{ {body} }} }}", "f.lib")
    (cell,) = library.inside("cell")
    return cell


def test_plain_text_is_read_into_groups():
    """Kinds, arguments, attributes and nesting come as written; timing is skipped; lines count from 1."""
    (library,) = parse_liberty(PLAIN, "f.lib")
    pins = [
        ("pin", ("A",), {"direction": ("input",), "capacitance": ("0.001",)}, []),
        ("pin", ("Y",), {"direction": ("output",), "function": ("A & B",)}, []),
    ]
    assert shape(library) == ("library", ("small",), {}, [("cell", ("AND2",), {"area": ("1.5",)}, pins)])
    (cell,) = library.inside("cell")
    assert (library.line, cell.line, [pin.line for pin in cell.groups]) == (1, 2, [4, 5])
    assert (cell.value("area"), cell.value("none"), cell.value("none", "d")) == ("1.5", "", "d")


@pytest.mark.parametrize(
    ("change", "name"),
    [
        (lambda t: t.replace("(AND2)", '("AND2")'), "quoted names"),
        (lambda t: t.replace(": input", ': "input"').replace("1.5", '"1.5"'), "quoted values and numbers"),
        (lambda t: t.replace(";\n", "\n").replace("; }", " }"), "missing semicolons"),
        (lambda t: t.replace("}", "};"), "semicolons after braces"),
        (lambda t: t.replace("(", " \n ( ").replace(":", "\n:\n").replace("{", "\n{"), "line breaks anywhere"),
        (lambda t: t.replace("  pin", "\\\n  pin").replace('"A & B"', '"A \\\n& B"'), "continued lines"),
        (
            lambda t: t.replace("{", '/* { " } */ {').replace(";", "; // } it's \" {\n"),
            "comments with braces and quotes",
        ),
        (lambda t: t.replace("cell_rise", 'when : "{ A } }"; cell_rise'), "braces in strings of skipped groups"),
        (lambda t: t.replace("cell_rise", 'when : "\\"A[0]{\\" "; cell_rise'), "escaped quotes in skipped groups"),
        (lambda t: t.replace("cell_rise", "a () { b () { c () { } d () {} } } cell_rise"), "deep skipped groups"),
        (lambda t: "define (x, cell, string);\n/* a */ " + t, "statements in front"),
    ],
)
def test_spellings_that_mean_the_same(change, name):
    """Each way to write the same library gives the same groups."""
    changed = change(PLAIN)
    assert changed != PLAIN, name
    assert [shape(group) for group in parse_liberty(changed, "f.lib")] == [
        shape(group) for group in parse_liberty(PLAIN, "f.lib")
    ]


def test_names_and_values_of_all_forms():
    """Lists, ranges, escaped quotes, expressions and empty arguments arrive as written."""
    cell = cell_of(
        'pin (A, "B") { function : "\\"D[0]\\" & A"; } pin ("D[3:0]") { } ff ("CK", IQ , IQN) { } '
        "bundle (Q) { members (Q1, Q2); } leakage : VDD * 2 + (0.5); eq = 3; voltage_map (VDD, 1.0); none (); "
        "type (b) { bit_width : 4; }"
    )
    kinds = [(group.kind, group.arguments) for group in cell.groups]
    assert kinds == [
        ("pin", ("A", "B")),
        ("pin", ("D[3:0]",)),
        ("ff", ("CK", "IQ", "IQN")),
        ("bundle", ("Q",)),
        ("type", ("b",)),
    ]
    assert cell.groups[0].value("function") == '"D[0]" & A'
    assert cell.groups[3].attributes == {"members": ("Q1", "Q2")}
    assert cell.attributes == {
        "leakage": ("VDD * 2 + (0.5)",),
        "eq": ("3",),
        "voltage_map": ("VDD", "1.0"),
        "none": (),
    }


def test_a_continued_string_is_joined():
    """Backslash and line break inside a string vanish, with blanks between them too."""
    assert cell_of('a : "x\\\ny"; b : "x\\  \ny";').attributes == {"a": ("xy",), "b": ("xy",)}


def test_several_libraries_and_no_test_cell():
    """All library groups of a file come back; a test_cell is not mixed with its cell."""
    text = PLAIN + PLAIN.replace("small", "more").replace("area", 'test_cell () { pin (Z) { function : "0"; } } area')
    first, second = parse_liberty(text, "f.lib")
    assert (first.arguments, second.arguments) == (("small",), ("more",))
    assert [shape(cell) for cell in first.groups] == [shape(cell) for cell in second.groups]


def test_comment_signs_inside_strings_are_no_comments():
    """A URL or a /* in a string stays, and a comment after it is still one."""
    cell = cell_of('u : "http://a/*b"; /* gone : 1; */ v : 2; // w : 3;\n x : "//";')
    assert cell.attributes == {"u": ("http://a/*b",), "v": ("2",), "x": ("//",)}


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        (
            PLAIN[: PLAIN.index("pin (Y)")],
            "f.lib:4: the file ends inside the group that opens at line 2; "
            "give the whole file, or add the missing brace",
        ),
        (
            PLAIN[: PLAIN.index('"3, 4"')],
            "f.lib:5: the file ends inside the group that opens at line 5; "
            "give the whole file, or add the missing brace",
        ),
        (
            PLAIN.replace("area :", "area"),
            'f.lib:3: no Liberty statement can be read at "area 1.5;"; '
            "write it as name : value; or name (values) { ... }, or mend the braces before it",
        ),
        (
            PLAIN + "}",
            'f.lib:8: no Liberty statement can be read at "}"; '
            "write it as name : value; or name (values) { ... }, or mend the braces before it",
        ),
        (
            PLAIN.replace("pin (A)", "pin (A"),
            'f.lib:4: no Liberty statement can be read at "pin (A { direction : input; capacitance "; '
            "write it as name : value; or name (values) { ... }, or mend the braces before it",
        ),
        (
            PLAIN.replace('"A & B"', '"A & B'),
            "f.lib:5: a string opens here and is not closed on its line; "
            "add the closing quote, or a backslash at the end of each line of it",
        ),
        (
            PLAIN.replace("area", "\n/* area"),
            "f.lib:4: a comment opens here and is not closed; close it with */",
        ),
        ("cell (A) { }", "f.lib: there is no library group in it; give a Liberty file"),
        (
            "library (l) {\n  cell (A) {\n    pg_pin ",
            "f.lib:3: the file ends inside the group that opens at line 2; "
            "give the whole file, or add the missing brace",
        ),
    ],
    ids=[
        "cut in a cell",
        "cut in a table",
        "no colon",
        "brace too many",
        "no )",
        "no quote",
        "no */",
        "no library",
        "cut in a word",
    ],
)
def test_a_broken_file_is_told_with_its_line(text, expected):
    """Each syntax error and each cut gives one message with place and remedy."""
    assert message(text) == expected


def test_every_cut_of_a_file_is_noticed():
    """Whatever the length at which a file breaks off, an error with a place comes, never groups."""
    for length in range(1, PLAIN.rindex("}")):
        assert message(PLAIN[:length]).startswith("f.lib")


@pytest.mark.parametrize("blanks", [" \t\n" * 30_000, "; " * 50_000, "/* x */ " * 20_000, "\\\n" * 50_000])
def test_a_syntax_error_after_many_blanks_comes_at_once(blanks):
    """No way to split blanks and comments is tried twice: 100,000 signs before an error cost no time."""
    start = time.perf_counter()
    assert "no Liberty statement can be read at" in message("library (l) {" + blanks + "!}")
    assert "no Liberty statement can be read at" in message("library (l) { a" + blanks.replace(";", "") + "!}")
    assert time.perf_counter() - start < 2


def test_depth_costs_no_stack():
    """A hundred thousand groups inside each other are read or skipped."""
    depth = 100_000
    for kind in ("cell", "timing"):
        text = "library (l) {" + f"{kind} (a) {{" * depth + "}" * depth + "}"
        (library,) = parse_liberty(text, "f.lib")
        assert len(library.groups) == (kind == "cell")


@pytest.mark.skipif(not REAL.exists(), reason="the two open libraries are not beside this repository")
@pytest.mark.parametrize("name", ["sky130hd_tt.lib.gz", "sg13g2_stdcell_typ_1p20V_25C.lib.gz"])
def test_real_libraries_agree_with_an_independent_reader(tmp_path, name):
    """Cells, pins, areas and expressions agree with lln-libparse (PyPI), the Liberty reader of a synthesis tool."""
    libparse = pytest.importorskip("libparse", reason="lln-libparse is no requirement of the tests")
    plain = tmp_path / "plain.lib"
    plain.write_bytes(gzip.decompress((REAL / name).read_bytes()))
    with plain.open() as file:
        tree = libparse.LibertyParser(file).ast
    (library,) = read_liberty(REAL / name)
    attributes = {"function", "three_state", "direction", "next_state", "clocked_on", "clear", "preset", "enable"}
    attributes |= {"data_in", "area", "capacitance", "max_capacitance", "clear_preset_var1", "state_function"}

    def theirs(node):
        inner = [child for child in node.children if child.id in ("cell", "pin", "ff", "latch", "statetable")]
        values = {child.id: child.value.strip('"') for child in node.children if child.id in attributes}
        return node.id, [a.strip('"') for a in node.args], values, [theirs(child) for child in inner]

    def ours(group):
        inner = group.inside("cell", "pin", "ff", "latch", "statetable")
        values = {key: value[0] for key, value in group.attributes.items() if key in attributes}
        return group.kind, list(group.arguments), values, [ours(child) for child in inner]

    assert ours(library) == theirs(tree)
