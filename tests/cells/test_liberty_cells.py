"""Cells from Liberty groups: pins, functions, buses, storage, and the words for what is not understood."""

import pytest

from auditor.cells.function import truth_table
from auditor.cells.liberty import parse_liberty
from auditor.cells.liberty_cells import liberty_cell
from auditor.cells.liberty_pins import library_defaults
from auditor.cells.library import Function
from auditor.notation import SourcePlace


def read(body, library=""):
    """Return the cell X with this body in a library with these statements."""
    (group,) = parse_liberty(f"library (l) {{ {library}\n cell (X) {{ {body} }} }}", "f.lib")
    (cell,) = group.inside("cell")
    return liberty_cell(cell, library_defaults(group, "f.lib"))


def understood(body, library=""):
    cell = read(body, library)
    assert cell.not_understood == ""
    return cell


INPUTS = "pin (A, B, CK, D, EN, R, S) { direction : input; }"
Q = 'pin (Q) { direction : output; function : "IQ"; } pin (QN) { direction : output; function : "IQN"; }'


def test_pins_of_a_gate():
    """Directions, functions, Z condition, loads, limit, area and place of a gate, power pins apart."""
    cell = understood(
        """area : 2.5; pg_pin (VDD) { pg_type : primary_power; }
        pin ("A") { direction : input; capacitance : 1.5; } pin (B) { direction : "input"; capacitance : "2"; }
        pin (EN) { direction : input; }
        pin (Y) { direction : output; function : "A B'"; three_state : "!EN"; max_capacitance : 60; }""",
        "capacitive_load_unit (1, ff);",
    )
    assert cell.place == SourcePlace("f.lib", 2)
    assert cell.area == 2.5
    assert {name: pin.direction for name, pin in cell.pins.items()} == {
        "VDD": "power",
        "A": "input",
        "B": "input",
        "EN": "input",
        "Y": "output",
    }
    y = cell.pins["Y"]
    assert y.function == Function(("A", "B"), ("$0", "$1", "!", "&"))
    assert y.three_state == Function(("EN",), ("$0", "!"))
    assert [cell.pins[p].capacitance_ff for p in ("A", "B", "EN", "Y")] == [1.5, 2.0, None, None]
    assert (y.limit_ff, cell.pins["A"].limit_ff) == (60.0, None)
    assert not cell.storage


@pytest.mark.parametrize(
    ("unit", "capacitance"),
    [
        ("capacitive_load_unit (1, pf);", 2.0),
        ('capacitive_load_unit (1.0000, "pf");', 2.0),
        ("capacitive_load_unit (10, ff);", 0.02),
        ('capacitive_load_unit ("1", "FF");', 0.002),
        ("", 2.0),
    ],
)
def test_capacitance_in_the_library_unit(unit, capacitance):
    """Values are turned into fF by capacitive_load_unit; without one they are pF."""
    assert (
        understood("pin (A) { direction : input; capacitance : 0.002; }", unit).pins["A"].capacitance_ff == capacitance
    )


@pytest.mark.parametrize(
    ("pin", "capacitance", "limit"),
    [
        ("direction : input;", 5.0, None),
        ("direction : input; capacitance : 0;", 0.0, None),
        ("direction : input; rise_capacitance : 2; fall_capacitance : 3;", 3.0, None),
        ("direction : input; fall_capacitance : 2;", 2.0, None),
        ("direction : input; capacitance : VDD * 2;", 5.0, None),
        ("direction : inout;", 6.0, 70.0),
        ("direction : output;", None, 70.0),
        ("direction : output; max_capacitance : 8;", None, 8.0),
        ("direction : internal;", None, None),
        ("", 5.0, None),
        ('function : "1";', None, 70.0),
    ],
)
def test_capacitance_and_limit_fall_back(pin, capacitance, limit):
    """Missing loads come from rise and fall, then from the library's defaults; so do limits and directions."""
    defaults = "default_input_pin_cap : 5; default_inout_pin_cap : 6; default_max_capacitance : 70;"
    cell = understood(f"pin (P) {{ {pin} }}", f"capacitive_load_unit (1, ff); {defaults}")
    assert (cell.pins["P"].capacitance_ff, cell.pins["P"].limit_ff) == (capacitance, limit)


