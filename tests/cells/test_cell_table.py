"""The cell table: what it can say, every message, and the stub that asks to be filled in."""

import tomllib

import pytest

from auditor.cells.cell_table import looks_like_table, stub, table_cells
from auditor.cells.expression import parse_expression
from auditor.cells.library import Function
from auditor.errors import InputError
from auditor.notation import SourcePlace

FULL = """# cells of the block that no file describes
[cell.MX]
inputs = ["A", "B", "S"]
outputs = { Y = "(A & !S) | (B & S)" }
power = ["VDD", "VSS"]
capacitance_ff = { A = 1.2, B = 1, S = 2 }
limit_ff = { Y = 60 }
three_state = { Y = "!S" }
area = 3.5

[cell.FF]
inputs = ["CK", "D", "RN", "S"]
outputs = { Q = "state", QN = "!state" }
[cell.FF.flip-flop]
clock = "CK"
data = "D"
clear = "!RN"
preset = "S"
both = "1"

[cell."LA T"]
inputs = ["EN", "D"]
outputs = { "Q[0]" = "state & EN" }
latch = { clock = "EN", data = "!D" }
"""


def messages(text):
    with pytest.raises(InputError) as caught:
        table_cells(text, "t.toml")
    return str(caught.value).splitlines()


def test_a_gate():
    """Inputs, outputs, power pins, loads, limits, Z condition, area and place come as written."""
    cell = table_cells(FULL, "t.toml")["MX"]
    assert {name: pin.direction for name, pin in cell.pins.items()} == {
        "A": "input",
        "B": "input",
        "S": "input",
        "Y": "output",
        "VDD": "power",
        "VSS": "power",
    }
    assert cell.pins["Y"].function == parse_expression("(A & !S) | (B & S)")
    assert cell.pins["Y"].three_state == Function(("S",), ("$0", "!"))
    assert [cell.pins[p].capacitance_ff for p in "ABSY"] == [1.2, 1.0, 2.0, None]
    assert (cell.pins["Y"].limit_ff, cell.area, cell.place) == (60.0, 3.5, SourcePlace("t.toml", 2))


def test_a_flip_flop():
    """The stored bit is called state; clear and preset are active at 1."""
    cell = table_cells(FULL, "t.toml")["FF"]
    (bit,) = cell.storage
    assert (bit.variable, bit.kind, bit.both) == ("state", "flip-flop", "1")
    assert (bit.clock, bit.data) == (Function(("CK",), ("$0",)), Function(("D",), ("$0",)))
    assert (bit.clear, bit.preset) == (Function(("RN",), ("$0", "!")), Function(("S",), ("$0",)))
    assert cell.pins["QN"].function == Function(("state",), ("$0", "!"))
    assert cell.place == SourcePlace("t.toml", 11)


def test_a_latch_in_inverted_polarity():
    """A bit stored inverted is settled as everywhere; quoted names and inline tables are TOML like any other."""
    cell = table_cells(FULL, "t.toml")["LA T"]
    (bit,) = cell.storage
    assert (bit.kind, bit.variable, bit.data) == ("latch", "state.inverted", Function(("D",), ("$0",)))
    assert cell.pins["Q[0]"].function == Function(("state.inverted", "EN"), ("$0", "!", "$1", "&"))


def test_an_enable_may_use_the_state():
    """Data may hold the state itself; a cell without outputs is fine."""
    text = '[cell.E]\ninputs = ["C", "D", "G"]\n[cell.E.flip-flop]\nclock = "C"\ndata = "(D & G) | (state & !G)"\n'
    assert table_cells(text, "t.toml")["E"].storage[0].data.inputs == ("D", "G", "state")


