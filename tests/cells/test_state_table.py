"""State tables, state functions and the words for clock gates: what they mean, and what is refused."""

import pytest

from auditor.cells.function import truth_table
from auditor.cells.liberty import parse_liberty
from auditor.cells.liberty_cells import liberty_cell
from auditor.cells.liberty_pins import library_defaults
from auditor.cells.library import Function

PINS = "pin (CK, EN, TE, D, R) { direction : input; } "
SHOWN = 'pin (Q) { direction : output; internal_node : "IQ"; }'
ITSELF, INVERSE = ("$0",), ("$0", "!")


def read(body):
    """Return the cell X with this body."""
    (group,) = parse_liberty(f"library (l) {{ cell (X) {{ {body} }} }}", "f.lib")
    (cell,) = group.inside("cell")
    return liberty_cell(cell, library_defaults(group, "f.lib"))


def table(inputs, rows, rest=SHOWN, node="IQ"):
    """Return the cell of a state table."""
    return read(f'{PINS} statetable ("{inputs}", "{node}") {{ table : "{rows}"; }} {rest}')


def only_bit(cell):
    """Return the one stored bit of a cell that is understood."""
    assert cell.not_understood == ""
    (bit,) = cell.storage
    return bit


GATE = 'pin (n) { direction : internal; internal_node : "n"; } pin (G) { direction : output; state_function : "CK n"; }'


@pytest.mark.parametrize(
    "rows",
    [
        "L L : - : L, L H : - : H, H - : - : N",
        "L L/H : - : L/H, H - : - : N",
        "h - : h/l : H/L ,\\\n  L H/L : L/H : - , L H : - : H, L L : - : L",
        "H - : - : N, L H : - : H, L L : H : L, L L : L : N",
    ],
)
def test_a_clock_gate_is_a_latch_and_a_gate(rows):
    """Any way to write the table gives the latch that is open while the clock is low, and CK & state behind it."""
    cell = table("CK EN", rows.replace("L H/L : L/H : - ,", ""), GATE, "n")
    bit = only_bit(cell)
    assert (bit.kind, bit.variable, bit.clear, bit.preset) == ("latch", "n.state", None, None)
    assert (bit.clock, bit.data) == (Function(("CK",), INVERSE), Function(("EN",), ITSELF))
    assert cell.pins["G"].function == Function(("CK", "n.state"), ("$0", "$1", "&"))
    assert cell.pins["n"].direction == "internal"


def test_the_node_need_not_be_a_pin():
    """A state function may name the node itself, and a node named like nothing else keeps its name."""
    rest = 'pin (G) { direction : output; state_function : "CK IQ"; }'
    cell = table("CK EN", "L L : - : L, L H : - : H, H - : - : N", rest)
    assert only_bit(cell).variable == "IQ"
    assert cell.pins["G"].function.inputs == ("CK", "IQ")


@pytest.mark.parametrize(
    ("rows", "clock"),
    [
        ("R L : - : L, R H : - : H, ~R - : - : N", ITSELF),
        ("F H/L : - : H/L, ~F - : - : N", INVERSE),
        ("F H/L : - : H/L, R - : - : N, H - : - : N, ~F - : L : L, ~F - : H : H", INVERSE),
    ],
)
def test_edges_give_a_flip_flop(rows, clock):
    """R, F, ~R and ~F: the clock edge is found from the rows."""
    bit = only_bit(table("CK D", rows))
    assert (bit.kind, bit.clock, bit.data) == ("flip-flop", Function(("CK",), clock), Function(("D",), ITSELF))


def test_clear_and_enable_in_a_state_table():
    """An asynchronous clear, and an enable that becomes part of the data."""
    rows = "- - - L : - : L, R H/L H H : - : H/L, R - L H : - : N, ~R - - H : - : N"
    bit = only_bit(table("CK D EN R", rows))
    assert (bit.clear, bit.preset, bit.both) == (Function(("R",), INVERSE), None, "")
    assert set(bit.data.inputs) == {"D", "EN", bit.variable}
    order = [bit.data.inputs.index(name) for name in ("D", "EN", bit.variable)]
    for d, en, q in [(d, en, q) for d in (0, 1) for en in (0, 1) for q in (0, 1)]:
        place = d << order[0] | en << order[1] | q << order[2]
        assert truth_table(bit.data) >> place & 1 == (d if en else q)


def test_a_state_function_beside_a_latch_group():
    """The bit may stand in a latch group while the output is a state function of it."""
    rest = (
        'latch (IQ, IQN) { data_in : "EN"; enable : "CK\'"; } pin (G) { direction : output; state_function : "CK IQ"; }'
    )
    cell = read(PINS + rest)
    assert only_bit(cell).clock == Function(("CK",), INVERSE)
    assert cell.pins["G"].function.inputs == ("CK", "IQ")


MARKED = "pin ({}) {{ direction : input; clock_gate_{}_pin : true; }} "
OUT = 'pin (G) { direction : output; clock_gate_out_pin : "true"; }'