def test_cells_without_pins_or_functions_are_fine():
    """Fill and decap cells, and outputs without a function, are no trouble."""
    assert dict(understood("area : 1;").pins) == {}
    assert understood("pin (Y) { direction : output; }").pins["Y"].function is None


def test_ties():
    """Constant outputs are functions without inputs."""
    cell = understood('pin (H) { direction : output; function : "1"; } pin (L) { direction : output; function : "0"; }')
    assert [cell.pins[p].function for p in "HL"] == [Function((), ("1",)), Function((), ("0",))]


def test_internal_pins_are_put_into_the_outputs():
    """An output over internal pins, or over another output, becomes a function of inputs."""
    cell = understood(
        INPUTS
        + """pin (Z) { direction : output; function : "!Y"; } pin (Y) { direction : output; function : "n ^ B"; }
        pin (n) { direction : internal; function : "A & S"; }"""
    )
    assert cell.pins["Y"].function == Function(("A", "S", "B"), ("$0", "$1", "&", "$2", "^"))
    assert cell.pins["Z"].function.program == ("$0", "$1", "&", "$2", "^", "!")


def test_flip_flop_by_position():
    """The two last arguments of ff are the variables, whatever they are called; edges come from the expression."""
    cell = understood(
        INPUTS
        + Q
        + """ff ("D", IQ, IQN) { next_state : "(D & !S) | (A & S)"; clocked_on : "!CK"; clear : "R'";
        preset : "EN"; clear_preset_var1 : H; clear_preset_var2 : L; }"""
    )
    (bit,) = cell.storage
    assert (bit.variable, bit.kind, bit.both) == ("IQ", "flip-flop", "1")
    assert bit.clock == Function(("CK",), ("$0", "!"))
    assert bit.data.inputs == ("D", "S", "A")
    assert (bit.clear, bit.preset) == (Function(("R",), ("$0", "!")), Function(("EN",), ("$0",)))
    assert cell.pins["Q"].function == Function(("IQ",), ("$0",))
    assert cell.pins["QN"].function == Function(("IQ",), ("$0", "!"))


def test_latches():
    """A latch is open at enable; one with neither enable nor data holds under clear and preset."""
    (bit,) = understood(INPUTS + Q + 'latch (IQ, IQN) { enable : "EN A"; data_in : "D"; }').storage
    assert (bit.kind, bit.clock.inputs, bit.data.inputs) == ("latch", ("EN", "A"), ("D",))
    (bit,) = understood(INPUTS + Q + 'latch (IQ, IQN) { clear : "R"; preset : "S"; }').storage
    assert (bit.clock, bit.data) == (Function((), ("0",)), Function(("IQ",), ("$0",)))


def test_one_variable_is_enough():
    """A flip-flop without a second variable works; so does one whose data holds the variable."""
    body = 'pin (Q) { direction : output; function : "IQ"; } ff (IQ) { next_state : "(D EN) | (IQ !EN)"; '
    (bit,) = understood(INPUTS + body + 'clocked_on : "CK"; }').storage
    assert bit.data.inputs == ("D", "EN", "IQ")


def test_two_stored_bits_in_a_row():
    """The data of a bit may be another stored bit."""
    cell = understood(
        INPUTS
        + """pin (Q) { direction : output; function : "M2"; }
        ff (M1, M1N) { next_state : "D"; clocked_on : "CK"; }
        ff (M2, M2N) { next_state : "!M1N"; clocked_on : "CK"; }"""
    )
    assert [bit.data for bit in cell.storage] == [Function(("D",), ("$0",)), Function(("M1",), ("$0",))]


