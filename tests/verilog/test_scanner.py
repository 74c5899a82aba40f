"""The fast lane: what it reads by itself, what it leaves waiting, and that no text throws it."""

import contextlib
from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from auditor.errors import InputError, TroubleList
from auditor.netlist.flatten import flatten
from auditor.verilog.draft import Draft
from auditor.verilog.read import read_verilog
from auditor.verilog.scanner import scan
from auditor.verilog.statements import Lines, Module, Reading
from auditor.verilog.text import SourceText
from tests.support.structural_texts import structural_texts

_HEAD = "module m(input a, input [3:0] v, output y);\n"


def _scanned(text: str, troubles: TroubleList) -> list[Draft]:
    """Return the drafts of a text without directives and comments."""
    return scan(SourceText(text, Lines((1,), ("f.v",), (1,))), troubles, Reading()).drafts


@pytest.mark.parametrize(
    "text",
    [
        "INV u(.A(a), .Y(y));",
        "INV \\u/1[0] ( .A ( \\v[3] [2] ) ,\n.Y( ) );",
        "DFF u(a, v[1], {a, v[3:2]}, );",
        "nand (y, a, v[0]), g(y, a, a); buf #(1,2) b(y, a);",
        "assign y = a, {y, v[0]} = {v[1], 1'b0};",
        "wire [7:-1] w, \\x(*y ; wire z = a; supply0 g; tri t; uwire u;",
        "INV u(.A({a, v[1:0], 2'b1x}));",
        "specify (a => y) = 1; endspecify;",
    ],
)
def test_plain_text_never_waits_for_the_grammar(text: str) -> None:
    """All that gate-level netlists are made of is read by the fast lane alone."""
    troubles = TroubleList()
    (draft,) = _scanned(_HEAD + text + "\nendmodule\n", troubles)
    assert not draft.waiting
    assert not troubles.troubles


def test_only_what_is_not_plain_waits() -> None:
    """Of a statement only the items that are not plain wait, each with its place among the others."""
    text = _HEAD + "INV a1(.A(a)), a2(.A(~a)), a3(.A(y));\nassign y = a, v[0] = a ^ y;\nwire [3-1:0] w;\nendmodule"
    (draft,) = _scanned(text, TroubleList())
    assert [(wait.kind, wait.instances_before, wait.assigns_before) for wait in draft.waiting] == [
        ("instance", 1, 0),
        ("assign", 2, 1),
        ("declaration", 2, 1),
    ]
    assert [instance.name for instance in draft.instances] == ["a1", "a3"]


@pytest.mark.parametrize("text", ["INV u(.wire(a));", "INV u(.A(wire));", "INV wire(.A(a));", "nand wire(y, a, a);"])
def test_keywords_are_never_names(text: str) -> None:
    """The fast lane leaves a statement that uses a keyword as a name to the grammar, which refuses it."""
    (draft,) = _scanned(_HEAD + text + "\nendmodule", TroubleList())
    assert not draft.instances
    assert len(draft.waiting) == 1


def test_after_a_parameter_nothing_is_plain() -> None:
    """A name may then be a number, so that the fast lane must not take it for a net."""
    (draft,) = _scanned(_HEAD + "INV u(.A(a));\nparameter P = 1;\nINV w(.A(P));\nendmodule", TroubleList())
    assert [instance.name for instance in draft.instances] == ["u"]
    assert [wait.kind for wait in draft.waiting] == ["parameter", "instance"]


@settings(deadline=None, max_examples=80, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(
    text=structural_texts(),
    wounds=st.lists(
        st.tuples(
            st.integers(0, 10**6),
            st.integers(0, 9),
            st.sampled_from(["", ";", ")", "(", "[", "]", "{", "}", ",", ".", "\\", "'", '"', "=", "~", "\n", "0", "x",
                             " wire ", " endmodule ", " module ", "/*", "(*", "*)", "//", "`", "#", ":", "assign ",
                             ".*", ", .a", "`SAME(", "`endif ", "`ifdef X ", "`define Y\\\n", " signed ", " wand ",
                             " tri1 ", " logic ", "(pull0, strong1) ", "#(2) ", " defparam u0.N = 1; ", " primitive "]),
        ),
        min_size=1,
        max_size=4,
    ),
)  # fmt: skip
def test_a_damaged_text_is_read_or_refused(tmp_path: Path, text: str, wounds: list[tuple[int, int, str]]) -> None:
    """Whatever is cut out of a text or put into it, both lanes give the same modules or both an InputError."""
    for place, length, inserted in wounds:
        start = place % len(text)
        text = text[:start] + inserted + text[start + length :]
    (tmp_path / "n.v").write_text(text)
    answers: list[dict[str, Module] | None] = [None, None]
    with contextlib.suppress(InputError):
        answers[0] = read_verilog([tmp_path / "n.v"])
    with contextlib.suppress(InputError):
        answers[1] = read_verilog([tmp_path / "n.v"], "grammar")
    assert answers[0] == answers[1]
    if answers[0] is not None:
        with contextlib.suppress(InputError):
            netlist = flatten(answers[0], None)
            assert len(netlist.first_pin) == len(netlist.instance_names) + 1