def gate(word, test=False, rest=OUT):
    """Return the clock gate that a word and marked pins describe."""
    pins = MARKED.format("CP", "clock") + MARKED.format("E", "enable") + MARKED.format("T", "test") * test
    return read(f"clock_gating_integrated_cell : {word}; {pins} {rest}")


@pytest.mark.parametrize("edge", ["posedge", "negedge"])
@pytest.mark.parametrize("control", ["", "_precontrol", "_postcontrol"])
def test_the_word_for_a_clock_gate(edge, control):
    """All latch-based styles: simulated over clock, enable, test and state against the structure in words."""
    cell = gate(f"latch_{edge}{control}", test=bool(control))
    bit = only_bit(cell)
    output = cell.pins["G"].function
    for place in range(16):
        value = {"CP": place & 1, "E": place >> 1 & 1, "T": place >> 2 & 1, bit.variable: place >> 3 & 1}
        at = lambda f, v=value: truth_table(f) >> sum(v[x] << j for j, x in enumerate(f.inputs)) & 1  # noqa: E731
        before = value["E"] | (value["T"] if control == "_precontrol" else 0)
        after = value[bit.variable] | (value["T"] if control == "_postcontrol" else 0)
        assert at(bit.data) == before
        assert at(bit.clock) == (1 - value["CP"] if edge == "posedge" else value["CP"])
        assert at(output) == (value["CP"] & after if edge == "posedge" else value["CP"] | (1 - after))


LATCH = "L L : - : L, L H : - : H, H - : - : N"


@pytest.mark.parametrize(
    ("cell", "reason"),
    [
        (table("CK D", "x"), "row 1 of its state table has not 2 inputs, a state and a next state"),
        (table("CK D", "L L : - : L, L H H : - : H"), "row 2 of its state table has not 2 inputs"),
        (table("CK D", "L Z : - : L"), "row 1 of its state table holds Z, which has no meaning there"),
        (table("CK D", "L H : R : L"), "row 1 of its state table holds R, which has no meaning there"),
        (table("CK D", "L/H L/H : - : L/H"), "row 1 of its state table leaves open which"),
        (table("CK D", "L L : - : L, L - : - : H, H - : - : N"), "rows of its state table contradict each other"),
        (table("CK D", "L L : - : L, L H : - : H"), "its state table is neither a flip-flop nor a latch"),
        (table("CK D", "R - : L : H, R - : H : L, ~R - : - : N", node="IQ2"), "its pin Q shows IQ, which is no node"),
        (table("CK D", LATCH, node="IQ JQ"), "its state table has 2 internal nodes; one alone is read"),
        (table("CK P", LATCH), "its state table uses P, which is no input pin"),
        (table("", LATCH), "its state table has 0 inputs; 1 to 12 are read"),
        (table("CK D", LATCH, node="D"), "its state table has D as input and as internal node"),
        (table("CK D", LATCH, 'latch (A, B) { data_in : "D"; }'), "its stored bits are described more than once"),
        (read(PINS + SHOWN), "its pin Q shows a stored bit, and no state table describes one"),
        (read(PINS + 'pin (Q) { direction : output; state_function : "CK IQ"; }'), "its pin Q shows a stored bit"),
        (gate("none_posedge"), "it is an integrated clock gate (none_posedge) whose behaviour is given by that word"),
        (gate("latch_posedge_precontrol_obs", test=True), "it is an integrated clock gate"),
        (gate("latch_posedge", test=True), "it is an integrated clock gate (latch_posedge) whose behaviour is given"),
        (gate("latch_posedge_precontrol"), "it is an integrated clock gate (latch_posedge_precontrol) whose"),
        (gate("latch_posedge", rest=OUT + MARKED.format("E2", "enable")), "it is an integrated clock gate"),
    ],
)
def test_what_is_not_one_latch_or_flip_flop_is_refused_in_words(cell, reason):
    """Such a cell has no behaviour and says why."""
    assert cell.not_understood.startswith(reason)
    assert cell.storage == ()
    assert all(pin.function is None for pin in cell.pins.values())


def test_a_table_that_toggles_is_a_flip_flop():
    """A divider by two has the inverse of its state as data; it is no latch."""
    bit = only_bit(table("CK D", "R - : L : H, R - : H : L, ~R - : - : N"))
    assert (bit.kind, bit.data.program) == ("flip-flop", INVERSE)


def test_long_tables_end_in_time():
    """Ten thousand rows over twelve inputs are evaluated or refused at once."""
    pins = " ".join(f"p{k}" for k in range(12))
    rows = ",".join([f"{'- ' * 12}: - : N"] * 10_001)
    cell = read(
        f'pin ({pins.replace(" ", ",")}) {{ direction : input; }} statetable ("{pins}", "n") {{ table : "{rows}"; }}'
    )
    assert cell.not_understood == "its state table has more than 10000 rows"