@pytest.mark.parametrize(
    ("first", "second", "both"),
    [
        ("H", "L", "1"),
        ("L", "H", "0"),
        ("l", "", "0"),
        ("", "L", "1"),
        ("", "H", "0"),
        ("H", "H", ""),
        ("L", "L", ""),
        ("N", "N", ""),
        ("T", "T", ""),
        ("X", "H", ""),
        ("H", "X", ""),
        ("", "", ""),
    ],
)
def test_clear_and_preset_together(first, second, both):
    """H and L force a value; N, T, X and a pair that does not complement leave it undefined."""
    forced = (f"clear_preset_var1 : {first}; " if first else "") + (f"clear_preset_var2 : {second};" if second else "")
    body = f'ff (IQ, IQN) {{ next_state : "D"; clocked_on : "CK"; clear : "R"; preset : "S"; {forced} }}'
    assert understood(INPUTS + Q + body).storage[0].both == both
    assert understood(INPUTS + Q + body.replace('preset : "S";', "")).storage[0].both == ""


def test_a_state_variable_named_like_a_pin():
    """Where ff names its variable like the output pin, the function means the variable."""
    cell = understood(
        INPUTS
        + """pin (Q) { direction : output; function : "Q"; } pin (QN) { direction : output; function : "QN"; }
        ff (Q, QN) { next_state : "(D EN) | (Q !EN)"; clocked_on : "CK"; }"""
    )
    (bit,) = cell.storage
    assert bit.variable == "Q.state"
    assert bit.data.inputs == ("D", "EN", "Q.state")
    assert cell.pins["Q"].function == Function(("Q.state",), ("$0",))
    assert cell.pins["QN"].function == Function(("Q.state",), ("$0", "!"))


BUS4 = "type (four) { base_type : array; bit_width : 4; bit_from : 3; bit_to : 0; downto : true; }"


@pytest.mark.parametrize(("library", "cell"), [(BUS4, ""), ("", BUS4)], ids=["in the library", "in the cell"])
def test_buses(library, cell):
    """A bus has the bits of its type, which inherit from it; a bank stores one bit each, by position."""
    x = understood(
        cell
        + """pin (CK) { direction : input; }
        bus (D) { bus_type : four; direction : input; capacitance : 2; pin ("D[3:2]") { capacitance : 3; } }
        bus ("Q") { bus_type : "four"; direction : output; function : "IQ"; }
        ff_bank (IQ, IQN, 4) { next_state : "D"; clocked_on : "CK"; }""",
        "capacitive_load_unit (1, ff);" + library,
    )
    assert list(x.pins) == ["CK", "D[3]", "D[2]", "D[1]", "D[0]", "Q[3]", "Q[2]", "Q[1]", "Q[0]"]
    assert [x.pins[f"D[{k}]"].capacitance_ff for k in range(4)] == [2.0, 2.0, 3.0, 3.0]
    state = {bit.variable: bit.data.inputs for bit in x.storage}
    assert [state[x.pins[f"Q[{k}]"].function.inputs[0]] for k in range(4)] == [(f"D[{k}]",) for k in range(4)]


def test_a_bus_without_type_and_a_range_of_pins():
    """Bits may be declared by pin groups alone, in the bus or in the cell, in either direction."""
    assert list(understood("bus (D) { direction : input; pin (D[0]) { } pin (D[1]) { } }").pins) == ["D[0]", "D[1]"]
    assert list(understood('pin ("D[0:2]", E) { direction : input; }').pins) == ["D[0]", "D[1]", "D[2]", "E"]


def test_bundles():
    """A bundle names its members; functions over bundles hold member by member, scalar names stay."""
    x = understood(
        """pin (EN) { direction : input; } bundle (D) { members (D1, D2); direction : input; }
        bundle (Q) { members ("Q1, Q2"); direction : output; function : "IQN"; }
        latch_bank ("IQ", "IQN", 2) { data_in : "!D"; enable : "EN"; }"""
    )
    assert [bit.data for bit in x.storage] == [Function(("D1",), ("$0",)), Function(("D2",), ("$0",))]
    assert [x.pins[q].function.inputs for q in ("Q1", "Q2")] == [("IQN[0]",), ("IQN[1]",)]
    assert [truth_table(x.pins[q].function) for q in ("Q1", "Q2")] == [0b10, 0b10]