FIRST = FULL.partition("[cell.FF]")[0]
SECOND = (
    FULL.partition("power")[0] + '[cell.FF]\ninputs = ["CK", "D"]\noutputs = { Q = "state" }\n[cell.FF.flip-flop]\n'
)
WHOLE = SECOND + 'clock = "CK"\ndata = "D"\n'


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("[cell.A\n", "t.toml:1: this is not valid TOML: Expected ']' at the end of a table declaration; mend it"),
        ("[cell.A]\narea = ", "t.toml:2: this is not valid TOML: Invalid value (at end of document); mend it"),
        ("[cells.A]\n", "t.toml:1: unknown key cells; did you mean cell?"),
        ("cell = 3\n", "t.toml:1: cell is not a table; make it a table"),
        ("[cell]\nA = 3\n", "t.toml:2: cell.A is not a table; make it a table"),
        (FIRST.replace("area", "aera"), "t.toml:9: unknown key cell.MX.aera; did you mean area?"),
        (
            FIRST.replace("area", "xyz"),
            "t.toml:9: unknown key cell.MX.xyz; use inputs, outputs, power, capacitance_ff, limit_ff, three_state, "
            "area, flip-flop, latch",
        ),
        (FIRST.replace("3.5", '"3"'), "t.toml:9: cell.MX.area is not a number from 0 on; make it a number from 0 on"),
        (FIRST.replace("3.5", "-1"), "t.toml:9: cell.MX.area is not a number from 0 on; make it a number from 0 on"),
        (FIRST.replace("3.5", "true"), "t.toml:9: cell.MX.area is not a number from 0 on; make it a number from 0 on"),
        (FIRST.replace("3.5", "inf"), "t.toml:9: cell.MX.area is not a number from 0 on; make it a number from 0 on"),
        (
            FIRST.replace('["VDD", "VSS"]', '"VDD"'),
            "t.toml:5: cell.MX.power is not a list of names in quotes; make it a list of names in quotes",
        ),
        (
            FIRST.replace('{ Y = "(A', '{ Y = 1, Z = "(A'),
            "t.toml:4: cell.MX.outputs.Y is not a text in quotes; make it a text in quotes",
        ),
        (FIRST.replace("VSS", "A"), "t.toml:2: the cell MX names its pin A twice; leave it in one list"),
        (
            FIRST.replace("{ A = 1.2", "{ A = 1.2, C = 1"),
            "t.toml:6: unknown input cell.MX.capacitance_ff.C; use A, B, S",
        ),
        (FIRST.replace("{ Y = 60", "{ YY = 60"), "t.toml:7: unknown output cell.MX.limit_ff.YY; did you mean Y?"),
        (
            FIRST.replace('{ Y = "!S"', '{ Z = "!S"'),
            "t.toml:8: unknown output cell.MX.three_state.Z; use Y",
        ),
        (
            FIRST.replace("(B & S)", "(B & S"),
            "t.toml:4: cell.MX.outputs.Y cannot be read: a parenthesis is not closed, at column 18 of the expression, "
            'near "(A & !S) | (B & S"; write an expression such as A & !B',
        ),
        (
            FIRST.replace("(A & !S) |", "A ^ S"),
            "t.toml:4: cell.MX.outputs.Y mixes ^ with operands side by side; add parentheses",
        ),
        (
            FIRST.replace("(B & S)", "(B & SEL)"),
            "t.toml:4: cell.MX.outputs.Y uses SEL, which is no input of the cell; name it among the inputs",
        ),
        (
            WHOLE.replace('"state"', '"stat"'),
            "t.toml:7: cell.FF.outputs.Q uses stat, which is no input of the cell; did you mean state?",
        ),
        (
            FIRST.replace("(B & S)", "state"),
            "t.toml:4: cell.MX.outputs.Y uses state, which is no input of the cell; name it among the inputs",
        ),
        (
            SECOND + 'data = "D"\n',
            "t.toml:8: cell.FF.flip-flop.clock is missing; add clock, an expression over the inputs",
        ),
        (
            SECOND + 'clock = "CK"\n',
            "t.toml:8: cell.FF.flip-flop.data is missing; add data, an expression over the inputs",
        ),
        (WHOLE + 'dta = "D"\n', "t.toml:11: unknown key cell.FF.flip-flop.dta; did you mean data?"),
        (WHOLE + 'both = "2"\n', 't.toml:11: cell.FF.flip-flop.both is not "0" or "1"; make it "0" or "1"'),
        (
            WHOLE + '[cell.FF.latch]\nclock = "CK"\ndata = "D"\n',
            "t.toml:5: a cell stores one bit; leave either flip-flop or latch",
        ),
        (
            WHOLE.replace('"CK", "D"]', '"CK", "D", "state"]'),
            "t.toml:5: a pin is named state, as the stored bit is; describe the cell in a Liberty file",
        ),
    ],
)
def test_every_mistake_is_told_with_its_line(text, expected):
    """One mistake gives one message: file, line, what was found, what to do."""
    assert messages(text) == [expected]


def test_all_mistakes_are_told_together():
    """The troubles of a table are collected and sorted by line."""
    text = FULL.replace("area = 3.5", "aera = 3").replace('data = "D"', 'data = "E"').replace("= 60", '= "60"')
    assert [line.partition(" ")[0] for line in messages(text)] == ["t.toml:7:", "t.toml:9:", "t.toml:16:"]


@pytest.mark.parametrize("name", ["DFFX1", "A.B", 'odd "name"', "back\\slash", "line\nbreak", "\x7f", "é"])
def test_a_stub_is_valid_but_not_filled_in(name):
    """Whatever the names, the stub is TOML, names all pins, and is rejected until its blanks are filled in."""
    text = stub(name, ["CK", "D[0]", name])
    entry = tomllib.loads(text)["cell"][name]
    assert entry["inputs"] == ["CK", "D[0]", name]
    assert entry["outputs"] == {"CK": "?", "D[0]": "?", name: "?"}
    with pytest.raises(InputError, match="is not filled in yet: "):
        table_cells(text, "t.toml")
    assert looks_like_table(text)


def test_the_message_for_a_stub():
    """One message per cell lists the blanks; a stub without pins is an empty cell."""
    assert messages(stub("X", ["A", "Y"]) + stub("Z", ["B"])) == [
        "t.toml:1: the cell X is not filled in yet: cell.X.outputs.A, cell.X.outputs.Y; "
        "write the function of each output, and leave each pin in one list",
        "t.toml:10: the cell Z is not filled in yet: cell.Z.outputs.B; "
        "write the function of each output, and leave each pin in one list",
    ]
    assert table_cells(stub("E", []), "t.toml")["E"].pins == {}


def test_a_stub_filled_in_as_it_says():
    """Pins moved and blanks written as the comments ask give the cell."""
    text = stub("DFFX1", ["CK", "D", "Q"])
    text = text.replace('["CK", "D", "Q"]', '["CK", "D"]').replace('{ CK = "?", D = "?", Q = "?" }', '{ Q = "state" }')
    head, _, tail = text.partition("# [cell.")
    tail = tail.replace("# ", "").replace('clock = "?"', 'clock = "CK"').replace('data = "?"', 'data = "D"')
    (bit,) = table_cells(f"{head}[cell.{tail}", "t.toml")["DFFX1"].storage
    assert (bit.kind, bit.data.inputs) == ("flip-flop", ("D",))
