"""Functions from truth tables: every table comes back, and needless names go."""

from hypothesis import given
from hypothesis import strategies as st

from auditor.cells.function import support, truth_table
from auditor.cells.library import Function
from auditor.cells.truth import TableSpace, function_between, table_function

NAMES = ("a", "b", "c", "d")


def over(function, names):
    """Return the table of a function over all ``names``."""
    space = TableSpace(len(names))
    return function.evaluate([space.columns[names.index(name)] for name in function.inputs], space.algebra)


def test_every_table_over_three_names_comes_back():
    """All 256 tables: the function has the table, and names only what it depends on."""
    for table in range(256):
        function = table_function(NAMES[:3], table)
        assert over(function, NAMES) % 256 == table
        assert set(function.inputs) == set(support(function))


def test_a_plain_table_gives_a_plain_function():
    """Gates come back as gates: a conjunction, an exclusive or, an inverter, constants."""
    assert table_function(["a", "b"], 0b1000) == Function(("a", "b"), ("$1", "$0", "&"))
    assert table_function(["a", "b"], 0b0110) == Function(("a", "b"), ("$0", "$1", "^"))
    assert table_function(["a", "b"], 0b0011) == Function(("b",), ("$0", "!"))
    assert table_function(["a"], 0b11) == Function((), ("1",))
    assert table_function([], 0) == Function((), ("0",))


@given(st.integers(0, 0xFFFF), st.integers(0, 0xFFFF))
def test_freedom_is_used_and_kept_to(ones, either):
    """The function is 1 and 0 where it must be, and needs each name that is left once the others are dropped."""
    ones, zeros = ones & ~either, 0xFFFF & ~ones & ~either
    function = function_between(NAMES, ones, zeros)
    table = over(function, NAMES)
    assert (table & ones, table & zeros) == (ones, 0)
    space = TableSpace(4)
    for j, name in enumerate(NAMES):
        if name not in function.inputs:
            ones, zeros = space.either(ones, j), space.either(zeros, j)
    assert not ones & zeros
    for name in function.inputs:
        j = NAMES.index(name)
        assert space.either(ones, j) & space.either(zeros, j)


def test_a_function_of_a_constant_table_has_no_inputs():
    """Where all places are free or 1 the function is the constant."""
    assert truth_table(function_between(NAMES, 0b1000, 0)) == 1
    assert function_between(NAMES, 0b1000, 0).inputs == ()
