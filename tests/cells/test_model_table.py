"""Tables of user-defined primitives against a simulation that matches their rows symbol by symbol.

The symbols are those of IEEE 1364-2005, table 8-1.
"""

import random
import re

import pytest

from auditor.cells.function import truth_table
from auditor.errors import InputError
from tests.support.cell_models import models, outputs, step, understood

LEVELS = {"0": "0", "1": "1", "x": "x", "?": "01x", "b": "01"}
CHANGES = {"r": ["01"], "f": ["10"], "p": ["01", "0x", "x1"], "n": ["10", "1x", "x0"]}
CHANGES["*"] = [a + b for a in "01x" for b in "01x" if a != b]


def primitive(ports, table, reg=True, name="p"):
    """Return the text of a primitive with output Q, a state if ``reg``."""
    state = "reg Q;" if reg else ""
    return f"primitive {name} (Q, {ports}); output Q; input {ports}; {state}\ntable\n{table}\nendtable\nendprimitive\n"


class Rows:
    """A sequential table, run on 0, 1 and x exactly as the standard says: rows of levels first, else x."""

    def __init__(self, table):
        self.rows = []
        for row in filter(str.strip, table.lower().split(";")):
            fields, before, after = row.split(":")
            self.rows.append((re.findall(r"\([^)]*\)|\S", fields), before.strip(), after.strip()))

    def next(self, before, now, state):
        """Return the state after the inputs, strings of levels, change in one place."""
        (changed,) = [j for j in range(len(now)) if before[j] != now[j]]
        for with_edge in (False, True):
            for fields, present, after in self.rows:
                has_edge = any(len(f) > 1 or f in CHANGES for f in fields)
                met = all(self.meets(f, j, changed, before, now) for j, f in enumerate(fields))
                if has_edge == with_edge and met and state in LEVELS[present]:
                    return state if after == "-" else after
        return "x"

    @staticmethod
    def meets(field, j, changed, before, now):
        if field in LEVELS:
            return now[j] in LEVELS[field]
        if j != changed:
            return False
        change = before[j] + now[j]
        if field in CHANGES:
            return change in CHANGES[field]
        return change[0] in LEVELS[field[1]] and change[1] in LEVELS[field[2]]


