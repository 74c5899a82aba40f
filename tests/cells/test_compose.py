"""Putting the functions of a cell's nets into each other."""

from time import process_time

import pytest

from auditor.cells.compose import NotUnderstood, put_into_each_other
from auditor.cells.library import Function

INVERTED = ("$0", "!")


def test_nets_are_put_in_and_variables_stay():
    """A net used by another is replaced by its function; a name that is a state variable means the variable."""
    functions = {
        "y": Function(("n", "q"), ("$0", "$1", "&")),
        "n": Function(("a",), INVERTED),
        "q": Function(("q",), INVERTED),
    }
    whole = put_into_each_other(functions, {"q"})
    assert whole["y"] == Function(("a", "q"), ("$0", "!", "$1", "&"))
    assert whole["q"] == Function(("q",), INVERTED)


def test_a_circle_is_refused_with_its_names():
    """Nets that depend on each other have no function."""
    functions = {"a": Function(("b",), ("$0",)), "b": Function(("a",), ("$0",)), "c": Function(("x",), ("$0",))}
    with pytest.raises(NotUnderstood, match="the functions of its pins a, b depend on each other in a circle"):
        put_into_each_other(functions, ())


def test_a_long_chain_is_quick():
    """Twenty thousand inverters in a row take time in proportion."""
    functions = {f"n{k + 1}": Function((f"n{k}",), INVERTED) for k in range(20_000)}
    start = process_time()
    assert put_into_each_other(functions, ())["n20000"] == Function(("n0",), ("$0",))
    assert process_time() - start < 5
