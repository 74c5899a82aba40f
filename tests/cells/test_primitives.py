"""Gate primitives against the truth tables of IEEE 1364-2005, section 7."""

import itertools

import pytest

from auditor.cells.function import BitAlgebra
from auditor.cells.library import CellLibrary
from auditor.cells.primitives import find_cell, primitive_cell

# Tables 7-3 and 7-4 of the standard for two inputs extend to n inputs from left to right.
MEANING = {
    "and": lambda v: int(all(v)),
    "nand": lambda v: int(not all(v)),
    "or": lambda v: int(any(v)),
    "nor": lambda v: int(not any(v)),
    "xor": lambda v: sum(v) % 2,
    "xnor": lambda v: 1 - sum(v) % 2,
}


@pytest.mark.parametrize("name", MEANING)
@pytest.mark.parametrize("inputs", [1, 2, 3, 5])
def test_symmetric_gates(name, inputs):
    """Every gate has its standard function for any number of inputs."""
    cell = primitive_cell(name, inputs)
    function = cell.pins["out"].function
    assert function.inputs == tuple(f"in{k}" for k in range(inputs))
    for row in itertools.product((0, 1), repeat=inputs):
        assert function.evaluate(row, BitAlgebra(1)) == MEANING[name](row)
    assert [pin.direction for pin in cell.pins.values()] == ["output"] + ["input"] * inputs
    assert not cell.storage


def test_buffers_inverter_and_multiplexer():
    """Buffer and inverter have one input; mux selects its second input where the first is 1."""

    def table(name, inputs):
        function = primitive_cell(name, inputs).pins["out"].function
        return [function.evaluate(row, BitAlgebra(1)) for row in itertools.product((0, 1), repeat=inputs)]

    assert table("buf", 1) == [0, 1]
    assert table("not", 1) == [1, 0]
    assert table("mux", 3) == [0, 1, 0, 1, 0, 0, 1, 1]


@pytest.mark.parametrize(
    ("name", "inverted", "off_at"),
    [("bufif0", 0, 1), ("bufif1", 0, 0), ("notif0", 1, 1), ("notif1", 1, 0)],
)
def test_three_state_gates(name, inverted, off_at):
    """The first input is the data, the second the control that puts the output to Z."""
    output = primitive_cell(name, 2).pins["out"]
    assert output.function.inputs == ("in0",)
    assert output.function.evaluate([1], BitAlgebra(1)) == 1 - inverted
    assert output.three_state.inputs == ("in1",)
    assert [output.three_state.evaluate([bit], BitAlgebra(1)) for bit in (0, 1)] == [int(off_at == b) for b in (0, 1)]


@pytest.mark.parametrize(
    ("name", "inputs"), [("tran", 2), ("AND", 2), ("buf", 2), ("not", 2), ("mux", 2), ("bufif0", 3)]
)
def test_what_is_no_primitive_is_a_key_error(name, inputs):
    """Unknown names and impossible numbers of inputs raise KeyError, also through the library."""
    with pytest.raises(KeyError, match=f"{name} with {inputs} inputs"):
        find_cell(CellLibrary({}), name, inputs)


def test_a_primitive_is_made_once():
    """The same cell comes back for the same question."""
    assert find_cell(CellLibrary({}), "xor", 2) is primitive_cell("xor", 2)