TABLES = {
    "flip-flop, every edge spelled out": ("D, C", "0 (01) : ? : 0; 1 (01) : ? : 1; ? (1?) : ? : -; (??) ? : ? : -;"),
    "flip-flop, letters": ("D, C", "0 r:?:0;1 R:?:1;? n:?:-;* ?:?:-;"),
    "flip-flop, falling, x reduced": (
        "C, D",
        "(10) 0 : ? : 0; (1x) 0 : 0 : 0; (10) 1 : ? : 1; (x0) 1 : 1 : 1; p ? : ? : -; b * : ? : -; x * : ? : -;",
    ),
    "clear and preset, clear wins": (
        "D, C, R, S",
        "? ? 1 ? : ? : 0; ? ? 0 1 : ? : 1; ? ? (10) 1 : ? : 1; 0 r 0 0 : ? : 0; 1 r 0 0 : ? : 1; ? f 0 0 : ? : -;"
        "* ? 0 0 : ? : -; ? ? (?0) 0 : ? : -; ? ? 0 (?0) : ? : -; 1 r 0 ? : ? : 1;",
    ),
    "preset wins, holes where no state can be": (
        "SET, RESET, C, D",
        "0 1 ? ? : ? : 0; 0 * ? ? : 0 : 0; 1 ? ? ? : ? : 1; * 0 ? ? : 1 : 1; 0 ? (01) 0 : ? : 0; ? 0 (01) 1 : ? : 1;"
        "0 ? p 0 : 0 : 0; ? 0 p 1 : 1 : 1; 0 0 n ? : ? : -; 0 0 ? * : ? : -;",
    ),
    "enable inside": (
        "D, E, C",
        "? 0 ? : ? : -; 0 1 r : ? : 0; 1 1 r : ? : 1; ? ? f : ? : -; * ? b : ? : -; ? * b : ? : -;",
    ),
    "toggle": ("T, C", "0 r : ? : -; 1 r : 0 : 1; 1 r : 1 : 0; ? f : ? : -; * ? : ? : -;"),
    "scan": (
        "D, SI, SE, C",
        "0 ? 0 r : ? : 0; 1 ? 0 r : ? : 1; ? 0 1 r : ? : 0; ? 1 1 r : ? : 1; ? ? ? f : ? : -;"
        "* ? ? ? : ? : -; ? * ? ? : ? : -; ? ? * ? : ? : -;",
    ),
    "latch of levels": ("D, G", "? 0 : ? : -; 0 1 : ? : 0; 1 1 : ? : 1; 0 x : 0 : 0; 1 x : 1 : 1;"),
    "latch of edges": (
        "D, G",
        "* 0 : ? : -; ? (?0) : ? : -; 0 (?1) : ? : 0; 1 (?1) : ? : 1; (?0) 1 : ? : 0; (?1) 1 : ? : 1;",
    ),
    "latch, open low, with clear": (
        "GN, RN, D",
        "? 0 ? : ? : 0; 1 1 ? : ? : -; 0 1 0 : ? : 0; 0 1 1 : ? : 1; 0 ? 0 : ? : 0;",
    ),
    "latch with two gates": ("D, G, H", "? 0 ? : ? : -; ? ? 0 : ? : -; 0 1 1 : ? : 0; 1 1 1 : ? : 1;"),
    "set and reset alone": ("S, R", "0 0 : ? : -; 1 0 : ? : 1; ? 1 : ? : 0;"),
    "set and reset, set wins": ("S, R", "0 0 : ? : -; 1 ? : ? : 1; 0 1 : ? : 0;"),
    "never holding": ("A, B", "0 ? : ? : 1; 1 0 : ? : 1; 1 1 : ? : 0;"),
}


@pytest.mark.parametrize(("ports", "table"), TABLES.values(), ids=TABLES)
def test_the_storage_found_moves_as_the_rows_say(ports, table):
    """A random walk of single changes: as soon as the rows know the state, the storage has it, and never loses it."""
    cell = understood(primitive(ports, table))
    rows, names = Rows(table), ports.split(", ")
    assert [pin.name for pin in cell.pins.values() if pin.direction == "input"] == names
    for seed in range(5):
        chance = random.Random(seed)
        now = [chance.choice("01") for _ in names]
        expected, state, known = "0" if ports == "T, C" else "x", 0, 0  # what toggles can be known from the start alone
        for _ in range(400):
            before = list(now)
            changed = chance.randrange(len(now))
            now[changed] = "10"[int(now[changed])]
            pins = [dict(zip(names, map(int, levels), strict=True)) for levels in (before, now)]
            known_before = expected != "x"
            expected = rows.next(before, now, expected)
            if known_before:
                state = step(cell, *pins, state)
                assert outputs(cell, pins[1], state)["Q"] == int(expected)
            elif expected != "x":
                state = int(outputs(cell, pins[1], 1)["Q"] == int(expected))
            known += known_before
        assert known > 300


def test_the_structure_is_as_one_would_write_it():
    """Clear, preset, enable and clock come out over their own pins alone."""
    cells = {name: understood(primitive(*table)).storage[0] for name, table in TABLES.items()}
    both = cells["preset wins, holes where no state can be"]
    assert (both.kind, both.clear.inputs, both.preset.inputs, both.both) == ("flip-flop", ("RESET",), ("SET",), "1")
    assert (both.data.inputs, both.clock.inputs, both.clock.program) == (("D",), ("C",), ("$0",))
    assert cells["clear and preset, clear wins"].both == "0"
    assert cells["flip-flop, falling, x reduced"].clock.program == ("$0", "!")
    assert set(cells["enable inside"].data.inputs) == {"D", "E", "Q.state"}
    latch = cells["latch, open low, with clear"]
    assert (latch.kind, latch.clock.program, latch.clear.inputs, latch.data.inputs) == (
        "latch",
        ("$0", "!"),
        ("RN",),
        ("D",),
    )
    gates = cells["latch with two gates"]
    assert (set(gates.clock.inputs), gates.data.inputs, gates.clear) == ({"G", "H"}, ("D",), None)
    alone = cells["set and reset alone"]
    assert (alone.clock.program, alone.clear.inputs, alone.preset.inputs, alone.both) == (("0",), ("R",), ("S",), "0")