GATE = "clock_gating_integrated_cell : latch_posedge;"


@pytest.mark.parametrize(
    ("body", "reason"),
    [
        (
            'ff (IQ, IQN) { next_state : "D"; clocked_on : "CK"; clocked_on_also : "A"; }',
            "its ff has a second clock (clocked_on_also), which is not read",
        ),
        (
            'latch (IQ, IQN) { data_in : "D"; enable : "EN"; enable_also : "A"; }',
            "its latch has a second clock (enable_also), which is not read",
        ),
        ('ff (IQ, IQN) { next_state : "D"; }', "its ff has no clocked_on"),
        ('ff (IQ, IQN) { clocked_on : "CK"; }', "its ff has no next_state"),
        ('latch (IQ, IQN) { enable : "EN"; }', "its latch has no data_in"),
        ("latch (IQ, IQN) { }", "its latch has no enable"),
        ("ff () { }", "its ff group does not name its variables and width"),
        ("ff_bank (IQ, IQN, 99999) { }", "its ff_bank group does not name its variables and width"),
        ("ff_bank (IQ, IQN) { }", "its ff_bank group does not name its variables and width"),
        (
            'pin (Y) { direction : output; function : "A &"; }',
            "the function of pin Y cannot be read: it ends where a pin is expected, "
            'at column 4 of the expression, near "A &"',
        ),
        (
            'ff (IQ, IQN) { next_state : ")"; clocked_on : "CK"; }',
            "the next_state of its ff cannot be read: ')' stands where a pin is expected, "
            'at column 1 of the expression, near ")"',
        ),
        (
            'pin (Y) { direction : output; function : "A & N1"; }',
            "the function of pin Y uses N1, which is neither a pin nor a state variable",
        ),
        (
            'pin (Y) { direction : output; three_state : "n"; } pin (n) { direction : internal; }',
            "three_state of pin Y uses n, which is a pin without a function",
        ),
        (
            'pin (Y) { direction : output; function : "Z"; } pin (Z) { direction : output; function : "!Y"; }',
            "the functions of its pins Y, Z depend on each other in a circle",
        ),
        ('pin ("P[0:999999999]") { direction : input; }', "its P has more than 65536 bits"),
        ("bus (P) { bus_type : none; direction : input; }", "its bus P does not say which bits it has"),
        (
            'bus (P) { direction : input; pin (P[0], P[1]) { } } pin (Y) { direction : output; function : "P"; }',
            "the function of pin Y uses P, which has several bits, as one",
        ),
    ],
)
def test_what_is_not_understood_is_said_in_words(body, reason):
    """Such a cell keeps its pins and loads, and says why its behaviour is unknown."""
    cell = read("area : 3; " + INPUTS.replace("input;", "input; capacitance : 0.001;") + body)
    assert cell.not_understood == reason
    assert cell.storage == ()
    assert all(pin.function is None for pin in cell.pins.values())
    assert (cell.name, cell.area, cell.place) == ("X", 3.0, SourcePlace("f.lib", 2))
    if not reason.startswith(("its bus", "its P")):
        assert cell.pins["A"].capacitance_ff == 1.0


def test_a_described_clock_gate_is_understood():
    """A clock gate with a latch and a function needs no state table."""
    body = GATE + INPUTS + 'pin (G) { direction : output; function : "CK & IQ"; }'
    cell = understood(body + 'latch (IQ, IQN) { data_in : "EN"; enable : "!CK"; }')
    assert cell.pins["G"].function.inputs == ("CK", "IQ")


def test_internal_pins_that_double_each_other_are_no_cell():
    """A chain of pins whose written-out function would grow without bound is refused in time."""
    chain = "".join(f'pin (n{k}) {{ direction : internal; function : "n{k + 1} ^ n{k + 1}"; }}' for k in range(60))
    cell = read(chain + "pin (n60) { direction : input; }")
    assert "has more than 100000 terms" in cell.not_understood