def test_combinational_tables():
    """A multiplexer, an adder's carry, symbols without blanks between them."""
    mux = "0 ? 0 : 0; 1 ? 0 : 1; ? 0 1 : 0; ? 1 1 : 1; 0 0 ? : 0; 1 1 ? : 1;"
    function = understood(primitive("A, B, S", mux, reg=False)).pins["Q"].function
    assert (function.inputs, truth_table(function)) == (("A", "B", "S"), 0b11001010)
    carry = "00?:0;0?0:0;?00:0;11?:1;1?1:1;?11:1;"
    function = understood(primitive("A, B, C", carry, reg=False)).pins["Q"].function
    assert truth_table(function) == 0b11101000
    assert understood(primitive("A", "b : 1; x : x;", reg=False)).pins["Q"].function.program == ("1",)


@pytest.mark.parametrize(
    "table",
    [
        "0 r : ? : 0; 1 r : ? : 1; ? f : ? : -;",  # a change of D makes it unknown
        "0 * : ? : 0; 1 * : ? : 1; * ? : ? : -;",  # both edges
        "0 r : ? : 0; 1 f : ? : 1; * ? : ? : -; 1 r : ? : -; 0 f : ? : -;",  # an edge for each value
        "? ? : ? : -;",  # never anything else
        "0 0 : ? : 0; 0 1 : 0 : 1; 0 1 : 1 : 0; 1 ? : ? : -;",  # it would go round
        "0 0 : ? : 0; 0 1 : ? : x; 1 ? : ? : -;",
    ],
)
def test_what_is_no_single_bit_of_storage_is_refused(table):
    """No structure is found where none does the same in every case."""
    (cell,) = models(primitive("D, C", table)).values()
    assert cell.not_understood.endswith(" is neither a flip-flop nor a latch")
    assert cell.storage == ()


def test_a_table_with_a_hole_is_refused_where_it_can_be_met():
    """Unknown for two 0s; a cell that never applies them is understood all the same."""
    hole = primitive("A, B", "1 ? : 1; 0 1 : 0;", reg=False)
    (cell,) = models(hole).values()
    assert cell.not_understood == "the table of p at m.v:1 gives no output for A = 0, B = 0"
    around = "module m (Y, A); output Y; input A; wire n; not (n, A); p (Y, A, n); endmodule"
    assert understood(hole + around).pins["Y"].function.inputs == ("A",)


@pytest.mark.parametrize(
    ("table", "trouble"),
    [
        (
            "0 r : ? : 0;\n1 z : ? : 1;",
            "m.v:4: primitive p: z is no symbol of a table; use 0 1 x ? b * r f p n - or (01)",
        ),
        (
            "0 r : ? : 0;\n1 r : 1;",
            'm.v:4: primitive p: the row "1 r : 1" does not hold 2 inputs, the state and the next',
        ),
        ("0 : ? : 0;", "m.v:3: primitive p: the row"),
        ("r f : ? : 0;", "m.v:3: primitive p: f cannot stand for C: a row has one edge at most"),
        ("- 1 : ? : 0;", "m.v:3: primitive p: - cannot stand for D: - is an output"),
        ("0 (11) : ? : 0;", "m.v:3: primitive p: (11) is no change; mend the row"),
        ("0 r : r : 0;", "m.v:3: primitive p: r is no present state; use 0 1 x ? or b"),
        ("0 r : ? : ?;", "m.v:3: primitive p: ? is no output; use 0 1 x or -"),
        ("0 r : ? : 0", "m.v:3: primitive p: the last row is not ended; end it with ;"),
        ("", "m.v:2: primitive p: its table is empty; give it rows"),
        (
            "0 r : ? : 0;\n? r : 1 : 1;",
            "m.v:3: primitive p: rows contradict each other: next 0 here, 1 at line 4 for the same inputs; mend one",
        ),
        ("0 (01) : ? : -;\n? p : 1 : 0;", "m.v:3: primitive p: rows contradict each other"),
        ("0 1 : ? : x;\nb ? : 0 : 0;", "m.v:3: primitive p: rows contradict each other"),
        ("0 0 : ? : 0;\n" * 2001, "m.v:2003: primitive p: its table has more than 2000 rows; describe it by gates"),
    ],
)
def test_bad_tables_are_errors_with_their_line(table, trouble):
    """Every way to spell a table wrong says what and where."""
    with pytest.raises(InputError) as caught:
        models(primitive("D, C", table))
    assert str(caught.value).startswith(trouble)


@pytest.mark.parametrize(
    "table",
    [
        "0 r : ? : 0; 1 r : ? : 1; ? n : ? : -; * ? : ? : -; 0 r : 0 : -; x r : ? : 0; x r : ? : 1;",
        "0 r : ? : 0; 1 r : ? : 1; ? n : ? : -; * ? : ? : -; 0 (0x) : ? : 1; 0 (0x) : ? : 0;",
    ],
)
def test_rows_that_differ_only_for_unknown_values_are_let_pass(table):
    """No change and 0 agree where the state is 0, and what x does has no bearing on the cell."""
    assert understood(primitive("D, C", table)).storage[0].data.inputs == ("D",)


def test_a_combinational_table_has_no_edges_and_no_state():
    """Such rows are errors, and an output without reg has two parts in a row."""
    for row in ("r : 1;", "1 : -;", "1 : ? : 0;"):
        with pytest.raises(InputError, match=r"m\.v:3: primitive p: "):
            models(primitive("A", row, reg=False))


@pytest.mark.parametrize(
    ("text", "trouble"),
    [
        ("primitive p (Q, A); output Q; input A;\nendprimitive", "m.v:1: primitive p: it has no table ... endtable"),
        ("primitive p (Q, A); output Q; input A;\ntable 0:0; 1:1; endprimitive", "m.v:1: primitive p: it has no table"),
        (
            "primitive p (Q, A); output Q; input B; table 0:0; endtable endprimitive",
            "m.v:1: primitive p: its ports are",
        ),
        ("primitive p (Q); output Q; table :0; endtable endprimitive", "m.v:1: primitive p: its ports are"),
        (
            "\nprimitive p (Q, A); output Q; input A; table 0:0; endtable",
            "m.v:2: the primitive that begins here is not",
        ),
        ("primitive (Q, A); endprimitive", "m.v:1: primitive without a name; name it"),
        ("primitive p; endprimitive", "m.v:1: primitive p: it has no table"),
    ],
)
def test_bad_primitives_are_errors(text, trouble):
    """Ports, table and end are asked for by name."""
    with pytest.raises(InputError) as caught:
        models(text)
    assert str(caught.value).startswith(trouble)


def test_ports_declared_in_the_header():
    """The newer spelling, with an initial value, an escaped name and a label at the end."""
    text = "primitive p (output reg Q, input D, \\c.k ); initial Q = 1'b0; table 0 r:?:0; 1 r:?:1; ? f:?:-; * ?:?:-;"
    cell = understood(text + " endtable endprimitive : p")
    assert cell.storage[0].clock.inputs == ("c.k",)


def test_two_thousand_rows_are_compared_in_a_moment():
    """The largest table that is read, all rows apart, takes well below the limit of a test."""
    from time import process_time

    rows = "".join(f"{' '.join(f'{k:012b}')} : ? : {k % 2};\n" for k in range(2000))
    start = process_time()
    models(primitive(", ".join(f"i{k}" for k in range(12)), rows))
    assert process_time() - start < 10
